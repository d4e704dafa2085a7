package shock

import (
	"fmt"
	"math"

	"rampwright/problems/gas"
)

// Oblique is one attached oblique shock on the weak branch.
type Oblique struct {
	Mach       float64 // ahead
	Turning    float64 // theta, rad
	WaveAngle  float64 // beta to the flow ahead, rad
	NormalMach float64 // M sin(beta)
	Mach2      float64 // behind
	Jump       Jump
}

// Detached reports a turning no attached shock can give. By is the excess over
// the largest attached turning, rad.
type Detached struct {
	Mach    float64
	Turning float64
	By      float64
}

func (e *Detached) Error() string {
	return fmt.Sprintf("no attached shock at Mach %.6g turns the flow by %.6g rad: %.3g rad too much", e.Mach, e.Turning, e.By)
}

// Weak returns the weak oblique shock that turns a flow of Mach number M >= 1
// by theta >= 0. With x = cot(beta), T = tan(theta) the relation (NACA Report
// 1135 eq. 138) is the cubic
//
//	2x^3 + T B x^2 - 2(M^2-1) x + T A = 0,  A = (g-1)M^2 + 2,  B = (g+1)M^2 + 2
//
// whose largest root is the weak shock. The Mach number behind follows from the
// conserved total temperature.
//
// Special cases are:
//
//	theta = 0 gives the Mach wave, all ratios 1
//	theta < 0, M < 1, or NaN gives *Detached with By NaN: no shock is defined
//	theta above the largest attached turning gives *Detached
//
// Accuracy: wave angle to 1e-12 rad up to 0.999 of the largest turning and to
// 1e-6 deg at 0.9999 of it.
func Weak(g gas.Perfect, mach, turning float64) (Oblique, error) {
	if !(turning >= 0) || !(mach >= 1) || turning >= math.Pi/2 {
		return Oblique{}, notAttached(g, mach, turning)
	}
	cotangent, ok := WeakCotangent(g.Gamma, mach*mach, math.Tan(turning))
	if !ok {
		return Oblique{}, notAttached(g, mach, turning)
	}
	normalSquare := mach * mach / (1 + cotangent*cotangent)
	pressure := pressureRatio(g.Gamma, normalSquare)
	density := densityRatio(g.Gamma, normalSquare)
	temperature := pressure / density
	return Oblique{
		Mach:       mach,
		Turning:    turning,
		WaveAngle:  math.Atan2(1, cotangent),
		NormalMach: math.Sqrt(normalSquare),
		Mach2:      math.Sqrt((g.TotalTemperatureRatio(mach)/temperature - 1) * 2 / (g.Gamma - 1)),
		Jump:       Jump{pressure, density, temperature, totalPressureRatio(g.Gamma, pressure, density)},
	}, nil
}

// WeakCotangent returns cot(beta) of the weak shock for M^2 >= 1 and
// T = tan(theta) >= 0, and whether the shock is attached. It is the kernel of
// every chain: no trigonometry, no allocation.
//
// Halley's iteration starts at the Mach wave x0 = sqrt(M^2-1), where the cubic
// is positive and convex, and falls back to Newton's where Halley's denominator
// is not positive; both approach the largest root from above. A slope <= 0 or
// x <= 0 on the way proves that there is no positive root: detached.
func WeakCotangent(gamma, machSquare, tangent float64) (cotangent float64, attached bool) {
	x := math.Sqrt(machSquare - 1)
	if tangent == 0 {
		return x, true
	}
	c2 := tangent * ((gamma+1)*machSquare + 2)
	c1 := 2 * (machSquare - 1)
	c0 := tangent * ((gamma-1)*machSquare + 2)
	for range maxIterations {
		value := ((2*x+c2)*x-c1)*x + c0
		slope := (6*x+2*c2)*x - c1
		if !(slope > 0) || !(x > 0) {
			return 0, false
		}
		step := value / slope
		if bend := 1 - step*(6*x+c2)/slope; bend > 0.5 {
			step /= bend
		}
		x -= step
		if math.Abs(step) <= converged*x {
			return x, x > 0
		}
	}
	return x, x > 0
}

const (
	// maxIterations bounds the linear convergence at a double root, where each
	// step gains at least a factor of two: 60 steps exhaust the mantissa.
	maxIterations = 60
	// converged is the relative step after which one more, at least quadratic,
	// correction lies below rounding away from detachment.
	converged = 1e-9
)

func notAttached(g gas.Perfect, mach, turning float64) error {
	by := math.NaN()
	if mach >= 1 && turning >= 0 {
		largest, _ := LargestTurning(g, mach)
		by = turning - largest
	}
	return &Detached{Mach: mach, Turning: turning, By: by}
}

// Turning returns theta of a shock at wave angle beta (NACA Report 1135
// eq. 138):
//
//	tan(theta) = 2 cot(beta) (M^2 sin^2(beta) - 1) / (M^2 (g + cos(2 beta)) + 2)
//
// It is 0 at the Mach angle and at pi/2, negative outside.
func Turning(g gas.Perfect, mach, waveAngle float64) float64 {
	sin, cos := math.Sincos(waveAngle)
	square := mach * mach
	// M^2 (g + cos 2b) + 2 with cos 2b = 1 - 2 sin^2 b.
	return math.Atan2(2*cos*(square*sin*sin-1), sin*(square*(g.Gamma+1-2*sin*sin)+2))
}
