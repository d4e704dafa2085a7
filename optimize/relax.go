package optimize

import (
	"math"

	"rampwright/problems"
)

// relaxations finds the smallest loosening of each member of the conflicts.
func (e *explainer) relaxations(conflicts []Conflict) ([]Relaxation, error) {
	var list []Relaxation
	done := map[Side]bool{}
	for _, conflict := range conflicts {
		for _, side := range conflict.Members {
			if done[side] {
				continue
			}
			done[side] = true
			found, err := e.solve(remove(e.soft, side), e.closest(side), false)
			if err != nil {
				return nil, err
			}
			relaxation := Relaxation{Side: side, Bound: math.NaN()}
			if found.violation == 0 {
				relaxation.Bound, relaxation.X = found.aim, found.x
			}
			list = append(list, relaxation)
		}
	}
	return list, nil
}

// closest is the aim that drives a quantity toward a side of its limit: all
// members of a group.
func (e *explainer) closest(side Side) problems.Aim {
	aim := problems.Aim{Highest: !side.Upper, Text: side.Limit.Quantity, Where: side.Limit.Point}
	for _, q := range e.task.Problem.Quantities() {
		if q.Name == side.Limit.Quantity && q.Point == side.Limit.Point {
			aim.Parts = append(aim.Parts, problems.Part{
				Point: q.Point, Weight: 1,
				Reads: []problems.Read{{Quantity: q.Name, Point: q.Point, Member: q.Member}},
			})
		}
	}
	if len(aim.Parts) > 1 {
		aim.Aggregate = problems.Worst
	}
	return aim
}
