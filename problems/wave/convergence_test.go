package wave_test

import (
	"math"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// order is the order at which errors fall when the step is halved twice.
func order(errors [3]float64) float64 { return math.Log2(errors[0]/errors[2]) / 2 }

// corner is a flat body that turns away by `turning` degrees at (1, 0), below a
// flat cowl.
func corner(turning float64, planes ...float64) wave.Geometry {
	g := wedge(0, 0, 0.9, planes...)
	g.Body = []contour.Point{{}, {X: 1}, {X: 3, Y: -2 * math.Tan(turning*degree)}}
	return g
}

// exactFan integrates the centred fan of the corner at (1, 0) over the plane x = 2
// up to y = 1 by the midpoint rule in the Prandtl-Meyer angle: mass-averaged Mach
// number and area-averaged pressure. Between the wall and the fan, and above the
// fan, the flow is uniform.
func exactFan(t *testing.T, mach, turning float64) (machAverage, pressure float64) {
	t.Helper()
	g := gas.Air
	total := g.TotalPressureRatio(mach)
	type point struct{ y, mass, mach, p float64 }
	at := func(angle float64) point {
		m, p, err := shock.Expand(g, mach, angle)
		if err != nil {
			t.Fatal(err)
		}
		flux := p * m * math.Sqrt(g.TotalTemperatureRatio(m)) * math.Cos(angle)
		if math.Abs(p*g.TotalPressureRatio(m)-total) > 1e-9*total {
			t.Fatal("the expansion is not isentropic")
		}
		return point{math.Tan(math.Asin(1/m) - angle), flux, m, p}
	}
	var mass, sum, force float64
	add := func(p point, dy float64) {
		mass, sum, force = mass+p.mass*dy, sum+p.mass*p.mach*dy, force+p.p*dy
	}
	first, last := at(0), at(turning*degree)
	bottom := -math.Tan(turning * degree)
	add(first, 1-first.y)
	add(last, last.y-bottom)
	const steps = 20000
	for i := range steps {
		a, b := at(turning*degree*float64(i)/steps), at(turning*degree*float64(i+1)/steps)
		add(at(turning*degree*(float64(i)+0.5)/steps), a.y-b.y)
	}
	return sum / mass, force / (1 - bottom)
}

// Wavelets converge to the exact Prandtl-Meyer fan with the square of their size:
// averages over a plane across it. Behind it the flow is exact whatever their
// number.
func TestWaveletsConvergeToTheExactFan(t *testing.T) {
	const mach, turning = 2.5, 12
	wantMach, wantPressure := exactFan(t, mach, turning)
	var machErrors, pressureErrors, gaps [3]float64
	for i, parts := range []float64{6, 12, 24} {
		r := fly(t, corner(turning, 2), mach, 0, wave.Settings{Wavelet: turning * degree / parts, Threshold: 1e-8})
		s := r.Stations[0]
		machErrors[i], pressureErrors[i] = math.Abs(s.Mach-wantMach), math.Abs(s.Pressure-wantPressure)
		gaps[i] = r.OpenMomentum
		if s.Mach-r.Error.Stations[0].Mach > wantMach || s.Mach+r.Error.Stations[0].Mach < wantMach {
			t.Errorf("%v wavelets: Mach %v, exact %v, error bound %v", parts, s.Mach, wantMach, r.Error.Stations[0].Mach)
		}
		behind, ratio, err := shock.Expand(gas.Air, mach, turning*degree)
		if err != nil {
			t.Fatal(err)
		}
		wall := r.Regions[s.Profile[0].Region]
		within(t, "Mach number behind", wall.Mach, behind, 1e-12)
		within(t, "pressure behind", wall.Pressure, ratio, 1e-12)
		within(t, "total pressure behind", wall.TotalPressure, 1, 1e-12)
		within(t, "mass", s.Closure.Mass, 0, 1e-13)
	}
	for name, errors := range map[string][3]float64{"Mach number": machErrors, "pressure": pressureErrors, "open momentum": gaps} {
		if p := order(errors); p < 1.85 || p > 2.3 {
			t.Errorf("%s: errors %v fall at order %.2f, want 2", name, errors, p)
		}
	}
}

// bend is a body of n equal corners that turns the flow by `turning` degrees over
// a unit length.
func bend(n int, turning float64) wave.Geometry {
	g := wedge(0, 8, 1.2, 1.25)
	p := contour.Point{}
	g.Body = []contour.Point{p}
	for i := 1; i <= n; i++ {
		slope := math.Tan(turning * degree * float64(i) / float64(n))
		p = contour.Point{X: p.X + 1/float64(n), Y: p.Y + slope/float64(n)}
		g.Body = append(g.Body, p)
	}
	return g
}

// A compression in n small steps becomes isentropic: the loss of total pressure
// falls with n squared, and the wall pressure approaches that of the isentropic
// turn (Prandtl-Meyer backwards).
func TestTurningInSmallStepsIsIsentropic(t *testing.T) {
	const mach, turning = 3, 12
	var losses, gaps [3]float64
	for i, n := range []int{4, 8, 16} {
		r := fly(t, bend(n, turning), mach, 0, wave.Settings{})
		for _, w := range r.Walls {
			if w.Surface == wave.Body && w.Segment == n {
				s := r.Regions[w.Region]
				losses[i] = 1 - s.TotalPressure
				back, _, err := shock.Expand(gas.Air, s.Mach, turning*degree)
				if err != nil {
					t.Fatal(err)
				}
				gaps[i] = math.Abs(back - mach)
				break
			}
		}
	}
	for name, errors := range map[string][3]float64{"loss": losses, "Mach number turned back": gaps} {
		if p := order(errors); p < 1.9 || p > 2.1 {
			t.Errorf("%s: %v falls at order %.2f, want 2", name, errors, p)
		}
	}
}

// Small turnings are linearised theory (Ackeret): p/p0 - 1 = g M^2/sqrt(M^2-1)
// times the turning on the wedge, twice that behind its reflection, to first order.
func TestSmallAnglesAreLinearisedTheory(t *testing.T) {
	const mach = 2.5
	slope := 1.4 * mach * mach / math.Sqrt(mach*mach-1)
	var single, double [3]float64
	for i, turning := range []float64{0.4, 0.2, 0.1} {
		r, incident, back := reflected(t, mach, turning)
		single[i] = math.Abs(r.Regions[incident.Below].Pressure - 1 - slope*turning*degree)
		double[i] = math.Abs(r.Regions[back.Above].Pressure - 1 - 2*slope*turning*degree)
	}
	for name, errors := range map[string][3]float64{"wedge": single, "reflection": double} {
		if p := order(errors); p < 1.9 || p > 2.1 {
			t.Errorf("%s: departure %v from linearised theory at order %.2f, want 2", name, errors, p)
		}
	}
}

// The averages of a duct full of crossing waves approach a limit as wavelets and
// threshold shrink together: above shock-on-lip the ramp shock enters the duct.
func TestRefinementConverges(t *testing.T) {
	c := chainOf(t, article([]float64{5, 5}, 5, 4, 4.4, 0))
	g := c.geometry(0.5)
	at := func(k float64) wave.Station {
		s := wave.Settings{Wavelet: 2 * degree / k, Threshold: 1.6e-3 / (k * k), Events: 200000, Fronts: 20000, WithoutError: true}
		r := fly(t, g, 4.4, 0, s)
		if r.Ending != nil {
			t.Fatal(r.Ending)
		}
		return r.Stations[0]
	}
	limit := at(16)
	if len(limit.Profile) < 20 {
		t.Fatalf("%d parts: the plane is too quiet to test anything", len(limit.Profile))
	}
	var errors [3]float64
	for i, k := range []float64{1, 2, 4} {
		s := at(k)
		errors[i] = math.Abs(s.Mach-limit.Mach)/limit.Mach + math.Abs(s.Recovery-limit.Recovery)/limit.Recovery
	}
	p := order(errors)
	t.Logf("errors %v, order %.2f, %d parts", errors, p, len(limit.Profile))
	if p < 1 {
		t.Errorf("errors %v fall at order %.2f, want 1 at least", errors, p)
	}
}
