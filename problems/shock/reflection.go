package shock

import (
	"math"

	"rampwright/problems/gas"
)

// RegularReflection returns the largest turning, rad, at which a shock in a flow
// of Mach number M > 1 still reflects regularly at a straight wall: the lower of
// the detachment and, where it exists below that, the mechanical-equilibrium
// criterion (Ben-Dor, Shock Wave Reflection Phenomena, from memory). For
// g = 1.4 the second exists from M = 2.202 up.
func RegularReflection(g gas.Perfect, mach float64) float64 {
	detachment := ReflectionDetachment(g, mach)
	if equilibrium, ok := equilibriumBelow(g, mach, detachment, cross, bracketedRoot); ok {
		return equilibrium
	}
	return detachment
}

// RegularReflectionBracketed is the second route to RegularReflection, on
// WeakBracketed and bisection.
func RegularReflectionBracketed(g gas.Perfect, mach float64) float64 {
	across := func(g gas.Perfect, mach, turning float64) (mach2, pressure float64, ok bool) {
		wave, err := WeakBracketed(g, mach, turning)
		return wave.Mach2, wave.Jump.Pressure, err == nil
	}
	detachment := detachmentOfReflection(g, mach, across, func(g gas.Perfect, mach float64) float64 {
		turning, _ := LargestTurningSearched(g, mach)
		return turning
	}, bisect)
	if equilibrium, ok := equilibriumBelow(g, mach, detachment, across, bisect); ok {
		return equilibrium
	}
	return detachment
}

// ReflectionDetachment returns the turning at which the reflected shock is just
// attached: theta = theta_max(M2(M, theta)), rad.
func ReflectionDetachment(g gas.Perfect, mach float64) float64 {
	return detachmentOfReflection(g, mach, cross, func(g gas.Perfect, mach float64) float64 {
		turning, _ := LargestTurning(g, mach)
		return turning
	}, bracketedRoot)
}

// MechanicalEquilibrium returns the turning at which the pressure behind the
// regular reflection equals that behind a normal shock in the same flow, rad,
// and whether such a turning exists below detachment of the reflection.
func MechanicalEquilibrium(g gas.Perfect, mach float64) (turning float64, exists bool) {
	return equilibriumBelow(g, mach, ReflectionDetachment(g, mach), cross, bracketedRoot)
}

// crossing gives the Mach number and pressure ratio behind a weak shock.
type crossing func(g gas.Perfect, mach, turning float64) (mach2, pressure float64, ok bool)

type rootFinder func(f func(float64) float64, a, b float64) float64

// cross is the lean form of Weak.
func cross(g gas.Perfect, mach, turning float64) (mach2, pressure float64, ok bool) {
	if !(mach >= 1) {
		return 0, 0, false
	}
	cotangent, ok := WeakCotangent(g.Gamma, mach*mach, math.Tan(turning))
	if !ok {
		return 0, 0, false
	}
	normalSquare := mach * mach / (1 + cotangent*cotangent)
	pressure = pressureRatio(g.Gamma, normalSquare)
	temperature := pressure / densityRatio(g.Gamma, normalSquare)
	return math.Sqrt((g.TotalTemperatureRatio(mach)/temperature - 1) * 2 / (g.Gamma - 1)), pressure, true
}

func detachmentOfReflection(g gas.Perfect, mach float64, across crossing, largest func(gas.Perfect, float64) float64, root rootFinder) float64 {
	sonic, _ := SonicTurning(g, mach)
	return root(func(turning float64) float64 {
		behind, _, ok := across(g, mach, turning)
		if !ok || behind <= 1 {
			return -turning
		}
		return largest(g, behind) - turning
	}, 0, sonic)
}

// equilibriumBelow looks for the turning of mechanical equilibrium just inside
// detachment, where the reflected shock is still attached.
func equilibriumBelow(g gas.Perfect, mach, detachment float64, across crossing, root rootFinder) (turning float64, exists bool) {
	stem := pressureRatio(g.Gamma, mach*mach)
	excess := func(turning float64) float64 {
		behind, incident, ok := across(g, mach, turning)
		if !ok {
			return math.NaN()
		}
		_, reflected, ok := across(g, behind, turning)
		if !ok {
			return math.NaN()
		}
		return incident*reflected - stem
	}
	high := detachment * (1 - justInside)
	if !(excess(high) > 0) {
		return math.NaN(), false
	}
	return root(excess, 0, high), true
}

// justInside keeps the reflected shock attached against rounding of the
// detachment turning; the criterion is lost only within 1e-9 of M = 2.202.
const justInside = 1e-9
