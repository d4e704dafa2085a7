package wave_test

import (
	"math"
	"math/rand/v2"
	"reflect"
	"sync"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/wave"
)

// gap is the largest relative jump of mass, momentum and energy flux through a
// front, rebuilt from its end points and the states beside it alone.
func gap(r *wave.Trace, f wave.Front) float64 {
	length := contour.Distance(f.From, f.To)
	nx, ny := -(f.To.Y-f.From.Y)/length, (f.To.X-f.From.X)/length
	through := func(region int) [4]float64 {
		s := r.Regions[region]
		density := s.Pressure / r.TemperatureRatio(region)
		u := s.Mach * math.Sqrt(r.Gas.Gamma*r.TemperatureRatio(region))
		sin, cos := math.Sincos(s.FlowAngle)
		mass := density * u * (cos*nx + sin*ny)
		heat := r.Gas.Gamma/(r.Gas.Gamma-1)*r.TemperatureRatio(region) + u*u/2
		return [4]float64{mass, mass*u*cos + s.Pressure*nx, mass*u*sin + s.Pressure*ny, mass * heat}
	}
	a, b := through(f.Below), through(f.Above)
	s := r.Regions[f.Below]
	scale := s.Pressure * (1 + r.Gas.Gamma*s.Mach*s.Mach)
	worst := 0.0
	for i := range a {
		worst = max(worst, math.Abs(a[i]-b[i])/scale)
	}
	return worst
}

// Every shock and slip line conserves mass, momentum and energy to rounding, every
// wavelet mass and energy; total pressure never rises along a particle's path.
func TestConservationAcrossEveryFront(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 1))
	exact, rough := 0, 0
	for range count(20, 200) {
		s := sampleOf(t, rng)
		r := fly(t, s.geometry(0, 2), s.mach, s.incidence, wave.Settings{WithoutError: true, Events: 3000})
		height := 0.16
		for _, f := range r.Fronts {
			// Shorter fronts lose their direction in the rounding of their ends.
			if contour.Distance(f.From, f.To) < 1e-3*height {
				continue
			}
			ahead, behind := r.Regions[f.Above], r.Regions[f.Below] // of a wave that runs up
			if f.Family < 0 {
				ahead, behind = behind, ahead
			}
			if f.Family != 0 && !f.Merged && behind.TotalPressure > ahead.TotalPressure*(1+1e-14) {
				t.Errorf("%v of %v: total pressure rises from %v to %v", f.Kind, s.mach, ahead.TotalPressure, behind.TotalPressure)
			}
			if f.Merged || f.Kind == wave.Wavelet {
				rough++
				continue
			}
			exact++
			if g := gap(r, f); g > 1e-11 {
				t.Errorf("%v from %v to %v leaves %g open", f.Kind, f.From, f.To, g)
			}
		}
	}
	if exact < 200 || rough < 200 {
		t.Errorf("%d exact fronts and %d wavelets or merged ones tested: too few", exact, rough)
	}
}

// Over every stream tube mass and energy close to rounding, momentum to what
// wavelets and merged fronts leave open; so do capture by mass and by streamline,
// and spillage by streamline and by momentum.
func TestClosureOfRandomInlets(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	tested := 0
	for range count(40, 400) {
		s := sampleOf(t, rng)
		r := fly(t, s.geometry(0, 2), s.mach, s.incidence, wave.Settings{WithoutError: true})
		if math.IsNaN(r.Captured.Capture) {
			continue
		}
		tested++
		within(t, "capture", r.Captured.Traced, r.Captured.Capture, 1e-9)
		within(t, "spillage", r.Captured.Spillage, r.Captured.Balance, r.OpenMomentum+1e-11)
		tubes := []wave.Closure{r.Spilled}
		for _, station := range r.Stations {
			if station.Err == nil {
				tubes = append(tubes, station.Closure)
			}
		}
		for _, tube := range tubes {
			within(t, "mass of a tube", tube.Mass, 0, r.OpenMass+1e-10)
			within(t, "energy of a tube", tube.Energy, 0, r.OpenMass+1e-10)
			within(t, "momentum of a tube", tube.Momentum, 0, r.OpenMomentum+1e-11)
		}
		within(t, "mass left open", r.OpenMass, 0, 1e-5)
	}
	if tested < 20 {
		t.Errorf("%d inlets tested", tested)
	}
}

// The forces by segment are the pressures of the wall pieces, which lie end to end
// from the start of a segment to its end, or to the plane.
func TestForcesAreWallPressures(t *testing.T) {
	for _, mach := range []float64{5, 6.4} {
		c := chainOf(t, veyric(mach, 1))
		g := c.geometry(0)
		r := fly(t, g, mach, 1, wave.Settings{})
		scale := 1 / (gas.Air.DynamicPressure(1, mach) * 0.16)
		next := 0
		for _, f := range r.Forces {
			var want contour.Point
			at := f.From
			for ; next < len(r.Walls) && r.Walls[next].Surface == f.Surface && r.Walls[next].Segment == f.Segment; next++ {
				w := r.Walls[next]
				side := 1.0
				if w.Surface == wave.CowlInner {
					side = -1
				}
				push := side * (r.Regions[w.Region].Pressure - 1) * scale
				want.X += push * (w.To.Y - w.From.Y)
				want.Y -= push * (w.To.X - w.From.X)
				within(t, "gap between wall pieces", contour.Distance(at, w.From), 0, 1e-9)
				at = w.To
			}
			within(t, "end of a segment", contour.Distance(at, f.To), 0, 1e-9)
			within(t, "force along x", f.X, want.X, 1e-13)
			within(t, "force along y", f.Y, want.Y, 1e-13)
		}
		if next != len(r.Walls) {
			t.Errorf("%d of %d wall pieces bear a force", next, len(r.Walls))
		}
		for _, f := range r.Forces[:len(r.Forces)-1] {
			if f.To.X > g.Planes[0]+1e-12 {
				t.Errorf("%v %d reaches past the plane: %v", f.Surface, f.Segment, f.To)
			}
		}
		within(t, "end of the outer cowl", r.Forces[len(r.Forces)-1].To.X, g.CowlInner[0].X+g.OuterLength, 1e-12)
	}
}

