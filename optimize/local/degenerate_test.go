package local

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// square is min sum (x_j - target_j)^2 in a box with constraints to be set.
func square(low, high float64, target ...float64) Program {
	n := len(target)
	return Program{
		Low: fill(n, low), High: fill(n, high),
		Value: func(x, c []float64) float64 {
			sum := 0.0
			for j, v := range x {
				sum += (v - target[j]) * (v - target[j])
			}
			return sum
		},
		Gradient: func(x, g, jac []float64) {
			for j, v := range x {
				g[j] = 2 * (v - target[j])
			}
		},
	}
}

// constrain adds inequalities to a program: c and their gradients.
func constrain(p Program, equalities, inequalities int, value func(x, c []float64), gradient func(x, jac []float64)) Program {
	f, g := p.Value, p.Gradient
	p.Equalities, p.Inequalities = equalities, inequalities
	p.Value = func(x, c []float64) float64 { value(x, c); return f(x, c) }
	p.Gradient = func(x, grad, jac []float64) { gradient(x, jac); g(x, grad, jac) }
	return p
}

// min x^2 subject to x >= 1 has multiplier 2: Nocedal & Wright, the example of
// an exact penalty, exact for a weight above 2.
func TestMultiplierOfTheExactPenaltyExample(t *testing.T) {
	p := constrain(square(-10, 10, 0), 0, 1,
		func(x, c []float64) { c[0] = 1 - x[0] },
		func(x, jac []float64) { jac[0] = -1 })
	for _, start := range []float64{-10, -3, 0, 1, 2, 10} {
		r := solve(t, p, []float64{start})
		if r.Status != Converged || math.Abs(r.X[0]-1) > 1e-12 || math.Abs(r.Multipliers[0]-2) > 1e-9 {
			t.Errorf("from %g: %v x %v lambda %v", start, r.Status, r.X, r.Multipliers)
		}
	}
}

func TestInfeasibleProgramsEndAtTheLeastViolation(t *testing.T) {
	cases := []struct {
		name         string
		program      Program
		start        []float64
		total, worst float64 // least l1 violation and the worst one there
		x            []float64
	}{
		{
			name: "x >= 1 twice against x <= 0", // l1: two votes against one
			program: constrain(square(-5, 5, 0.3), 0, 3,
				func(x, c []float64) { c[0], c[1], c[2] = x[0], 1-x[0], 1-x[0] },
				func(x, jac []float64) { copy(jac, []float64{1, -1, -1}) }),
			start: []float64{-4}, total: 1, worst: 1, x: []float64{1},
		},
		{
			name: "x^2 + 1 <= 0", // stationary at 0 with violation 1
			program: constrain(square(-5, 5, 2), 0, 1,
				func(x, c []float64) { c[0] = x[0]*x[0] + 1 },
				func(x, jac []float64) { jac[0] = 2 * x[0] }),
			start: []float64{3}, total: 1, worst: 1, x: []float64{0},
		},
		{
			name: "unit disc against x + y >= 3", // on the diagonal, where both prices are 1
			program: constrain(square(-5, 5, 0, 0), 0, 2,
				func(x, c []float64) { c[0], c[1] = x[0]*x[0]+x[1]*x[1]-1, 3-x[0]-x[1] },
				func(x, jac []float64) { copy(jac, []float64{2 * x[0], 2 * x[1], -1, -1}) }),
			// The price of the disc that balances grad = (1,1) on its rim is
			// 1/sqrt 2 < 1, so the rim is kept: x = y = 1/sqrt 2.
			start: []float64{4, -4}, total: 3 - math.Sqrt2, worst: 3 - math.Sqrt2,
			x: []float64{math.Sqrt2 / 2, math.Sqrt2 / 2},
		},
		{
			name: "x^2 = -1 and y = 2 in a box to 1", // equalities, and a face in the way
			program: constrain(square(-1, 1, 0.5, 0.5), 2, 0,
				func(x, c []float64) { c[0], c[1] = x[0]*x[0]+1, x[1]-2 },
				func(x, jac []float64) { copy(jac, []float64{2 * x[0], 0, 0, 1}) }),
			start: []float64{0.9, -1}, total: 2, worst: 1, x: []float64{0, 1},
		},
		{
			name: "violated by smooth constraints only", // (x-1)^2 + (x+1)^2 + 2: both priced, 4 at x = 0
			program: constrain(square(-5, 5, 4), 0, 2,
				func(x, c []float64) { c[0], c[1] = (x[0]-1)*(x[0]-1)+1, (x[0]+1)*(x[0]+1)+1 },
				func(x, jac []float64) { copy(jac, []float64{2 * (x[0] - 1), 2 * (x[0] + 1)}) }),
			start: []float64{4.5}, total: 4, worst: 2, x: []float64{0},
		},
	}
	for _, c := range cases {
		r := solve(t, c.program, c.start)
		total := 0.0
		for i, v := range r.Constraints {
			if i < c.program.Equalities {
				v = math.Abs(v)
			}
			total += max(v, 0)
		}
		if r.Status != Infeasible || !r.Elastic || math.Abs(total-c.total) > 1e-9 || math.Abs(r.Violation-c.worst) > 1e-8 {
			t.Errorf("%s: %v at %v, violation %.12g (%.12g), wanted %.12g; %d iterations kkt %g", c.name, r.Status, r.X, total, r.Violation, c.total, r.Iterations, r.KKT)
		}
		for j, x := range c.x {
			if math.Abs(r.X[j]-x) > 1e-6 {
				t.Errorf("%s: x = %v, wanted %v", c.name, r.X, c.x)
			}
		}
	}
}

