package inlet

import (
	"context"
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/wave"
)

// hinged is an inlet whose shocks meet the lip, drawn at random.
func hinged(t *rapid.T) (*Frozen, Definition) {
	lip := Fixed(rapid.Float64Range(4, 10).Draw(t, "lip turning"))
	mach := rapid.Float64Range(3.5, 7).Draw(t, "mach")
	d := Definition{
		Gas: gas.Air, CaptureHeight: 0.3, Width: 1, LipTurning: &lip, CowlWedge: Fixed(4), CowlLength: 0.25,
		ShockOnLip: Fixed(mach), DuctFactor: 1, Points: []Point{{Name: "design", Mach: mach, Pressure: 3000, Temperature: 220}},
	}
	for range rapid.IntRange(1, 3).Draw(t, "ramps") {
		d.RampAngle = append(d.RampAngle, Fixed(rapid.Float64Range(4, 8).Draw(t, "ramp")))
	}
	problem, err := New(d)
	if err != nil {
		t.Fatal(err)
	}
	f := problem.Freeze(nil)
	if _, err := f.Contour(); err != nil {
		t.Fatalf("the contour does not close: %v", err)
	}
	return f, d
}

// TestAPartAtRest: moved to where it stands, a part changes nothing, and the trace of
// the inlet at its design point agrees with the chain.
func TestAPartAtRest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, d := hinged(t)
		h := Hinge{rapid.IntRange(0, len(d.RampAngle)).Draw(t, "part")}
		angle, err := f.Angle(h)
		if err != nil {
			t.Fatal(err)
		}
		moved, err := f.Move(h, angle)
		if err != nil {
			t.Fatal(err)
		}
		_, before := f.OfGeometry()
		names, after := moved.OfGeometry()
		for i := range names {
			if math.Abs(after.Values[i]-before.Values[i]) > 1e-12*math.Max(1, math.Abs(before.Values[i])) {
				t.Errorf("%s changes from %v to %v", names[i].Name, before.Values[i], after.Values[i])
			}
		}
		chain, err := f.At(context.Background(), d.Points[0], SearchTrace())
		if err != nil {
			t.Fatal(err)
		}
		traced, err := moved.At(context.Background(), d.Points[0], SearchTrace())
		if err != nil {
			t.Fatal(err)
		}
		if !traced.Traced {
			t.Fatal("the moved inlet is not traced")
		}
		if chain.Err != nil || chain.Traced {
			return // the chain ends, or has its lip behind the wave from the focus
		}
		for _, name := range []string{"recovery", "throat_mach", "throat_pressure_kPa", "throat_temperature_K", "capture", "internal_contraction_over_self_start"} {
			want, _ := chain.Value(name)
			if got, why := traced.Value(name); !(math.Abs(got-want) <= 1e-9*math.Abs(want)) {
				t.Errorf("%s: trace %v (%v), chain %v", name, got, why, want)
			}
		}
	})
}

