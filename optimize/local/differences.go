package local

import "math"

// differenceStep is the step of a difference over the width of the box: the
// cube root of the rounding unit, where truncation h^2 f”'/6 and rounding
// eps f/h of a central difference balance.
const differenceStep = 6.055454452393343e-06 // 2^-52 ^ (1/3)

// Differenced returns p with a Gradient made of second-order differences of its
// Value inside the box:
//
//	central    (f(x+h) - f(x-h)) / 2h
//	at a face  (-3 f(x) + 4 f(x+h) - f(x+2h)) / 2h, h inward
//
// h is 6e-6 of the variable's range, or of max(1, |x|) where that is infinite;
// the relative error is about 1e-10 for well-scaled functions. A side on which
// something is undefined is avoided the same way as a face; with neither side
// defined the derivative is NaN. A fixed variable has derivative 0. One
// gradient costs 2n + 1 values. Linear rows are not minded by the differences.
// The result holds buffers: it is not safe for concurrent use.
func Differenced(p Program) Program {
	n, m := p.Dimension(), p.Constraints()
	d := &differences{
		program: p,
		x:       make([]float64, n),
		here:    make([]float64, m+1),
		near:    make([]float64, m+1),
		far:     make([]float64, m+1),
	}
	p.Gradient = d.gradient
	return p
}

type differences struct {
	program         Program
	x               []float64
	here, near, far []float64 // f, then the constraints
}

func (d *differences) gradient(x, grad, jac []float64) {
	copy(d.x, x)
	d.evaluate(d.here)
	n := len(x)
	for j := range x {
		store := func(i int, v float64) {
			if i == 0 {
				grad[j] = v
			} else {
				jac[(i-1)*n+j] = v
			}
		}
		d.column(j, x[j], store)
		d.x[j] = x[j]
	}
}

// column stores the derivatives along variable j.
func (d *differences) column(j int, x float64, store func(i int, v float64)) {
	h := d.program.High[j] - d.program.Low[j]
	if h == 0 {
		for i := range d.here {
			store(i, 0)
		}
		return
	}
	if math.IsInf(h, 1) {
		h = max(1, math.Abs(x))
	}
	h *= differenceStep
	h = (x + h) - x // the step that rounding leaves
	up, down := d.at(j, x+h, d.near), d.at(j, x-h, d.far)
	switch {
	case up && down:
		for i := range d.here {
			store(i, (d.near[i]-d.far[i])/(2*h))
		}
	case up && d.at(j, x+2*h, d.far):
		d.oneSided(h, store)
	case down && d.at(j, x-h, d.near) && d.at(j, x-2*h, d.far):
		d.oneSided(-h, store)
	default:
		for i := range d.here {
			store(i, math.NaN())
		}
	}
}

func (d *differences) oneSided(h float64, store func(i int, v float64)) {
	for i, here := range d.here {
		store(i, (-3*here+4*d.near[i]-d.far[i])/(2*h))
	}
}

// at evaluates with variable j at x; false outside the box and where something
// is undefined.
func (d *differences) at(j int, x float64, dst []float64) bool {
	if x < d.program.Low[j] || x > d.program.High[j] {
		return false
	}
	d.x[j] = x
	d.evaluate(dst)
	return finite(dst...)
}

func (d *differences) evaluate(dst []float64) {
	dst[0] = d.program.Value(d.x, dst[1:])
}
