package optimize

import (
	"context"
	"math"
)

// ExactSearch is the optimum found on the exact model alone: the yardstick of a
// design, run afterwards and never feeding it. It asks tens of thousands of
// evaluations and suits models that cost microseconds.
type ExactSearch struct {
	Feasible    bool
	X           []float64 // in the variables' units; nil where nothing was found
	Aim         float64
	Violation   float64
	Evaluations int
}

const (
	exactGenerations = 100
	exactStarts      = 24
)

// SearchExact searches the exact model: evolution over the box, then the local
// solver from its distinct points and from space-filling starts, each moved to
// where the model has values (see towardKnown). Starts are split over jobs; the
// result does not depend on it.
func SearchExact(ctx context.Context, task Task, settings Settings) (*ExactSearch, error) {
	plan, err := newPlan(task)
	if err != nil {
		return nil, err
	}
	settings = settings.WithDefaults(plan.dimension())
	land := newExactLandscape(ctx, plan)
	scout := newSearcher(plan, land, 1)
	starts, err := scout.explore(ctx, nil, uint64(settings.Seed), exactGenerations)
	if err != nil {
		return nil, err
	}
	if land.err != nil {
		return nil, land.err
	}
	known := starts[0]
	for _, u := range plan.design(exactStarts, settings.Seed) {
		starts = append(starts, scout.towardKnown(u, known))
	}
	found, counts := make([]*solution, len(starts)), make([]int, len(starts))
	failures := make([]error, len(starts))
	low, high := plan.cube()
	inSlots(settings.Jobs, len(starts), func(i int) {
		own := newExactLandscape(ctx, plan)
		found[i], failures[i] = newSearcher(plan, own, 1).polish(ctx, starts[i], low, high, exactPolish)
		counts[i] = own.evaluations
		if failures[i] == nil {
			failures[i] = own.err
		}
	})
	result := &ExactSearch{Aim: math.NaN(), Violation: math.Inf(1), Evaluations: land.evaluations}
	for i, s := range found {
		if failures[i] != nil {
			return nil, failures[i]
		}
		result.Evaluations += counts[i]
		result.take(plan, s)
	}
	return result, nil
}

// take keeps a solution that is better: feasible before infeasible, then the
// aim, or less violation.
func (r *ExactSearch) take(plan *plan, s *solution) {
	feasible := s.violation == 0 && plan.insideLinear(s.u) && !math.IsNaN(s.aim)
	switch {
	case feasible && !r.Feasible,
		feasible && plan.objective.better(s.aim, r.Aim),
		!feasible && !r.Feasible && s.violation < r.Violation:
		r.Feasible, r.X, r.Aim, r.Violation = feasible, plan.denormal(s.u), s.aim, s.violation
	}
}
