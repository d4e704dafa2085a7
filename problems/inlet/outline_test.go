package inlet

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/wave"
)

// outlined is the contour of a design given as an outline, with the cowl and the
// body as far as 4 throat heights behind the shoulder.
func outlined(t *testing.T, d Definition) Definition {
	t.Helper()
	c, err := problemOf(t, d).Freeze(nil).Contour()
	if err != nil {
		t.Fatal(err)
	}
	sin, cos := math.Sincos(c.CowlInner)
	along := func(p contour.Point, distance float64) contour.Point {
		return contour.Point{X: p.X + distance*cos, Y: p.Y + distance*sin}
	}
	d.Outline = &Outline{
		Body:       append(append([]contour.Point(nil), c.Corners...), c.Shoulder, along(c.Shoulder, 4*c.Throat)),
		CowlInner:  []contour.Point{c.Lip, along(c.Lip, 8*c.Throat)},
		OuterAngle: c.CowlOuter, ThroatX: c.Shoulder.X,
	}
	d.RampAngle, d.CowlAngle, d.LipTurning = nil, nil, nil
	return d
}

// A design given as an outline is the design with every wave traced: every quantity
// that does not measure the throat height (along the vertical here, across the duct
// there) agrees.
func TestOutlineOfADesignIsTheDesign(t *testing.T) {
	design := veyric()
	outline := outlined(t, design)
	want, got := evaluate(t, design.asking()), evaluate(t, outline)
	height := map[string]bool{
		"internal_contraction_over_self_start": true, "internal_contraction_over_isentropic": true,
		"total_contraction_over_started": true, "throat_height_m": true, "total_contraction": true, "internal_contraction": true,
	}
	for i, q := range got.p.Quantities() {
		if height[q.Name] {
			continue
		}
		value, reason := want.find(q.Point, fullName(q))
		if (reason == nil) != (got.dst.Reasons[i] == nil) {
			t.Fatalf("%s at %s: %v, of the design %v", fullName(q), q.Point, got.dst.Reasons[i], reason)
		}
		if reason == nil {
			within(t, fullName(q)+" at "+q.Point, got.dst.Values[i], value, 2e-9*math.Max(1, math.Abs(value)))
		}
	}
	// Across the duct the throat height is the vertical one times cos(phi_c).
	cos := math.Cos(8 * radian)
	within(t, "throat height", got.value(problems.Geometry, "throat_height_m")*cos, want.value(problems.Geometry, "throat_height_m"), 1e-9)
}

func fullName(q problems.Quantity) string {
	if q.Member == "" {
		return q.Name
	}
	return q.Name + "/" + q.Member
}

// A convex corner ahead of the shoulder has no attachment margin, a concave one
// does; more ramps than a design has are fine.
func TestOutlineCorners(t *testing.T) {
	d := outlined(t, veyric())
	var body []contour.Point
	angles := []float64{2, 3, 4, 5, 6, 7, 8, 9, 10, 9, 11, 4}
	at := contour.Point{}
	for _, angle := range angles {
		body = append(body, at)
		at = contour.Point{X: at.X + 0.06, Y: at.Y + 0.06*math.Tan(angle*radian)}
	}
	d.Outline = &Outline{
		Body: append(body, at), CowlInner: []contour.Point{{X: 0.62, Y: 0.18}, {X: 0.9, Y: 0.19}}, OuterAngle: 8 * radian, ThroatX: 0.70,
	}
	d.CaptureHeight = 0.18
	p := problemOf(t, d)
	f := mustAt(t, p.Freeze(nil), d.Points[0])
	if _, reason := f.Member("ramp_attachment_margin_deg", "ramp 10"); !errors.As(reason, new(*problems.NotApplicable)) {
		t.Errorf("the margin of a convex corner: %v", reason)
	}
	for _, ramp := range []string{"ramp 1", "ramp 9", "ramp 11"} {
		if value, reason := f.Member("ramp_attachment_margin_deg", ramp); reason != nil || !(value > 20) {
			t.Errorf("margin of %s: %v (%v)", ramp, value, reason)
		}
	}
	if f.Err != nil || !f.Traced {
		t.Errorf("status %s, traced %t", f.Status(), f.Traced)
	}
	flow, err := p.Flow(context.Background(), nil)
	if err != nil || flow.Outline == nil {
		t.Errorf("flow of an outline: %v, outline %v", err, flow.Outline)
	}
}

