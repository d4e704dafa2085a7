package wave_test

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// printed returns the values of a row of the published table and half a unit of
// the last digit of each.
func printed(t *testing.T, id string) (values, halves []float64) {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/shocks.csv")
	if err != nil {
		t.Fatal(err)
	}
	reader := csv.NewReader(strings.NewReader(string(data)))
	reader.Comment, reader.FieldsPerRecord = '#', 6
	rows, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows {
		if row[0] != id {
			continue
		}
		for cell := range strings.SplitSeq(row[3], ";") {
			value, err := strconv.ParseFloat(cell, 64)
			if err != nil {
				t.Fatal(err)
			}
			_, decimals, _ := strings.Cut(cell, ".")
			values, halves = append(values, value), append(halves, 0.5*math.Pow(10, -float64(len(decimals))))
		}
		return values, halves
	}
	t.Fatalf("no row %s", id)
	return nil, nil
}

// reflected flies a wedge whose shock reflects from a cowl along the free stream,
// and returns the incident and the reflected shock.
func reflected(t *testing.T, mach, turning float64) (r *wave.Trace, incident, back wave.Front) {
	t.Helper()
	weak, err := shock.Weak(gas.Air, mach, turning*degree)
	if err != nil {
		t.Fatal(err)
	}
	place := 1 / math.Tan(weak.WaveAngle)
	r = fly(t, wedge(turning, 0, place/2, place+0.01), mach, 0, wave.Settings{})
	if r.Ending != nil {
		t.Fatal(r.Ending)
	}
	incident, back = fronts(r, wave.Shock, 1)[0], fronts(r, wave.Shock, -1)[0]
	within(t, "place of reflection", back.From.X, place, 1e-12)
	within(t, "height of reflection", back.From.Y, 1, 1e-12)
	return r, incident, back
}

// The table rows of regular reflection: course notebook (Niemeyer) to the printed
// digits, Anderson's example 4.7, read off charts, to 2 %.
func TestPublishedReflections(t *testing.T) {
	want, half := printed(t, "RR-3")
	turning := shock.Turning(gas.Air, 2.2, 35*degree) / degree
	r, incident, back := reflected(t, 2.2, turning)
	between := r.Regions[incident.Below]
	beta := between.FlowAngle/degree - angleOf(back)
	for i, got := range []float64{
		turning, between.Mach, beta, -angleOf(back),
		2.2 * math.Sin(angleOf(incident)*degree), between.Mach * math.Sin(beta*degree),
	} {
		within(t, "RR-3 value "+strconv.Itoa(i+1), got, want[i], half[i])
	}

	want, _ = printed(t, "RR-1")
	r, incident, back = reflected(t, 2.8, 16)
	between, behind := r.Regions[incident.Below], r.Regions[back.Above]
	for i, got := range []float64{angleOf(incident), between.Mach, -angleOf(back), behind.Pressure, behind.Mach} {
		within(t, "RR-1 value "+strconv.Itoa(i+1), got, want[i], 0.02*want[i])
	}
}

// Two shocks of one strength that cross are a reflection from the plane of
// symmetry.
func TestSymmetricCrossingIsTheWallReflection(t *testing.T) {
	for _, turning := range []float64{0.5, 4, 9, 15} {
		r, _, back := reflected(t, 4, turning)
		want := r.Regions[back.Above]

		g := wedge(turning, -turning, 0.02, 0.9)
		g.CowlInner[0].X = 1e-6 // the lip nearly above the leading edge
		g.CowlInner[1].Y = 1 - (g.CowlInner[1].X-1e-6)*math.Tan(turning*degree)
		g.OuterAngle = 0
		weak, err := shock.Weak(gas.Air, 4, turning*degree)
		if err != nil {
			t.Fatal(err)
		}
		g.Planes[0] = 0.5/math.Tan(weak.WaveAngle) + 0.01
		crossed := fly(t, g, 4, 0, wave.Settings{})
		if crossed.Ending != nil {
			t.Fatal(crossed.Ending)
		}
		up := fronts(crossed, wave.Shock, 1)
		got := crossed.Regions[up[len(up)-1].Below]
		within(t, "pressure", got.Pressure, want.Pressure, 1e-12*want.Pressure)
		within(t, "Mach number", got.Mach, want.Mach, 1e-12*want.Mach)
		within(t, "direction", got.FlowAngle, 0, 1e-12)
		within(t, "total pressure", got.TotalPressure, want.TotalPressure, 1e-12)
	}
}

