package optimize

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/surrogate/gpr"
)

// The window around points holds them all, none of its sides is shorter than the
// least, and the points touch every side that is not.
func TestWindowAround(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, count := rapid.IntRange(1, 4).Draw(t, "n"), rapid.IntRange(1, 8).Draw(t, "count")
		points := make([][]float64, count)
		for i := range points {
			points[i] = rapid.SliceOfN(rapid.Float64Range(0, 1), n, n).Draw(t, "point")
		}
		w := windowAround(points)
		for j := range n {
			low, high := math.Inf(1), math.Inf(-1)
			for _, u := range w.all(points) {
				low, high = math.Min(low, u[j]), math.Max(high, u[j])
			}
			if low != 0 || high > 1+1e-12 || w.width[j] < leastWidth || w.width[j] > leastWidth && high < 1-1e-12 {
				t.Errorf("side %d: from %g to %g of a width of %g", j, low, high, w.width[j])
			}
		}
	})
	if w := closeWindow([][]float64{{0, 0.5}, {1, 0.5}}); w.width != nil {
		t.Errorf("window %v around points far apart", w)
	}
	if w := closeWindow([][]float64{{0.5, 0.5}, {0.6, 0.55}}); w.width == nil {
		t.Error("no window around points close together")
	}
}

// A fit through a window predicts what it was given, and its slopes are those of
// its mean in the unit cube.
func TestFitThroughAWindow(t *testing.T) {
	f := func(u []float64) float64 { return math.Sin(40*u[0]) + u[1]*u[1] }
	p := mustPlan(t, disk(1))
	var samples []*sample
	for i := range 25 {
		u := []float64{0.5 + 0.02*float64(i%5), 0.3 + 0.03*float64(i/5)}
		values := []float64{f(u), 0}
		samples = append(samples, &sample{u: u, values: values})
	}
	fit := fitOne(context.Background(), p.fitted[0], nearKinds(1), samples, nil, true)
	if fit.Err != nil || fit.window.width == nil {
		t.Fatal(fit.Err, fit.window)
	}
	at, slope := []float64{0.533, 0.371}, make([]float64, 2)
	fit.gradient(slope, at)
	if math.Abs(fit.mean(at)-f(at)) > 1e-3 {
		t.Errorf("mean %g, want %g", fit.mean(at), f(at))
	}
	for j := range at {
		const h = 1e-5
		up, down := []float64{at[0], at[1]}, []float64{at[0], at[1]}
		up[j], down[j] = up[j]+h, down[j]-h
		if numeric := (fit.mean(up) - fit.mean(down)) / (2 * h); math.Abs(numeric-slope[j]) > 1e-4*math.Max(1, math.Abs(slope[j])) {
			t.Errorf("slope %d is %g, by differences %g", j, slope[j], numeric)
		}
	}
}

// A fit that errs by more than it says is believed less: its standardised
// leave-one-out residuals have a root mean square of 1 afterwards.
func TestWindowedDeviationsCoverTheResiduals(t *testing.T) {
	var x [][]float64
	var y []float64
	for i := range 8 {
		x, y = append(x, []float64{float64(i) / 7}), append(y, math.Pow(-1, float64(i/2))*float64(i+1))
	}
	f, err := windowAround(x).fit(context.Background(), gpr.Config{Kernel: gpr.Matern52, Seed: 1}, x, y)
	if err != nil {
		t.Fatal(err)
	}
	plain := &windowed{f.window, f.fitted, 1}
	_, wide := f.predict([]float64{0.4})
	_, narrow := plain.predict([]float64{0.4})
	if f.widen < 1 || math.Abs(wide-f.widen*narrow) > 1e-12*wide {
		t.Errorf("deviation %g from %g, widened by %g", wide, narrow, f.widen)
	}
}

