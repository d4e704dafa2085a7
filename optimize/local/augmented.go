package local

import (
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// MinimizeAugmented solves p by the augmented Lagrangian method with bounds
// (Hestenes 1969, Powell 1969, Rockafellar 1973; Nocedal & Wright algorithm 17.4,
// from memory): it lowers
//
//	psi(x) = f + sum_eq (lambda c + rho c^2/2) + sum_ineq (max(0, lambda + rho c)^2 - lambda^2)/(2 rho)
//
// over the box and then moves the multipliers,
//
//	lambda <- lambda + rho c (eq.),  lambda <- max(0, lambda + rho c) (ineq.)
//
// with rho ten times larger where the violation has not fallen to a quarter. The
// linear rows are treated like the nonlinear ones.
//
// It is the second route beside Minimize and shares nothing with it but Program,
// Settings and Result: no quadratic program, no elastic phase, no l1 merit. It
// needs some ten times more evaluations. Settings.Iterations bounds the rounds of
// multipliers. Only the box holds at every point evaluated.
//
// Special cases are: Infeasible where rho has reached its limit and the violation
// does not vanish (Multipliers are then no certificate); Undefined where the start,
// moved into the box, has no value; Stalled where rounding leaves no step in
// several rounds.
func MinimizeAugmented(ctx context.Context, p *Program, start []float64, settings Settings) (*Result, error) {
	var w Workspace
	if err := w.check(p, start, settings); err != nil {
		return nil, err
	}
	a := newAugmented(p, start, settings.withDefaults())
	if !a.evaluate() {
		return a.finish(Undefined), nil
	}
	a.startPenalty()
	tolerance, idle := firstInner, 0
	for a.rounds = 0; a.rounds < a.settings.Iterations; a.rounds++ {
		idle++
		if a.descend(ctx, math.Max(tolerance, a.settings.Tolerance/2)) {
			idle = 0
		}
		before := a.distance
		a.moveMultipliers()
		switch stationary := a.kkt <= a.settings.Tolerance; {
		case stationary && a.violation <= a.settings.Feasibility:
			return a.finish(Converged), nil
		case ctx.Err() != nil:
			return a.finish(Cancelled), nil
		case a.rho >= mostPenalty && a.violation > a.settings.Feasibility:
			return a.finish(Infeasible), nil
		case idle == mostIdle:
			return a.finish(Stalled), nil
		}
		if a.distance > slowFeasibility*before {
			a.rho *= penaltyGrowth
		}
		tolerance *= innerDecay
	}
	return a.finish(IterationLimit), nil
}

// Named numbers of the augmented Lagrangian.
const (
	firstInner      = 1e-2 // scaled stationarity asked of the first round
	innerDecay      = 0.1
	slowFeasibility = 0.25
	penaltyGrowth   = 10
	leastPenalty    = 1e-4
	firstPenalty    = 10 // largest at the start
	mostPenalty     = 1e12
	mostIdle        = 5 // rounds in a row in which rounding leaves no step
)

// augmented is a solve under way. Rows are the nonlinear constraints, then the
// linear rows AtMost and Equal.
type augmented struct {
	program  *Program
	settings Settings
	n, rows  int
	width    []float64 // of each variable, as in setScales
	equality []bool    // by row

	x, gradient []float64 // gradient of psi
	f, psi      float64
	c           []float64 // residuals by row
	slope, jac  []float64 // of f, and of the rows

	lambda    []float64
	rho       float64
	distance  float64 // from feasibility and complementarity, see moveMultipliers
	violation float64
	kkt       float64

	rounds, values, gradients int
}

func newAugmented(p *Program, start []float64, settings Settings) *augmented {
	n, m := p.Dimension(), p.Constraints()
	rows := m + len(p.AtMost.B) + len(p.Equal.B)
	a := &augmented{
		program: p, settings: settings, n: n, rows: rows,
		width: make([]float64, n), equality: make([]bool, rows),
		x: slices.Clone(start), gradient: make([]float64, n), c: make([]float64, rows),
		slope: make([]float64, n), jac: make([]float64, rows*n), lambda: make([]float64, rows),
		rho: firstPenalty, distance: math.Inf(1), kkt: math.NaN(),
	}
	copy(a.jac[m*n:], p.AtMost.A)
	copy(a.jac[(m+len(p.AtMost.B))*n:], p.Equal.A)
	for r := range a.equality {
		a.equality[r] = r < p.Equalities || r >= m+len(p.AtMost.B)
	}
	for j := range a.x {
		a.x[j] = math.Min(math.Max(a.x[j], p.Low[j]), p.High[j])
		a.width[j] = p.High[j] - p.Low[j]
		if math.IsInf(a.width[j], 0) || a.width[j] == 0 {
			a.width[j] = math.Max(1, math.Abs(a.x[j]))
		}
	}
	return a
}

// evaluate fills f, residuals and psi at x; false where undefined.
func (a *augmented) evaluate() bool {
	p, m := a.program, a.program.Constraints()
	a.values++
	a.f = p.Value(a.x, a.c[:m])
	for r, b := range slices.Concat(p.AtMost.B, p.Equal.B) {
		row := a.jac[(m+r)*a.n : (m+r+1)*a.n]
		a.c[m+r] = floats.Dot(row, a.x) - b
	}
	a.psi = a.f
	for r, c := range a.c {
		if a.equality[r] {
			a.psi += c * (a.lambda[r] + a.rho*c/2)
		} else {
			pull := math.Max(0, a.lambda[r]+a.rho*c)
			a.psi += (pull*pull - a.lambda[r]*a.lambda[r]) / (2 * a.rho)
		}
	}
	return finite(a.f, a.psi)
}

// differentiate fills the gradient of psi at the point of the latest evaluate;
// false where undefined.
func (a *augmented) differentiate() bool {
	a.gradients++
	a.program.Gradient(a.x, a.slope, a.jac[:a.program.Constraints()*a.n])
	copy(a.gradient, a.slope)
	for r := range a.c {
		if pull := a.pull(r); pull != 0 {
			floats.AddScaled(a.gradient, pull, a.jac[r*a.n:(r+1)*a.n])
		}
	}
	return finite(a.gradient...)
}

// pull is the multiplier that row r has to first order at x.
func (a *augmented) pull(r int) float64 {
	pull := a.lambda[r] + a.rho*a.c[r]
	if !a.equality[r] {
		pull = math.Max(0, pull)
	}
	return pull
}

// startPenalty balances the penalty against f where the start is infeasible
// (Birgin & Martinez 2014, from memory).
func (a *augmented) startPenalty() {
	squares := 0.0
	for r, c := range a.c {
		if a.equality[r] || c > 0 {
			squares += c * c
		}
	}
	if squares > 0 {
		a.rho = math.Min(firstPenalty, math.Max(leastPenalty, 2*math.Max(1, math.Abs(a.f))/squares))
	}
}

// moveMultipliers takes the first-order multipliers and measures what is left:
// the violation; the larger of it and of min(-c, lambda/rho), which vanishes with
// it at a solution; and the residual of the first-order conditions, scaled as in
// Result.KKT.
func (a *augmented) moveMultipliers() {
	a.distance, a.violation = 0, 0
	complementarity := 0.0
	for r, c := range a.c {
		next := a.pull(r)
		if a.equality[r] {
			a.violation = math.Max(a.violation, math.Abs(c))
			a.distance = math.Max(a.distance, math.Abs(c))
		} else {
			a.violation = math.Max(a.violation, c)
			a.distance = math.Max(a.distance, math.Abs(math.Max(c, -a.lambda[r]/a.rho)))
			complementarity = math.Max(complementarity, math.Abs(next*c))
		}
		a.lambda[r] = next
	}
	scale := 1.0
	for j, v := range a.slope {
		scale = math.Max(scale, math.Abs(v)*a.width[j])
	}
	a.kkt = math.Max(a.stationarity()*math.Max(1, a.slopeSize()), complementarity) / scale
}

// slopeSize is the change of f across the box to first order.
func (a *augmented) slopeSize() float64 {
	size := 0.0
	for j, v := range a.slope {
		size = math.Max(size, math.Abs(v)*a.width[j])
	}
	return size
}

// finish fills the result; the slope of psi that a face carries is its
// multiplier.
func (a *augmented) finish(status Status) *Result {
	m, atMost := a.program.Constraints(), len(a.program.AtMost.B)
	r := &Result{
		X: a.x, F: a.f, Constraints: a.c[:m],
		Multipliers: a.lambda[:m], RowsAtMost: a.lambda[m : m+atMost], RowsEqual: a.lambda[m+atMost:],
		FaceLow: make([]float64, a.n), FaceHigh: make([]float64, a.n),
		KKT: a.kkt, Violation: a.violation,
		Iterations: a.rounds, Values: a.values, Gradients: a.gradients, Status: status,
	}
	for j, g := range a.gradient {
		switch {
		case a.x[j] == a.program.Low[j] && g > 0:
			r.FaceLow[j] = g
		case a.x[j] == a.program.High[j] && g < 0:
			r.FaceHigh[j] = -g
		}
	}
	return r
}
