package local

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// Named numbers of the line search.
const (
	// sufficient is the fraction of the predicted gain a step must keep (Armijo;
	// Nocedal & Wright eq. 18.28).
	sufficient = 1e-4
	// retreat shortens a step that ends where something is undefined.
	retreat = 0.3
	// shortestStep is the fraction of the step at which the search gives up.
	shortestStep = 1e-10
	// noisySteps is how many steps in a row may promise less than rounding.
	noisySteps = 15
)

// searchLine looks along the step for a point of sufficiently lower merit and
// makes it current: the full step, then the second-order correction, then
// shorter steps. It returns false when there is none.
func (w *Workspace) searchLine() bool {
	merit, change, noise := w.merit(w.f, w.constraints), w.predictedChange(), w.meritNoise()
	if -change <= noise {
		w.noisy++
	} else {
		w.noisy = 0
	}
	for w.length = 1; w.length >= shortestStep; {
		reached, ok := w.tryStep(w.length, w.step)
		if ok && reached <= merit+sufficient*w.length*change+noise && w.takeTrial() {
			return true
		}
		if w.length == 1 && ok && w.correctStep() {
			corrected, ok := w.tryStep(1, w.quadratic.step)
			if ok && corrected <= merit+sufficient*change+noise && w.takeTrial() {
				return true
			}
		}
		w.length *= shorten(merit, change*w.length, reached, ok)
	}
	return false
}

// tryStep evaluates x + length p and returns its merit; ok is false where it is
// undefined.
func (w *Workspace) tryStep(length float64, p []float64) (merit float64, ok bool) {
	for j, x := range w.x {
		w.trial[j] = x + length*p[j]
	}
	w.keepInBox(w.trial)
	if !w.evaluateTrial() {
		return math.NaN(), false
	}
	return w.merit(w.trialF, w.trialConstraints), true
}

// takeTrial accepts the trial unless its derivatives are undefined.
func (w *Workspace) takeTrial() bool {
	if !w.differentiateTrial() {
		return false
	}
	w.acceptTrial()
	return true
}

// correctStep solves the quadratic program again with the constraints' own
// curvature along the step that was just tried (Nocedal & Wright eq. 18.36),
//
//	offsets = c(x + p) - A p
//
// and leaves the corrected step in the program. It returns false when there is
// nothing to correct.
func (w *Workspace) correctStep() bool {
	if w.nonlinear == 0 {
		return false
	}
	for i, c := range w.trialConstraints {
		w.corrected[i] = c - floats.Dot(w.jacobian[i*w.n:(i+1)*w.n], w.step)
	}
	w.linearise(w.corrected)
	return w.quadratic.solve() == solved
}

// shorten returns the factor for the next trial: the minimum of the parabola
// through merit and slope here and the merit reached, within [0.1, 0.5].
func shorten(merit, change, reached float64, ok bool) float64 {
	if !ok || math.IsInf(reached, 0) {
		return retreat
	}
	factor := -change / (2 * (reached - merit - change))
	if !(factor >= 0.1) {
		return 0.1
	}
	return min(factor, 0.5)
}
