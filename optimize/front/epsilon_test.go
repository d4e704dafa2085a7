package front

import (
	"context"
	"errors"
	"math"
	"testing"

	"rampwright/optimize/local"
)

// zdt is a problem of Zitzler, Deb & Thiele (2000): f0 = x1,
// f1 = g h(f0/g), g = 1 + 9 mean(x2..xn), 0 <= x <= 1. Its front has g = 1.
type zdt struct {
	h, slope func(r float64) float64 // of h
}

const zdtVariables = 30

// The shapes of the fronts; the square root is cut off where its slope has no
// bound.
var (
	zdt1 = zdt{
		func(r float64) float64 { return 1 - math.Sqrt(r) },
		func(r float64) float64 { return -0.5 / math.Sqrt(math.Max(r, 1e-12)) },
	}
	zdt2 = zdt{
		func(r float64) float64 { return 1 - r*r },
		func(r float64) float64 { return -2 * r },
	}
)

func (z zdt) objectives(x []float64) (f Point, g float64) {
	sum := 0.0
	for _, v := range x[1:] {
		sum += v
	}
	g = 1 + 9*sum/float64(len(x)-1)
	return Point{x[0], g * z.h(x[0]/g)}, g
}

// gradient stores df/dx.
func (z zdt) gradient(x []float64, objective int, dst []float64) {
	clear(dst)
	if objective == 0 {
		dst[0] = 1
		return
	}
	_, g := z.objectives(x)
	r := x[0] / g
	dst[0] = z.slope(r)
	for j := 1; j < len(x); j++ {
		dst[j] = 9 / float64(len(x)-1) * (z.h(r) - r*z.slope(r))
	}
}

// solver answers by sequential quadratic programming from the design that keeps
// the bound, or from the middle of the box.
func (z zdt) solver(designs *[][]float64) Solve {
	var workspace local.Workspace
	low, high := make([]float64, zdtVariables), make([]float64, zdtVariables)
	for j := range high {
		high[j] = 1
	}
	return func(ctx context.Context, q Question) (Answer, error) {
		program := local.Program{
			Low: low, High: high, Inequalities: 1,
			Value: func(x, c []float64) float64 {
				f, _ := z.objectives(x)
				c[0] = math.Max(-1, f[1-q.Lower]-q.AtMost)
				return f[q.Lower]
			},
			Gradient: func(x, grad, jac []float64) {
				z.gradient(x, q.Lower, grad)
				z.gradient(x, 1-q.Lower, jac)
			},
		}
		start := make([]float64, zdtVariables)
		for j := range start {
			start[j] = 0.5
		}
		if q.Near != nil {
			start = (*designs)[q.Near[len(q.Near)-1]]
		}
		result, err := workspace.Minimize(ctx, &program, start, local.Settings{})
		if err != nil {
			return Answer{}, err
		}
		x := append([]float64(nil), result.X...)
		*designs = append(*designs, x)
		f, _ := z.objectives(x)
		return Answer{Point: f, Found: result.Violation < 1e-6}, nil
	}
}

// Exact hypervolumes by hand, reference (1.1, 1.1): 1.1 x 1.1 less the area below
// the front over [0, 1], 1/3 for 1 - sqrt(x) and 2/3 for 1 - x^2: 0.876667 and
// 0.543333. The steps between n points lose about 1/(2 n) of it.
func TestFrontsOfPublishedProblems(t *testing.T) {
	const n = 1001
	for name, c := range map[string]struct {
		problem zdt
		want    float64
	}{"ZDT1": {zdt1, 0.8766666666666667}, "ZDT2": {zdt2, 0.5433333333333333}} {
		t.Run(name, func(t *testing.T) {
			var designs [][]float64
			along, err := EpsilonConstraint(t.Context(), n, c.problem.solver(&designs))
			if err != nil {
				t.Fatal(err)
			}
			var curve []Point
			for _, i := range along {
				f, _ := c.problem.objectives(designs[i])
				curve = append(curve, f)
			}
			volume := Hypervolume(curve, Point{1.1, 1.1})
			t.Logf("%d points, hypervolume %.6f, exact %.6f", len(curve), volume, c.want)
			if !(math.Abs(volume-c.want) <= 1e-3) {
				t.Errorf("hypervolume %.6f, want %.6f within 1e-3", volume, c.want)
			}
			if kept := NonDominated(curve); len(kept) < n*99/100 {
				t.Errorf("%d of %d points are dominated", len(curve)-len(kept), len(curve))
			}
		})
	}
}

// line is the trade f1 = 1 - f0 on [0, 1], answered exactly; questions are noted.
type line struct{ asked []Question }

