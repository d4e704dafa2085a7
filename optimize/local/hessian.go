package local

import "gonum.org/v1/gonum/floats"

// resetHessian returns to a diagonal B whose unconstrained step has the size of
// half the box in its steepest direction.
func (w *Workspace) resetHessian() {
	steepest := 0.0
	if w.elastic {
		for i, c := range w.constraints {
			if w.excess(i, c) > 0 {
				steepest = max(steepest, w.weight[i]*w.reachOf(i))
			}
		}
	} else {
		steepest = w.scaledSize(w.gradient)
	}
	if steepest == 0 {
		steepest = 1
	}
	w.fillDiagonal(w.hessian, 2*steepest)
	w.freshHessian = true
}

// fillDiagonal stores B = size diag(1/width^2).
func (w *Workspace) fillDiagonal(hessian []float64, size float64) {
	clear(hessian)
	for j, width := range w.quadratic.width {
		hessian[j*w.n+j] = size / (width * width)
	}
}

// damping is Powell's: the curvature kept is at least this fraction of the
// model's.
const damping = 0.2

// updateHessian is the damped BFGS update (Powell 1978; Nocedal & Wright
// Procedure 18.2),
//
//	s = x+ - x,  y = grad L(x+, lambda) - grad L(x, lambda)
//	theta = 1 if s'y >= 0.2 s'Bs, else 0.8 s'Bs / (s'Bs - s'y)
//	r = theta y + (1 - theta) B s
//	B <- B - B s s'B / s'Bs + r r'/s'r
//
// After a reset B is first scaled to the curvature of y (eq. 6.20). It keeps B
// positive definite and does nothing for a step of no length.
func (w *Workspace) updateHessian() {
	w.lagrangianGradient(w.image, w.trialGradient, w.trialJacobian)
	w.lagrangianGradient(w.bend, w.gradient, w.jacobian)
	for j := range w.move {
		w.move[j] = w.x[j] - w.trial[j]
		w.bend[j] -= w.image[j]
	}
	slope := floats.Dot(w.move, w.bend)
	if w.freshHessian && slope > 0 {
		size := 0.0
		for j, y := range w.bend {
			size += y * y * w.quadratic.width[j] * w.quadratic.width[j]
		}
		w.fillDiagonal(w.hessian, size/slope)
	}
	for j := range w.image {
		w.image[j] = floats.Dot(w.hessian[j*w.n:(j+1)*w.n], w.move)
	}
	curvature := floats.Dot(w.move, w.image)
	if !(curvature > 0) || !finite(slope, curvature) {
		return
	}
	w.freshHessian = false
	if slope < damping*curvature {
		theta := (1 - damping) * curvature / (curvature - slope)
		for j := range w.bend {
			w.bend[j] = theta*w.bend[j] + (1-theta)*w.image[j]
		}
		slope = floats.Dot(w.move, w.bend)
	}
	for i := range w.n {
		for j := range w.n {
			w.hessian[i*w.n+j] += w.bend[i]*w.bend[j]/slope - w.image[i]*w.image[j]/curvature
		}
	}
}

// lagrangianGradient stores the gradient of the part of the Lagrangian that
// bends: grad f (0 in the elastic phase) + sum_i lambda_i grad c_i.
func (w *Workspace) lagrangianGradient(dst, gradient, jacobian []float64) {
	copy(dst, gradient)
	if w.elastic {
		clear(dst)
	}
	for i, multiplier := range w.multiplier[:w.nonlinear] {
		if multiplier == 0 {
			continue
		}
		for j, a := range jacobian[i*w.n : (i+1)*w.n] {
			dst[j] += multiplier * a
		}
	}
}
