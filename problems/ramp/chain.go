// Package ramp marches a chain of ramp shocks at one flight condition: states,
// recovery with analytic derivatives, the equal-strength optimum, and the
// contour on which all ramp shocks meet in one point.
package ramp

import (
	"fmt"
	"math"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

// MaxRamps is the largest number of ramps of a chain.
const MaxRamps = 8

// Broken reports the first ramp of a chain that has no attached shock. Ramp
// counts from 1. Err is *shock.Detached, or nil where the flow ahead of the ramp
// is already subsonic.
type Broken struct {
	Ramp int
	Mach float64
	Err  error
}

func (e *Broken) Error() string {
	if e.Err == nil {
		return fmt.Sprintf("flow ahead of ramp %d is subsonic (Mach %.4g)", e.Ramp, e.Mach)
	}
	return fmt.Sprintf("ramp %d: %v", e.Ramp, e.Err)
}

func (e *Broken) Unwrap() error { return e.Err }

// March fills waves[i] with the weak shock of turning[i] (rad), each in the flow
// behind the one before, starting at Mach number mach. It returns the number of
// attached shocks; fewer than len(turning) comes with *Broken. waves must be as
// long as turning.
func March(g gas.Perfect, mach float64, turning []float64, waves []shock.Oblique) (attached int, err error) {
	for i, theta := range turning {
		if !(mach >= 1) {
			return i, &Broken{Ramp: i + 1, Mach: mach}
		}
		wave, err := shock.Weak(g, mach, theta)
		if err != nil {
			return i, &Broken{Ramp: i + 1, Mach: mach, Err: err}
		}
		waves[i] = wave
		mach = wave.Mach2
	}
	return len(turning), nil
}

// Recovery returns the total-pressure ratio of a chain of at most MaxRamps weak
// shocks of turning theta_i, rad, and the Mach number behind it:
//
//	pi = (prod rho2/rho1)^(g/(g-1)) (prod p2/p1)^(-1/(g-1))
//
// ok is false where a shock is detached, a turning is not in [0, pi/2), or
// mach is below 1. It allocates nothing.
func Recovery(g gas.Perfect, mach float64, turning []float64) (recovery, machBehind float64, ok bool) {
	if !(mach >= 1) {
		return math.NaN(), math.NaN(), false
	}
	square := mach * mach
	density, cooling := 1.0, 1.0
	for _, theta := range turning {
		var s step
		if !s.cross(g.Gamma, square, tangent(theta)) {
			return math.NaN(), math.NaN(), false
		}
		density *= s.density
		cooling *= s.cooling
		square = s.behind
	}
	return totalPressure(g.Gamma, density, cooling), math.Sqrt(square), true
}

// step is one shock in squares of Mach numbers and x = cot(beta): everything
// behind it is rational in them. With w = 1 + x^2, that is Mn^2 = M1^2/w, the
// ratios of NACA Report 1135 (eqs. 128-132) have the common denominators
//
//	low = (g-1) M1^2 + 2w,  high = 2g M1^2 - (g-1) w
//	rho2/rho1 = (g+1) M1^2/low,  T1/T2 = (g+1)^2 M1^2 w/(low high)
//	M2^2 = ((g+1)^2 M1^4 w - 4 (M1^2-w)(g M1^2+w))/(low high)
type step struct {
	ahead     float64 // M1^2
	tangent   float64 // tan(theta)
	cotangent float64 // x
	width     float64 // w
	inverse   float64 // 1/(low high)
	density   float64 // rho2/rho1
	cooling   float64 // T1/T2
	behind    float64 // M2^2
}

func (s *step) cross(gamma, square, tangent float64) bool {
	if !(square >= 1) || !(tangent >= 0) {
		return false
	}
	x, attached := shock.WeakCotangent(gamma, square, tangent)
	if !attached {
		return false
	}
	w := 1 + x*x
	low := (gamma-1)*square + 2*w
	high := 2*gamma*square - (gamma-1)*w
	inverse := 1 / (low * high)
	both := (gamma + 1) * (gamma + 1) * square * w
	s.ahead, s.tangent, s.cotangent, s.width, s.inverse = square, tangent, x, w, inverse
	s.density = (gamma + 1) * square * high * inverse
	s.cooling = both * inverse
	s.behind = (both*square - 4*(square-w)*(gamma*square+w)) * inverse
	return true
}

// tangent of a turning in [0, pi/2); outside there is no shock.
func tangent(theta float64) float64 {
	if !(theta >= 0 && theta < math.Pi/2) {
		return math.NaN()
	}
	return math.Tan(theta)
}

// totalPressure returns rho2/rho1 (T1/T2)^(1/(g-1)); for g = 1.4 the power 2.5
// needs a square root only.
func totalPressure(gamma, density, cooling float64) float64 {
	if gamma == 1.4 {
		return density * cooling * cooling * math.Sqrt(cooling)
	}
	return density * math.Pow(cooling, 1/(gamma-1))
}
