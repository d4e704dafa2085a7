package optimize

import (
	"context"
	"errors"
	"fmt"
	"math"
	"reflect"
	"slices"
	"testing"

	"rampwright/problems"
	"rampwright/problems/analytic"
)

// Known solutions are found and verified within the default effort.
func TestDesignKnownSolutions(t *testing.T) {
	for name, c := range map[string]struct {
		task Task
		x    []float64
		aim  float64
	}{
		"disk":                     {disk(1), diskX(1), diskAim(1)},
		"Hock & Schittkowski 35":   {beale(3), bealeX, bealeAim},
		"edge of what is known":    {cliff(), []float64{1, 0.2}, math.Sqrt(2.1)},
		"Charalambous & Bandler 3": {charalambous3(), []float64{1, 1}, 2},
	} {
		result := mustDesign(t, c.task, Settings{})
		if result.Status != Verified {
			t.Errorf("%s: %v, surrogate error %g: %s", name, result.Status, result.Best.SurrogateError, result.Why)
		}
		if math.Abs(result.Best.AimExact-c.aim) > 1e-5 || farthest(result.Best.X, c.x) > 1e-2 {
			t.Errorf("%s: %.9g at %v, want %.9g at %v", name, result.Best.AimExact, result.Best.X, c.aim, c.x)
		}
		for _, check := range result.Best.Assessment.Checks {
			if !(check.Margin >= 0) {
				t.Errorf("%s: margin %g of %s", name, check.Margin, check.Quantity.Name)
			}
		}
	}
}

// restless is a problem of one route that gives a little more at every run of a
// design it was asked before, or does so only when run afresh.
type restless struct {
	*toy
	seen  map[string]bool
	stale bool // Evaluate repeats what it gave first; Repeat does not
}

func (p *restless) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	key := fmt.Sprint(x)
	err := p.toy.Evaluate(ctx, x, dst)
	if p.seen[key] && !p.stale {
		dst.Values[0] = math.Nextafter(dst.Values[0], math.Inf(1))
	}
	p.seen[key] = true
	return err
}

type storedRestless struct{ *restless }

func (p storedRestless) Repeat(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	err := p.toy.Evaluate(ctx, x, dst)
	dst.Values[0] = math.Nextafter(dst.Values[0], math.Inf(1))
	return err
}

// Without a second route a design is verified by running it again: the same bits,
// from the model itself and not from a store, or no verification.
func TestDesignWithoutSecondRoute(t *testing.T) {
	bare := disk(1).Problem.(verifiedToy).toy
	for name, c := range map[string]struct {
		problem problems.Problem
		want    Status
		found   Repetition
	}{
		"the same again": {bare, Verified, Same},
		"another value":  {&restless{toy: bare, seen: map[string]bool{}}, NotVerified, Differs},
		"from a store":   {storedRestless{&restless{toy: bare, seen: map[string]bool{}, stale: true}}, NotVerified, Differs},
	} {
		task := disk(1)
		task.Problem = c.problem
		result := mustDesign(t, task, Settings{})
		if result.Status != c.want || result.Best.Repetition != c.found || !math.IsNaN(result.Best.RouteGap) || result.Best.Second != nil || result.Counts.Verify != len(result.Candidates) {
			t.Errorf("%s: %v, repetition %d, route gap %g, %d verifications", name, result.Status, result.Best.Repetition, result.Best.RouteGap, result.Counts.Verify)
		}
		if math.Abs(result.Best.AimExact-diskAim(1)) > 1e-6 {
			t.Errorf("%s: aim %g, want %g", name, result.Best.AimExact, diskAim(1))
		}
	}
}

// otherRoute is a second route that differs a little.
type otherRoute struct {
	verifiedToy
	factor float64
}

func (p otherRoute) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	err := p.Evaluate(ctx, x, dst)
	dst.Values[0] *= p.factor
	return err
}

