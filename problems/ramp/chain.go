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
// ok is false where a shock is detached. It allocates nothing.
func Recovery(g gas.Perfect, mach float64, turning []float64) (recovery, machBehind float64, ok bool) {
	square := mach * mach
	density, pressure := 1.0, 1.0
	for _, theta := range turning {
		var s step
		if !s.cross(g.Gamma, square, tangent(theta)) {
			return math.NaN(), math.NaN(), false
		}
		density *= s.density
		pressure *= s.pressure
		square = s.behind
	}
	return totalPressure(g.Gamma, density, pressure), math.Sqrt(square), true
}

// step is one shock in squares of Mach numbers and x = cot(beta): everything
// behind it is rational in them.
type step struct {
	ahead     float64 // M1^2
	tangent   float64 // tan(theta)
	cotangent float64 // x
	normal    float64 // Mn^2 = M1^2/(1 + x^2)
	pressure  float64
	density   float64
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
	normal := square / (1 + x*x)
	low := (gamma-1)*normal + 2
	high := 2*gamma*normal - (gamma - 1)
	s.ahead, s.tangent, s.cotangent, s.normal = square, tangent, x, normal
	s.pressure = high / (gamma + 1)
	s.density = (gamma + 1) * normal / low
	// 1 + (g-1)/2 M^2 is conserved times T: M2^2 from T2/T1 = p2p1/rho2rho1.
	s.behind = ((2+(gamma-1)*square)*s.density/s.pressure - 2) / (gamma - 1)
	return true
}

// tangent of a turning; a turning of a right angle or more has no shock.
func tangent(theta float64) float64 {
	if theta >= math.Pi/2 {
		return math.NaN()
	}
	return math.Tan(theta)
}

// totalPressure returns rho^(g/(g-1)) p^(-1/(g-1)); for g = 1.4 the power 2.5
// needs square roots only.
func totalPressure(gamma, density, pressure float64) float64 {
	if gamma == 1.4 {
		ratio := density / pressure
		return density * ratio * ratio * math.Sqrt(ratio)
	}
	return density * math.Pow(density/pressure, 1/(gamma-1))
}