// The probability of a value is 1 for a model that never failed, falls toward
// failures and rises away from them, and stays within (0, 1].
func TestSuccessProbability(t *testing.T) {
	p := mustPlan(t, disk(1))
	at := func(x float64, works bool) *sample {
		value := 1.0
		if !works {
			value = math.NaN()
		}
		return &sample{u: []float64{x, 0.5}, values: []float64{value, 1}}
	}
	if s := p.newSuccess([]*sample{at(0.1, true), at(0.9, true)}); s != nil || s.at([]float64{0.5, 0.5}) != 1 {
		t.Error("a model that never failed is doubted")
	}
	s := p.newSuccess([]*sample{at(0.1, true), at(0.2, true), at(0.3, true), at(0.7, false), at(0.8, false)})
	before := 1.0
	for x := 0.3; x <= 0.75; x += 0.05 {
		now := s.at([]float64{x, 0.5})
		if !(now > 0 && now <= before) {
			t.Errorf("probability %g at %g after %g", now, x, before)
		}
		before = now
	}
	if got := s.at([]float64{0.75, 0.5}); got > 0.5 {
		t.Errorf("probability %g between two failures", got)
	}
}

// A quantity that is a polynomial is recognised, one that is not is not, nor is
// one that does not apply everywhere.
func TestPolynomialsAreRecognised(t *testing.T) {
	task := Task{
		Problem: &toy{
			variables:  []problems.Variable{variable("x", 0, 1), variable("y", 0, 1)},
			quantities: []problems.Quantity{quantity("square"), quantity("wave"), quantity("partly")},
			fill: func(x []float64, dst *problems.Evaluation) {
				dst.Set(0, 1+x[0]-3*x[0]*x[1]+x[1]*x[1])
				dst.Set(1, math.Sin(3*x[0])+x[1])
				if dst.Set(2, x[0]); x[1] > 0.9 {
					dst.Miss(2, &problems.NotApplicable{Why: "too high"})
				}
			},
		},
		Limits: []problems.Limit{atMost("wave", 1), atMost("partly", 1)},
		Aim:    aimAt("square", false),
	}
	p := mustPlan(t, task)
	d := &designer{plan: p, settings: Settings{}.WithDefaults(2)}
	samples, err := p.evaluate(context.Background(), 1, p.design(20, 1))
	if err != nil {
		t.Fatal(err)
	}
	d.training = samples
	known := d.polynomials(context.Background(), samples[3])
	if known[0] == nil || known[1] != nil || known[2] != nil {
		t.Fatalf("polynomials %v", known)
	}
	if got := known[0].mean(samples[3].u); math.Abs(got-samples[3].values[0]) > 1e-12 || known[0].Samples != 19 {
		t.Errorf("the sample left out is predicted as %g, want %g, from %d", got, samples[3].values[0], known[0].Samples)
	}
}

// Beside a feasible sample one that violates limits is a center only within reach
// of a step, however good its aim; without a feasible one the merit alone decides.
func TestCenterKeepsToTheFeasible(t *testing.T) {
	p := mustPlan(t, disk(1))
	inside := &sample{u: []float64{0.5, 0.5}, aim: 1, feasible: true, excess: []float64{0}}
	near := &sample{u: []float64{0.6, 0.5}, aim: 5, excess: []float64{0.01}}
	far := &sample{u: []float64{1, 1}, aim: 1e6, excess: []float64{0.01}}
	d := &designer{plan: p, radius: 0.1, penalty: merit{sign: -1, aimScale: 1, usual: []float64{1}, weight: []float64{1}}}
	d.samples = []*sample{inside, near, far}
	if d.center() != near {
		t.Errorf("center %v", d.center().u)
	}
	d.samples = []*sample{near, far}
	if d.center() != far {
		t.Errorf("center %v without a feasible sample", d.center().u)
	}
}

// The scale of the aim follows samples that spread far more than the first.
func TestMeritRescales(t *testing.T) {
	p := mustPlan(t, disk(1))
	var samples []*sample
	for _, aim := range []float64{1, 1.1, 1.2} {
		samples = append(samples, &sample{u: make([]float64, 2), aim: aim, evaluation: problems.NewEvaluation(2), excess: []float64{0}})
	}
	m := newMerit(p, samples)
	before := m.aimScale
	m.rescale(samples)
	if m.aimScale != before {
		t.Errorf("scale %g from %g without reason", m.aimScale, before)
	}
	m.rescale(append(samples, &sample{aim: 50}))
	if m.aimScale < 48 {
		t.Errorf("scale %g for an aim of 50 among 1", m.aimScale)
	}
}
