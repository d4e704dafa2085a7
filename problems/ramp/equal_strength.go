package ramp

import (
	"math"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

// Equal is the chain of greatest recovery with n oblique shocks and a terminal
// normal shock.
type Equal struct {
	Turning    []float64 // rad
	NormalMach float64   // of every oblique shock
	Terminal   float64   // Mach number ahead of the normal shock
	Recovery   float64
}

// EqualStrength returns the optimum of n >= 0 ramps at Mach number M0 with free
// turning: all oblique shocks have the same normal Mach number (Oswatitsch 1944,
// NACA TM 1140), which leaves one unknown, found by golden-section search. The
// weak branch limits the normal Mach number to that of the largest turning.
func EqualStrength(g gas.Perfect, mach float64, n int) Equal {
	recoveryAt := func(normal float64) float64 {
		behind, recovery := equalChain(g, mach, normal, n, nil)
		if !(behind >= 1) {
			return 0
		}
		_, terminal := shock.Normal(g, behind)
		return recovery * terminal.TotalPressure
	}
	normal := maximize(recoveryAt, 1, mach)
	turning := make([]float64, n)
	terminal, _ := equalChain(g, mach, normal, n, turning)
	return Equal{Turning: turning, NormalMach: normal, Terminal: terminal, Recovery: recoveryAt(normal)}
}

// equalChain marches n shocks of one normal Mach number; behind is NaN where one
// would be normal or the flow subsonic.
func equalChain(g gas.Perfect, mach, normal float64, n int, turning []float64) (behind, recovery float64) {
	jump := shock.Across(g, normal)
	recovery = 1
	for i := range n {
		if !(mach > normal) {
			return math.NaN(), math.NaN()
		}
		if turning != nil {
			turning[i] = shock.Turning(g, mach, math.Asin(normal/mach))
		}
		mach = math.Sqrt((g.TotalTemperatureRatio(mach)/jump.Temperature - 1) * 2 / (g.Gamma - 1))
		recovery *= jump.TotalPressure
	}
	return mach, recovery
}

// maximize is golden-section search of a unimodal function, to the flatness of
// its maximum.
func maximize(f func(float64) float64, low, high float64) float64 {
	const golden = 0.6180339887498949 // (sqrt(5)-1)/2
	a, b := high-golden*(high-low), low+golden*(high-low)
	fa, fb := f(a), f(b)
	for high-low > 1e-10 {
		if fa < fb {
			low, a, fa = a, b, fb
			b = low + golden*(high-low)
			fb = f(b)
		} else {
			high, b, fb = b, a, fa
			a = high - golden*(high-low)
			fa = f(a)
		}
	}
	return (low + high) / 2
}
