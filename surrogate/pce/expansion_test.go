package pce

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"
	"rampwright/problems"
	"rampwright/problems/analytic"
	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

var background = context.Background()

func fit(t rapid.TB, m surrogate.Model, x [][]float64, y []float64) *Expansion {
	t.Helper()
	f, err := m.Fit(background, x, y)
	if err != nil {
		t.Fatal(err)
	}
	return f.(*Expansion)
}

// everyKind lists one configuration of each way to fit.
var everyKind = []surrogate.Model{OLS{}, Ridge{}, Lasso{}, LeastAngle{}, OLS{Truncation: Truncation{Norm: 0.6}}, LeastAngle{Truncation: Truncation{Interactions: 2}}}

func samples(n, d int, seed int64, f func([]float64) float64) ([][]float64, []float64) {
	x := doe.RandomLatinHypercube(n, d, doe.Stream(seed, "test samples"))
	y := make([]float64, n)
	for i := range x {
		y[i] = f(x[i])
	}
	return x, y
}

func smooth(x []float64) float64 {
	sum := math.Sin(3*x[0]) * math.Exp(-x[1])
	for j, v := range x[1:] {
		sum += v * v / float64(j+1)
	}
	return sum
}

// Numbers of terms C(d+p, p), and the hyperbolic set of p = 3, q = 0.5 in two
// inputs by hand: 1; x, y; x^2, y^2; x^3, y^3 (x y has norm 4).
func TestTruncation(t *testing.T) {
	for d, want := range map[int][]int{4: {1, 5, 15, 35, 70, 126, 210, 330, 495}, 5: {1, 6, 21, 56, 126, 252, 462}} {
		_, ends := Truncation{Degree: len(want) - 1}.indices(d, 1000)
		if fmt.Sprint(ends) != fmt.Sprint(want) {
			t.Errorf("%d inputs: %v terms, want %v", d, ends, want)
		}
	}
	terms, ends := Truncation{Degree: 3, Norm: 0.5}.indices(2, 1000)
	if fmt.Sprint(ends) != "[1 3 5 7]" {
		t.Errorf("hyperbolic terms %v: %v", ends, terms)
	}
	terms, _ = Truncation{Degree: 4, Norm: 0.5}.indices(2, 1000)
	if last := terms[len(terms)-2]; fmt.Sprint(last) != "[1 1]" {
		t.Errorf("x y belongs to level 4 of q = 0.5: %v", terms)
	}
	if _, ends = (Truncation{Degree: 3, Interactions: 1}).indices(4, 1000); fmt.Sprint(ends) != "[1 5 9 13]" {
		t.Errorf("no interactions: %v terms", ends)
	}
	if _, ends = (Truncation{}).indices(4, 100); fmt.Sprint(ends) != "[1 5 15 35 70]" {
		t.Errorf("at most 100 terms: %v", ends)
	}
}

// Orthonormality by Gauss quadrature on a dense grid: the mean of psi_i psi_k
// under the distribution is 1 for i = k and else 0.
func TestPolynomialsAreOrthonormal(t *testing.T) {
	const n, degree = 20000, 8
	for _, in := range []Input{{}, {Normal: true, Mean: 0.4, Deviation: 0.1}} {
		products := make([]float64, (degree+1)*(degree+1))
		psi := make([]float64, degree+1)
		for i := range n {
			u, weight := (float64(i)+0.5)/n, 1.0/n
			if in.Normal { // midpoint rule on +-10 deviations
				z := -10 + 20*u
				u, weight = in.Mean+in.Deviation*z, 20.0/n*math.Exp(-z*z/2)/math.Sqrt(2*math.Pi)
			}
			in.polynomials(psi, u)
			for a, p := range psi {
				for b, q := range psi {
					products[a*(degree+1)+b] += weight * p * q
				}
			}
		}
		for a := range degree + 1 {
			for b := range degree + 1 {
				want := 0.0
				if a == b {
					want = 1
				}
				if math.Abs(products[a*(degree+1)+b]-want) > 1e-5 {
					t.Errorf("normal %v: product of %d and %d is %g", in.Normal, a, b, products[a*(degree+1)+b])
				}
			}
		}
	}
}

