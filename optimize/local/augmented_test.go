package local

import (
	"context"
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The augmented Lagrangian reaches the published optima of Hock & Schittkowski,
// and the point and multipliers of sequential quadratic programming.
func TestAugmentedAgreesWithSQP(t *testing.T) {
	for _, c := range allPublished() {
		r, err := MinimizeAugmented(context.Background(), &c.program, c.start, Settings{Tolerance: 1e-7, Feasibility: 1e-8})
		if err != nil {
			t.Fatal(err)
		}
		t.Logf("%s: %v, f %.15g, kkt %.1e, violation %.1e, %d rounds, %d values", c.name, r.Status, r.F, r.KKT, r.Violation, r.Iterations, r.Values)
		if r.Status != Converged {
			t.Errorf("%s: %v at %v", c.name, r.Status, r.X)
		}
		if math.Abs(r.F-c.f) > 1e-6*math.Max(1, math.Abs(c.f)) {
			t.Errorf("%s: f = %.12g, published %.12g", c.name, r.F, c.f)
		}
		other := solve(t, c.program, c.start)
		for j, x := range other.X {
			if math.Abs(r.X[j]-x) > 1e-4 {
				t.Errorf("%s: x[%d] = %.8g, by quadratic programs %.8g", c.name, j, r.X[j], x)
			}
		}
		for i, l := range other.Multipliers {
			if math.Abs(r.Multipliers[i]-l) > 1e-3*math.Max(1, math.Abs(l)) {
				t.Errorf("%s: multiplier %d is %.6g, by quadratic programs %.6g", c.name, i, r.Multipliers[i], l)
			}
		}
		checkConditions(t, c.name, &c.program, r, 1e-5)
	}
}

// min x^2 with x >= 1 has the multiplier 2, as an inequality and as a linear row.
func TestAugmentedMultiplier(t *testing.T) {
	nonlinear := Program{
		Low: []float64{-5}, High: []float64{5}, Inequalities: 1,
		Value:    func(x, c []float64) float64 { c[0] = 1 - x[0]; return x[0] * x[0] },
		Gradient: func(x, g, jac []float64) { g[0], jac[0] = 2*x[0], -1 },
	}
	linear := Program{
		Low: []float64{-5}, High: []float64{5}, AtMost: Rows{A: []float64{-1}, B: []float64{-1}},
		Value:    func(x, _ []float64) float64 { return x[0] * x[0] },
		Gradient: func(x, g, _ []float64) { g[0] = 2 * x[0] },
	}
	for name, p := range map[string]Program{"nonlinear": nonlinear, "linear": linear} {
		r, err := MinimizeAugmented(context.Background(), &p, []float64{4}, Settings{})
		if err != nil {
			t.Fatal(err)
		}
		multiplier := append(append([]float64(nil), r.Multipliers...), r.RowsAtMost...)[0]
		if r.Status != Converged || math.Abs(r.X[0]-1) > 1e-8 || math.Abs(multiplier-2) > 1e-6 {
			t.Errorf("%s: %v at %v with multiplier %v", name, r.Status, r.X, multiplier)
		}
	}
}

// Random convex quadratics under a ball: both routes end at one point, and the
// box holds at every point evaluated.
func TestAugmentedAgreesOnRandomPrograms(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 5).Draw(t, "n")
		center := rapid.SliceOfN(rapid.Float64Range(-2, 2), n, n).Draw(t, "center")
		curvature := rapid.SliceOfN(rapid.Float64Range(0.5, 20), n, n).Draw(t, "curvature")
		radius := rapid.Float64Range(0.3, 3).Draw(t, "radius")
		p := Program{Low: fill(n, -1), High: fill(n, 1.5), Inequalities: 1}
		p.Value = func(x, c []float64) float64 {
			f := 0.0
			c[0] = -radius * radius
			for j, v := range x {
				if v < -1 || v > 1.5 {
					t.Errorf("asked outside the box at %v", x)
				}
				f += curvature[j] * (v - center[j]) * (v - center[j])
				c[0] += v * v
			}
			return f
		}
		p.Gradient = func(x, g, jac []float64) {
			for j, v := range x {
				g[j], jac[j] = 2*curvature[j]*(v-center[j]), 2*v
			}
		}
		r, err := MinimizeAugmented(context.Background(), &p, fill(n, 0.5), Settings{Tolerance: 1e-7, Feasibility: 1e-8})
		if err != nil {
			t.Fatal(err)
		}
		other, err := Minimize(context.Background(), &p, fill(n, 0.5), Settings{})
		if err != nil {
			t.Fatal(err)
		}
		if r.Status != Converged || math.Abs(r.F-other.F) > 1e-6*math.Max(1, math.Abs(other.F)) {
			t.Errorf("%v with f %.10g, by quadratic programs %.10g", r.Status, r.F, other.F)
		}
	})
}

// The endings other than convergence.
func TestAugmentedEndings(t *testing.T) {
	base := hs43()
	impossible := base.program
	impossible.Value = func(x, c []float64) float64 {
		f := base.program.Value(x, c)
		c[0] = 1 + x[0]*x[0]
		return f
	}
	impossible.Gradient = func(x, g, jac []float64) {
		base.program.Gradient(x, g, jac)
		copy(jac[:4], []float64{2 * x[0], 0, 0, 0})
	}
	undefined := base.program
	undefined.Value = func(x, c []float64) float64 { clear(c); return math.NaN() }
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	for name, c := range map[string]struct {
		ctx      context.Context
		program  Program
		settings Settings
		want     Status
	}{
		"impossible": {context.Background(), impossible, Settings{}, Infeasible},
		"undefined":  {context.Background(), undefined, Settings{}, Undefined},
		"cancelled":  {ended, base.program, Settings{}, Cancelled},
		"one round":  {context.Background(), base.program, Settings{Iterations: 1}, IterationLimit},
	} {
		r, err := MinimizeAugmented(c.ctx, &c.program, base.start, c.settings)
		if err != nil {
			t.Fatal(err)
		}
		if r.Status != c.want {
			t.Errorf("%s: %v, want %v", name, r.Status, c.want)
		}
	}
	var wrong *ProgramError
	if _, err := MinimizeAugmented(context.Background(), &Program{}, nil, Settings{}); !errors.As(err, &wrong) {
		t.Errorf("an empty program: %v", err)
	}
}

func BenchmarkAugmentedHS71(b *testing.B) {
	c := hs71()
	for b.Loop() {
		r, err := MinimizeAugmented(context.Background(), &c.program, c.start, Settings{Tolerance: 1e-7, Feasibility: 1e-8})
		if err != nil || r.Status != Converged {
			b.Fatal(err, r.Status)
		}
	}
}
