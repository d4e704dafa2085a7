package wave_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// Each reason for a trace to end, with its place and the state that could not go on.
func TestEndings(t *testing.T) {
	incident, err := shock.Weak(gas.Air, 2, 14*degree)
	if err != nil {
		t.Fatal(err)
	}
	foot := 1 / math.Tan(incident.WaveAngle)
	sonic, _ := shock.SonicTurning(gas.Air, 2)
	largest, _ := shock.LargestTurning(gas.Air, 2)
	// The wedge of 14 deg at Mach 2 is beyond the detachment of its reflection, and
	// two of 15 deg beyond that of their crossing (Ben-Dor: 12.90 deg the lower criterion).
	cases := map[string]struct {
		g        wave.Geometry
		mach     float64
		settings wave.Settings
		reason   wave.Reason
		site     string
		place    contour.Point
		ahead    float64 // Mach number of the state
	}{
		"wedge too steep": {wedge(30, 0, 0.5, 1), 2, wave.Settings{}, wave.Detached, "body corner 1", contour.Point{}, 2},
		"no reflection":   {wedge(14, 0, 0.3, 2), 2, wave.Settings{}, wave.MachReflection, "cowl inside", contour.Point{X: foot, Y: 1}, incident.Mach2},
		"cowl too steep":  {wedge(2, -30, 0.3, 0.4), 2, wave.Settings{}, wave.Detached, "lip", contour.Point{X: 0.3, Y: 1}, 2},
		"barely detached": {wedge((sonic+largest)/2/degree, 0, 0.3, 2), 2, wave.Settings{}, wave.SubsonicPocket, "body corner 1", contour.Point{}, 2},
		"vacuum":          {wedge(-20, 0, 0.3, 2), 20, wave.Settings{}, wave.Evacuated, "body corner 1", contour.Point{}, 20},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			r := fly(t, c.g, c.mach, 0, c.settings)
			if r.Ending == nil {
				t.Fatal("no ending")
			}
			var ending *wave.Ending
			if !errors.As(r.Stations[0].Err, &ending) || ending != r.Ending {
				t.Fatalf("the station is missing for %v", r.Stations[0].Err)
			}
			if ending.Reason != c.reason || ending.Site != c.site {
				t.Errorf("%v", ending)
			}
			within(t, "x", ending.Place.X, c.place.X, 1e-9)
			within(t, "y", ending.Place.Y, c.place.Y, 1e-9)
			within(t, "Mach number", ending.State.Mach, c.ahead, 1e-9)
			if !math.IsInf(r.Error.Stations[0].Mach, 1) {
				t.Errorf("error bound %v of a station that was not reached", r.Error.Stations[0].Mach)
			}
			if !strings.Contains(ending.Error(), c.reason.String()) {
				t.Errorf("message %q", ending)
			}
		})
	}
}

// Walls of very different directions lean the sweep away from the stream: where a
// wave leans upstream of it, another direction is tried. The cowl turns up by 70
// deg far downstream of an inlet that a straight cowl leaves alone.
func TestSweepLeansWithTheFlow(t *testing.T) {
	g := wedge(0, -0.5, 0.3, 1, 5.5)
	straight := fly(t, wedge(0, -0.5, 0.3, 1), 1.2, 0, wave.Settings{})
	g.CowlInner = append(g.CowlInner, contour.Point{X: 6, Y: 3})
	r := fly(t, g, 1.2, 0, wave.Settings{})
	if straight.Ending != nil || r.Stations[0].Err != nil {
		t.Fatalf("straight: %v, flared: %v", straight.Ending, r.Stations[0].Err)
	}
	within(t, "Mach number", r.Stations[0].Mach, straight.Stations[0].Mach, 1e-9)
	within(t, "pressure", r.Stations[0].Pressure, straight.Stations[0].Pressure, 1e-9)
}

// Nearly sonic flow has waves normal to every direction at hand.
func TestNearlySonicStreamIsSteep(t *testing.T) {
	g := wedge(0, -1e-7, 0.3, 1)
	g.Body = append(g.Body, contour.Point{X: 6, Y: 0.02})
	r := fly(t, g, 1.00001, 0, wave.Settings{})
	if r.Ending == nil || r.Ending.Reason != wave.SteepWave || r.Ending.Site != "lip" {
		t.Errorf("ending %v", r.Ending)
	}
}