// A polynomial of degree up to 3 is reproduced exactly by least squares,
// lasso and least angle, anywhere in the cube.
func TestPolynomialIsReproduced(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.IntRange(1, 3).Draw(t, "inputs")
		degree := rapid.IntRange(0, 3).Draw(t, "degree")
		terms, ends := Truncation{Degree: max(degree, 1)}.indices(d, 1000)
		b := newBasis(make([]Input, d), terms[:ends[degree]])
		c := make([]float64, len(b.terms))
		for i := range c {
			c[i] = float64(rapid.IntRange(-9, 9).Draw(t, "coefficient"))
		}
		n := 3*len(c) + 2
		x := doe.RandomLatinHypercube(n, d, doe.Stream(rapid.Int64().Draw(t, "seed"), ""))
		scale := math.Pow(10, float64(rapid.IntRange(-250, 250).Draw(t, "log scale")))
		y := make([]float64, n)
		for i := range x {
			y[i] = scale * b.mean(c, x[i])
		}
		for _, m := range []surrogate.Model{OLS{}, Lasso{}, LeastAngle{}} {
			e := fit(t, m, x, y)
			for range 5 {
				u := make([]float64, d)
				for j := range u {
					u[j] = rapid.Float64Range(0, 1).Draw(t, "u")
				}
				if got, want := e.Mean(u), scale*b.mean(c, u); math.Abs(got-want) > 1e-8*scale*float64(1+len(c)) {
					t.Fatalf("%s, %s at %v: %g, want %g", m.Kind(), e.Describe(), u, got, want)
				}
			}
		}
	})
}

// 1 + 2 x1 + 3 x2 + x1 x2 on [-1,1]^2: mean 1, variance 40/9, indices 0.3, 0.675,
// 0.025 by hand.
func TestMomentsOfAPolynomial(t *testing.T) {
	x, y := samples(20, 2, 1, func(u []float64) float64 {
		a, b := 2*u[0]-1, 2*u[1]-1
		return 1 + 2*a + 3*b + a*b
	})
	for _, m := range []surrogate.Model{OLS{}, Lasso{}, LeastAngle{}} {
		e := fit(t, m, x, y)
		mean, variance := e.Moments()
		near(t, "mean", mean, 1, 1e-10)
		near(t, "variance", variance, 40.0/9, 1e-10)
		nearAll(t, "first order", e.FirstOrder(), []float64{0.3, 0.675}, 1e-10)
		nearAll(t, "total", e.Total(), []float64{0.325, 0.7}, 1e-10)
		near(t, "interaction", e.Interaction(0, 1), 0.025, 1e-9)
		near(t, "coefficient", coefficients(e, [][]int{{1, 1}})[0], 1.0/3, 1e-9)
	}
}

// Hermite: f = 2 + z1 + z1 z2 with z standard normal has mean 2, variance 2,
// first-order indices 1/2 and 0, totals 1 and 1/2.
func TestNormalInputs(t *testing.T) {
	inputs := []Input{{Normal: true, Mean: 0.5, Deviation: 0.2}, {Normal: true, Mean: 0.3, Deviation: 0.1}}
	x, y := samples(30, 2, 2, func(u []float64) float64 {
		a, b := (u[0]-0.5)/0.2, (u[1]-0.3)/0.1
		return 2 + a + a*b
	})
	e := fit(t, OLS{Inputs: inputs}, x, y)
	mean, variance := e.Moments()
	near(t, "mean", mean, 2, 1e-9)
	near(t, "variance", variance, 2, 1e-9)
	near(t, "first order", e.FirstOrder()[0], 0.5, 1e-9)
	nearAll(t, "total", e.Total(), []float64{1, 0.5}, 1e-9)
	slope := make([]float64, 2)
	e.Gradient(slope, []float64{0.6, 0.35})
	nearAll(t, "slope", slope, []float64{7.5, 5}, 1e-9)
}

