package envelope

import (
	"fmt"

	"rampwright/problems/atmosphere"
	"rampwright/problems/gas"
)

// Hold says what of the ambient air stays as the Mach number changes.
type Hold int

const (
	// HeldState keeps pressure and temperature: a test facility, or an altitude.
	HeldState Hold = iota
	// HeldDynamicPressure keeps q = g/2 p M^2, so that p = 2 q/(g M^2), with the
	// temperature of the standard atmosphere at the altitude of that pressure.
	HeldDynamicPressure
)

// Air is the ambient air of the map.
type Air struct {
	Hold            Hold
	Pressure        float64 // Pa; of HeldState
	Temperature     float64 // K; of HeldState
	DynamicPressure float64 // Pa; of HeldDynamicPressure
}

// NoAltitude reports a Mach number at which the standard atmosphere has no altitude
// of the dynamic pressure held.
type NoAltitude struct {
	Mach            float64
	DynamicPressure float64 // Pa
	Cause           error
}

func (e *NoAltitude) Error() string {
	return fmt.Sprintf("no altitude gives the dynamic pressure %.5g kPa at Mach %.5g: %v", e.DynamicPressure/1000, e.Mach, e.Cause)
}

func (e *NoAltitude) Unwrap() error { return e.Cause }

// At returns pressure, Pa, and temperature, K, at a Mach number. Error:
// *NoAltitude.
func (a Air) At(g gas.Perfect, mach float64) (pressure, temperature float64, err error) {
	if a.Hold == HeldState {
		return a.Pressure, a.Temperature, nil
	}
	pressure = 2 * a.DynamicPressure / (g.Gamma * mach * mach)
	h, err := atmosphere.AltitudeOf(pressure)
	if err != nil {
		return 0, 0, &NoAltitude{mach, a.DynamicPressure, err}
	}
	state, err := atmosphere.At(h)
	if err != nil {
		return 0, 0, &NoAltitude{mach, a.DynamicPressure, err}
	}
	return pressure, state.Temperature, nil
}
