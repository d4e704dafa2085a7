package local

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// The merit function is the l1 penalty (Nocedal & Wright eq. 18.27, one weight
// a constraint),
//
//	phi(x) = f(x) + sum_i w_i viol_i(x)
//
// exact when w_i > |lambda_i|. In the elastic phase it is the violation alone.

// updateWeights follows the multipliers of the quadratic program: up at once,
// down by halves (Powell 1978, from memory), so that an early large estimate
// does not shorten every later step. The elastic phase has weights of its own.
func (w *Workspace) updateWeights() {
	if w.elastic {
		return
	}
	for i := range w.weight {
		size := math.Abs(w.multiplier[i])
		w.weight[i] = max(size, (w.weight[i]+size)/2)
	}
}

// merit returns phi for a value and constraints.
func (w *Workspace) merit(f float64, constraints []float64) float64 {
	sum := f
	if w.elastic {
		sum = 0
	}
	for i, c := range constraints {
		sum += w.weight[i] * w.excess(i, c)
	}
	return sum
}

// predictedChange returns the change of phi along step p in the linear model:
// grad f'p + sum_i w_i (viol_i(c + A p) - viol_i(c)), negative but for rounding.
func (w *Workspace) predictedChange() float64 {
	sum := 0.0
	if !w.elastic {
		sum = floats.Dot(w.gradient, w.step)
	}
	for i, c := range w.constraints {
		linear := c + floats.Dot(w.jacobian[i*w.n:(i+1)*w.n], w.step)
		sum += w.weight[i] * (w.excess(i, linear) - w.excess(i, c))
	}
	return sum
}

// meritNoise estimates the rounding of phi: that of f, whose terms are taken to
// be at least of size 1 as in the residual, and of each weighted constraint from
// its change across the box.
func (w *Workspace) meritNoise() float64 {
	size := max(1, math.Abs(w.f))
	if w.elastic {
		size = 0
	}
	for i, c := range w.constraints {
		size += w.weight[i] * (math.Abs(c) + w.quadratic.reach[i])
	}
	return w.settings.Rounding * size
}

// totalViolation is the weighted l1 violation of the nonlinear constraints at x.
func (w *Workspace) totalViolation() float64 {
	sum := 0.0
	for i, c := range w.constraints {
		sum += w.weight[i] * w.excess(i, c)
	}
	return sum
}