// Sobol' indices of any fit: each in [0,1], first order at most total, first
// orders at most 1 together; permuted inputs permute the indices.
func TestIndicesAreShares(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.IntRange(2, 4).Draw(t, "inputs")
		x, y := samples(rapid.IntRange(8, 60).Draw(t, "samples"), d, rapid.Int64().Draw(t, "seed"), smooth)
		m := rapid.SampledFrom([]surrogate.Model{OLS{}, Ridge{Truncation: Truncation{Degree: 4}, Growth: 3, Penalty: 0.01, Exactly: true}}).Draw(t, "kind")
		e := fit(t, m, x, y)
		first, total, sum := e.FirstOrder(), e.Total(), 0.0
		for j := range first {
			sum += first[j]
			if first[j] < 0 || first[j] > total[j]+1e-12 || total[j] > 1+1e-12 {
				t.Fatalf("indices %v, %v", first, total)
			}
		}
		if sum > 1+1e-12 {
			t.Fatalf("first orders %v", first)
		}
		turned := make([][]float64, len(x))
		for i, row := range x {
			turned[i] = append(append([]float64(nil), row[1:]...), row[0])
		}
		other := fit(t, m, turned, y).Total()
		for j := range total {
			if math.Abs(other[(j+d-1)%d]-total[j]) > 1e-6 {
				t.Fatalf("totals %v, of permuted inputs %v", total, other)
			}
		}
	})
}

func TestGradient(t *testing.T) {
	x, y := samples(60, 3, 3, smooth)
	for _, m := range everyKind {
		e := fit(t, m, x, y)
		slope := make([]float64, 3)
		for _, u := range [][]float64{{0.3, 0.5, 0.8}, {0, 1, 0}, {1, 1, 1}} {
			mean, _ := e.Predict(u)
			if got := e.Gradient(slope, u); math.Abs(got-mean) > 1e-12*(1+math.Abs(mean)) || math.Abs(e.Mean(u)-mean) > 1e-12*(1+math.Abs(mean)) {
				t.Errorf("%s: means %g, %g, %g differ", m.Kind(), got, mean, e.Mean(u))
			}
			for j := range u {
				at := func(k float64) float64 {
					moved := append([]float64(nil), u...)
					moved[j] += k * 1e-3
					return e.Mean(moved)
				}
				difference := (8*(at(1)-at(-1)) - (at(2) - at(-2))) / 12e-3
				if math.Abs(difference-slope[j]) > 1e-7*(1+math.Abs(difference)) {
					t.Errorf("%s at %v: slope %d is %.10g, by differences %.10g", m.Kind(), u, j, slope[j], difference)
				}
			}
		}
	}
}

// Closed-form leave-one-out equals refitting the same terms without the sample.
func TestLeaveOneOutByRefitting(t *testing.T) {
	x, y := samples(24, 2, 4, smooth)
	for _, m := range []surrogate.Model{
		OLS{Truncation: Truncation{Degree: 3}, Exactly: true},
		Ridge{Truncation: Truncation{Degree: 5}, Growth: 3, Penalty: 1e-3, Exactly: true},
	} {
		e := fit(t, m, x, y)
		for i := range x {
			less := fit(t, m, append(append([][]float64(nil), x[:i]...), x[i+1:]...), append(append([]float64(nil), y[:i]...), y[i+1:]...))
			near(t, m.Kind()+" leave-one-out", e.LeaveOneOut()[i], less.Mean(x[i]), 1e-9)
		}
	}
}

