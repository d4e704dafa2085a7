package brief

import (
	"testing"

	"rampwright/problems"
)

// Every searched setting of an inlet finds its key, each ramp that of all ramps.
func TestWidestIsTheRangeOfTheKey(t *testing.T) {
	for name, want := range map[string][2]float64{
		"ramp_1_angle_deg": {0.1, 40}, "ramp_8_angle_deg": {0.1, 40}, "cowl_angle_deg": {-20, 60}, "lip_turning_deg": {0, 40},
		"cowl_wedge_deg": {0, 30}, "shock_on_lip_mach": {1.5, 12}, "lip_setback": {0, 0.5},
		"x1": {3, 7}, // of a test problem
	} {
		low, high := Widest(problems.Variable{Name: name, Low: 3, High: 7})
		if got := [2]float64{low, high}; got != want {
			t.Errorf("%s: %v, want %v", name, got, want)
		}
	}
}
