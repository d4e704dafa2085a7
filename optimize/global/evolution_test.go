package global

import (
	"context"
	"errors"
	"math"
	"slices"
	"sync/atomic"
	"testing"

	"pgregory.net/rapid"
)

func minimize(t testing.TB, n int, f Objective, s Settings) *Result {
	t.Helper()
	r, err := Minimize(context.Background(), n, f, s)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// scaled lets an objective stated in a box be searched in the unit cube.
func scaled(low, high []float64, f func(y []float64) (float64, float64)) Objective {
	return func(x []float64) (float64, float64) {
		y := make([]float64, len(x))
		for j, v := range x {
			y[j] = low[j] + v*(high[j]-low[j])
		}
		return f(y)
	}
}

func fill(n int, v float64) []float64 {
	s := make([]float64, n)
	for i := range s {
		s[i] = v
	}
	return s
}

func rastrigin(y []float64) (float64, float64) {
	sum := 10 * float64(len(y))
	for _, v := range y {
		sum += v*v - 10*math.Cos(2*math.Pi*v)
	}
	return sum, 0
}

func styblinskiTang(y []float64) (float64, float64) {
	sum := 0.0
	for _, v := range y {
		sum += v*v*v*v - 16*v*v + 5*v
	}
	return sum / 2, 0
}

// g06 and g24 of the constrained test collection of CEC 2006 (Liang et al.,
// formulas and optima from memory).
func g06(y []float64) (float64, float64) {
	a, b := y[0], y[1]
	g1 := -(a-5)*(a-5) - (b-5)*(b-5) + 100
	g2 := (a-6)*(a-6) + (b-5)*(b-5) - 82.81
	return math.Pow(a-10, 3) + math.Pow(b-20, 3), max(g1, 0) + max(g2, 0)
}

func g24(y []float64) (float64, float64) {
	a, b := y[0], y[1]
	g1 := -2*math.Pow(a, 4) + 8*math.Pow(a, 3) - 8*a*a + b - 2
	g2 := -4*math.Pow(a, 4) + 32*math.Pow(a, 3) - 88*a*a + 96*a + b - 36
	return -a - b, max(g1, 0) + max(g2, 0)
}

func TestKnownOptima(t *testing.T) {
	cases := []struct {
		name        string
		low, high   []float64
		f           func([]float64) (float64, float64)
		optimum     float64
		tolerance   float64
		factor      float64
		generations int
	}{
		// Global minimum 0 at the origin, by construction.
		{"Rastrigin, 4 variables", fill(4, -5.12), fill(4, 4.12), rastrigin, 0, 1e-6, 0, 400},
		// -39.16616570377142 a variable, at -2.903534 (root of 4x^3 - 32x + 5).
		{"Styblinski-Tang, 5 variables", fill(5, -5), fill(5, 5), styblinskiTang, -5 * 39.16616570377142, 1e-6, 0, 300},
		// Feasible only in a curved strip a hundredth of the box wide, along which
		// factor 0.5 contracts too early in a quarter of all runs.
		{"g06", []float64{13, 0}, []float64{100, 100}, g06, -6961.81387558015, 1e-3, 0.6, 400},
		{"g24", []float64{0, 0}, []float64{3, 4}, g24, -5.50801327159536, 1e-6, 0, 200},
	}
	for _, c := range cases {
		for seed := range uint64(5) {
			r := minimize(t, len(c.low), scaled(c.low, c.high, c.f), Settings{Generations: c.generations, Factor: c.factor, Seed: seed})
			if r.Violation > 0 || math.Abs(r.F-c.optimum) > c.tolerance {
				t.Errorf("%s, seed %d: %.10g (violation %g) after %d evaluations, known %.10g", c.name, seed, r.F, r.Violation, r.Evaluations, c.optimum)
			}
			if seed == 0 {
				t.Logf("%s: %.12g after %d evaluations, %v, %d points", c.name, r.F, r.Evaluations, r.Status, len(r.Points))
			}
		}
	}
}

func TestSameBytesForAnyJobs(t *testing.T) {
	f := scaled(fill(3, -5.12), fill(3, 5.12), rastrigin)
	alone := minimize(t, 3, f, Settings{Generations: 30, Seed: 5, Jobs: 1})
	for _, jobs := range []int{2, 7} {
		together := minimize(t, 3, f, Settings{Generations: 30, Seed: 5, Jobs: jobs})
		if !sameBits(alone, together) {
			t.Errorf("jobs %d: %+v, alone %+v", jobs, together, alone)
		}
	}
	other := minimize(t, 3, f, Settings{Generations: 30, Seed: 6, Jobs: 1})
	if sameBits(alone, other) {
		t.Error("the seed changes nothing")
	}
}

// Two evaluations that wait for each other end only if they run side by side.
func TestJobsRunSideBySide(t *testing.T) {
	meet := make(chan struct{})
	f := func(x []float64) (float64, float64) {
		select {
		case meet <- struct{}{}:
		case <-meet:
		}
		return x[0], 0
	}
	r := minimize(t, 1, f, Settings{Agents: 4, Generations: 3, Jobs: 2})
	if r.Evaluations != 16 {
		t.Errorf("%d evaluations", r.Evaluations)
	}
}

func TestEarlyStop(t *testing.T) {
	f := scaled(fill(2, -5), fill(2, 5), styblinskiTang)
	long := minimize(t, 2, f, Settings{Generations: 1000})
	if long.Status != Collapsed || long.Generations >= 1000 || long.Evaluations != 50*(long.Generations+1) {
		t.Errorf("%v after %d generations and %d evaluations", long.Status, long.Generations, long.Evaluations)
	}
	short := minimize(t, 2, f, Settings{Generations: 3})
	if short.Status != GenerationLimit || short.Generations != 3 || short.Evaluations != 200 {
		t.Errorf("%v after %d generations and %d evaluations", short.Status, short.Generations, short.Evaluations)
	}
}

func sameBits(a, b *Result) bool {
	same := func(p, q Point) bool {
		return slices.EqualFunc(p.X, q.X, func(v, w float64) bool { return math.Float64bits(v) == math.Float64bits(w) }) &&
			math.Float64bits(p.F) == math.Float64bits(q.F) && p.Violation == q.Violation
	}
	return same(a.Point, b.Point) && slices.EqualFunc(a.Points, b.Points, same) &&
		a.Evaluations == b.Evaluations && a.Status == b.Status
}

func TestUndefinedObjectives(t *testing.T) {
	for name, f := range map[string]Objective{
		"NaN":       func([]float64) (float64, float64) { return math.NaN(), math.NaN() },
		"infinite":  func([]float64) (float64, float64) { return math.Inf(-1), math.Inf(1) },
		"violation": func([]float64) (float64, float64) { return 0, math.NaN() },
	} {
		r := minimize(t, 2, f, Settings{Generations: 5})
		if r.Violation != Undefined || len(r.X) != 2 || r.Evaluations != 300 || len(r.Points) != 0 {
			t.Errorf("%s: %+v", name, r)
		}
	}
	// Defined in a small corner only.
	r := minimize(t, 2, func(x []float64) (float64, float64) {
		if x[0] < 0.8 || x[1] < 0.8 {
			return math.NaN(), 0
		}
		return x[0] + x[1], 0
	}, Settings{})
	if r.Violation != 0 || math.Abs(r.F-1.6) > 1e-6 {
		t.Errorf("corner: %+v", r.Point)
	}
}

// A planted point is never lost to a worse one, and every point stays in the
// cube.
func TestPlantedPointIsKept(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 5).Draw(t, "n")
		planted := make([]float64, n)
		for j := range planted {
			planted[j] = rapid.SampledFrom([]float64{0, 0.25, 0.5, 1}).Draw(t, "planted")
		}
		needle := func(x []float64) (float64, float64) {
			outside := 0.0
			for j, v := range x {
				if v < 0 || v > 1 {
					t.Fatalf("coordinate %d = %g outside the cube", j, v)
				}
				outside += math.Abs(v - 0.5)
			}
			if slices.Equal(x, planted) {
				return -1, 0
			}
			return outside, 0.1 + outside
		}
		r, err := Minimize(context.Background(), n, needle, Settings{
			Agents: 8, Generations: 20, Seed: rapid.Uint64().Draw(t, "seed"), Seeds: [][]float64{planted},
		})
		if err != nil || r.F != -1 || r.Violation != 0 || !slices.Equal(r.X, planted) {
			t.Fatalf("%v %+v", err, r)
		}
	})
}