// lassoPath walks down the first 40 steps of a lasso path on a smooth function and
// returns how many were solved; each of those is optimal.
func lassoPath(t rapid.TB, inputs, count int, seed int64) (solved int) {
	x, y := samples(count, inputs, seed, func(u []float64) float64 { return smooth(append(u, 0.5)) })
	terms, _ := Truncation{Degree: 4}.indices(inputs, 80)
	_, scaled, _ := surrogate.Standardise(y)
	v := newCovariance(newBasis(make([]Input, inputs), terms).design(x), scaled)
	solver := newLassoSolver(v)
	for _, alpha := range v.alphas()[:40] {
		if !solver.solve(alpha, pathTolerance) {
			continue
		}
		if solver.violation(alpha) > 1e-10 {
			t.Fatalf("alpha %g: violated by %g", alpha, solver.violation(alpha))
		}
		solved++
	}
	return solved
}

// The optimality conditions of the lasso hold along the path wherever it is called
// solved, on random problems with more and fewer samples than columns.
func TestLassoOptimality(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		inputs, count := rapid.IntRange(1, 4).Draw(t, "inputs"), rapid.IntRange(6, 50).Draw(t, "samples")
		lassoPath(t, inputs, count, rapid.Int64().Draw(t, "seed"))
	})
}

// Steps are left unsolved where the columns in use all but depend on each other, which
// is rare.
func TestLassoPathIsSolved(t *testing.T) {
	for seed := range int64(12) {
		for inputs := 1; inputs <= 4; inputs++ {
			if solved := lassoPath(t, inputs, 8+4*int(seed), seed); solved < 38 {
				t.Errorf("%d inputs, seed %d: %d of 40 steps solved", inputs, seed, solved)
			}
		}
	}
}

// The Styblinski-Tang function in five inputs is a quartic of sixteen terms whose
// cubic part explains almost nothing: both sparse kinds find it all the same.
func TestSparseKindsFindTheQuartic(t *testing.T) {
	problem, err := analytic.New("styblinski_tang")
	if err != nil {
		t.Fatal(err)
	}
	value := problems.NewEvaluation(len(problem.Quantities()))
	quartic := func(u []float64) float64 {
		x := make([]float64, len(u))
		surrogate.Box{Low: []float64{-5, -5, -5, -5, -5}, High: []float64{5, 5, 5, 5, 5}}.FromUnit(x, u)
		if err := problem.Evaluate(context.Background(), x, value); err != nil {
			t.Fatal(err)
		}
		return value.Values[0]
	}
	for seed := range int64(4) {
		x, y := samples(100, 5, seed, quartic)
		for _, m := range []surrogate.Model{LeastAngle{}, Lasso{Seed: seed}} {
			e := fit(t, m, x, y)
			for _, u := range [][]float64{{0.1, 0.9, 0.4, 0.6, 0.5}, {0, 0, 1, 1, 0.3}} {
				near(t, m.Kind(), e.Mean(u), quartic(u), 1e-9)
			}
		}
	}
}

