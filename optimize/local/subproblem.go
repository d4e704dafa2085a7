package local

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// linearise states the quadratic program at x with the given offsets of the
// nonlinear rows:
//
//	minimise 1/2 p'Bp + grad f'p  subject to  offsets + A p <= 0 (= 0)
//
// In the elastic phase grad f is dropped and every nonlinear row costs its
// violation times its weight instead.
func (w *Workspace) linearise(offsets []float64) {
	q, p := &w.quadratic, w.program
	copy(q.hessian, w.hessian)
	for j, width := range q.width {
		q.hessian[j*w.n+j] += w.restraint / (width * width)
	}
	copy(q.normal, w.jacobian)
	copy(q.gradient, w.gradient)
	if w.elastic {
		clear(q.gradient)
	}
	for row := range w.rows {
		price := math.Inf(1)
		if row >= w.nonlinear {
			q.offset[row] = w.linearResidual(row, w.x)
		} else {
			q.offset[row] = offsets[row]
			if w.elastic {
				price = w.weight[row]
			}
		}
		w.setRange(row, price)
	}
	for j, x := range w.x {
		q.below[j] = p.Low[j] - x
		q.above[j] = p.High[j] - x
	}
	q.measureRows()
	w.excuseFlatRows()
}

// excuseFlatRows takes a constraint that no step changes to first order as met
// when its violation is within Feasibility: nothing could be done about it.
func (w *Workspace) excuseFlatRows() {
	q := &w.quadratic
	for i, c := range q.offset[:w.nonlinear] {
		if q.reach[i] == 0 && w.excess(i, c) <= w.settings.Feasibility {
			q.offset[i] = 0
		}
	}
}

// setRange sets the range of a row's multiplier in the quadratic program from
// the price of its violation.
func (w *Workspace) setRange(row int, price float64) {
	w.quadratic.most[row] = price
	w.quadratic.least[row] = 0
	if w.isEquality(row) {
		w.quadratic.least[row] = -price
	}
}

// enterElastic begins the phase that minimises the violation alone. It first
// weighs each constraint by the inverse of its reach, so that their units do not
// matter to the way back to feasible points.
func (w *Workspace) enterElastic() {
	w.elastic, w.plain, w.restraint = true, false, 0
	w.entries++
	for i := range w.weight {
		w.weight[i] = 1
		if reach := w.reachOf(i); reach > 0 {
			w.weight[i] = 1 / reach
		}
	}
	w.entry = w.totalViolation()
	w.resetHessian()
}

// makePlain weighs all constraints alike, at a violated point that is stationary
// for the weights of enterElastic: what is reported is the l1 violation in the
// units given. It returns false where that does not apply.
func (w *Workspace) makePlain() bool {
	if !w.elastic || w.plain || w.kkt > w.settings.Tolerance || w.violation <= w.settings.Feasibility {
		return false
	}
	w.plain, w.restraint = true, 0
	for i := range w.weight {
		w.weight[i] = 1
	}
	w.entry = w.totalViolation()
	w.resetHessian()
	return true
}

// Named numbers of phases and restraint.
const (
	// elasticGain is the fraction of the violation at entry that ends the phase.
	elasticGain = 0.1
	// elasticEntries is how often the phase may end on that fraction; later it
	// runs until the point is feasible or stationary.
	elasticEntries = 5
	// crampedStep is the fraction of the step below which the restraint grows.
	crampedStep = 0.3
	// restraintGrowth is the largest factor it grows by after such a step.
	restraintGrowth = 10
	// restraintFade is the factor it shrinks by after a full step.
	restraintFade = 0.25
)

// changePhase leaves the elastic phase once it has done its work.
func (w *Workspace) changePhase() {
	if !w.elastic {
		return
	}
	enough := w.entries <= elasticEntries && w.totalViolation() <= elasticGain*w.entry
	if enough || w.worstViolation() <= w.settings.Feasibility {
		w.elastic, w.restraint = false, 0
		clear(w.weight)
		w.resetHessian()
	}
}

// restrain adapts the extra diagonal of B to the last step. Along a crease of the
// merit function, or where the Lagrangian curves downward, full steps leave the
// constraints by more than their correction brings back; a heavier diagonal
// shortens the step so that the correction can follow. It is set to shorten the
// step that was just tried as much as the line search did, by at most
// restraintGrowth, and fades while full steps succeed.
func (w *Workspace) restrain() {
	switch {
	case w.nonlinear == 0:
	case w.length < crampedStep:
		size, curvature := 0.0, 0.0
		for i, p := range w.step {
			size += p * p / (w.quadratic.width[i] * w.quadratic.width[i])
			curvature += p * floats.Dot(w.hessian[i*w.n:(i+1)*w.n], w.step)
		}
		w.restraint = (w.restraint + curvature/size) * min(1/w.length, restraintGrowth)
	case w.length == 1:
		w.restraint *= restraintFade
	}
}
