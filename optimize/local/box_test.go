package local

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"
)

// rosenbrock is the chained function of Rosenbrock (1960), minimum 0 at ones.
func rosenbrock(x, g []float64) float64 {
	clear(g)
	sum := 0.0
	for j := range len(x) - 1 {
		bend, rest := x[j+1]-x[j]*x[j], 1-x[j]
		sum += 100*bend*bend + rest*rest
		g[j] += -400*bend*x[j] - 2*rest
		g[j+1] += 200 * bend
	}
	return sum
}

func TestMinimizeBoxOnRosenbrock(t *testing.T) {
	cases := []struct {
		n       int
		high    float64
		calls   int // ceiling: a regression guard on a deterministic count
		minimum float64
	}{
		{2, 2, 60, 0},
		{10, 2, 150, 0},
		// With x <= 0.5 and n = 2 the minimum is on the face: x = 0.5, y = 0.25.
		{2, 0.5, 40, 0.25},
	}
	for _, c := range cases {
		calls := 0
		f := func(x, g []float64) float64 { calls++; return rosenbrock(x, g) }
		start := make([]float64, c.n)
		for j := range start {
			start[j] = []float64{-1.2, 0.4}[j%2]
		}
		r, err := MinimizeBox(context.Background(), fill(c.n, -2), fill(c.n, c.high), f, start, Settings{})
		if err != nil || r.Status != Converged || math.Abs(r.F-c.minimum) > 1e-12 {
			t.Errorf("n %d: %v %+v", c.n, err, r)
			continue
		}
		t.Logf("n %d: %d calls, kkt %.1g", c.n, calls, r.KKT)
		if calls > c.calls || calls != r.Values {
			t.Errorf("n %d: %d calls, %d said, ceiling %d", c.n, calls, r.Values, c.calls)
		}
	}
}

func TestMinimizeBoxAvoidsUndefinedPoints(t *testing.T) {
	// -log x - log(1-x-y) + x + 3y has no value outside a triangle.
	f := func(x, g []float64) float64 {
		rest := 1 - x[0] - x[1]
		g[0], g[1] = -1/x[0]+1/rest+1, 1/rest+3-1/x[1]
		return -math.Log(x[0]) - math.Log(rest) + x[0] + 3*x[1] - math.Log(x[1])
	}
	random := rand.New(rand.NewPCG(1, 1))
	for range 50 {
		a := random.Float64()
		start := []float64{0.99 * a, 0.99 * (1 - a)}
		r, err := MinimizeBox(context.Background(), fill(2, 0), fill(2, 1), f, start, Settings{})
		if err != nil || r.Status != Converged {
			t.Errorf("from %v: %v %+v", start, err, r)
		}
	}
}

func TestReusedWorkspaceDoesNotAllocate(t *testing.T) {
	c := hs100()
	var w Workspace
	ctx := context.Background()
	run := func() {
		if r, err := w.Minimize(ctx, &c.program, c.start, Settings{}); err != nil || r.Status != Converged {
			t.Fatal(err, r.Status)
		}
	}
	run()
	first := w.result.Clone()
	gradient := c.program.Gradient
	c.program.Gradient = func(x, g, jac []float64) { gradient(x, g, jac) }
	if n := testing.AllocsPerRun(20, run); n > 0 {
		t.Errorf("%g allocations a solve", n)
	}
	for j, v := range w.result.X {
		if v != first.X[j] {
			t.Errorf("a reused workspace gives x[%d] = %.17g, a fresh one %.17g", j, v, first.X[j])
		}
	}
}