// The parts of a plane lie end to end from body to cowl, their shares are those of
// the whole, and the averages are those of the parts.
func TestPartsTileThePlane(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 9))
	tested := 0
	for range 40 {
		s := sampleOf(t, rng)
		r := fly(t, s.geometry(0, 1), s.mach, s.incidence, wave.Settings{WithoutError: true})
		for _, station := range r.Stations {
			if station.Err != nil {
				continue
			}
			tested++
			at := station.Profile[0].Low
			var share, height, mach, recovery, pressure float64
			for _, p := range station.Profile {
				within(t, "gap between parts", p.Low, at, 1e-14)
				at = p.High
				state := r.Regions[p.Region]
				share, height = share+p.Share, height+p.High-p.Low
				mach, recovery = mach+p.Share*state.Mach, recovery+p.Share*state.TotalPressure
				pressure += (p.High - p.Low) * state.Pressure
			}
			within(t, "share of the mass", share, 1, 1e-13)
			within(t, "height", height, station.Height, 1e-13)
			within(t, "Mach number", mach, station.Mach, 1e-12)
			within(t, "recovery", recovery, station.Recovery, 1e-12)
			within(t, "pressure", pressure/height, station.Pressure, 1e-12)
		}
	}
	if tested < 20 {
		t.Errorf("%d planes tested", tested)
	}
}

// The outer cowl of veyric-6 in the free stream is the wedge of the chain's cowl
// drag, with the body's shocks ahead of the lip.
func TestOuterCowlIsTheWedge(t *testing.T) {
	c := chainOf(t, veyric(6, 0))
	r := fly(t, c.geometry(0), 6, 0, wave.Settings{})
	last := r.Forces[len(r.Forces)-1]
	if last.Surface != wave.CowlOuter {
		t.Fatal("no outer cowl")
	}
	within(t, "cowl drag", last.X, c.flown("cowl_drag"), 1e-9)
}

// A larger inlet is the same inlet: nothing but lengths changes.
func TestScaleDoesNotMatter(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 8))
	for range 10 {
		s := sampleOf(t, rng)
		g := s.geometry(0, 1)
		settings := wave.Settings{Wavelet: 3 * degree, Threshold: 0.01, WithoutError: true}
		small := fly(t, g, s.mach, s.incidence, settings)
		const k = 1 << 10 // a power of two scales without rounding
		for _, points := range [][]contour.Point{g.Body, g.CowlInner} {
			for i := range points {
				points[i] = contour.Point{X: k * points[i].X, Y: k * points[i].Y}
			}
		}
		g.OuterLength *= k
		for i := range g.Planes {
			g.Planes[i] *= k
		}
		large := fly(t, g, s.mach, s.incidence, settings)
		if small.Events != large.Events || !reflect.DeepEqual(small.Regions, large.Regions) {
			t.Errorf("Mach %v: %d and %d events", s.mach, small.Events, large.Events)
		}
	}
}

// The same input gives the same bits, whatever other traces ran before or run beside
// it.
func TestDeterminism(t *testing.T) {
	c := chainOf(t, veyric(6.6, 1))
	g := c.geometry(0, 2)
	machs := []float64{6.6, 4.5, 7, 5.2}
	var alone []*wave.Trace
	for _, mach := range machs {
		alone = append(alone, fly(t, g, mach, 1, wave.Settings{}))
	}
	if alone[0].Events < 100 {
		t.Fatalf("%d events", alone[0].Events)
	}
	beside := make([]*wave.Trace, 4*len(machs))
	var wait sync.WaitGroup
	for i := range beside {
		wait.Go(func() {
			trace, err := wave.Run(gas.Air, wave.FreeStream{Mach: machs[i%len(machs)], Incidence: degree}, g, wave.Settings{})
			if err == nil {
				beside[i] = trace
			}
		})
	}
	wait.Wait()
	for i, b := range beside {
		a := alone[i%len(machs)]
		if b == nil || !reflect.DeepEqual(a.Regions, b.Regions) || !reflect.DeepEqual(a.Fronts, b.Fronts) ||
			!reflect.DeepEqual(a.Walls, b.Walls) || !reflect.DeepEqual(a.Error, b.Error) {
			t.Errorf("Mach %v: two runs differ", machs[i%len(machs)])
		}
	}
}

// Above shock-on-lip the ramp shocks fall inside the lip, by what their straight
// lines say as long as they do not cross before.
func TestShockInsideTheLip(t *testing.T) {
	c := chainOf(t, article([]float64{11}, 7, 4, 4.5, 0))
	r := fly(t, c.geometry(0), 4.5, 0, wave.Settings{})
	if len(r.LipShocks) != 1 || !r.LipShocks[0].Inside || r.LipShocks[0].Corner != 1 {
		t.Fatalf("shocks at the lip: %+v", r.LipShocks)
	}
	beta := angleOf(fronts(r, wave.Shock, 1)[0])
	lip := c.Contour.Lip
	within(t, "clearance", r.LipShocks[0].Clearance, (lip.X-lip.Y/math.Tan(beta*degree))/0.16, 1e-9)
	within(t, "capture", r.Captured.Capture, 1, 1e-9)
	if !(r.LipShocks[0].Clearance < -0.01) {
		t.Errorf("clearance %v, want inside", r.LipShocks[0].Clearance)
	}
}