// What no trace can use is a status, and what no outline can be is refused.
func TestImpossibleOutlines(t *testing.T) {
	d := outlined(t, veyric())
	steep := *d.Outline
	steep.OuterAngle = 2
	d.Outline = &steep
	f := mustAt(t, problemOf(t, d).Freeze(nil), d.Points[0])
	if f.Traced || !strings.HasPrefix(f.Status(), "cannot be traced: ") {
		t.Errorf("traced %t, %s", f.Traced, f.Status())
	}
	closed := *d.Outline
	closed.OuterAngle, closed.ThroatX = 0.2, 30
	closed.CowlInner = []contour.Point{closed.CowlInner[0], {X: 30, Y: 0}}
	d.Outline = &closed
	if f := mustAt(t, problemOf(t, d).Freeze(nil), d.Points[0]); f.Status() != "duct closed at the throat plane" {
		t.Errorf("status %s", f.Status())
	}
	d.Outline = &Outline{}
	d.LipTurning = new(Setting)
	_, err := New(d)
	for _, want := range []string{"no ramp angle", "body of an outline", "inner cowl of an outline"} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v does not say %q", err, want)
		}
	}
}

// Walls that cross behind the throat plane meet where their straight lines do; those
// that open or end before do not.
func TestWallsCrossBehindTheThroat(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rise := rapid.Float64Range(-0.2, 1).Draw(t, "rise of the body")
		fall := rapid.Float64Range(-0.2, 1).Draw(t, "fall of the cowl")
		ends := rapid.Float64Range(1.05, 4).Draw(t, "end of the cowl")
		o := &Outline{
			Body:      []contour.Point{{}, {X: 1, Y: 0.1}, {X: 5, Y: 0.1 + 4*rise}},
			CowlInner: []contour.Point{{X: 0.6, Y: 0.3}, {X: 1, Y: 0.3}, {X: ends, Y: 0.3 - (ends-1)*fall}},
			ThroatX:   1,
		}
		want := math.Inf(1) // of 0.1 + rise s = 0.3 - fall s
		if rise+fall > 0 {
			want = 1 + 0.2/(rise+fall)
		}
		x, corner, ok := o.Crossing()
		switch {
		case math.Abs(want-ends) < 1e-9: // to rounding at the end of the cowl
		case ok != (want < ends):
			t.Fatalf("crossing %t at %v, the lines meet at %v, the cowl ends at %v", ok, x, want, ends)
		case ok && (math.Abs(x-want) > 1e-9*want || corner != o.CowlInner[2]):
			t.Fatalf("crossing at %v ahead of %v, want %v", x, corner, want)
		}
	})
}

// The trace beside the chain tells the throat behind a lip shock that misses the
// shoulder; capture and the lip are the same.
func TestTraceBesideTheChain(t *testing.T) {
	_, flow := flowOf(t, veyric())
	cruise, takeover := &flow.Points[0], &flow.Points[1]
	if cruise.Trace != nil || cruise.Traced {
		t.Error("shock-on-lip was traced")
	}
	beside := takeover.Trace
	if beside == nil || takeover.Traced {
		t.Fatalf("traced %t, trace %v", takeover.Traced, beside)
	}
	capture, _ := takeover.Value("capture")
	within(t, "capture", beside.Captured.Capture, capture, 1e-9)
	lip, _ := takeover.Value("lip_mach")
	within(t, "lip Mach number", beside.Regions[beside.LipRegion].Mach, lip, 1e-9)
	miss, _ := takeover.Value("lip_shock_miss")
	within(t, "miss", -beside.LipShockMiss, miss, 1e-9)
	if again, err := problemOf(t, veyric()).Freeze(nil).Trace(takeover.Point, wave.Settings{}); err != nil || again.Ending != nil {
		t.Errorf("traced anew: %v, %v", err, again)
	}
}

// Straight shocks tell nothing of a given outline, which is traced in every draw.
func TestStraightClearanceOfAnOutline(t *testing.T) {
	built := builtOf(t, outlined(t, veyric()), Tolerances{Mach: 0.02})
	clearance := make([]float64, len(built.definition.Points))
	built.StraightClearance(nil, []float64{0.01}, clearance)
	for i, c := range clearance {
		if !math.IsNaN(c) {
			t.Errorf("clearance %v at point %d", c, i)
		}
	}
}
