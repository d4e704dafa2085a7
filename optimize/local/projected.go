package local

import (
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// Named numbers of the descent.
const (
	projectedSteps = 500   // of one round
	projectedLeast = 1e-14 // fraction of a step at which the search gives up
	curvatureLeast = 1e-10 // s'y over |s||y| below which an update is left out
)

// descend lowers psi over the box to the scaled stationarity given by two-metric
// projection (Bertsekas, SIAM J. Control Optim. 20, 1982, from memory): variables
// on a face against which the gradient presses are held, the others move by
//
//	d_F = -H_FF g_F,  x(t) = P(x + t d)
//
// with H the inverse BFGS matrix (Nocedal & Wright eq. 6.17) and Armijo's rule
// along the projected path. It reports whether x moved.
func (a *augmented) descend(ctx context.Context, tolerance float64) (moved bool) {
	if !a.evaluate() || !a.differentiate() {
		return false
	}
	h := newInverse(a)
	from, before := make([]float64, a.n), make([]float64, a.n)
	for range projectedSteps {
		if a.stationarity() <= tolerance || ctx.Err() != nil {
			return moved
		}
		copy(from, a.x)
		copy(before, a.gradient)
		if !a.searchPath(h.direction(a), from) {
			copy(a.x, from)
			restored := a.evaluate() && a.differentiate()
			if !restored || h.fresh {
				return moved
			}
			h.reset(a)
			continue
		}
		moved = true
		h.learn(a, from, before)
	}
	return moved
}

// searchPath shortens the step until psi falls sufficiently, and differentiates
// there; x is left anywhere where it returns false.
func (a *augmented) searchPath(direction, from []float64) bool {
	psi, gradient := a.psi, slices.Clone(a.gradient)
	noise := a.settings.Rounding * math.Max(1, math.Abs(psi)) * 1e-3
	for t := 1.0; t >= projectedLeast; t *= 0.5 {
		change := 0.0
		for j, x := range from {
			a.x[j] = math.Min(math.Max(x+t*direction[j], a.program.Low[j]), a.program.High[j])
			change += gradient[j] * (a.x[j] - x)
		}
		if !(change < 0) {
			return false
		}
		if a.evaluate() && a.psi <= psi+sufficient*change+noise && a.differentiate() {
			return true
		}
	}
	return false
}

// held reports whether variable j stands on a face against which psi presses.
func (a *augmented) held(j int) bool {
	return a.x[j] <= a.program.Low[j] && a.gradient[j] >= 0 || a.x[j] >= a.program.High[j] && a.gradient[j] <= 0
}

// stationarity is the largest slope of psi that no face carries, times the width
// of its variable, over the change of f across the box.
func (a *augmented) stationarity() float64 {
	worst := 0.0
	for j, g := range a.gradient {
		if !a.held(j) {
			worst = math.Max(worst, math.Abs(g)*a.width[j])
		}
	}
	return worst / math.Max(1, a.slopeSize())
}

// inverse is the BFGS approximation of the inverse Hessian of psi, row-major.
type inverse struct {
	h     []float64
	fresh bool
}

func newInverse(a *augmented) *inverse {
	h := &inverse{h: make([]float64, a.n*a.n)}
	h.reset(a)
	return h
}

// reset makes the first step a tenth of the box at most.
func (h *inverse) reset(a *augmented) {
	clear(h.h)
	size := 0.0
	for j, g := range a.gradient {
		size = math.Max(size, math.Abs(g)*a.width[j])
	}
	for j, width := range a.width {
		h.h[j*a.n+j] = 0.1 * width * width / math.Max(size, 1e-300)
	}
	h.fresh = true
}

// direction is -H_FF g_F, zero in the held variables.
func (h *inverse) direction(a *augmented) []float64 {
	d := make([]float64, a.n)
	for i := range d {
		if a.held(i) {
			continue
		}
		for j, g := range a.gradient {
			if !a.held(j) {
				d[i] -= h.h[i*a.n+j] * g
			}
		}
	}
	return d
}

// learn updates with the step taken, where psi curves upward along it:
//
//	H <- (I - s y'/s'y) H (I - y s'/s'y) + s s'/s'y
//
// A fresh H is first scaled to the curvature found (eq. 6.20).
func (h *inverse) learn(a *augmented, from, before []float64) {
	s, y := make([]float64, a.n), make([]float64, a.n)
	floats.SubTo(s, a.x, from)
	floats.SubTo(y, a.gradient, before)
	product := floats.Dot(s, y)
	if !(product > curvatureLeast*floats.Norm(s, 2)*floats.Norm(y, 2)) {
		return
	}
	if h.fresh {
		image := 0.0
		for j, v := range y {
			image += v * v * h.h[j*a.n+j]
		}
		floats.Scale(product/image, h.h)
	}
	h.fresh = false
	hy := make([]float64, a.n)
	for i := range hy {
		hy[i] = floats.Dot(h.h[i*a.n:(i+1)*a.n], y)
	}
	stretch := (1 + floats.Dot(y, hy)/product) / product
	for i := range a.n {
		for j := range a.n {
			h.h[i*a.n+j] += stretch*s[i]*s[j] - (hy[i]*s[j]+s[i]*hy[j])/product
		}
	}
}
