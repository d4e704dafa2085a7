package local

import "math"

// measure stores the worst violation and the residual of the first-order
// conditions (Nocedal & Wright eq. 12.34) at x with the multipliers of the
// quadratic program solved there:
//
//	stationarity     max_j width_j |dL/dx_j|
//	complementarity  max_i |lambda_i r_i|, r the residual of row or face
//
// both over max(1, max_j width_j |df/dx_j|), the change of f across the box. In
// the elastic phase f is the weighted violation: a multiplier lies between 0 and
// the weight, which it has where the constraint is violated, and the scale is
// max(1, largest change of a priced constraint across the box).
func (w *Workspace) measure() {
	w.violation = w.worstViolation()
	w.lagrangianGradient(w.slope, w.gradient, w.jacobian)
	for row := w.nonlinear; row < w.rows; row++ {
		if multiplier := w.multiplier[row]; multiplier != 0 {
			for j, a := range w.jacobian[row*w.n : (row+1)*w.n] {
				w.slope[j] += multiplier * a
			}
		}
	}
	for j := range w.slope {
		w.slope[j] += w.multiplier[w.rows+w.n+j] - w.multiplier[w.rows+j]
	}
	w.kkt = max(w.scaledSize(w.slope), w.complementarity()) / w.residualScale()
}

func (w *Workspace) residualScale() float64 {
	if !w.elastic {
		return max(1, w.scaledSize(w.gradient))
	}
	scale := 1.0
	for i, multiplier := range w.multiplier[:w.nonlinear] {
		scale = max(scale, math.Abs(multiplier)*w.reachOf(i))
	}
	return scale
}

// complementarity is the largest product of a multiplier and its residual; in
// the elastic phase also of its distance from the weight and the violation.
func (w *Workspace) complementarity() float64 {
	worst := 0.0
	for i, c := range w.constraints {
		multiplier := w.multiplier[i]
		switch {
		case w.elastic:
			// w viol(c) - lambda c, which splits into (w - lambda) c+ and lambda c-.
			worst = max(worst, w.weight[i]*w.excess(i, c)-multiplier*c)
		case !w.isEquality(i):
			worst = max(worst, math.Abs(multiplier*c))
		}
	}
	for row := w.nonlinear; row < w.rows; row++ {
		if !w.isEquality(row) {
			worst = max(worst, math.Abs(w.multiplier[row]*w.linearResidual(row, w.x)))
		}
	}
	for j, x := range w.x {
		if multiplier := w.multiplier[w.rows+j]; multiplier != 0 {
			worst = max(worst, multiplier*(x-w.program.Low[j]))
		}
		if multiplier := w.multiplier[w.rows+w.n+j]; multiplier != 0 {
			worst = max(worst, multiplier*(w.program.High[j]-x))
		}
	}
	return worst
}

// worstViolation is the largest violation of constraints and linear rows.
func (w *Workspace) worstViolation() float64 {
	worst := 0.0
	for i, c := range w.constraints {
		worst = max(worst, w.excess(i, c))
	}
	for row := w.nonlinear; row < w.rows; row++ {
		worst = max(worst, w.excess(row, w.linearResidual(row, w.x)))
	}
	return worst
}

// scaledSize is max_j width_j |v_j|.
func (w *Workspace) scaledSize(v []float64) float64 {
	size := 0.0
	for j, value := range v {
		size = max(size, math.Abs(value)*w.quadratic.width[j])
	}
	return size
}

// reachOf is the reach of constraint i at x.
func (w *Workspace) reachOf(i int) float64 {
	return reach(w.jacobian[i*w.n:(i+1)*w.n], w.quadratic.width)
}