func (l *line) solve(_ context.Context, q Question) (Answer, error) {
	l.asked = append(l.asked, q)
	if q.Lower == 0 {
		f1 := math.Min(1, q.AtMost)
		return Answer{Point{1 - f1, f1}, f1 >= 0}, nil
	}
	f0 := math.Min(1, q.AtMost)
	return Answer{Point{f0, 1 - f0}, f0 >= 0}, nil
}

func TestEpsilonConstraintAsksEvenly(t *testing.T) {
	l := &line{}
	along, err := EpsilonConstraint(t.Context(), 5, l.solve)
	if err != nil {
		t.Fatal(err)
	}
	if len(along) != 5 || len(l.asked) != 7 {
		t.Fatalf("curve of %v after %d questions", along, len(l.asked))
	}
	// The ends of a line are decided: refining them makes no difference.
	for k, want := range []float64{1, 0.75, 0.5, 0.25, 0} {
		answer, _ := l.solve(t.Context(), l.asked[along[k]])
		if math.Abs(answer.Point[1]-want) > 1e-12 {
			t.Errorf("point %d: %v, want f1 = %g", k, answer.Point, want)
		}
	}
}

// Where one design is best in both objectives, it is the whole curve; an objective
// that differs by rounding alone does not make it a trade.
func TestEpsilonConstraintWithoutATrade(t *testing.T) {
	for name, c := range map[string]struct {
		best [2]Point // of objective 0, of objective 1
		want int
	}{
		"one design":            {[2]Point{{1, 2}, {1, 2}}, 0},
		"objective 1 the same":  {[2]Point{{1, 2}, {3, 2 - 1e-9}}, 0},
		"objective 0 the same":  {[2]Point{{1 - 1e-9, 4}, {1, 2}}, 1},
		"both nearly the same":  {[2]Point{{1, 2}, {1 + 1e-9, 2 - 1e-9}}, 0},
		"objective 1 near zero": {[2]Point{{1, 0}, {3, 0}}, 0},
	} {
		var asked []Question
		along, err := EpsilonConstraint(t.Context(), 5, func(_ context.Context, q Question) (Answer, error) {
			if asked = append(asked, q); len(asked) > 2 {
				return Answer{}, nil
			}
			return Answer{c.best[q.Lower], true}, nil
		})
		if err != nil || len(along) != 1 || along[0] != c.want || len(asked) > 4 {
			t.Errorf("%s: curve %v after %d questions, %v", name, along, len(asked), err)
		}
	}
}

// An end that is missed at first is sought from the other.
func TestEpsilonConstraintSeeksAnEndAgain(t *testing.T) {
	for missed := range 2 {
		l := &line{}
		along, err := EpsilonConstraint(t.Context(), 3, func(ctx context.Context, q Question) (Answer, error) {
			answer, err := l.solve(ctx, q)
			if q.Lower == missed && q.Near == nil {
				answer.Found = false
			}
			return answer, err
		})
		if err != nil || len(along) != 3 || len(l.asked[2].Near) != 1 || l.asked[2].Near[0] != 1-missed {
			t.Errorf("objective %d missed: curve %v, %v", missed, along, err)
		}
	}
}

func TestEpsilonConstraintWithoutADesign(t *testing.T) {
	along, err := EpsilonConstraint(t.Context(), 5, func(context.Context, Question) (Answer, error) {
		return Answer{}, nil
	})
	if err != nil || len(along) != 0 {
		t.Errorf("curve %v, %v", along, err)
	}
}

// A question that fails, or a context that ends, leaves the curve so far.
func TestEpsilonConstraintCutShort(t *testing.T) {
	broken := errors.New("broken")
	for fails := range 7 {
		l := &line{}
		along, err := EpsilonConstraint(t.Context(), 5, func(ctx context.Context, q Question) (Answer, error) {
			if len(l.asked) == fails {
				return Answer{}, broken
			}
			return l.solve(ctx, q)
		})
		if !errors.Is(err, broken) || len(l.asked) != fails {
			t.Errorf("failing question %d: %v after %d questions", fails, err, len(l.asked))
		}
		for _, i := range along {
			if i < 0 || i >= fails {
				t.Errorf("failing question %d: the curve %v has an answer that was not given", fails, along)
			}
		}
	}
	ctx, cancel := context.WithCancel(t.Context())
	l := &line{}
	along, err := EpsilonConstraint(ctx, 5, func(ctx context.Context, q Question) (Answer, error) {
		if len(l.asked) == 4 {
			cancel()
		}
		return l.solve(ctx, q)
	})
	if !errors.Is(err, context.Canceled) || len(along) != 3 {
		t.Errorf("cancelled in the first question between the ends: curve %v, %v", along, err)
	}
	if _, err := EpsilonConstraint(t.Context(), 1, l.solve); !errors.Is(err, ErrTooFewPoints) {
		t.Errorf("one point: %v", err)
	}
}
