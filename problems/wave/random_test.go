package wave_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/wave"
)

// The error that a trace reports at default settings bounds its distance from the
// fine one; capture agrees to 1e-4, mass-averaged recovery and throat Mach number to
// 1e-3 where neither trace ran into its event budget.
func TestReportedErrorBoundsTheObservedOne(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	compared := 0
	for range count(30, 200) {
		s := sampleOf(t, rng)
		g := s.geometry(0, 2)
		fine := wave.Fine()
		fine.WithoutError = true
		rough, exact := fly(t, g, s.mach, s.incidence, wave.Settings{}), fly(t, g, s.mach, s.incidence, fine)
		if !math.IsNaN(rough.Captured.Capture) {
			within(t, "capture", rough.Captured.Capture, exact.Captured.Capture, min(1e-4, rough.Error.Capture+1e-12))
			within(t, "spillage", rough.Captured.Spillage, exact.Captured.Spillage, rough.Error.Spillage+1e-12)
		}
		for i := range rough.Stations {
			a, b, bound := &rough.Stations[i], &exact.Stations[i], rough.Error.Stations[i]
			if a.Err != nil || b.Err != nil || exact.Threshold > wave.Fine().Threshold {
				continue
			}
			compared++
			within(t, "recovery", a.Recovery, b.Recovery, bound.Recovery+1e-12)
			within(t, "Mach number", a.Mach, b.Mach, bound.Mach+1e-12)
			within(t, "pressure", a.Pressure, b.Pressure, bound.Pressure+1e-12)
			if rough.Threshold == wave.DefaultThreshold {
				within(t, "recovery against fine", a.Recovery, b.Recovery, 1e-3)
				within(t, "Mach number against fine", a.Mach, b.Mach, 1e-3*b.Mach)
			}
		}
	}
	if compared < 30 {
		t.Errorf("%d stations compared", compared)
	}
}

// sound fails on a trace that breaks its promises: numbers present or a reason with
// a place.
func sound(t testing.TB, r *wave.Trace) {
	t.Helper()
	if r.Events > r.Settings.Events+2 {
		t.Errorf("%d events, budget %d", r.Events, r.Settings.Events)
	}
	for _, e := range []*wave.Ending{r.Ending, r.OutsideEnding} {
		if e != nil && (e.Reason.String() == "" || e.Site == "" || math.IsNaN(e.Place.X+e.Place.Y) || !(e.State.Mach >= 1)) {
			t.Errorf("ending without reason, place or state: %+v", *e)
		}
	}
	var ending *wave.Ending
	for _, s := range r.Stations {
		switch {
		case s.Err != nil && !errors.As(s.Err, &ending):
			t.Errorf("station missing for %v", s.Err)
		case s.Err == nil && !(s.Mach > 1 && s.Recovery > 0 && s.Recovery < 1+1e-6 && s.Pressure > 0 && s.Worst <= s.Best):
			t.Errorf("station %+v", s)
		case s.Err == nil && !(math.Abs(s.Closure.Mass) < 1e-4):
			t.Errorf("mass of the captured tube leaves %v open", s.Closure.Mass)
		}
	}
	if r.Ending == nil && (math.IsNaN(r.Captured.Capture) || math.IsNaN(r.Captured.Traced)) {
		t.Errorf("captured stream %+v without a reason", r.Captured)
	}
	for i := range r.Regions {
		if s := r.Regions[i]; !(s.Mach >= 1) || !(s.Pressure > 0) || math.IsNaN(s.FlowAngle) || !(s.TotalPressure <= 1+1e-2) {
			t.Errorf("region %d: %+v", i, s)
		}
	}
}

// Any inlet at any condition ends with numbers or with a reason and a place.
func TestAnyInletEndsSomehow(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	between := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	runs, endings := 0, 0
	for range count(25, 500) {
		g := outlineOf(rng)
		for range count(8, 20) {
			stream := wave.FreeStream{Mach: between(1.5, 8), Incidence: between(-6, 6) * degree}
			r, err := wave.Run(gas.Air, stream, g, wave.Settings{WithoutError: true, Events: count(4000, wave.DefaultEvents)})
			if err != nil {
				continue // walls that meet ahead of a plane
			}
			runs++
			if r.Ending != nil {
				endings++
			}
			sound(t, r)
		}
	}
	t.Logf("%d runs, %d endings", runs, endings)
	if runs < 100 || endings == 0 || endings > runs/2 {
		t.Errorf("%d of %d runs ended early: not the test it should be", endings, runs)
	}
}

// FuzzRun: no input makes a trace panic, hang or break its promises.
func FuzzRun(f *testing.F) {
	f.Add(6.0, 0.0, 8.0, 15.0, 1.2, 8.0, 12.0)
	f.Add(3.0, -2.0, 14.0, 3.0, 0.7, -4.0, 5.0)
	f.Add(1.3, 3.0, -3.0, 1.0, 0.4, 0.0, 0.0)
	f.Add(20.0, 0.0, -20.0, 5.0, 2.0, 12.0, 30.0)
	f.Add(6.0, 1.3, 8.0, 7.0, -0.35, 8.0, 87.0)       // planes ahead of the leading edge
	f.Add(9.83, -19.7, 63.5, 22.0, 0.133, 75.0, 83.2) // waves that pass the vertical
	f.Fuzz(func(t *testing.T, mach, incidence, first, second, lip, cowl, outer float64) {
		g := wedge(first, cowl, lip, lip+0.3, lip+0.9)
		g.Body = []contour.Point{
			{}, {X: 0.6, Y: 0.6 * math.Tan(first*degree)},
			{X: 1.5, Y: 0.6*math.Tan(first*degree) + 0.9*math.Tan(second*degree)},
			{X: 2.5, Y: 0.6*math.Tan(first*degree) + 0.9*math.Tan(second*degree) + math.Tan(cowl*degree)},
		}
		g.OuterAngle = outer * degree
		r, err := wave.Run(gas.Air, wave.FreeStream{Mach: mach, Incidence: incidence * degree}, g, wave.Settings{Events: 2000})
		if err == nil {
			sound(t, r)
		}
	})
}
