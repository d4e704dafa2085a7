package optimize

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// The logarithm of the standardised expected improvement against 50-digit
// arithmetic, and at its ends.
func TestLogImprovement(t *testing.T) {
	for _, c := range []struct{ z, want float64 }{
		{5, 1.6094379231264313}, {0, -0.9189385332046728}, {-1, -2.4851210257126413}, {-2, -4.768783523917114},
		{-5, -16.74430116266099}, {-10, -55.55312203612235}, {-20, -206.9178385094251}, {-40, -808.29856835662},
		{-100, -5010.12957880025}, {-1e3, -500014.73445209116}, {-1e6, -500000000028.55},
	} {
		if got := logImprovement(c.z); math.Abs(got-c.want) > 1e-11*math.Abs(c.want) {
			t.Errorf("z %g: %.17g, want %.17g", c.z, got, c.want)
		}
	}
	if !math.IsInf(logImprovement(math.Inf(-1)), -1) || !math.IsNaN(logImprovement(math.NaN())) {
		t.Error("no limit at the ends")
	}
	// EI of m 1, s 0.5 against the best 0.8, by the same arithmetic.
	if got := 0.5 * math.Exp(logImprovement(-0.4)); math.Abs(got-0.115219418473726487) > 1e-15 {
		t.Errorf("expected improvement %.17g", got)
	}
}

// It rises with z, its slope is Phi/h, and the probability agrees with the error
// function where that has digits; no branch joins with a step.
func TestImprovementProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		z := -rapid.Float64Range(-6, 300).Draw(t, "z")
		const step = 1e-3
		slope := (logImprovement(z+step) - logImprovement(z-step)) / (2 * step)
		if want := math.Exp(logProbability(z) - logImprovement(z)); math.Abs(slope-want) > 1e-5*(1+math.Abs(want)) {
			t.Errorf("slope %g at %g, want %g", slope, z, want)
		}
		if z > -30 {
			if want := math.Log(math.Erfc(-z/math.Sqrt2) / 2); math.Abs(logProbability(z)-want) > 1e-11*(1+math.Abs(want)) {
				t.Errorf("log Phi(%g) = %g, want %g", z, logProbability(z), want)
			}
		}
	})
	for _, joint := range []float64{-1, -100, -20 * math.Sqrt2} {
		for name, f := range map[string]func(float64) float64{"improvement": logImprovement, "probability": logProbability} {
			below, above := f(math.Nextafter(joint, -1e9)), f(math.Nextafter(joint, 0))
			if math.Abs(above-below) > 1e-11*math.Abs(below) {
				t.Errorf("%s steps at %g: %.15g, %.15g", name, joint, below, above)
			}
		}
	}
}

// ripples is sin(9 x) + x/10 on [0, 1] from its samples, with a limit that leaves
// out the right half.
func ripplesDesigner(t *testing.T, at ...float64) *designer {
	t.Helper()
	task := Task{
		Problem: &toy{
			variables:  []problems.Variable{variable("x", 0, 1), variable("y", 0, 1)},
			quantities: []problems.Quantity{quantity("height"), quantity("half")},
			fill: func(x []float64, dst *problems.Evaluation) {
				dst.Set(0, math.Sin(9*x[0])+x[1]/10)
				dst.Set(1, x[0])
			},
		},
		Limits: []problems.Limit{atMost("half", 0.5)},
		Aim:    aimAt("height", false),
	}
	p := mustPlan(t, task)
	d := &designer{plan: p, settings: Settings{}.WithDefaults(2), radius: startRadius}
	var points [][]float64
	for i, x := range at {
		points = append(points, []float64{x, math.Mod(0.37*float64(i+1), 1)})
	}
	samples, err := p.evaluate(context.Background(), 1, points)
	if err != nil {
		t.Fatal(err)
	}
	d.samples, d.training, d.counts.Samples = samples, samples, len(samples)
	d.penalty = newMerit(p, samples)
	if err := d.fitWide(context.Background()); err != nil {
		t.Fatal(err)
	}
	return d
}

// The point of largest expected improvement keeps the limit and stands apart from
// the samples; beside an infeasible valley that is deeper, it stays on this side.
func TestImproveKeepsTheLimits(t *testing.T) {
	d := ripplesDesigner(t, 0.02, 0.15, 0.3, 0.42, 0.55, 0.7, 0.85, 0.98)
	p, err := d.improve(context.Background())
	if err != nil || p == nil {
		t.Fatal(p, err)
	}
	if p.u[0] > 0.5+1e-3 || !d.fresh(p.u) {
		t.Errorf("improve at %v", p.u)
	}
	// The valley of sin(9 x) within the limit is at its end.
	if p.u[0] < 0.4 {
		t.Errorf("improve at %v, away from the only valley", p.u)
	}
}
