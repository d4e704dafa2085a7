package shock

import "math"

// bracketedRoot returns a root of f in [a, b] by Brent's method (Brent,
// Algorithms for Minimization without Derivatives, 1973, ch. 4) to the spacing
// of floating-point numbers. Where f has one sign on both ends, the end with
// the smaller |f| is returned: the caller has shown that it is the limit.
func bracketedRoot(f func(float64) float64, a, b float64) float64 {
	fa, fb := f(a), f(b)
	if (fa > 0) == (fb > 0) {
		if math.Abs(fa) < math.Abs(fb) {
			return a
		}
		return b
	}
	c, fc := a, fa
	step, last := b-a, b-a
	for range 200 {
		if (fb > 0) == (fc > 0) {
			c, fc = a, fa
			step, last = b-a, b-a
		}
		if math.Abs(fc) < math.Abs(fb) {
			a, b, c = b, c, b
			fa, fb, fc = fb, fc, fb
		}
		tolerance := 2 * 2.220446049250313e-16 * math.Abs(b)
		half := (c - b) / 2
		if math.Abs(half) <= tolerance || fb == 0 {
			return b
		}
		step, last = brentStep(a, b, c, fa, fb, fc, half, tolerance, step, last)
		a, fa = b, fb
		if math.Abs(step) > tolerance {
			b += step
		} else {
			b += math.Copysign(tolerance, half)
		}
		fb = f(b)
	}
	return b
}

// brentStep chooses inverse quadratic or secant interpolation where it
// converges fast enough, bisection otherwise.
func brentStep(a, b, c, fa, fb, fc, half, tolerance, step, last float64) (next, before float64) {
	if math.Abs(last) < tolerance || math.Abs(fa) <= math.Abs(fb) {
		return half, half
	}
	var p, q float64
	s := fb / fa
	if a == c {
		p, q = 2*half*s, 1-s
	} else {
		r, t := fb/fc, fa/fc
		p = s * (2*half*t*(t-r) - (b-a)*(r-1))
		q = (t - 1) * (r - 1) * (s - 1)
	}
	if p > 0 {
		q = -q
	}
	p = math.Abs(p)
	if 2*p < math.Min(3*half*q-math.Abs(tolerance*q), math.Abs(last*q)) {
		return p / q, step
	}
	return half, half
}

// bisect halves [a, b] until no number lies between: slow, and independent of
// any interpolation.
func bisect(f func(float64) float64, a, b float64) float64 {
	negative := !(f(a) > 0)
	for range 200 {
		middle := a + (b-a)/2
		if middle <= a || middle >= b {
			break
		}
		if (f(middle) > 0) == negative {
			b = middle
		} else {
			a = middle
		}
	}
	return b
}
