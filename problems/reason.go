package problems

import "fmt"

// NotApplicable is the reason of a quantity whose definition does not cover
// this point: a limit on it does not apply there, which is no failure.
type NotApplicable struct {
	Why string
}

func (e *NotApplicable) Error() string { return "not applicable: " + e.Why }

// Detached is the reason behind a shock that cannot stay attached.
type Detached struct {
	Shock string  // "ramp 2", "lip shock", "outer cowl"
	Mach  float64 // Mach number ahead of it
	By    float64 // turning beyond the largest attached one, radians
}

func (e *Detached) Error() string {
	return fmt.Sprintf("%s detached at Mach %.4g, %.3g deg beyond attachment", e.Shock, e.Mach, e.By*degreesPerRadian)
}

const degreesPerRadian = 57.29577951308232 // 180/pi, exact to double precision

// Status is the reason behind a flow that leaves the model at one point:
// a short phrase such as "shocks inside the lip".
type Status struct {
	Phrase string
}

func (e *Status) Error() string { return e.Phrase }
