package inlet

import (
	"context"
	"math"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// A shock of 10 deg at Mach 3.6 that falls inside the lip of a cowl along the stream
// reflects there: p3/p1 = 2.32 * 1.991 (the worked example of a regular reflection in
// Anderson, Fundamentals of Aerodynamics, chapter 9; from memory, its wave angles read
// off a chart, hence 3 %), and to rounding two shocks of 10 deg one after the other,
// against the separation limit 1 + 0.3 M^2. No quantity of the lip knows of it: the stream ahead of the lip meets
// no wave there.
func TestWorstRiseIsTheReflectionOfASwallowedShock(t *testing.T) {
	inside := func(throat float64) *PointFlow {
		d := veyric().at(3.6, 0)
		d.RampAngle, d.CowlAngle, d.LipTurning = nil, nil, nil
		foot := math.Tan(10 * radian)
		d.Outline = &Outline{
			Body:       []contour.Point{{}, {X: 3, Y: 3 * foot}, {X: 6, Y: 3 * foot}},
			CowlInner:  []contour.Point{{X: 2, Y: 1}, {X: 6, Y: 1}},
			OuterAngle: 8 * radian, ThroatX: throat,
		}
		f, err := problemOf(t, d).Freeze(nil).At(context.Background(), d.Points[0], VerifyTrace())
		if err != nil {
			t.Fatal(err)
		}
		if f.Err != nil || !f.Traced {
			t.Fatalf("not traced to the throat: %v", f.Err)
		}
		return f
	}
	f := inside(3.1)
	rise, ok := f.WorstRise()
	if !ok || rise.Surface != wave.CowlInner {
		t.Fatalf("%+v, %v", rise, ok)
	}
	within(t, "Mach number ahead", rise.Mach, 3.6, 1e-12)
	within(t, "pressure ratio", rise.Ratio, 2.32*1.991, 0.03*2.32*1.991)
	air := gas.Perfect{Gamma: 1.4, R: 287.05}
	first, err := shock.Weak(air, 3.6, 10*radian)
	if err != nil {
		t.Fatal(err)
	}
	second, err := shock.Weak(air, first.Mach2, 10*radian)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "pressure ratio by two shocks", rise.Ratio, first.Jump.Pressure*second.Jump.Pressure, 1e-9)
	within(t, "share of the separation limit", rise.Share, rise.Ratio/(1+0.3*3.6*3.6), 1e-12)
	within(t, "height of the reflection", rise.Place.Y, 1, 1e-9)
	within(t, "place of the reflection", rise.Place.X, 1/math.Tan(24*radian), 0.02)
	if margin, reason := f.Value("separation_margin"); !(margin > 0.5) {
		t.Errorf("separation margin %v (%v), yet it knows nothing of the reflection", margin, reason)
	}

	if rise, ok := inside(2.2).WorstRise(); ok { // a plane ahead of the reflection
		t.Errorf("a rise behind the throat plane: %+v", rise)
	}
	if _, ok := (&PointFlow{}).WorstRise(); ok {
		t.Error("a rise without a trace")
	}
}

// Where the lip shock meets the shoulder it is cancelled, and no wall of the duct sees
// a rise ahead of the throat plane.
func TestNoRiseWhereTheLipShockMeetsTheShoulder(t *testing.T) {
	d := veyric().asking()
	flow, err := problemOf(t, d).Freeze(nil).At(context.Background(), d.Points[0], VerifyTrace())
	if err != nil || !flow.Traced {
		t.Fatalf("%v, %+v", err, flow)
	}
	if rise, ok := flow.WorstRise(); ok {
		t.Errorf("%+v", rise)
	}
}
