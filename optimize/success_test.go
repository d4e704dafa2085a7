package optimize

import (
	"context"
	"math"
	"testing"

	"rampwright/problems"
)

// halfKnown is a designer on a square whose model fails left of the middle, with
// samples on a grid of five by five.
func halfKnown(t *testing.T) *designer {
	t.Helper()
	task := Task{
		Problem: verifiedToy{&toy{
			variables:  []problems.Variable{variable("x", 0, 1), variable("y", 0, 1)},
			quantities: []problems.Quantity{quantity("height")},
			fill: func(x []float64, dst *problems.Evaluation) {
				if dst.Set(0, x[0]+x[1]); x[0] < 0.5 {
					dst.Miss(0, &problems.Status{Phrase: "solver stopped"})
				}
			},
		}},
		Aim: aimAt("height", false),
	}
	d := &designer{plan: mustPlan(t, task), settings: Settings{}.WithDefaults(2), radius: startRadius}
	var points [][]float64
	for i := range 25 {
		points = append(points, []float64{float64(i%5) / 4, float64(i/5) / 4})
	}
	samples, err := d.plan.evaluate(context.Background(), 1, points)
	if err != nil {
		t.Fatal(err)
	}
	d.samples, d.training = samples, samples
	d.penalty = newMerit(d.plan, samples)
	d.success = d.plan.newSuccess(samples)
	return d
}

// Most neighbours decide; a failure alone among successes does not.
func TestAmongFailures(t *testing.T) {
	d := halfKnown(t)
	for _, c := range []struct {
		u    []float64
		want bool
	}{{[]float64{0, 0}, true}, {[]float64{0.3, 0.5}, true}, {[]float64{0.5, 0.5}, false}, {[]float64{1, 1}, false}} {
		if got := d.amongFailures(c.u); got != c.want {
			t.Errorf("%v among failures: %t", c.u, got)
		}
		if p := d.success.at(c.u); p < leastSuccess != c.want {
			t.Errorf("%v succeeds with probability %g", c.u, p)
		}
	}
	for _, s := range d.training {
		if alone := s.u[0] == 0.75 && s.u[1] == 0.5; alone {
			s.values[0] = math.NaN()
		}
	}
	if d.amongFailures([]float64{0.76, 0.52}) {
		t.Error("one failure among successes counts as many")
	}
	d.success = nil
	if d.amongFailures([]float64{0, 0}) {
		t.Error("failures without a failed sample")
	}
}

// Scouts keep out of where the model fails, a step goes half the way there, and the
// search over the box ends where there is a value to be had.
func TestSearchesKeepOutOfFailures(t *testing.T) {
	d := halfKnown(t)
	if err := d.fit(t.Context()); err != nil {
		t.Fatal(err)
	}
	center := d.center()
	if center.u[0] != 0.5 || center.u[1] != 0 {
		t.Fatalf("the least height known is at %v", center.u)
	}
	scouts := d.scouts(center, 4, 0.4)
	for _, p := range scouts {
		if d.amongFailures(p.u) {
			t.Errorf("a scout at %v", p.u)
		}
	}
	if len(scouts) == 0 {
		t.Error("no scouts")
	}
	step, err := d.exploit(t.Context(), center)
	if err != nil {
		t.Fatal(err)
	}
	// The nearest failure is at (0.25, 0).
	if !step.cut || math.Abs(step.u[0]-0.375) > 1e-6 {
		t.Errorf("a step to %v, want 0.375", step.u)
	}
	wide, err := d.search(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	if wide == nil || d.success.at(wide.u) < leastSuccess {
		t.Errorf("the search over the box ends at %+v", wide)
	}
}
