package optimize

import (
	"context"
	"math"

	"rampwright/optimize/local"
)

// Play is how far one variable may move, the others following, at the cost of a
// share of the aim and within every limit.
type Play struct {
	Low, High float64 // in the variable's unit
}

// Plays finds the play of every variable around a design on the exact model: the
// least and the greatest value among designs whose aim is worse by no more than
// loss, relative. Wide play at a vanishing loss says that the optimum is not
// unique. It returns nil for an aim that is the worst of several points.
func Plays(ctx context.Context, task Task, x []float64, loss float64) ([]Play, error) {
	plan, err := newPlan(task)
	if err != nil {
		return nil, err
	}
	land := newExactLandscape(ctx, plan)
	s := newSearcher(plan, land, 1)
	if s.worst() {
		return nil, nil
	}
	start := plan.normal(x)
	s.values(start)
	best := plan.objective.value(s.vector)
	allowed := loss * math.Max(math.Abs(best), 1e-12)
	low, high := plan.cube()
	plays := make([]Play, plan.dimension())
	for j, v := range plan.variables {
		ends := [2]float64{start[j], start[j]}
		for side, sign := range []float64{1, -1} {
			program := s.reach(j, sign, best, allowed, low, high)
			result, err := s.workspace.Minimize(ctx, &program, start, exactPolish)
			if err != nil {
				return nil, err
			}
			if land.err != nil {
				return nil, land.err
			}
			if result.Violation <= 1e-8 {
				ends[side] = result.X[j]
			}
		}
		plays[j] = Play{v.Low + math.Min(ends[0], start[j])*(v.High-v.Low), v.Low + math.Max(ends[1], start[j])*(v.High-v.Low)}
	}
	return plays, nil
}

// reach is the program that drives one variable down (sign 1) or up (-1) while
// the aim stays within what is allowed and the limits hold.
func (s *searcher) reach(j int, sign, best, allowed float64, low, high []float64) local.Program {
	program, _ := s.program(low, low, high)
	m := program.Inequalities
	aim := s.plan.objective.sign()
	program.Inequalities++
	value, gradient := program.Value, program.Gradient
	program.Value = func(u, c []float64) float64 {
		c[m] = (value(u, c[:m]) - aim*best - allowed) / allowed
		return sign * u[j]
	}
	program.Gradient = func(u, grad, jac []float64) {
		n := len(grad)
		gradient(u, grad, jac[:m*n])
		for k, g := range grad {
			jac[m*n+k] = g / allowed
		}
		clear(grad)
		grad[j] = sign
	}
	return program
}
