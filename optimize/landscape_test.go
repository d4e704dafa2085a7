package optimize

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// sampledDisk is a design of the disk problem after its first fits.
func sampledDisk(t testing.TB) *designer {
	t.Helper()
	plan := mustPlan(t, disk(1))
	d := &designer{plan: plan, settings: Settings{Samples: 24}.WithDefaults(2), radius: startRadius}
	if err := d.sample(context.Background()); err != nil {
		t.Fatal(err)
	}
	if err := d.fit(context.Background()); err != nil {
		t.Fatal(err)
	}
	return d
}

// differencesOf are central differences of a landscape by the step given.
func differencesOf(land landscape, u []float64, indices []int, size int, step float64) map[int][]float64 {
	rows := map[int][]float64{}
	up, down := make([]float64, size), make([]float64, size)
	probe := append([]float64(nil), u...)
	for _, i := range indices {
		rows[i] = make([]float64, len(u))
	}
	for j := range u {
		probe[j] = u[j] + step
		land.values(probe, up)
		probe[j] = u[j] - step
		land.values(probe, down)
		probe[j] = u[j]
		for _, i := range indices {
			rows[i][j] = (up[i] - down[i]) / (2 * step)
		}
	}
	return rows
}

// jacobianOf is the landscape's own.
func jacobianOf(land landscape, u []float64, indices []int, size int) [][]float64 {
	rows := make([][]float64, size)
	for _, i := range indices {
		rows[i] = make([]float64, len(u))
	}
	land.values(u, make([]float64, size))
	land.jacobian(u, rows)
	return rows
}

// The gradients of corrected surrogates are those of their values, at random
// points and at the optimum.
func TestSurrogateJacobian(t *testing.T) {
	d := sampledDisk(t)
	tilted := newAnchor(d.center(), d.near.fits, nil)
	for k := range tilted.tilt {
		tilted.tilt[k][0], tilted.tilt[k][1] = 0.3, -0.2*float64(k+1)
	}
	check := func(t interface{ Errorf(string, ...any) }, u []float64) {
		for name, at := range map[string]*anchor{"plain": nil, "shifted": d.anchor, "tilted": tilted} {
			for _, fits := range [][]Fit{d.near.fits, d.wide.fits} {
				land := d.plan.surrogates(fits, at)
				got := jacobianOf(land, u, d.plan.fitted, 2)
				// The values of a process on a smooth function are sums that
				// cancel down to some 1e-7, so that differences are rough.
				for i, want := range differencesOf(land, u, d.plan.fitted, 2, 1e-3) {
					if farthest(got[i], want) > 1e-3 {
						t.Errorf("%s at %v: quantity %d has slope %v, differences say %v", name, u, i, got[i], want)
					}
				}
			}
		}
	}
	check(t, d.plan.normal(diskX(1)))
	rapid.Check(t, func(t *rapid.T) {
		check(t, []float64{rapid.Float64Range(0, 1).Draw(t, "u"), rapid.Float64Range(0, 1).Draw(t, "v")})
	})
}

// The exact landscape differentiates the model, up to the faces of the cube.
func TestExactJacobian(t *testing.T) {
	p := mustPlan(t, disk(1))
	check := func(t interface{ Errorf(string, ...any) }, u []float64) {
		rows := jacobianOf(newExactLandscape(context.Background(), p), u, p.fitted, 2)
		x := p.denormal(u)
		slope := 0.3 * math.Exp(0.3*(x[0]+2*x[1])) * 2.5
		// Central differences inside the cube, one-sided on its faces: the latter
		// err by half a step times the curvature.
		tolerance := 1e-8
		if u[0] == 0 || u[0] == 1 || u[1] == 0 || u[1] == 1 {
			tolerance = 1e-4
		}
		for i, want := range [][]float64{{slope, 2 * slope}, {5 * x[0], 5 * x[1]}} {
			if farthest(rows[i], want) > tolerance {
				t.Errorf("at %v quantity %d has slope %v, want %v", u, i, rows[i], want)
			}
		}
	}
	check(t, p.normal(diskX(1)))
	for _, face := range [][]float64{{0, 0.4}, {1, 1}, {0.3, 0}} {
		check(t, face)
	}
	rapid.Check(t, func(t *rapid.T) {
		check(t, []float64{rapid.Float64Range(0.001, 0.999).Draw(t, "u"), rapid.Float64Range(0.001, 0.999).Draw(t, "v")})
	})
}

func TestExplicitJacobian(t *testing.T) {
	p := mustPlan(t, mixed(atLeast("curved", 0.1)))
	part := newExplicitPart(p)
	rapid.Check(t, func(t *rapid.T) {
		u := []float64{rapid.Float64Range(0.001, 0.999).Draw(t, "u"), rapid.Float64Range(0.001, 0.999).Draw(t, "v")}
		x := p.denormal(u)
		rows := [][]float64{nil, nil, nil, nil, make([]float64, 2)}
		part.jacobian(u, rows)
		want := []float64{math.Exp(x[0]/10) * (x[1] - 100), math.Exp(x[0] / 10)}
		if farthest(rows[4], want) > 1e-7 { // x2 near 100 costs two digits
			t.Errorf("at %v slope %v, want %v", u, rows[4], want)
		}
	})
}

// A corrected surrogate equals the exact values at its anchor; after learning it
// also meets those of another sample (secant condition), and leaves every slope
// across the step as it was (least change).
func TestAnchorMeetsItsSamples(t *testing.T) {
	d := sampledDisk(t)
	rapid.Check(t, func(t *rapid.T) {
		draw := func(label string) *sample {
			u := []float64{rapid.Float64Range(0, 1).Draw(t, label+" u"), rapid.Float64Range(0, 1).Draw(t, label+" v")}
			found, err := d.plan.evaluate(context.Background(), 1, [][]float64{u})
			if err != nil {
				t.Fatal(err)
			}
			return found[0]
		}
		center, other := draw("center"), draw("other")
		length := distance(center.u, other.u)
		if length < 1e-3 {
			return
		}
		a := newAnchor(center, d.near.fits, nil)
		land := d.plan.surrogates(d.near.fits, a)
		meets := func(what string, s *sample) {
			got := make([]float64, 2)
			land.values(s.u, got)
			if farthest(got, s.values) > 1e-9 {
				t.Errorf("%s: %v, exact %v", what, got, s.values)
			}
		}
		meets("anchor", center)
		a.learn(other, d.near.fits)
		meets("other sample", other)
		meets("anchor after learning", center)
		across := []float64{-(other.u[1] - center.u[1]), other.u[0] - center.u[0]}
		for k, tilt := range a.tilt {
			if turn := tilt[0]*across[0] + tilt[1]*across[1]; math.Abs(turn) > 1e-9 {
				t.Errorf("fit %d is tilted by %g across the step", k, turn)
			}
		}
		a.learn(center, d.near.fits) // no direction to learn from
		meets("anchor after learning from itself", center)
	})
}

// A missing exact value corrects nothing.
func TestAnchorIgnoresMissingValues(t *testing.T) {
	d := sampledDisk(t)
	blank := &sample{u: []float64{0.2, 0.9}, values: []float64{math.NaN(), math.Inf(1)}}
	a := newAnchor(blank, d.near.fits, nil)
	a.learn(&sample{u: []float64{0.3, 0.8}, values: blank.values}, d.near.fits)
	for k := range a.shift {
		if a.shift[k] != 0 || norm(a.tilt[k]) != 0 {
			t.Errorf("fit %d is shifted by %g and tilted by %v", k, a.shift[k], a.tilt[k])
		}
	}
}