// Mach 3, wedges of 10 and 5 degrees opposed: slip line and pressure computed
// independently.
func TestOpposedWedges(t *testing.T) {
	r := fly(t, wedge(10, -5, 0.1, 1.4), 3, 0, wave.Settings{})
	if r.Ending != nil {
		t.Fatal(r.Ending)
	}
	slips := fronts(r, wave.Slip, 0)
	if len(slips) != 1 {
		t.Fatalf("%d slip lines, want 1", len(slips))
	}
	within(t, "slip line", angleOf(slips[0]), 4.979847, 5e-7)
	for _, region := range []int{slips[0].Below, slips[0].Above} {
		within(t, "pressure ratio", r.Regions[region].Pressure, 2.840072, 5e-7)
	}
}

// Shock-on-lip designs are exact for the chain: every number of the throat and a
// capture of one.
func TestShockOnLipIsTheChain(t *testing.T) {
	for _, ramps := range [][]float64{{11}, {7, 8}, {6, 6.5, 7}, {4, 5, 5.5, 6}} {
		total := 0.0
		for _, angle := range ramps {
			total += angle
		}
		for _, mach := range []float64{3, 4, 5, 6, 7} {
			for _, share := range []float64{0.35, 0.7, 1} { // of the turning left to the cowl
				c := chainOf(t, article(ramps, share*total, mach, mach, 0))
				r := fly(t, c.geometry(0), mach, 0, wave.Settings{})
				if r.Ending != nil {
					t.Fatalf("ramps %v Mach %v: %v", ramps, mach, r.Ending)
				}
				s := r.Stations[0]
				within(t, "recovery", s.Recovery, c.flown("recovery"), 1e-9)
				within(t, "throat Mach number", s.Mach, c.flown("throat_mach"), 1e-9)
				within(t, "pressure ratio", s.Pressure, c.flown("pressure_ratio"), 1e-9*s.Pressure)
				within(t, "temperature ratio", s.Temperature, c.flown("temperature_ratio"), 1e-9*s.Temperature)
				within(t, "capture", r.Captured.Capture, 1, 1e-9)
				within(t, "traced capture", r.Captured.Traced, 1, 1e-9)
				within(t, "spillage", r.Captured.Spillage, 0, 1e-9)
				within(t, "error bound", r.Error.Stations[0].Mach, 0, 1e-9)
				if share < 1 {
					within(t, "lip shock's miss", r.LipShockMiss, 0, 1e-9)
				}
			}
		}
	}
}

// Below shock-on-lip no ramp shocks cross in the captured stream, and the chain's
// traced capture and spillage are exact. Veyric-6 keeps 0.677 at Mach 4.5.
func TestCaptureBelowShockOnLip(t *testing.T) {
	for _, mach := range []float64{4.2, 4.5, 5, 5.5, 5.9} {
		c := chainOf(t, veyric(mach, 0))
		r := fly(t, c.geometry(0), mach, 0, wave.Settings{})
		within(t, "capture", r.Captured.Capture, c.flown("capture"), 1e-9)
		within(t, "traced capture", r.Captured.Traced, c.flown("capture"), 1e-9)
		within(t, "spillage", r.Captured.Spillage, c.flown("spillage_drag"), 1e-9)
		within(t, "spillage by momentum", r.Captured.Balance, c.flown("spillage_drag"), 1e-9)
		within(t, "lip shock's miss", math.Abs(r.LipShockMiss), c.flown("lip_shock_miss"), 1e-9)
		if len(r.LipShocks) != 3 {
			t.Fatalf("%d shocks at the lip, want 3", len(r.LipShocks))
		}
		for _, s := range r.LipShocks {
			if s.Inside || s.Clearance < 0 {
				t.Errorf("Mach %v: shock of corner %d inside the lip by %v", mach, s.Corner, s.Clearance)
			}
		}
		if mach == 4.5 {
			within(t, "capture at Mach 4.5", r.Captured.Capture, 0.677, 5e-4)
		}
	}
}
