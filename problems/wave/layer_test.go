package wave_test

import (
	"math"
	"testing"

	"rampwright/problems/gas"
	"rampwright/problems/inlet"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// flow is a uniform stream, pressure and total pressure over those of the free
// stream, direction in rad.
type flow struct{ mach, angle, p, pt float64 }

func (f flow) shocked(t *testing.T, turning float64) flow {
	t.Helper()
	w, err := shock.Weak(gas.Air, f.mach, math.Abs(turning))
	if err != nil {
		t.Fatal(err)
	}
	return flow{w.Mach2, f.angle + turning, f.p * w.Jump.Pressure, f.pt * w.Jump.TotalPressure}
}

func (f flow) expanded(t *testing.T, turning float64) flow {
	t.Helper()
	mach, ratio, err := shock.Expand(gas.Air, f.mach, math.Abs(turning))
	if err != nil {
		t.Fatal(err)
	}
	return flow{mach, f.angle + turning, f.p * ratio, f.pt}
}

// refracted is the upper flow behind a shock that comes out of a stronger lower flow
// and sends an expansion back into it, by bisection on the direction.
func refracted(t *testing.T, upper, lower flow) flow {
	t.Helper()
	largest, _ := shock.LargestTurning(gas.Air, upper.mach)
	low, high := lower.angle, upper.angle+0.999*largest
	for range 60 {
		angle := (low + high) / 2
		if upper.shocked(t, angle-upper.angle).p < lower.expanded(t, angle-lower.angle).p {
			low = angle
		} else {
			high = angle
		}
	}
	return upper.shocked(t, low-upper.angle)
}

// layer computes by hand, from oblique shocks and expansions alone, the flow next to
// the cowl when the merged ramp shocks fall just inside the lip: the free stream
// expands around the lip, passes the merged shock, its reflection from the cowl, and
// then takes the pressure behind the lip shock of the core. Waves between are left
// out. It returns that pressure and the layer's total pressure and Mach number; below
// 1 no supersonic layer exists.
func layer(t *testing.T, mach, cowl float64, ramps []float64) (pressure, total, layerMach float64) {
	free := flow{mach: mach, p: 1, pt: 1}
	core := free
	for _, angle := range ramps {
		core = core.shocked(t, angle*degree)
	}
	merged := refracted(t, free, core)
	beside := refracted(t, free.expanded(t, cowl*degree), merged)
	reflected := beside.shocked(t, cowl*degree-beside.angle)
	pressure = core.shocked(t, cowl*degree-core.angle).p
	ratio := gas.Air.TotalPressureRatio(mach) * reflected.pt / pressure // pt/p
	square := 5 * (math.Pow(max(1, ratio), 2/7.) - 1)
	return pressure, reflected.pt, math.Sqrt(square)
}

// halcyre is a Mach 4.5 cruiser of three ramps.
func halcyre(mach float64) inlet.Definition {
	d := article([]float64{6.5, 6.5, 7}, 9, 4.5, mach, 0)
	d.CaptureHeight, d.CowlWedge = 0.9, inlet.Fixed(3)
	return d
}

// A little above shock-on-lip the merged ramp shock falls inside the lip. The layer
// between it and the cowl has lost most of its total pressure and must take the
// pressure behind the lip shock: at Mach 6 that leaves it sonic, and the trace ends
// there; at Mach 4.5 it stays supersonic. By hand and by the trace.
func TestSonicLayerBehindTheLip(t *testing.T) {
	cases := []struct {
		name  string
		d     inlet.Definition
		mach  float64
		cowl  float64
		ramps []float64
		sonic bool
	}{
		{"veyric", veyric(6, 0), 6.3, 8, []float64{8.08, 7.22, 8.44}, true},
		{"halcyre", halcyre(4.5), 4.55, 9, []float64{6.5, 6.5, 7}, false},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			pressure, total, mach := layer(t, c.mach, c.cowl, c.ramps)
			r := fly(t, chainOf(t, c.d).geometry(0), c.mach, 0, wave.Settings{})
			var first, last *wave.State // behind the reflection, and at the end
			for _, w := range r.Walls {
				s := &r.Regions[w.Region]
				if w.Surface == wave.CowlInner && s.TotalPressure < 0.9 {
					if first == nil {
						first = s
					}
					last = s
				}
			}
			t.Logf("by hand p %.2f pt %.4f Mach %.3f; traced p %.2f .. %.2f pt %.4f Mach %.3f .. %.3f; %v",
				pressure, total, mach, first.Pressure, last.Pressure, last.TotalPressure, first.Mach, last.Mach, r.Ending)
			if (mach < 1.05) != c.sonic {
				t.Errorf("Mach %.3f of the layer by hand", mach)
			}
			// What is left out by hand, the lip fan's effect on the merged shock and the
			// waves between, is of the order of the difference of pressure.
			within(t, "total pressure", last.TotalPressure, total, 0.03*total)
			within(t, "pressure", last.Pressure, pressure, 0.03*pressure)
			within(t, "Mach number", last.Mach, mach, 0.03*mach)
			if c.sonic {
				if r.Ending == nil || r.Ending.Reason != wave.SubsonicPocket || r.Ending.State.Mach > 1.1 || !(r.Ending.BehindLip > 0 && r.Ending.BehindLip < 0.1) {
					t.Errorf("ending %v", r.Ending)
				}
				return
			}
			if r.Ending != nil {
				t.Errorf("ending %v", r.Ending)
			}
		})
	}
}

// A hair above shock-on-lip the crossings lie within a millionth of the lip; the
// reflections merged into a fan must not put its wavelets out of order. What may end
// the trace is the nearly sonic layer, or the budget spent on it.
func TestHairAboveShockOnLip(t *testing.T) {
	g := chainOf(t, veyric(6, 0)).geometry(0)
	for _, excess := range []float64{1e-7, 1e-6, 1e-5, 1e-4, 1e-3} {
		for _, wavelet := range []float64{0.5, 1} {
			r := fly(t, g, 6+excess, 0, wave.Settings{Wavelet: wavelet * degree, WithoutError: true})
			if r.Ending != nil && r.Ending.Reason == wave.Irregular {
				t.Errorf("Mach 6 + %g: %v", excess, r.Ending)
			}
			within(t, "capture", r.Captured.Capture, 1, 1e-8)
		}
	}
}
