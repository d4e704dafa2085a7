package optimize

import (
	"fmt"
	"slices"

	"rampwright/constraints"
	"rampwright/optimize/local"
	"rampwright/problems"
)

// plan is a task made ready: limits as rows, the aim over indices, and which
// quantities need surrogates. Searches work on the unit cube, u = (x - low) /
// (high - low).
type plan struct {
	problem    problems.Problem
	explicit   problems.Explicit // nil where the problem has none
	variables  []problems.Variable
	quantities []problems.Quantity
	rows       []constraints.Row
	objective  objective
	fitted     []int      // quantities that cost a model run and are needed, ascending
	exact      []int      // explicit quantities needed, ascending
	curved     []int      // rows that are nonlinear constraints of a search
	straight   []int      // rows kept as linear rows
	linear     local.Rows // their sides in the unit cube, row-major
	starts     [][]float64
}

func newPlan(task Task) (*plan, error) {
	p := &plan{
		problem:    task.Problem,
		variables:  task.Problem.Variables(),
		quantities: task.Problem.Quantities(),
	}
	if len(p.variables) == 0 {
		return nil, ErrNothingToSearch
	}
	p.explicit, _ = task.Problem.(problems.Explicit)
	var err error
	if p.rows, err = constraints.Rows(p.quantities, task.Limits); err != nil {
		return nil, err
	}
	if p.objective, err = newObjective(p.quantities, task.Aim); err != nil {
		return nil, err
	}
	p.sortRows()
	if err := p.sortQuantities(); err != nil {
		return nil, err
	}
	p.starts, err = p.takeStarts(task.Starts)
	return p, err
}

// sortRows separates limits on explicit linear quantities, which a search keeps
// at every step, from the rest.
func (p *plan) sortRows() {
	linear, _ := p.problem.(problems.Linear)
	for r := range p.rows {
		row := &p.rows[r]
		if len(row.Bounds()) == 0 {
			continue
		}
		if linear != nil && row.Quantity.Explicit {
			if a, b, ok := linear.LinearForm(row.Index); ok {
				p.straight = append(p.straight, r)
				p.addLinear(row, a, b)
				continue
			}
		}
		p.curved = append(p.curved, r)
	}
}

// addLinear states low <= a x + b <= high in the unit cube.
func (p *plan) addLinear(row *constraints.Row, a []float64, b float64) {
	n := len(p.variables)
	scaled := make([]float64, n)
	for j, v := range p.variables {
		scaled[j] = a[j] * (v.High - v.Low)
		b += a[j] * v.Low
	}
	for _, bound := range row.Bounds() {
		for _, coefficient := range scaled {
			p.linear.A = append(p.linear.A, bound.Sign*coefficient)
		}
		p.linear.B = append(p.linear.B, bound.Sign*(bound.At-b)-backoff*row.Scale)
	}
}

// backoff is how far, in scaled margin, every search stays inside a limit, so
// that the exact margin of its answer is not negative by rounding.
const backoff = 1e-9

func (p *plan) sortQuantities() error {
	needed := slices.Clone(p.objective.reads)
	for _, r := range p.curved {
		needed = append(needed, p.rows[r].Index)
	}
	slices.Sort(needed)
	for _, i := range slices.Compact(needed) {
		if p.quantities[i].Explicit {
			p.exact = append(p.exact, i)
		} else {
			p.fitted = append(p.fitted, i)
		}
	}
	if len(p.exact) > 0 && p.explicit == nil {
		return fmt.Errorf("%s is marked explicit, but the problem cannot evaluate it alone", p.quantities[p.exact[0]].Name)
	}
	return nil
}

// dimension is the number of variables.
func (p *plan) dimension() int { return len(p.variables) }

// cube returns the faces of the unit cube.
func (p *plan) cube() (low, high []float64) {
	low, high = make([]float64, p.dimension()), make([]float64, p.dimension())
	for j := range high {
		high[j] = 1
	}
	return low, high
}

// denormal turns a point of the unit cube into the units of the variables; the
// faces of the cube are the exact bounds.
func (p *plan) denormal(u []float64) []float64 {
	x := make([]float64, len(u))
	p.toUnits(x, u)
	return x
}

func (p *plan) toUnits(x, u []float64) {
	for j, v := range p.variables {
		switch {
		case u[j] <= 0:
			x[j] = v.Low
		case u[j] >= 1:
			x[j] = v.High
		default:
			x[j] = v.Low + u[j]*(v.High-v.Low)
		}
	}
}

// normal turns variables into a point of the unit cube.
func (p *plan) normal(x []float64) []float64 {
	u := make([]float64, len(x))
	for j, v := range p.variables {
		u[j] = (x[j] - v.Low) / (v.High - v.Low)
	}
	return u
}

// insideLinear reports whether u keeps every linear row.
func (p *plan) insideLinear(u []float64) bool {
	n := p.dimension()
	for r, b := range p.linear.B {
		sum := 0.0
		for j, v := range u {
			sum += p.linear.A[r*n+j] * v
		}
		if sum > b {
			return false
		}
	}
	return true
}