// TestPartsMoveAsRigidBodies: lengths and turnings within a part stay, nothing else
// moves, and the throat height is the distance of the duct's walls.
func TestPartsMoveAsRigidBodies(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, d := hinged(t)
		n := len(d.RampAngle)
		h := Hinge{rapid.IntRange(0, n).Draw(t, "part")}
		angle, err := f.Angle(h)
		if err != nil {
			t.Fatal(err)
		}
		by := rapid.Float64Range(-2, 2).Draw(t, "by") * radian
		moved, err := f.Move(h, angle+by)
		if err != nil {
			t.Fatal(err)
		}
		same := func(what string, a, b float64) {
			if math.Abs(a-b) > 1e-12*math.Max(1, math.Abs(a)) {
				t.Errorf("%s changes from %v to %v", what, a, b)
			}
		}
		now, err := moved.Angle(h)
		if err != nil { // a part moved into the duct leaves no contour, and says so
			if _, closed := moved.Contour(); closed == nil {
				t.Fatalf("a closed duct has no angle: %v", err)
			}
			return
		}
		same("the angle asked for", angle+by, now)
		before, _ := f.Contour()
		after, _ := moved.Contour()
		for i := range n {
			same("a ramp length", before.RampLength(i), after.RampLength(i))
		}
		same("x of the lip", before.Lip.X, after.Lip.X)
		same("y of the lip", before.Lip.Y, after.Lip.Y)
		for i := range max(h.Ramp, 1) {
			same("x of a fixed corner", before.Corners[i].X, after.Corners[i].X)
		}
		g := moved.Geometry()
		duct := heading(g.Body[len(g.Body)-2], g.Body[len(g.Body)-1])
		same("the duct's direction", before.CowlInner, duct)
		rear := g.CowlInner[len(g.CowlInner)-2:]
		wall := contour.Line{Through: rear[0], Angle: heading(rear[0], rear[1])}
		same("the cowl's direction behind", duct, wall.Angle)
		same("throat height", after.Throat, -wall.Height(after.Shoulder))
		if h.Ramp == 0 {
			flap := contour.Distance(g.CowlInner[0], g.CowlInner[1])
			line := contour.Line{Through: before.Lip, Angle: before.CowlInner}
			same("the flap's length", line.Along(before.Shoulder), flap)
			if by > 1e-6 && after.Throat <= before.Throat {
				t.Error("a cowl turned outward does not open the throat")
			}
		}
	})
}

// TestPartsThereAreNot reports the part and the ramps.
func TestPartsThereAreNot(t *testing.T) {
	cowl := Fixed(6)
	problem, err := New(Definition{
		Gas: gas.Air, CaptureHeight: 0.3, Width: 1, RampAngle: []Setting{Fixed(6), Fixed(6)}, CowlAngle: &cowl, CowlWedge: Fixed(4),
		ShockOnLip: Fixed(5), DuctFactor: 1, Points: []Point{{Name: "design", Mach: 5, Pressure: 3000, Temperature: 220}},
	})
	if err != nil {
		t.Fatal(err)
	}
	var none *NoHinge
	if _, err := problem.Freeze(nil).Move(Hinge{3}, 0.1); !errors.As(err, &none) || none.Ramps != 2 || none.Hinge.Ramp != 3 {
		t.Errorf("ramp 3 of 2: %v", err)
	}
	moved, err := problem.Freeze(nil).Move(Hinge{2}, 30*radian)
	if err != nil {
		t.Fatal(err)
	}
	flow, err := moved.At(context.Background(), Point{Mach: 5, Pressure: 3000, Temperature: 220}, wave.Settings{})
	if err != nil || flow.Err == nil {
		t.Errorf("a ramp turned through the cowl: %v, status %v", err, flow.Status())
	}
}

// TestThroatOfAMovedOutline: the throat height of an outline with a part turned is
// that of the walls given anew where the part has moved them.
func TestThroatOfAMovedOutline(t *testing.T) {
	frozen := func(o *Outline) *Frozen {
		d := outlined(t, veyric())
		if o != nil {
			d.Outline = o
		}
		return problemOf(t, d).Freeze(nil)
	}
	f := frozen(nil)
	for _, h := range []Hinge{{0}, {1}, {3}} {
		angle, err := f.Angle(h)
		if err != nil {
			t.Fatal(err)
		}
		for _, by := range []float64{-0.5, 0, 0.5} {
			moved, err := f.Move(h, angle+by*radian)
			if err != nil {
				t.Fatal(err)
			}
			g := moved.Geometry()
			want, err := frozen(&Outline{g.Body, g.CowlInner, g.OuterAngle, g.Planes[0]}).Contour()
			if err != nil {
				t.Fatal(err)
			}
			if got, err := moved.Contour(); err != nil || math.Abs(got.Throat-want.Throat) > 1e-12*want.Throat {
				t.Errorf("%s by %g deg: throat height %v m (%v), of the walls where they stand %v m", h.Name(), by, got.Throat, err, want.Throat)
			}
		}
	}
}
