package shock

import (
	"math"

	"rampwright/problems/gas"
)

// RegularReflectionBracketed is the second route to RegularReflection: the
// criteria in the turning itself, on WeakBracketed, the searched largest turning
// and bisection.
func RegularReflectionBracketed(g gas.Perfect, mach float64) float64 {
	sonic, _ := SonicTurning(g, mach)
	detachment := bisect(func(turning float64) float64 {
		wave, err := WeakBracketed(g, mach, turning)
		if err != nil || wave.Mach2 <= 1 {
			return -turning
		}
		largest, _ := LargestTurningSearched(g, wave.Mach2)
		return largest - turning
	}, 0, sonic)

	_, normal := NormalByPrandtl(g, mach)
	excess := func(turning float64) float64 {
		incident, err := WeakBracketed(g, mach, turning)
		if err != nil {
			return math.NaN()
		}
		reflected, err := WeakBracketed(g, incident.Mach2, turning)
		if err != nil {
			return math.NaN()
		}
		return incident.Jump.Pressure*reflected.Jump.Pressure - normal.Pressure
	}
	high := detachment * (1 - justInside)
	if !(excess(high) > 0) {
		return detachment
	}
	return bisect(excess, 0, high)
}

// justInside keeps the reflected shock attached against rounding of the
// detachment turning; the criterion is lost only within 1e-9 of M = 2.202.
const justInside = 1e-9
