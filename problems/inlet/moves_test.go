package inlet

import (
	"testing"

	"rampwright/problems"
)

// A tolerance moves what depends on it and nothing else: the angle of the outer cowl
// by that of the cowl alone, the length by no condition of flight, the recovery by each,
// by the setback because a lip further forward takes the shocks inside.
func TestMovesAreThoseOfTheTolerance(t *testing.T) {
	p := problemOf(t, veyric())
	point := veyric().Points[0].Name
	for name, c := range map[string]struct {
		tolerances                                Tolerances
		recovery, length, outer, lip, temperature bool
	}{
		"ramps":   {Tolerances{RampAngle: 0.1}, true, true, false, false, false},
		"cowl":    {Tolerances{CowlAngle: 0.1}, true, false, true, false, false},
		"setback": {Tolerances{LipSetback: 0.01}, true, false, false, true, false},
		"mach":    {Tolerances{Mach: 0.03}, true, false, false, false, true},
		"all":     {Tolerances{0.1, 0.1, 0.01, 0.03, 0.5}, true, true, true, true, true},
	} {
		b, err := p.Built(c.tolerances)
		if err != nil {
			t.Fatal(err)
		}
		moves, err := b.Moves(t.Context(), nil)
		if err != nil {
			t.Fatal(err)
		}
		for i, q := range p.Quantities() {
			want, asked := map[problems.Quantity]bool{
				{Name: "recovery", Point: point}: c.recovery, {Name: "length_m", Point: problems.Geometry}: c.length,
				{Name: "cowl_outer_angle_deg", Point: problems.Geometry}: c.outer, {Name: "lip_x_m", Point: problems.Geometry}: c.lip,
				{Name: "total_temperature_K", Point: point}: c.temperature,
			}[problems.Quantity{Name: q.Name, Point: q.Point}]
			if asked && moves[i] != want {
				t.Errorf("%s: %s moves %v, want %v", name, q.Name, moves[i], want)
			}
		}
	}
}