func TestDegenerateData(t *testing.T) {
	x, y := samples(20, 2, 5, smooth)
	line, twice := make([][]float64, len(x)), append([][]float64(nil), x...)
	level, against := make([]float64, len(y)), append([]float64(nil), y...)
	for i := range x {
		line[i] = []float64{x[i][0], x[i][0]}
		level[i] = -3.5
		if i >= 10 {
			twice[i] = x[i-10]
		}
	}
	against[12] += 1
	scaled := func(k float64) []float64 {
		out := make([]float64, len(y))
		for i := range y {
			out[i] = k * y[i]
		}
		return out
	}
	for _, c := range []struct {
		name string
		x    [][]float64
		y    []float64
	}{
		{"repeated", twice, append(append([]float64(nil), y[:10]...), y[:10]...)}, {"contradictory", twice, against},
		{"constant", x, level}, {"collinear", line, y}, {"huge", x, scaled(1e300)}, {"tiny", x, scaled(1e-300)},
		{"two samples", x[:2], y[:2]}, {"three samples", x[:3], y[:3]}, {"one point", [][]float64{{0.5}, {0.5}, {0.5}}, []float64{1, 2, 3}},
		{"outlier", x, append(append([]float64(nil), y[:19]...), 1e12)},
	} {
		for _, m := range everyKind {
			e := fit(t, m, c.x, c.y)
			slope := make([]float64, len(c.x[0]))
			for _, u := range c.x {
				mean, deviation := e.Predict(u)
				values := append([]float64{mean, deviation, e.Mean(u), e.Gradient(slope, u)}, slope...)
				values = append(append(values, e.LeaveOneOut()...), e.LeaveOneOutDeviation()...)
				values = append(append(values, e.FirstOrder()...), e.Influence()...)
				for _, v := range values {
					if math.IsNaN(v) || math.IsInf(v, 0) {
						t.Fatalf("%s, %s, %s: %v", c.name, m.Kind(), e.Describe(), values)
					}
				}
			}
			if c.name == "constant" && (e.Mean(c.x[0]) != -3.5 || e.Describe()[:8] != "constant") {
				t.Errorf("%s: constant outputs give %g, %q", m.Kind(), e.Mean(c.x[0]), e.Describe())
			}
		}
	}
}

func TestErrors(t *testing.T) {
	x, y := samples(6, 2, 6, smooth)
	for _, m := range everyKind {
		bad := append([]float64(nil), y...)
		bad[2] = math.NaN()
		var data *surrogate.DataError
		if _, err := m.Fit(background, x, bad); !errors.As(err, &data) || data.Row != 2 {
			t.Errorf("%s, NaN: %v", m.Kind(), err)
		}
		if _, err := m.Fit(background, x[:1], y[:1]); !errors.As(err, &data) {
			t.Errorf("%s, one sample: %v", m.Kind(), err)
		}
		ctx, cancel := context.WithCancel(background)
		cancel()
		if _, err := m.Fit(ctx, x, y); !errors.Is(err, context.Canceled) {
			t.Errorf("%s, cancelled: %v", m.Kind(), err)
		}
	}
	var data *surrogate.DataError
	if _, err := (OLS{Truncation: Truncation{Degree: 4}, Exactly: true}).Fit(background, x, y); !errors.As(err, &data) {
		t.Errorf("fewer samples than terms: %v", err)
	}
	var settings *surrogate.SettingsError
	_, err := Ridge{Truncation: Truncation{Degree: -1, Norm: 2}, Growth: -3, Inputs: []Input{{Normal: true}}}.Fit(background, x, y)
	if !errors.As(err, &settings) || len(settings.Problems) != 5 {
		t.Errorf("settings: %v", err)
	}
}

func TestMeanDoesNotAllocate(t *testing.T) {
	x, y := samples(60, 3, 7, smooth)
	e := fit(t, Ridge{}, x, y)
	u, slope := []float64{0.2, 0.3, 0.4}, make([]float64, 3)
	if n := testing.AllocsPerRun(1000, func() { e.Mean(u); e.Gradient(slope, u); e.Predict(u) }); n > 0.1 {
		t.Errorf("%g allocations", n) // the pool may be emptied by a collection
	}
}

// A warm refit keeps the structure on the same data, and a constant does not
// bind the next fit.
func TestWarm(t *testing.T) {
	x, y := samples(40, 3, 9, smooth)
	level := make([]float64, len(y))
	for _, m := range everyKind {
		e := fit(t, m, x, y)
		again := fit(t, e.Warm(), x, y)
		if again.Describe() != e.Describe() || math.Abs(again.Mean(x[3])-e.Mean(x[3])) > 1e-6 {
			t.Errorf("%s: %s became %s", m.Kind(), e.Describe(), again.Describe())
		}
		constant := fit(t, m, x, level)
		if freed := fit(t, constant.Warm(), x, y); freed.Describe() != e.Describe() {
			t.Errorf("%s: after a constant %s, want %s", m.Kind(), freed.Describe(), e.Describe())
		}
	}
}
