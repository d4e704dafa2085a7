package envelope

import (
	"context"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// Frozen is the inlet of a problem at fixed values of its variables, as a Model.
type Frozen struct {
	definition inlet.Definition
	x          []float64
	air        Air
	quantities []problems.Quantity
	first      int // of the quantities of the condition among those of a problem with it
}

// conditionName names the condition under study among the points of a problem.
const conditionName = "condition"

// Freeze fixes the inlet of a problem at x, in air that follows the Mach number.
func Freeze(problem *inlet.Problem, x []float64, air Air) (*Frozen, error) {
	f := &Frozen{definition: problem.Definition(), x: x, air: air}
	probe, err := f.at(Condition{Mach: f.definition.Points[0].Mach})
	if err != nil {
		return nil, err
	}
	for i, q := range probe.Quantities() {
		if q.Point != conditionName {
			continue
		}
		if f.quantities == nil {
			f.first = i
		}
		f.quantities = append(f.quantities, q)
	}
	return f, nil
}

// Quantities lists those of one condition.
func (f *Frozen) Quantities() []problems.Quantity { return f.quantities }

// Point is a condition in the air it is met in.
func (f *Frozen) Point(at Condition) (inlet.Point, error) {
	p, t, err := f.air.At(f.definition.Gas, at.Mach)
	return inlet.Point{Name: conditionName, Mach: at.Mach, Incidence: at.Incidence, Pressure: p, Temperature: t}, err
}

// at is the problem whose second point is the condition.
func (f *Frozen) at(at Condition) (*inlet.Problem, error) {
	point, err := f.Point(at)
	if err != nil {
		return nil, err
	}
	d := f.definition
	d.Points = []inlet.Point{d.Points[0], point}
	return inlet.New(d)
}

// At computes the inlet at one condition.
func (f *Frozen) At(ctx context.Context, at Condition, dst *problems.Evaluation) (status, err error) {
	flow, err := f.Flow(ctx, at)
	if err != nil {
		return nil, err
	}
	n := len(f.quantities)
	copy(dst.Values, flow.Evaluation.Values[f.first:f.first+n])
	copy(dst.Reasons, flow.Evaluation.Reasons[f.first:f.first+n])
	return flow.Points[1].Err, nil
}

// Flow is the whole flow at one condition: the design point, then the condition.
func (f *Frozen) Flow(ctx context.Context, at Condition) (*inlet.Flow, error) {
	problem, err := f.at(at)
	if err != nil {
		return nil, err
	}
	return problem.Flow(ctx, f.x)
}
