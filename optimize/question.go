package optimize

import (
	"math"

	"rampwright/problems"
)

// solve searches the exact model under the sides and the hard limits; with
// feasibility alone it ends at the first design that meets them.
func (e *explainer) solve(sides []Side, aim problems.Aim, feasibility bool) (*outcome, error) {
	limits := append([]problems.Limit(nil), e.hard...)
	for _, side := range sides {
		limits = append(limits, side.alone())
	}
	plan, err := newPlan(Task{Problem: e.task.Problem, Limits: limits, Aim: aim})
	if err != nil {
		return nil, err
	}
	starts, err := e.startsFor(plan)
	if err != nil {
		return nil, err
	}
	best := &outcome{violation: math.Inf(1), aim: math.NaN()}
	// Rounds of a fixed size, so that the answer does not depend on the jobs.
	for len(starts) > 0 {
		round := starts[:min(len(starts), solveRound)]
		starts = starts[len(round):]
		found, err := e.polishAll(plan, round, feasibility)
		if err != nil {
			return nil, err
		}
		for _, f := range found {
			if f.violation < best.violation || f.violation == best.violation && plan.objective.better(f.aim, best.aim) {
				best = f
			}
		}
		if feasibility && best.violation == 0 {
			break
		}
	}
	if best.violation == 0 {
		e.known = append(e.known, best.u)
	}
	return best, nil
}

const (
	solveRound       = 8
	explainStarts    = 24
	explainEvolution = 40 // generations
)

// startsFor are the points a question is asked from: solutions of earlier
// questions, the evolution search's distinct points, a space-filling design. A
// start where the flow is not known is moved toward one where it is.
func (e *explainer) startsFor(plan *plan) ([][]float64, error) {
	land := newExactLandscape(e.ctx, plan)
	searcher := newSearcher(plan, land, 1)
	searcher.blind = true
	evolved, err := searcher.explore(e.ctx, e.known[max(0, len(e.known)-10):], uint64(e.settings.Seed), explainEvolution)
	if err != nil {
		return nil, err
	}
	if land.err != nil {
		return nil, land.err
	}
	starts := append([][]float64(nil), evolved...)
	for _, u := range plan.design(explainStarts, e.settings.Seed) {
		starts = append(starts, searcher.towardKnown(u, evolved[0]))
	}
	e.evaluations += land.evaluations
	e.starts = max(e.starts, len(starts))
	return starts, nil
}

// towardKnown moves u toward a point whose values are all known until its own
// are: continuation past detachment by bisection.
func (s *searcher) towardKnown(u, known []float64) []float64 {
	defined := func(share float64) ([]float64, bool) {
		at := make([]float64, len(u))
		for j := range at {
			at[j] = u[j] + share*(known[j]-u[j])
		}
		s.values(at)
		for _, r := range s.plan.curved {
			if math.IsNaN(s.vector[s.plan.rows[r].Index]) {
				return at, false
			}
		}
		return at, true
	}
	at, ok := defined(0)
	low, high := 0.0, 1.0
	for range 12 {
		if ok && low == 0 {
			return at
		}
		middle := (low + high) / 2
		if next, known := defined(middle); known {
			at, ok, high = next, true, middle
		} else {
			low = middle
		}
	}
	if !ok {
		return append([]float64(nil), known...)
	}
	return at
}

// polishAll runs the local solver from every start, side by side.
func (e *explainer) polishAll(plan *plan, starts [][]float64, feasibility bool) ([]*outcome, error) {
	found, failures, counts := make([]*outcome, len(starts)), make([]error, len(starts)), make([]int, len(starts))
	low, high := plan.cube()
	inSlots(e.settings.Jobs, len(starts), func(i int) {
		land := newExactLandscape(e.ctx, plan)
		searcher := newSearcher(plan, land, 1)
		searcher.blind = feasibility
		solution, err := searcher.polish(e.ctx, starts[i], low, high, exactPolish)
		if counts[i], failures[i] = land.evaluations, err; err == nil {
			failures[i] = land.err
		}
		if failures[i] == nil {
			violation := solution.violation + plan.linearViolation(solution.u)
			if math.IsNaN(solution.aim) && !feasibility {
				violation = math.Inf(1)
			}
			found[i] = &outcome{u: solution.u, x: plan.denormal(solution.u), aim: solution.aim, violation: violation}
		}
	})
	for i, err := range failures {
		if err != nil {
			return nil, err
		}
		e.evaluations += counts[i]
	}
	return found, nil
}
