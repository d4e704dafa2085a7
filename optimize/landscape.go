package optimize

import (
	"context"
	"math"

	"rampwright/problems"
)

// landscape is what a search walks on: the needed quantities as functions of a
// point of the unit cube. A landscape serves one goroutine.
type landscape interface {
	// values stores the needed quantities of u at their indices, NaN where there
	// is none.
	values(u, dst []float64)
	// jacobian stores their gradients at the point of the latest values, one row
	// a needed quantity.
	jacobian(u []float64, rows [][]float64)
}

// explicitPart evaluates the explicit quantities of a plan and differentiates
// them: exactly, at no cost in model runs.
type explicitPart struct {
	plan       *plan
	x          []float64
	evaluation *problems.Evaluation
	up, down   []float64
	probe      []float64
}

func newExplicitPart(p *plan) *explicitPart {
	n := len(p.quantities)
	return &explicitPart{
		plan: p, x: make([]float64, p.dimension()), probe: make([]float64, p.dimension()),
		evaluation: problems.NewEvaluation(n), up: make([]float64, n), down: make([]float64, n),
	}
}

func (e *explicitPart) values(u, dst []float64) {
	if len(e.plan.exact) == 0 {
		return
	}
	e.plan.toUnits(e.x, u)
	e.plan.explicit.EvaluateExplicit(e.x, e.evaluation)
	for _, i := range e.plan.exact {
		dst[i] = e.evaluation.Values[i]
	}
}

func (e *explicitPart) jacobian(u []float64, rows [][]float64) {
	if len(e.plan.exact) > 0 {
		differentiate(u, e.probe, e.up, e.down, e.plan.exact, rows, e.values)
	}
}

// differenceStep balances truncation against rounding for central differences
// of functions good to about 1e-15: error near 1e-10.
const differenceStep = 6e-6

// differentiate fills rows[i] for the indices given by central differences
// inside the cube, one-sided where a neighbour is missing or outside.
func differentiate(u, probe, up, down []float64, indices []int, rows [][]float64, values func(u, dst []float64)) {
	copy(probe, u)
	for j := range u {
		high, low := math.Min(1, u[j]+differenceStep), math.Max(0, u[j]-differenceStep)
		probe[j] = high
		values(probe, up)
		probe[j] = low
		values(probe, down)
		probe[j] = u[j]
		for _, i := range indices {
			rows[i][j] = (up[i] - down[i]) / (high - low)
		}
	}
}

// exactLandscape is the true model itself, for problems that cost little.
type exactLandscape struct {
	ctx         context.Context
	plan        *plan
	x           []float64
	evaluation  *problems.Evaluation
	up, down    []float64
	probe       []float64
	needed      []int
	evaluations int
	err         error // why the model could not be run
}

func newExactLandscape(ctx context.Context, p *plan) *exactLandscape {
	n := len(p.quantities)
	return &exactLandscape{
		ctx: ctx, plan: p, x: make([]float64, p.dimension()), probe: make([]float64, p.dimension()),
		evaluation: problems.NewEvaluation(n), up: make([]float64, n), down: make([]float64, n),
		needed: append(append([]int(nil), p.exact...), p.fitted...),
	}
}

func (l *exactLandscape) values(u, dst []float64) {
	l.plan.toUnits(l.x, u)
	l.evaluations++
	if err := l.plan.problem.Evaluate(l.ctx, l.x, l.evaluation); err != nil {
		l.err = err
		l.evaluation.Clear()
	}
	l.plan.settle(l.evaluation)
	for _, i := range l.needed {
		dst[i] = l.evaluation.Values[i]
	}
}

func (l *exactLandscape) jacobian(u []float64, rows [][]float64) {
	differentiate(u, l.probe, l.up, l.down, l.needed, rows, l.values)
}
