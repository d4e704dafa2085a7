package inlet

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// At shock-on-lip all ramp shocks cross in the focus, and one wave leaves it
// toward the body, at the Mach angle of the flow of the last ramp. A lip set
// back stands in that flow just where the wave does not descend below it:
// phi_n >= asin(1/M_n). One ramp has no crossing.
func TestSetBackLipAndTheFocusWave(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := anyDefinition(t)
		d.LipSetback = Fixed(rapid.Float64Range(1e-4, 0.02).Draw(t, "setback"))
		a := flowAt(t, d, first{}, 0)
		if a.shape.err != nil {
			t.Fatal(a.shape.err)
		}
		n := a.design.Ramps
		lift := a.design.TotalTurning() - math.Asin(1/a.lipMach)
		if math.Abs(lift) < 1e-4 {
			return // the wave runs along the lip level
		}
		stands := n == 1 || lift > 0
		if (a.placeErr == nil) != stands || (a.placeErr != nil && phrase(a.placeErr) != errFocusWave.Phrase) {
			t.Fatalf("%d ramps, flow angle %v, Mach angle %v: status %v", n, a.design.TotalTurning(), math.Asin(1/a.lipMach), a.placeErr)
		}
	})
}