func TestDesignWithRoutesThatDiffer(t *testing.T) {
	for _, c := range []struct {
		factor float64
		want   Status
	}{{1 + 1e-9, NotVerified}, {1 + 1e-12, Verified}, {math.NaN(), NotVerified}} {
		task := disk(1)
		task.Problem = otherRoute{task.Problem.(verifiedToy), c.factor}
		if result := mustDesign(t, task, Settings{}); result.Status != c.want {
			t.Errorf("factor %v: %v, want %v (gap %g)", c.factor, result.Status, c.want, result.Best.RouteGap)
		}
	}
}

// An infeasible task ends with the least violation, near the true least one.
func TestDesignInfeasible(t *testing.T) {
	task := disk(1)
	task.Limits = []problems.Limit{atLeast("square", 8)} // the farthest corner has 6.25
	result := mustDesign(t, task, Settings{})
	if result.Status != Infeasible || result.Best.Assessment.Feasible || len(result.Candidates) != 1 {
		t.Errorf("%v with %d candidates", result.Status, len(result.Candidates))
	}
	if got := result.Best.Assessment.Violation; math.Abs(got-1.75/8) > 1e-6 {
		t.Errorf("violation %g at %v, want %g", got, result.Best.X, 1.75/8)
	}
	for _, s := range result.Samples {
		if mustPlan(t, task).judge(make([]float64, 2), s.Evaluation).violation < result.Best.Assessment.Violation {
			t.Errorf("%v violates less than the best", s.X)
		}
	}
}

// The history is what an observer could plot: the best aim never worsens, nor
// does the least violation, nor do the counts run backward or past the plan.
func TestHistoryNeverWorsens(t *testing.T) {
	for name, task := range map[string]Task{"disk": disk(1), "edge": cliff(), "worst": charalambous2(), "infeasible": disk(-1)} {
		for seed := int64(1); seed <= 3; seed++ {
			settings := Settings{Seed: seed}.WithDefaults(2)
			var events []Event
			result, err := Design(context.Background(), task, settings, func(e Event) { events = append(events, e) })
			if err != nil {
				t.Fatal(err)
			}
			sign := mustPlan(t, task).objective.sign()
			if n := result.Sampled.Evaluations; n != settings.Samples || n >= result.History[0].Evaluations {
				t.Errorf("%s: %d samples, then %+v", name, n, result.History[0])
			}
			result.History = append([]Step{result.Sampled}, result.History...)
			for i, step := range result.History[1:] {
				before := result.History[i]
				if !math.IsNaN(before.Aim) && !(sign*step.Aim <= sign*before.Aim) || step.Violation > before.Violation || step.Evaluations <= before.Evaluations {
					t.Errorf("%s: %+v is followed by %+v", name, before, step)
				}
			}
			for i, event := range events {
				if i > 0 && event.Evaluations < events[i-1].Evaluations || event.Evaluations > event.Planned || event.Planned != settings.Samples+settings.Infill {
					t.Errorf("%s: event %d is %+v", name, i, event)
				}
			}
			if len(result.Samples) != result.Counts.Samples+result.Counts.Infill || result.Counts.Samples != settings.Samples || result.Counts.Infill > settings.Infill {
				t.Errorf("%s: %d samples for %+v", name, len(result.Samples), result.Counts)
			}
		}
	}
}

// A result is the same to the last bit for any number of jobs.
func TestDesignDoesNotDependOnJobs(t *testing.T) {
	valleys, err := analytic.New("g08")
	if err != nil {
		t.Fatal(err)
	}
	for name, task := range map[string]Task{
		"edge": cliff(), "worst": charalambous3(),
		"valleys": {Problem: valleys, Limits: valleys.OwnLimits(), Aim: valleys.Aim()},
	} {
		for _, jobs := range []int{2, 7} {
			settings := Settings{Jobs: 1, Batch: []int{0, 4}[jobs/7]}
			want := mustDesign(t, task, settings)
			settings.Jobs = jobs
			got := mustDesign(t, task, settings)
			if !reflect.DeepEqual(got.Best.X, want.Best.X) || got.Best.SurrogateError != want.Best.SurrogateError || got.Counts != want.Counts || len(got.Samples) != len(want.Samples) {
				t.Fatalf("%s with %d jobs: %v after %+v, with one %v after %+v", name, jobs, got.Best.X, got.Counts, want.Best.X, want.Counts)
			}
			for i, s := range got.Samples {
				if !slices.Equal(s.X, want.Samples[i].X) {
					t.Errorf("%s with %d jobs: sample %d is %v, with one %v", name, jobs, i, s.X, want.Samples[i].X)
				}
			}
		}
	}
}

