package optimize

import (
	"context"
	"math"

	"rampwright/constraints"
	"rampwright/problems"
)

// Side is one side of a limit.
type Side struct {
	Limit problems.Limit
	Upper bool // the upper side, at_most; otherwise the lower, at_least
}

// Bound returns the number of the side.
func (s Side) Bound() float64 {
	if s.Upper {
		return s.Limit.High
	}
	return s.Limit.Low
}

// alone is the limit with this side only.
func (s Side) alone() problems.Limit {
	limit := s.Limit
	if s.Upper {
		limit.Low = math.Inf(-1)
	} else {
		limit.High = math.Inf(1)
	}
	return limit
}

// Conflict is a set of sides that cannot be met together, together with the hard
// limits and the box, though every set with one member less can.
type Conflict struct {
	Members []Side
}

// Relaxation is the least to which one side must be loosened so that an exact
// design meets it and every other limit.
type Relaxation struct {
	Side  Side
	Bound float64   // the loosened bound; NaN where loosening this side alone is not enough
	X     []float64 // the design that meets it, in the variables' units
}

// Explanation is why no exact design meets all limits, by exact search.
type Explanation struct {
	Feasible    bool      // a design that meets all limits was found after all
	Least       Candidate // the exact design of least violation; no surrogate predicted it
	Conflicts   []Conflict
	Relaxations []Relaxation
	Starts      int // local searches behind each answer "cannot be met"
	Evaluations int
}

// Explain looks for the least violation of a task on the exact model, for sets of
// limits that contradict each other, and for the smallest relaxation of each of
// their members. It asks tens of thousands of evaluations.
func Explain(ctx context.Context, task Task, settings Settings) (*Explanation, error) {
	settings = settings.WithDefaults(len(task.Problem.Variables()))
	e := &explainer{ctx: ctx, task: task, settings: settings}
	e.split()
	least, err := e.leastViolation(e.soft)
	if err != nil {
		return nil, err
	}
	out := &Explanation{Feasible: least.violation == 0, Starts: e.starts}
	if out.Least, err = e.evidence(least.x); err != nil {
		return nil, err
	}
	if !out.Feasible {
		if out.Conflicts, err = e.conflicts(); err != nil {
			return nil, err
		}
		if out.Relaxations, err = e.relaxations(out.Conflicts); err != nil {
			return nil, err
		}
	}
	out.Evaluations = e.evaluations
	return out, nil
}

// evidence judges a design by both exact routes.
func (e *explainer) evidence(x []float64) (Candidate, error) {
	plan, err := newPlan(e.task)
	if err != nil {
		return Candidate{}, err
	}
	evaluation := problems.NewEvaluation(len(plan.quantities))
	if err := e.task.Problem.Evaluate(e.ctx, x, evaluation); err != nil {
		return Candidate{}, err
	}
	e.evaluations++
	s := plan.judge(plan.normal(x), evaluation)
	c := Candidate{
		X: x, Exact: evaluation, AimExact: s.aim, AimPredicted: math.NaN(), SurrogateError: math.NaN(),
		Predicted: unpredicted(len(plan.quantities)), Assessment: constraints.Assess(plan.rows, evaluation),
	}
	return c, c.verify(e.ctx, e.task.Problem)
}

// explainer is an explanation under way.
type explainer struct {
	ctx         context.Context
	task        Task
	settings    Settings
	hard        []problems.Limit
	soft        []Side
	known       [][]float64 // unit-cube points that solved an earlier question
	starts      int
	evaluations int
}

// split separates the sides that may be loosened from the hard limits.
func (e *explainer) split() {
	for _, limit := range e.task.Limits {
		if limit.Kind == problems.Hard {
			e.hard = append(e.hard, limit)
			continue
		}
		if !math.IsInf(limit.Low, -1) {
			e.soft = append(e.soft, Side{Limit: limit})
		}
		if !math.IsInf(limit.High, 1) {
			e.soft = append(e.soft, Side{Limit: limit, Upper: true})
		}
	}
}

// outcome is the answer to one question.
type outcome struct {
	u         []float64
	x         []float64
	aim       float64
	violation float64
}

// leastViolation looks for a design that meets the sides given and the hard
// limits, and stops at the first.
func (e *explainer) leastViolation(sides []Side) (*outcome, error) {
	return e.solve(sides, e.task.Aim, true)
}
