package local

import "context"

// Minimize solves p from the start, which is first projected into box and
// linear rows. The error reports a program, start or setting that makes no
// sense; how the solve went is the Status of the result.
func Minimize(ctx context.Context, p *Program, start []float64, settings Settings) (*Result, error) {
	var w Workspace
	return w.Minimize(ctx, p, start, settings)
}

// Minimize is the package's Minimize in memory that is reused: the slices of
// the result are valid until the next call (see Result.Clone), and a call of a
// size seen before allocates nothing but what the program's functions do.
func (w *Workspace) Minimize(ctx context.Context, p *Program, start []float64, settings Settings) (*Result, error) {
	if err := w.check(p, start, settings); err != nil {
		return nil, err
	}
	w.prepare(p, settings.withDefaults())
	if !w.project(start) {
		return w.finish(Inconsistent), nil
	}
	if !w.evaluateStart() {
		if ctx.Err() != nil {
			return w.finish(Cancelled), nil
		}
		return w.finish(Undefined), nil
	}
	for {
		if !w.findStep() {
			return w.finish(Stalled), nil
		}
		w.measure()
		if w.makePlain() {
			continue
		}
		if status, done := w.verdict(); done {
			return w.finish(status), nil
		}
		if ctx.Err() != nil {
			return w.finish(Cancelled), nil
		}
		if w.iterations == w.settings.Iterations {
			return w.finish(IterationLimit), nil
		}
		w.iterations++
		w.updateWeights()
		if w.searchLine() {
			w.updateHessian()
			w.restrain()
			w.changePhase()
			continue
		}
		if ctx.Err() != nil {
			return w.finish(Cancelled), nil
		}
		if !w.recover() {
			return w.finish(Stalled), nil
		}
	}
}

// findStep solves the quadratic program at x. Linearised constraints that
// contradict each other start the elastic phase.
func (w *Workspace) findStep() bool {
	w.linearise(w.constraints)
	result := w.quadratic.solve()
	if result == inconsistent && !w.elastic {
		w.enterElastic()
		w.linearise(w.constraints)
		result = w.quadratic.solve()
	}
	if result != solved {
		w.resetHessian()
		w.linearise(w.constraints)
		result = w.quadratic.solve()
	}
	if result != solved {
		return false
	}
	copy(w.step, w.quadratic.step)
	copy(w.multiplier, w.quadratic.multiplier)
	return true
}

// verdict tells whether the point just measured ends the solve.
func (w *Workspace) verdict() (Status, bool) {
	stationary, feasible := w.kkt <= w.settings.Tolerance, w.violation <= w.settings.Feasibility
	switch {
	case stationary && feasible && !w.elastic:
		return Converged, true
	case stationary && !feasible && w.elastic:
		return Infeasible, true
	default:
		return Stalled, w.noisy > noisySteps
	}
}

// recover answers a line search without result: first a fresh Hessian, then the
// elastic phase where something is violated. It reports whether anything is
// left to try.
func (w *Workspace) recover() bool {
	switch {
	case !w.freshHessian:
		w.resetHessian()
	case !w.elastic && w.violation > w.settings.Feasibility:
		w.enterElastic()
	default:
		return false
	}
	return true
}
