package inlet

import (
	"context"
	"testing"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// dualMode is a Mach 4.5 inlet whose reflected lip shock, at take-over, meets the cowl
// just behind the throat plane.
func dualMode() Definition {
	cowl := Fixed(13)
	return Definition{
		CaptureHeight: 0.9, Width: 1, Gas: gas.Air, ShockOnLip: Fixed(4.5), DuctFactor: 1, CowlLength: 0.25,
		RampAngle: []Setting{Fixed(6.9544), Fixed(8.0045), Fixed(10.012)}, CowlAngle: &cowl, CowlWedge: Fixed(3), LipSetback: Fixed(0.05),
		Points: []Point{
			{Name: "cruise", Mach: 4.5, Pressure: 4233, Temperature: 218.3},
			{Name: "takeover", Mach: 3.5, Pressure: 6997, Temperature: 216.65, Traced: true},
		},
	}
}

// A stream that cannot go on behind the throat plane says so, with a turning that no
// attached shock gives there; the averages of the plane stand. Behind a terminal shock
// the flow is subsonic, and nothing is said of waves.
func TestEndBehindTheThroat(t *testing.T) {
	flow, err := problemOf(t, dualMode()).Flow(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	cruise, takeover := &flow.Points[0], &flow.Points[1]
	if cruise.Behind != nil {
		t.Errorf("cruise: %v", cruise.Behind)
	}
	end := takeover.Behind
	if takeover.Err != nil || end == nil || end.Reason != wave.MachReflection {
		t.Fatalf("take-over: %v, behind the throat %v", takeover.Err, end)
	}
	if !(end.Place.X > takeover.Trace.Stations[0].X) {
		t.Errorf("%v is not behind the throat plane, x %v", end, takeover.Trace.Stations[0].X)
	}
	if _, err := shock.Weak(gas.Air, end.State.Mach, end.Turning); err == nil {
		t.Errorf("an attached shock gives %v", end)
	}
	d := dualMode()
	d.TerminalShock = true
	flow, err = problemOf(t, d).Flow(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	if behind := flow.Points[1].Behind; behind != nil {
		t.Errorf("behind a terminal shock: %v", behind)
	}
}