// permuted is a problem with its variables in another order.
type permuted struct {
	verifiedToy
	order []int // variable j here is variable order[j] there
}

func (p permuted) Variables() []problems.Variable {
	inner := p.verifiedToy.Variables()
	list := make([]problems.Variable, len(inner))
	for j, k := range p.order {
		list[j] = inner[k]
	}
	return list
}

func (p permuted) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	inner := make([]float64, len(x))
	for j, k := range p.order {
		inner[k] = x[j]
	}
	return p.verifiedToy.Evaluate(ctx, inner, dst)
}

func (p permuted) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.Evaluate(ctx, x, dst)
}

// The order of the variables is no part of the question.
func TestPermutedVariablesPermuteTheAnswer(t *testing.T) {
	task := beale(3)
	inner := task.Problem.(explicitToy).verifiedToy
	quantities := slices.Clone(inner.quantities)
	quantities[1].Explicit = false // the permutation hides the linear form
	for _, order := range [][]int{{2, 0, 1}, {1, 0, 2}} {
		task.Problem = permuted{verifiedToy{&toy{inner.variables, quantities, inner.fill}}, order}
		result := mustDesign(t, task, Settings{})
		for j, k := range order {
			if math.Abs(result.Best.X[j]-bealeX[k]) > 1e-2 || math.Abs(result.Best.AimExact-bealeAim) > 1e-5 {
				t.Errorf("order %v: %.8f at %v, want %.8f at %v permuted", order, result.Best.AimExact, result.Best.X, bealeAim, bealeX)
			}
		}
	}
}

// A model that cannot be run ends a design with its own error.
func TestBrokenModelEndsADesign(t *testing.T) {
	for _, from := range []float64{-1, 0.4} {
		task := disk(1)
		task.Problem = brokenAt{task.Problem, from}
		_, err := Design(context.Background(), task, Settings{Jobs: 3}, nil)
		var broken *brokenModel
		if !errors.As(err, &broken) {
			t.Errorf("broken from %g: %v", from, err)
		}
	}
}

func TestDesignRefusals(t *testing.T) {
	if _, err := Design(context.Background(), disk(1), Settings{Samples: 3}, nil); err == nil {
		t.Error("three samples for two variables are accepted")
	}
	task := disk(1)
	task.Aim = problems.Aim{}
	if _, err := Design(context.Background(), task, Settings{}, nil); err == nil {
		t.Error("no aim is accepted")
	}
}

// Runners-up are distinct designs that hold every limit, best first.
func TestFinalistsAreDistinct(t *testing.T) {
	task := disk(1)
	result := mustDesign(t, task, Settings{})
	p := mustPlan(t, task)
	for i, c := range result.Candidates {
		if !c.Assessment.Feasible || i > 0 && c.AimExact > result.Candidates[i-1].AimExact {
			t.Errorf("candidate %d: aim %g, feasible %t", i, c.AimExact, c.Assessment.Feasible)
		}
		for _, other := range result.Candidates[:i] {
			if distance(p.normal(c.X), p.normal(other.X)) <= finalistApart {
				t.Errorf("%v and %v are the same design", c.X, other.X)
			}
		}
	}
	if len(result.Candidates) != finalistCount {
		t.Errorf("%d candidates", len(result.Candidates))
	}
}

func TestStatusWords(t *testing.T) {
	for status, want := range map[Status]string{
		Verified: "verified", NotVerified: "not_verified", Infeasible: "infeasible", Stopped: "stopped", Interrupted: "interrupted", 9: "status 9",
	} {
		if status.String() != want {
			t.Errorf("%d is %q, want %q", int(status), status, want)
		}
	}
}