func TestContradictoryLinearRows(t *testing.T) {
	p := square(0, 1, 0.2, 0.8)
	p.AtMost = Rows{A: []float64{1, 1, -1, -1}, B: []float64{0.5, -3}} // x + y <= 0.5, >= 3
	r := solve(t, p, []float64{0.5, 0.5})
	// Least l1 violation 2.5 anywhere with 0.5 <= x + y <= 2.
	if r.Status != Inconsistent || r.Values != 0 || !math.IsNaN(r.F) || r.Violation > 2.5+1e-9 || r.Violation < 1.25 {
		t.Errorf("%v: %+v", r.Status, r)
	}
}

func TestStartIsProjectedAndRowsHoldEverywhere(t *testing.T) {
	p := square(0, 1, 2, -1, 0.5)
	p.AtMost = Rows{A: []float64{1, 0, -1}, B: []float64{-0.1}}
	p.Equal = Rows{A: []float64{1, 1, 1}, B: []float64{1.5}}
	inner := p.Value
	p.Value = func(x, c []float64) float64 {
		for j, v := range x {
			if v < 0 || v > 1 {
				t.Errorf("x[%d] = %g outside the box", j, v)
			}
		}
		if v := x[0] - x[2] + 0.1; v > 1e-14 {
			t.Errorf("linear row violated by %g", v)
		}
		if v := x[0] + x[1] + x[2] - 1.5; math.Abs(v) > 1e-14 {
			t.Errorf("linear equality misses by %g", v)
		}
		return inner(x, c)
	}
	r := solve(t, p, []float64{7, -7, 0.1})
	if r.Status != Converged {
		t.Errorf("%v", r.Status)
	}
	checkConditions(t, "projected", &p, r, 1e-9)
}

// Two hundred copies of the same tangent constraints, some scaled, through one
// vertex: every active set but one is rank-deficient.
func TestDuplicatedConstraints(t *testing.T) {
	const copies = 80
	p := constrain(square(-3, 3, 2, 2), 0, 3*copies,
		func(x, c []float64) {
			for k := range copies {
				s := 1 + float64(k%7)*100
				c[3*k], c[3*k+1], c[3*k+2] = s*(x[0]*x[0]+x[1]*x[1]-2), x[0]-1, s*(x[0]+x[1]-2)
			}
		},
		func(x, jac []float64) {
			for k := range copies {
				s := 1 + float64(k%7)*100
				copy(jac[6*k:], []float64{2 * s * x[0], 2 * s * x[1], 1, 0, s, s})
			}
		})
	random := rand.New(rand.NewPCG(7, 7))
	for range 200 {
		start := []float64{6*random.Float64() - 3, 6*random.Float64() - 3}
		r := solve(t, p, start)
		if r.Status != Converged || math.Hypot(r.X[0]-1, r.X[1]-1) > 1e-9 {
			t.Errorf("from %v: %v at %v kkt %g, %d iterations", start, r.Status, r.X, r.KKT, r.Iterations)
		}
	}
}

// A redundant pair of equalities has a rank-deficient Jacobian everywhere.
func TestRedundantEqualities(t *testing.T) {
	p := constrain(square(-3, 3, 2, 0, 1), 2, 0,
		func(x, c []float64) {
			c[0] = x[0]*x[0] + x[1]*x[1] + x[2]*x[2] - 1
			c[1] = 3 * c[0]
		},
		func(x, jac []float64) {
			for j, v := range x {
				jac[j], jac[3+j] = 2*v, 6*v
			}
		})
	p.Equal = Rows{A: []float64{0, 1, 0, 0, 2, 0}, B: []float64{0, 0}}
	r := solve(t, p, []float64{1, 1, 1})
	want := []float64{2 / math.Sqrt(5), 0, 1 / math.Sqrt(5)}
	for j := range want {
		if r.Status != Converged || math.Abs(r.X[j]-want[j]) > 1e-9 {
			t.Fatalf("%v at %v, wanted %v", r.Status, r.X, want)
		}
	}
}

