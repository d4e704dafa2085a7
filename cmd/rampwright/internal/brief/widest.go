package brief

import (
	"strings"

	"rampwright/problems"
)

// Widest is the widest range a brief may search a variable over: that of its key, of
// the one key of all ramps for the angle of each. A variable of a test problem has no
// key: its range is the problem's own and no brief can widen it.
func Widest(v problems.Variable) (low, high float64) {
	name := v.Name
	if strings.HasPrefix(name, "ramp_") && strings.HasSuffix(name, "_angle_deg") {
		name = "ramp_angle_deg"
	}
	key, ok := find(inletPart, name)
	if !ok {
		return v.Low, v.High
	}
	return key.Low, key.High
}
