package local

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// Workspace holds the memory of a solve for reuse. Its zero value is ready; it
// serves one solve at a time.
type Workspace struct {
	program  *Program
	settings Settings

	n, nonlinear, rows int // variables, nonlinear constraints, those and the linear rows

	quadratic quadratic

	x           []float64
	f           float64
	constraints []float64
	gradient    []float64
	jacobian    []float64 // rows x n; the linear rows stay below the nonlinear ones

	trial            []float64
	trialF           float64
	trialConstraints []float64
	trialGradient    []float64
	trialJacobian    []float64

	step       []float64
	multiplier []float64 // rows + 2n, as in quadratic
	weight     []float64 // of each nonlinear violation in the merit
	corrected  []float64 // offsets of the second-order correction

	hessian           []float64
	freshHessian      bool
	slope             []float64 // gradient of the Lagrangian
	move, bend, image []float64 // s, y and B s of the Hessian update

	elastic   bool
	entries   int     // times the elastic phase began
	entry     float64 // weighted violation when it last began
	plain     bool    // all weights 1 in it
	restraint float64 // extra diagonal of B, in units of 1/width^2
	length    float64 // fraction of the last step taken
	kkt       float64
	violation float64 // worst, of constraints and linear rows
	noisy     int     // steps in a row whose predicted gain was below rounding

	iterations, values, gradients int

	result Result
}

func (w *Workspace) check(p *Program, start []float64, settings Settings) error {
	err := errors.Join(p.Validate(), settings.Validate())
	if len(start) != p.Dimension() {
		err = errors.Join(err, &ProgramError{"start", fmt.Sprintf("has %d entries for %d variables", len(start), p.Dimension())})
	}
	if !finite(start...) {
		err = errors.Join(err, &ProgramError{"start", "has a number that is not finite"})
	}
	return err
}

// prepare sizes the memory and stores what stays fixed during the solve.
func (w *Workspace) prepare(p *Program, settings Settings) {
	n, nonlinear := p.Dimension(), p.Constraints()
	rows := nonlinear + len(p.AtMost.B) + len(p.Equal.B)
	*w = Workspace{
		program: p, settings: settings, n: n, nonlinear: nonlinear, rows: rows,
		quadratic:        w.quadratic,
		x:                resize(w.x, n),
		constraints:      resize(w.constraints, nonlinear),
		gradient:         resize(w.gradient, n),
		jacobian:         resize(w.jacobian, rows*n),
		trial:            resize(w.trial, n),
		trialConstraints: resize(w.trialConstraints, nonlinear),
		trialGradient:    resize(w.trialGradient, n),
		trialJacobian:    resize(w.trialJacobian, rows*n),
		step:             resize(w.step, n),
		multiplier:       resize(w.multiplier, rows+2*n),
		weight:           resize(w.weight, nonlinear),
		corrected:        resize(w.corrected, nonlinear),
		hessian:          resize(w.hessian, n*n),
		slope:            resize(w.slope, n),
		move:             resize(w.move, n),
		bend:             resize(w.bend, n),
		image:            resize(w.image, n),
		kkt:              math.NaN(),
		result:           w.result,
	}
	for _, jacobian := range [][]float64{w.jacobian, w.trialJacobian} {
		copy(jacobian[nonlinear*n:], p.AtMost.A)
		copy(jacobian[(nonlinear+len(p.AtMost.B))*n:], p.Equal.A)
	}
	w.quadratic.resize(n, rows)
}

// isEquality tells whether a row, nonlinear or linear, is held at 0.
func (w *Workspace) isEquality(row int) bool {
	if row < w.nonlinear {
		return row < w.program.Equalities
	}
	return row >= w.nonlinear+len(w.program.AtMost.B)
}

// linearResidual returns a'x - b of a row behind the nonlinear ones.
func (w *Workspace) linearResidual(row int, x []float64) float64 {
	i := row - w.nonlinear
	b := w.program.Equal.B
	if count := len(w.program.AtMost.B); i < count {
		b = w.program.AtMost.B
	} else {
		i -= count
	}
	return floats.Dot(w.jacobian[row*w.n:(row+1)*w.n], x) - b[i]
}

// excess is by how much a residual breaks its row.
func (w *Workspace) excess(row int, residual float64) float64 {
	if w.isEquality(row) {
		return math.Abs(residual)
	}
	return max(residual, 0)
}

// keepInBox moves x into the box, against the rounding of a step.
func (w *Workspace) keepInBox(x []float64) {
	for j, v := range x {
		x[j] = min(max(v, w.program.Low[j]), w.program.High[j])
	}
}

// finish fills the result from the current point.
func (w *Workspace) finish(status Status) *Result {
	r := &w.result
	atMost := w.nonlinear + len(w.program.AtMost.B)
	r.X, r.F, r.Constraints = w.x, w.f, w.constraints
	r.Multipliers = w.multiplier[:w.nonlinear]
	r.RowsAtMost = w.multiplier[w.nonlinear:atMost]
	r.RowsEqual = w.multiplier[atMost:w.rows]
	r.FaceLow = w.multiplier[w.rows : w.rows+w.n]
	r.FaceHigh = w.multiplier[w.rows+w.n:]
	r.KKT, r.Violation = w.kkt, w.worstViolation()
	if status == Inconsistent {
		r.F = math.NaN()
		for i := range r.Constraints {
			r.Constraints[i] = math.NaN()
		}
	}
	r.Iterations, r.Values, r.Gradients = w.iterations, w.values, w.gradients
	r.Elastic, r.Status = w.elastic, status
	return r
}
