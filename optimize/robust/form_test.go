package robust

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The cases of testdata/reference/methods_checks.json, section form.
func TestFormOfTheReferenceCases(t *testing.T) {
	convex := func(u, gradient []float64) float64 {
		bend := 0.2 * (u[0] - u[1])
		gradient[0], gradient[1] = bend-1/math.Sqrt2, -bend-1/math.Sqrt2
		return bend*(u[0]-u[1])/2 - (u[0]+u[1])/math.Sqrt2 + 2.5
	}
	r, err := FORM(2, convex)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "beta", r.Beta, 2.5, 1e-9)
	near(t, "u1", r.Point[0], 1.7677669529663687, 1e-8)
	near(t, "u2", r.Point[1], 1.7677669529663687, 1e-8)
	near(t, "probability", r.Failure, 6.20966532577614e-3, 1e-10)
	curvatures, err := Curvatures(r.Point, convex)
	if err != nil || len(curvatures) != 1 {
		t.Fatal(curvatures, err)
	}
	near(t, "curvature", curvatures[0], 0.4, 1e-8)
	near(t, "second order", Breitung(r.Beta, curvatures), 4.39089646076e-3, 1e-9)

	// Resistance N(10, 1.5) less load N(5, 1).
	r, err = FORM(2, func(u, gradient []float64) float64 {
		gradient[0], gradient[1] = 1.5, -1
		return 10 + 1.5*u[0] - 5 - u[1]
	})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "beta", r.Beta, 2.77350098112615, 1e-12)
	near(t, "probability", r.Failure, 2.77283365762203e-3, 1e-15)
	near(t, "share of the resistance", r.Importance[0], 2.25/3.25, 1e-12)
}

// b sqrt(n) - sum(u): beta b for any number of inputs (reference case "linear");
// negative where the origin already fails.
func TestFormOfLinearMargins(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := rapid.IntRange(1, 9).Draw(rt, "n")
		b := rapid.Float64Range(-4, 4).Draw(rt, "b")
		r, err := FORM(n, func(u, gradient []float64) float64 {
			g := b * math.Sqrt(float64(n))
			for j, v := range u {
				g -= v
				gradient[j] = -1
			}
			return g
		})
		if err != nil {
			rt.Fatal(err)
		}
		near(t, "beta", r.Beta, b, 1e-8)
		near(t, "probability", r.Failure, Phi(-b), 1e-8)
	})
}

// The plain iteration cycles on this margin; the halved steps find the nearest
// point, compared with a search over the angle.
func TestFormOfAStronglyCurvedMargin(t *testing.T) {
	g := func(u, v float64) float64 { return u*u*u + v*v*v - 18 } // Rackwitz & Fiessler type example, ours
	r, err := FORM(2, func(u, gradient []float64) float64 {
		x, y := u[0]+2, u[1]+2.2
		gradient[0], gradient[1] = 3*x*x, 3*y*y
		return g(x, y)
	})
	if err != nil {
		t.Fatal(err)
	}
	nearest := math.Inf(1)
	for x := -3.0; x < 6; x += 1e-4 {
		nearest = math.Min(nearest, math.Hypot(x-2, math.Cbrt(18-x*x*x)-2.2))
	}
	near(t, "distance", math.Abs(r.Beta), nearest, 1e-6)
}

func TestFormWithoutAPoint(t *testing.T) {
	var none *NoPoint
	_, err := FORM(2, func(u, gradient []float64) float64 {
		gradient[0], gradient[1] = 0, 0
		return 1
	})
	if !errors.As(err, &none) {
		t.Errorf("a constant margin: %v", err)
	}
	_, err = FORM(1, func(u, gradient []float64) float64 {
		gradient[0] = 2 * u[0]
		return u[0]*u[0] + 1
	})
	if !errors.As(err, &none) {
		t.Errorf("a margin that is never lost: %v", err)
	}
	if p := Breitung(2, []float64{-0.6}); !math.IsNaN(p) {
		t.Errorf("a surface bent inside the sphere has probability %v", p)
	}
}

// A margin that is already zero at the origin, as of a design on its limit: even
// odds, and the inputs share by the slope.
func TestFormOfALimitWithoutMargin(t *testing.T) {
	r, err := FORM(2, func(u, gradient []float64) float64 {
		gradient[0], gradient[1] = 3, -4
		return 3*u[0] - 4*u[1]
	})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "beta", r.Beta, 0, 1e-15)
	near(t, "probability", r.Failure, 0.5, 1e-15)
	near(t, "share of the first", r.Importance[0], 0.36, 1e-15)
	near(t, "share of the second", r.Importance[1], 0.64, 1e-15)
}
