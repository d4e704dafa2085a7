package local

import "math"

// projectionPull weighs the distance from the start against the violation of
// contradictory linear rows. The l1 violation is an exact penalty, so any small
// weight gives a point of least violation.
const projectionPull = 1e-6

// project moves the start to the nearest point of box and linear rows, in units
// of the scales. Where there is none it stores the point of the box with the
// least l1 violation of the rows, and returns false.
func (w *Workspace) project(start []float64) bool {
	q := &w.quadratic
	copy(w.x, start)
	w.keepInBox(w.x)
	w.setScales()
	if w.rows == w.nonlinear {
		return true
	}
	// The nonlinear rows are still 0 <= 0 here.
	w.linearise(w.constraints)
	w.fillDiagonal(q.hessian, 1)
	clear(q.gradient)
	found := q.solve() == solved
	if !found {
		for row := w.nonlinear; row < w.rows; row++ {
			w.setRange(row, 1)
		}
		w.fillDiagonal(q.hessian, projectionPull)
		q.solve()
	}
	for j, p := range q.step {
		w.x[j] += p
	}
	w.keepInBox(w.x)
	return found
}

// setScales stores the length that counts as large for each variable: the width
// of its range, or max(1, |x|) where that is infinite or zero.
func (w *Workspace) setScales() {
	for j := range w.n {
		width := w.program.High[j] - w.program.Low[j]
		if math.IsInf(width, 0) || width == 0 {
			width = max(1, math.Abs(w.x[j]))
		}
		w.quadratic.width[j] = width
	}
}

// evaluateStart evaluates everything at x; false when something is undefined.
func (w *Workspace) evaluateStart() bool {
	copy(w.trial, w.x)
	defined := w.evaluateTrial() && w.differentiateTrial()
	w.acceptTrial()
	w.resetHessian()
	return defined
}

// evaluateTrial fills trialF and trialConstraints; false when undefined.
func (w *Workspace) evaluateTrial() bool {
	w.values++
	w.trialF = w.program.Value(w.trial, w.trialConstraints)
	return finite(w.trialF) && finite(w.trialConstraints...)
}

// differentiateTrial fills the derivatives at the trial; false when undefined.
func (w *Workspace) differentiateTrial() bool {
	w.gradients++
	jacobian := w.trialJacobian[:w.nonlinear*w.n]
	w.program.Gradient(w.trial, w.trialGradient, jacobian)
	return finite(w.trialGradient...) && finite(jacobian...)
}

// acceptTrial makes the trial the current point; what was current is kept in
// the trial's memory until the next evaluation.
func (w *Workspace) acceptTrial() {
	w.x, w.trial = w.trial, w.x
	w.f, w.trialF = w.trialF, w.f
	w.constraints, w.trialConstraints = w.trialConstraints, w.constraints
	w.gradient, w.trialGradient = w.trialGradient, w.gradient
	w.jacobian, w.trialJacobian = w.trialJacobian, w.jacobian
}
