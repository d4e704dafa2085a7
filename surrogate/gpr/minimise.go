package gpr

import "math"

// minimum is the outcome of a bounded minimisation.
type minimum struct {
	x           []float64
	f           float64
	slope       float64 // largest component of the projected gradient
	evaluations int
	curvature   []float64 // inverse Hessian approximation, d x d; nil when none was learned
}

// objective returns f(x) and stores its gradient; an infinite f marks a point
// where it does not exist (the gradient is then not used).
type objective func(x, gradient []float64) float64

const (
	sufficientDecrease = 1e-4 // Armijo
	curvatureFloor     = 1e-10
	largestBacktracks  = 12
)

// minimise finds a local minimum of f on the box low <= x <= high from the
// given start, by BFGS steps projected on the box: variables held at a bound by
// the gradient stay there, the others take a quasi-Newton step with the inverse
// Hessian of the free variables, shortened until it decreases f enough
// (Bertsekas 1982; Nocedal & Wright 2006, section 6.1 and algorithm 3.1). It
// stops when no free component of the gradient exceeds tolerance, when a step
// decreases f by less than flat, or after the given number of iterations. An
// inverse Hessian learned elsewhere, which may be nil, saves the first steps.
//
// Unlike a general optimizer it stops at the rounding of the likelihood (flat)
// and takes and returns the curvature: most refits then cost two evaluations.
func minimise(f objective, start, low, high, learned []float64, tolerance, flat float64, iterations int) minimum {
	d := len(start)
	x, g := append([]float64(nil), start...), make([]float64, d)
	trial, trialG := make([]float64, d), make([]float64, d)
	step := make([]float64, d)
	clamp(x, low, high)
	m := minimum{x: x, f: f(x, g), evaluations: 1}
	h := newInverseHessian(d, learned)
	for range iterations {
		if math.IsInf(m.f, 0) {
			break
		}
		if m.slope = projectedSlope(x, g, low, high); m.slope <= tolerance {
			break
		}
		h.step(step, x, g, low, high)
		value, outcome := lineSearch(f, &m, flat, x, g, step, trial, trialG, low, high)
		if outcome == level || outcome == uphill && h.fresh {
			break
		}
		if outcome == uphill {
			h.reset()
			continue
		}
		h.update(x, trial, g, trialG)
		gain := m.f - value
		copy(x, trial)
		copy(g, trialG)
		m.f = value
		if gain <= flat {
			break
		}
	}
	m.slope = projectedSlope(x, g, low, high)
	if !h.fresh {
		m.curvature = h.h
	}
	return m
}

// outcome of a line search.
type outcome int

const (
	down   outcome = iota // f decreased enough
	level                 // no decrease, and none above flat was to be had
	uphill                // no decrease although the slope promised one
)

// lineSearch shortens the step until f decreases enough along its projection;
// it leaves the new point and gradient in trial and trialG. Steps that promise
// less than flat are not tried: there rounding decides.
func lineSearch(f objective, m *minimum, flat float64, x, g, step, trial, trialG, low, high []float64) (value float64, end outcome) {
	t := 1.0
	for range largestBacktracks {
		predicted := 0.0
		for j := range x {
			trial[j] = math.Min(math.Max(x[j]+t*step[j], low[j]), high[j])
			predicted += g[j] * (trial[j] - x[j])
		}
		if predicted >= 0 {
			return 0, uphill
		}
		if -predicted <= flat {
			return 0, level
		}
		value = f(trial, trialG)
		m.evaluations++
		if value <= m.f+sufficientDecrease*predicted {
			return value, down
		}
		shorter := 0.1
		if !math.IsInf(value, 0) && !math.IsNaN(value) { // minimum of the parabola through f, slope and value
			shorter = math.Min(math.Max(-predicted/(2*(value-m.f-predicted)), 0.1), 0.5)
		}
		t *= shorter
	}
	return 0, uphill
}

func clamp(x, low, high []float64) {
	for j := range x {
		x[j] = math.Min(math.Max(x[j], low[j]), high[j])
	}
}

// projectedSlope returns the largest gradient component that a step inside the
// box can follow.
func projectedSlope(x, g, low, high []float64) float64 {
	largest := 0.0
	for j, v := range g {
		if !held(x[j], v, low[j], high[j]) {
			largest = math.Max(largest, math.Abs(v))
		}
	}
	return largest
}

// held reports a variable that the gradient pushes against its bound.
func held(x, g, low, high float64) bool { return x <= low && g > 0 || x >= high && g < 0 }

// inverseHessian is the BFGS approximation, dense.
type inverseHessian struct {
	d     int
	h     []float64
	fresh bool // nothing learned since the last reset
	s, y  []float64
	hy    []float64
}

func newInverseHessian(d int, learned []float64) *inverseHessian {
	h := &inverseHessian{d: d, h: make([]float64, d*d), s: make([]float64, d), y: make([]float64, d), hy: make([]float64, d)}
	h.reset()
	if len(learned) == len(h.h) {
		copy(h.h, learned)
		h.fresh = false
	}
	return h
}

func (h *inverseHessian) reset() {
	h.fresh = true
	clear(h.h)
	for j := range h.d {
		h.h[j*h.d+j] = 1
	}
}

// Bounds on a step in any variable, the logarithm of a length or nugget: before
// anything was learned, and after.
const (
	firstStep   = 0.5
	longestStep = 2.0
)

// step stores -H g of the free variables in dst, scaled down to the bound.
func (h *inverseHessian) step(dst, x, g, low, high []float64) {
	longest := 0.0
	for j := range dst {
		dst[j] = 0
		if held(x[j], g[j], low[j], high[j]) {
			continue
		}
		for k := range dst {
			if !held(x[k], g[k], low[k], high[k]) {
				dst[j] -= h.h[j*h.d+k] * g[k]
			}
		}
		longest = math.Max(longest, math.Abs(dst[j]))
	}
	limit := longestStep
	if h.fresh {
		limit = firstStep
	}
	if longest > limit {
		for j := range dst {
			dst[j] *= limit / longest
		}
	}
}

// update is the BFGS formula (Nocedal & Wright 2006, equation 6.17), skipped
// where the curvature is not positive; the first one scales the identity by
// s'y/y'y (equation 6.20).
func (h *inverseHessian) update(x, next, g, nextG []float64) {
	d := h.d
	sy, yy, ss := 0.0, 0.0, 0.0
	for j := range d {
		h.s[j], h.y[j] = next[j]-x[j], nextG[j]-g[j]
		sy += h.s[j] * h.y[j]
		yy += h.y[j] * h.y[j]
		ss += h.s[j] * h.s[j]
	}
	if sy <= curvatureFloor*math.Sqrt(ss*yy) {
		return
	}
	if h.fresh {
		h.fresh = false
		for j := range d {
			h.h[j*d+j] = sy / yy
		}
	}
	yhy := 0.0
	for j := range d {
		h.hy[j] = 0
		for k := range d {
			h.hy[j] += h.h[j*d+k] * h.y[k]
		}
		yhy += h.y[j] * h.hy[j]
	}
	for j := range d {
		for k := range d {
			h.h[j*d+k] += (1+yhy/sy)*h.s[j]*h.s[k]/sy - (h.hy[j]*h.s[k]+h.s[j]*h.hy[k])/sy
		}
	}
}