func TestPointsAreDistinctAndOrdered(t *testing.T) {
	f := scaled(fill(2, -5), fill(2, 5), styblinskiTang)
	r := minimize(t, 2, f, Settings{Generations: 8, Seed: 3})
	if len(r.Points) < 3 || r.Points[0].F != r.F {
		t.Fatalf("%d points, first %+v, best %+v", len(r.Points), r.Points[0], r.Point)
	}
	for i, p := range r.Points {
		for k, q := range r.Points[:i] {
			if p.Better(q) {
				t.Errorf("point %d is better than point %d before it", i, k)
			}
			if max(math.Abs(p.X[0]-q.X[0]), math.Abs(p.X[1]-q.X[1])) < 0.05 {
				t.Errorf("points %d and %d coincide", i, k)
			}
		}
	}
}

func TestCancelled(t *testing.T) {
	for _, after := range []int64{0, 20, 260} {
		ctx, cancel := context.WithCancel(context.Background())
		if after == 0 {
			cancel()
		}
		var calls atomic.Int64
		r, err := Minimize(ctx, 3, func(x []float64) (float64, float64) {
			if calls.Add(1) == after {
				cancel()
			}
			return x[0] + x[1], 0
		}, Settings{Jobs: 2})
		if err != nil || r.Status != Cancelled || len(r.X) != 3 {
			t.Errorf("after %d: %v %+v", after, err, r)
		}
		if after > 0 && (r.Violation != 0 || r.Evaluations < int(after)) {
			t.Errorf("after %d: %+v", after, r)
		}
		cancel()
	}
}