// Constraints without slope where it counts: no multiplier exists for the first,
// none is needed for the others.
func TestFlatConstraints(t *testing.T) {
	cases := []struct {
		name   string
		value  func(x float64) float64
		slope  func(x float64) float64
		target float64
		want   Status
		x      float64
		within float64
	}{
		{"x^2 <= 0", func(x float64) float64 { return x * x }, func(x float64) float64 { return 2 * x }, 1, Stalled, 0, 1e-4},
		{"-1 <= 0", func(float64) float64 { return -1 }, func(float64) float64 { return 0 }, 1, Converged, 1, 1e-9},
		{"0 <= 0", func(float64) float64 { return 0 }, func(float64) float64 { return 0 }, 1, Converged, 1, 1e-9},
		{"1e-14 <= 0", func(float64) float64 { return 1e-14 }, func(float64) float64 { return 0 }, 1, Converged, 1, 1e-9},
		{"1 <= 0", func(float64) float64 { return 1 }, func(float64) float64 { return 0 }, 1, Infeasible, 3, 4},
	}
	for _, c := range cases {
		p := constrain(square(-4, 4, c.target), 0, 1,
			func(x, g []float64) { g[0] = c.value(x[0]) },
			func(x, jac []float64) { jac[0] = c.slope(x[0]) })
		r := solve(t, p, []float64{3})
		if r.Status != c.want || math.Abs(r.X[0]-c.x) > c.within {
			t.Errorf("%s: %v at %v, kkt %.2g, violation %.2g, %d iterations", c.name, r.Status, r.X, r.KKT, r.Violation, r.Iterations)
		}
	}
}

// The functions have no value beyond x + y = 1.2, which the first full step
// crosses; the optimum lies inside.
func TestUndefinedRegionIsBackedAwayFrom(t *testing.T) {
	p := constrain(square(0, 1, 0.55, 0.6), 0, 1,
		func(x, c []float64) {
			c[0] = 0.2 - math.Sqrt(1.2-x[0]-x[1]) // NaN beyond
		},
		func(x, jac []float64) {
			d := 0.5 / math.Sqrt(1.2-x[0]-x[1])
			jac[0], jac[1] = d, d
		})
	for _, start := range [][]float64{{0, 0}, {0, 1}, {1, 0}, {0.2, 0.9}} {
		r := solve(t, p, start)
		if r.Status != Converged {
			t.Errorf("from %v: %v at %v", start, r.Status, r.X)
		}
		checkConditions(t, "undefined region", &p, r, 1e-8)
	}
	if r := solve(t, p, []float64{1, 1}); r.Status != Undefined {
		t.Errorf("start without a value: %v", r.Status)
	}
}

func TestFixedVariableAndCorners(t *testing.T) {
	p := square(0, 1, 0.3, 2, -1, 0.7)
	p.Low[3], p.High[3] = 0.25, 0.25
	for corner := range 8 {
		start := []float64{float64(corner & 1), float64(corner >> 1 & 1), float64(corner >> 2 & 1), 5}
		r := solve(t, p, start)
		checkConditions(t, "corner", &p, r, 1e-9)
		if r.Status != Converged || r.X[3] != 0.25 || r.X[1] != 1 || r.X[2] != 0 {
			t.Errorf("%v at %v", r.Status, r.X)
		}
	}
}

func TestCancelledReturnsALegalPoint(t *testing.T) {
	c := hs100()
	ctx, cancel := context.WithCancel(context.Background())
	calls, inner := 0, c.program.Value
	c.program.Value = func(x, g []float64) float64 {
		if calls++; calls == 5 {
			cancel()
		}
		return inner(x, g)
	}
	r, err := Minimize(ctx, &c.program, c.start, Settings{})
	if err != nil || r.Status != Cancelled || !finite(r.X...) || r.Values < 5 {
		t.Errorf("%v %+v", err, r)
	}
	// A model that gives up at once because of the context is not undefined.
	c.program.Value = func([]float64, []float64) float64 { return math.NaN() }
	if r, err := Minimize(ctx, &c.program, c.start, Settings{}); err != nil || r.Status != Cancelled {
		t.Errorf("cancelled before the start: %v %+v", err, r)
	}
}

func TestIterationLimit(t *testing.T) {
	c := hs100()
	r, err := Minimize(context.Background(), &c.program, c.start, Settings{Iterations: 3})
	if err != nil || r.Status != IterationLimit || r.Iterations != 3 {
		t.Errorf("%v %+v", err, r)
	}
}

func TestValidateReportsEverything(t *testing.T) {
	p := Program{Low: []float64{0, 2}, High: []float64{1, 1}, AtMost: Rows{A: []float64{1}, B: []float64{1}}, Inequalities: -1}
	_, err := Minimize(context.Background(), &p, []float64{0, math.NaN(), 1}, Settings{Tolerance: -1, Iterations: -2})
	fields := map[string]bool{}
	var collect func(error)
	collect = func(err error) {
		if joined, ok := err.(interface{ Unwrap() []error }); ok {
			for _, e := range joined.Unwrap() {
				collect(e)
			}
			return
		}
		var wrong *ProgramError
		if errors.As(err, &wrong) {
			fields[wrong.Field] = true
		}
	}
	collect(err)
	for _, field := range []string{"Low", "AtMost", "Equalities", "Value", "Gradient", "start", "Tolerance", "Iterations"} {
		if !fields[field] {
			t.Errorf("%s not reported in %v", field, err)
		}
	}
}
