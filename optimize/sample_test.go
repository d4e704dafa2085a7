package optimize

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sync/atomic"
	"testing"

	"pgregory.net/rapid"

	"rampwright/constraints"
	"rampwright/problems"
)

// A quantity that does not apply asks nothing; any other missing value stays
// missing and counts as a violation.
func TestJudgeMissingValues(t *testing.T) {
	p := mustPlan(t, disk(1))
	inapplicable := &problems.NotApplicable{Why: "no terminal shock"}
	detached := &problems.Detached{Shock: "lip shock", Mach: 2, By: 0.1}
	evaluation := func(height, square any) *problems.Evaluation {
		e := problems.NewEvaluation(2)
		for i, entry := range []any{height, square} {
			switch v := entry.(type) {
			case float64:
				e.Set(i, v)
			case error:
				e.Miss(i, v)
			}
		}
		return e
	}
	for _, c := range []struct {
		name           string
		height, square any
		aim, violation float64
		feasible       bool
	}{
		{"inside", 2.0, 0.5, 2, 0, true},
		{"on the limit", 2.0, 1.0, 2, 0, true},
		{"outside", 2.0, 1.25, 2, 0.25, false},
		{"limit does not apply", 2.0, inapplicable, 2, 0, true},
		{"limit missing", 2.0, detached, 2, constraints.MissingViolation, false},
		{"limit missing without a reason", 2.0, nil, 2, constraints.MissingViolation, false},
		{"aim missing", detached, 0.5, math.NaN(), constraints.MissingViolation, false},
		{"aim does not apply", inapplicable, 0.5, math.NaN(), constraints.MissingViolation, false},
		{"both missing", detached, detached, math.NaN(), 2 * constraints.MissingViolation, false},
	} {
		e := evaluation(c.height, c.square)
		s := p.judge([]float64{0, 0}, e)
		same := s.aim == c.aim || math.IsNaN(s.aim) && math.IsNaN(c.aim)
		if !same || math.Abs(s.violation-c.violation) > 1e-12 || s.feasible != c.feasible {
			t.Errorf("%s: aim %g, violation %g, feasible %t", c.name, s.aim, s.violation, s.feasible)
		}
		if c.square == inapplicable && !math.IsInf(s.values[1], 1) {
			t.Errorf("%s: settled as %g", c.name, s.values[1])
		}
		if c.square == detached && !math.IsNaN(s.values[1]) {
			t.Errorf("%s: settled as %g", c.name, s.values[1])
		}
		if c.square == inapplicable && !math.IsNaN(e.Values[1]) {
			t.Errorf("%s: the evaluation itself was changed", c.name)
		}
	}
}

// Every call gets its own slot, each index once, never more at a time than jobs.
func TestInSlots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		jobs, n := rapid.IntRange(1, 9).Draw(t, "jobs"), rapid.IntRange(0, 40).Draw(t, "n")
		calls := make([]atomic.Int32, n)
		var running, most atomic.Int32
		inSlots(jobs, n, func(i int) {
			now := running.Add(1)
			for seen := most.Load(); now > seen && !most.CompareAndSwap(seen, now); seen = most.Load() {
			}
			calls[i].Add(1)
			running.Add(-1)
		})
		for i := range calls {
			if calls[i].Load() != 1 {
				t.Errorf("call %d was made %d times", i, calls[i].Load())
			}
		}
		if int(most.Load()) > jobs {
			t.Errorf("%d calls at a time, %d allowed", most.Load(), jobs)
		}
	})
}

// brokenAt is a model that cannot be run for some points.
type brokenAt struct {
	problems.Problem
	from float64 // of x
}

type brokenModel struct{ x float64 }

func (e *brokenModel) Error() string { return fmt.Sprintf("model broke at %g", e.x) }

func (p brokenAt) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	if x[0] >= p.from {
		return &brokenModel{x[0]}
	}
	return p.Problem.Evaluate(ctx, x, dst)
}

func TestEvaluateKeepsOrderAndReportsTheFirstError(t *testing.T) {
	task := disk(1)
	p := mustPlan(t, task)
	points := make([][]float64, 30)
	for i := range points {
		points[i] = []float64{float64(i) / 30, 0.5}
	}
	for _, jobs := range []int{1, 2, 7, 50} {
		samples, err := p.evaluate(context.Background(), jobs, points)
		if err != nil {
			t.Fatal(err)
		}
		for i, s := range samples {
			if x := p.denormal(points[i]); !slices.Equal(s.x, x) || s.evaluation.Values[1] != x[0]*x[0]+x[1]*x[1] {
				t.Errorf("%d jobs: sample %d is of another point", jobs, i)
			}
		}
		task.Problem = brokenAt{disk(1).Problem, p.denormal(points[11])[0]}
		_, err = mustPlan(t, task).evaluate(context.Background(), jobs, points)
		var broken *brokenModel
		if !errors.As(err, &broken) || broken.x != p.denormal(points[11])[0] {
			t.Errorf("%d jobs: %v, want the error of point 11", jobs, err)
		}
	}
}

// Space-filling points keep the linear rows and stay near the limits on explicit
// quantities; the same seed gives the same points.
func TestDesignPoints(t *testing.T) {
	p := mustPlan(t, mixed(
		problems.Limit{Quantity: "linear", Point: "here", Low: -298, High: -290},
		atLeast("curved", 0.5),
	))
	for seed := int64(1); seed <= 5; seed++ {
		points := p.design(40, seed)
		if len(points) != 40 {
			t.Fatalf("%d points", len(points))
		}
		outside := 0
		for _, u := range points {
			x := p.denormal(u)
			curved := math.Exp(x[0]/10) * (x[1] - 100)
			if !p.insideLinear(u) || curved < 0.5-explicitSlack {
				t.Errorf("seed %d: %v is outside", seed, u)
			}
			if curved < 0.5 {
				outside++
			}
		}
		if outside == 0 {
			t.Errorf("seed %d: no point just outside the limit", seed)
		}
		for i, u := range p.design(40, seed) {
			if !slices.Equal(u, points[i]) {
				t.Errorf("seed %d gives other points the second time", seed)
			}
		}
		if slices.Equal(points[0], p.design(40, seed+1)[0]) {
			t.Errorf("seeds %d and %d give the same points", seed, seed+1)
		}
	}
}

// Where limits leave too little room for the points, they give way: first those
// on curved quantities, then the linear rows.
func TestDesignPointsWithoutRoom(t *testing.T) {
	curved := mustPlan(t, mixed(problems.Limit{Quantity: "linear", Point: "here", Low: -298, High: -290}, atLeast("curved", 1e3)))
	for _, u := range curved.design(20, 1) {
		if !curved.insideLinear(u) {
			t.Errorf("%v breaks a linear row", u)
		}
	}
	if n := len(mustPlan(t, mixed(atLeast("linear", 1e6))).design(20, 1)); n != 20 {
		t.Errorf("%d points, 20 wanted", n)
	}
}

func TestRowViolation(t *testing.T) {
	for _, c := range []struct{ margin, scale, want float64 }{
		{0, 2, 0}, {3, 2, 0}, {-3, 2, 1.5}, {math.NaN(), 2, constraints.MissingViolation}, {math.Inf(1), 1, 0},
	} {
		if got := rowViolation(c.margin, c.scale); got != c.want {
			t.Errorf("margin %g over %g: %g, want %g", c.margin, c.scale, got, c.want)
		}
	}
}