func TestReflectStaysInside(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(-1e3, 1e3).Draw(t, "v")
		if r := reflect(v); r < 0 || r > 1 {
			t.Fatalf("reflect(%g) = %g", v, r)
		}
	})
	for v, want := range map[float64]float64{-0.25: 0.25, 1.25: 0.75, 2.25: 0.25, 0.5: 0.5, 1: 1, -1: 1} {
		if r := reflect(v); math.Abs(r-want) > 1e-15 {
			t.Errorf("reflect(%g) = %g, wanted %g", v, r, want)
		}
	}
}

func TestValidateReportsEverything(t *testing.T) {
	_, err := Minimize(context.Background(), 2, nil, Settings{
		Agents: 3, Generations: -1, Factor: 3, Crossover: 2, Collapse: -1, Separation: 2, Points: -1, Jobs: -1,
		Seeds: [][]float64{{0}, {0, 2}},
	})
	fields := map[string]int{}
	var collect func(error)
	collect = func(err error) {
		if joined, ok := err.(interface{ Unwrap() []error }); ok {
			for _, e := range joined.Unwrap() {
				collect(e)
			}
			return
		}
		var wrong *SettingError
		if errors.As(err, &wrong) {
			fields[wrong.Field]++
		}
	}
	collect(err)
	for _, field := range []string{"Agents", "Generations", "Factor", "Crossover", "Collapse", "Separation", "Points", "Jobs", "Seeds", "objective"} {
		if want := map[string]int{"Seeds": 2}[field]; fields[field] < max(1, want) {
			t.Errorf("%s not reported: %v", field, err)
		}
	}
}

func BenchmarkGenerations(b *testing.B) {
	f := func(x []float64) (float64, float64) { return x[0]*x[0] + x[1] + x[2]*x[3], 0 }
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Minimize(context.Background(), 4, f, Settings{Generations: 80, Collapse: 1e-300}); err != nil {
			b.Fatal(err)
		}
	}
}