// A crossing too strong to be regular ends in the duct; capture, known at the lip,
// stays.
func TestMachReflectionOfACrossing(t *testing.T) {
	r := fly(t, wedge(15, -15, 0.1, 1), 2, 0, wave.Settings{})
	if r.Ending == nil || r.Ending.Reason != wave.MachReflection || r.Ending.Site != "crossing" {
		t.Fatalf("ending %v", r.Ending)
	}
	within(t, "turning between the streams", r.Ending.Turning, 30*degree, 1e-12)
	if !(r.Captured.Capture > 0.5) || r.OutsideEnding != nil {
		t.Errorf("capture %v, outside %v", r.Captured.Capture, r.OutsideEnding)
	}
}

// A detached outer cowl ends the outside alone.
func TestDetachedOuterCowlLeavesTheDuct(t *testing.T) {
	g := wedge(8, 4, 1.6, 2)
	g.OuterAngle = 40 * degree
	r := fly(t, g, 2.5, 0, wave.Settings{})
	if r.OutsideEnding == nil || r.OutsideEnding.Reason != wave.Detached || r.OutsideEnding.Site != "outer cowl" {
		t.Errorf("outside: %v", r.OutsideEnding)
	}
	if r.Ending != nil || !(r.Stations[0].Recovery > 0.9) {
		t.Errorf("duct: %v, recovery %v", r.Ending, r.Stations[0].Recovery)
	}
}

// No run exceeds its budgets; past half the events the threshold rises.
func TestBudgets(t *testing.T) {
	c := chainOf(t, veyric(7, 0))
	g := c.geometry(3)
	full := fly(t, g, 7, 0, wave.Settings{WithoutError: true})
	if full.Events < 300 {
		t.Fatalf("%d events: too few to test a budget", full.Events)
	}
	r := fly(t, g, 7, 0, wave.Settings{Events: 100})
	if r.Ending == nil || r.Ending.Reason != wave.EventBudget || r.Events > 101 {
		t.Errorf("%d events, ending %v", r.Events, r.Ending)
	} else if got := r.Ending.Error(); !strings.HasPrefix(got, "more wave crossings than are traced, up to x ") || strings.Contains(got, "turning") {
		t.Errorf("the ending reads %q", got)
	}
	if !(r.Threshold > wave.DefaultThreshold) || full.Threshold < wave.DefaultThreshold {
		t.Errorf("threshold %v, with a full budget %v", r.Threshold, full.Threshold)
	}
	r = fly(t, g, 7, 0, wave.Settings{Fronts: 10})
	if r.Ending == nil || r.Ending.Reason != wave.FrontBudget {
		t.Errorf("ending %v", r.Ending)
	}
}

// What no trace can use is refused all at once.
func TestRefusals(t *testing.T) {
	refused := func(g wave.Geometry, stream wave.FreeStream, s wave.Settings, wants ...string) {
		t.Helper()
		_, err := wave.Run(gas.Air, stream, g, s)
		if err == nil {
			t.Fatalf("accepted, want %q", wants)
		}
		for _, want := range wants {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("%q does not mention %q", err, want)
			}
		}
	}
	good, stream := wedge(8, 4, 1.2, 2), wave.FreeStream{Mach: 3}
	refused(good, wave.FreeStream{Mach: 1, Incidence: 1}, wave.Settings{Wavelet: -1, Threshold: 1, Fronts: 1, Events: -3},
		"Mach number 1", "incidence 1", "wavelet size", "strength threshold", "front budget", "event budget")
	refused(wave.Geometry{OuterAngle: 2, OuterLength: -1}, stream, wave.Settings{},
		"outer cowl length", "outer cowl angle", "no averaging plane", "body has 0 points", "inner cowl has 0 points")

	g := wedge(8, 4, 1.2, 1, 2)
	g.Shoulder = 9
	refused(g, stream, wave.Settings{}, "shoulder 9", "plane 1")
	g = wedge(8, 4, 1.2, 2)
	g.Body[1].X = 0
	g.CowlInner[1].Y = math.NaN()
	refused(g, stream, wave.Settings{}, "body point 2", "inner cowl point 2")
	refused(wedge(8, 4, -0.5, 2), stream, wave.Settings{}, "lip does not lie downstream")
	refused(wedge(30, -30, 0.2, 2), stream, wave.Settings{}, "meet at x")
	g = wedge(8, 4, 1.2, 2)
	g.CowlInner[0].Y = -1
	refused(g, stream, wave.Settings{}, "not above the leading edge")
	refused(wedge(60, -60, 0.1, 0.2), stream, wave.Settings{}, "differ by")
	if _, err := wave.Run(gas.Perfect{Gamma: 2, R: 1}, stream, good, wave.Settings{}); err == nil {
		t.Error("a ratio of specific heats of 2 was accepted")
	}
}
