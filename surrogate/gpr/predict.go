package gpr

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// onStack is the largest number of inputs whose working space stays on the stack.
const onStack = 24

// scratch is the working space of one deviation.
type scratch struct {
	white []float64 // correlations r with the samples, delta, L^-1 delta
	trend []float64 // f - F'R^-1 r
}

// Mean returns f(x)'beta + sum_i alpha_i c(x, x_i).
func (p *Process) Mean(x []float64) float64 {
	var stack [onStack]float64
	u := p.scaled(stack[:0], x)
	sum := 0.0
	if p.config.Kernel == RBF {
		for i, a := range p.alpha {
			sum += a * math.Exp(-0.5*p.squared(u, i))
		}
	} else {
		for i, a := range p.alpha {
			sum += a * p.config.Kernel.correlation(p.squared(u, i))
		}
	}
	return p.scaling.Undo(p.trendAt(x) + sum)
}

// scaled appends x over the lengths.
func (p *Process) scaled(dst, x []float64) []float64 {
	if len(x) != p.d {
		panic("gpr: point of the wrong dimension")
	}
	for j, s := range p.scale {
		dst = append(dst, x[j]*s)
	}
	return dst
}

// squared returns the squared scaled distance of u to sample i.
func (p *Process) squared(u []float64, i int) float64 {
	sum := 0.0
	for j, v := range p.z[i*p.d : i*p.d+len(u)] {
		sum += (u[j] - v) * (u[j] - v)
	}
	return sum
}

func (p *Process) trendAt(x []float64) float64 {
	if p.q == 0 {
		return 0
	}
	sum := p.beta[0]
	for j, b := range p.beta[1:] {
		sum += b * x[j]
	}
	return sum
}

// Gradient stores d(mean)/dx_j = beta_j - sum_i alpha_i s(r_i) (x_j - x_ij)/l_j^2
// in dst and returns the mean. With Matern12 the mean has a kink at each sample;
// there the sample's own term is left out.
func (p *Process) Gradient(dst, x []float64) float64 {
	var stack [onStack]float64
	u := p.scaled(stack[:0], x)
	clear(dst)
	sum := 0.0
	for i, a := range p.alpha {
		squared := p.squared(u, i)
		c := p.config.Kernel.correlation(squared)
		sum += a * c
		if p.config.Kernel != RBF {
			c = p.config.Kernel.sensitivity(squared)
		}
		for j, v := range p.z[i*p.d : i*p.d+len(u)] {
			dst[j] -= a * c * (u[j] - v)
		}
	}
	for j, s := range p.scale {
		dst[j] *= s
		if p.config.Trend == Linear {
			dst[j] += p.beta[j+1]
		}
		dst[j] *= p.scaling.Scale
	}
	return p.scaling.Undo(p.trendAt(x) + sum)
}

// Predict returns the mean and the standard deviation of the noise-free
// process, the uncertainty of the trend included:
//
//	s2 (1 - r'R^-1 r + (f - F'R^-1 r)'(F'R^-1 F)^-1 (f - F'R^-1 r))
//
// (universal kriging; Jones, Schonlau & Welch 1998, equation 9, for a constant)
// times the factor of widen. Both parts are formed without their cancellation
// close to samples: with r = R e_i + delta, i the nearest sample, g the nugget,
//
//	1 - r'R^-1 r  = g + 2 (1 - c(x,x_i)) - delta'R^-1 delta
//	f - F'R^-1 r  = f(x) - f(x_i) - F'R^-1 delta
//
// because R_ii = 1 + g and delta_i = -(g + 1 - c(x,x_i)); derived here.
// Rounding below zero gives 0.
func (p *Process) Predict(x []float64) (mean, deviation float64) {
	var stack [onStack]float64
	u := p.scaled(stack[:0], x)
	s := p.pool.Get().(*scratch)
	defer p.pool.Put(s)
	sum, nearest, least := p.correlate(u, s.white)
	own := p.z[nearest*p.d : (nearest+1)*p.d]
	for k := range s.white {
		s.white[k] -= p.config.Kernel.correlation(p.squared(own, k))
	}
	s.white[nearest] = -(p.hyper.Nugget + p.config.Kernel.complement(least))
	forward(p.factor, s.white)
	p.trendFrom(s.trend, u, nearest)
	if p.q > 0 {
		trended := blas64.General{Rows: p.q, Cols: p.n, Stride: p.n, Data: p.trended}
		blas64.Gemv(blas.NoTrans, -1, trended, vector(s.white), 1, vector(s.trend))
	}
	return p.scaling.Undo(p.trendAt(x) + sum), p.deviation(least, blas64.Dot(vector(s.white), vector(s.white)), s.trend)
}

// correlate stores the correlations of u with the samples in r and returns
// sum_i alpha_i r_i and the nearest sample with its squared scaled distance.
func (p *Process) correlate(u, r []float64) (sum float64, nearest int, least float64) {
	least = math.Inf(1)
	for i, a := range p.alpha {
		squared := p.squared(u, i)
		if squared < least {
			nearest, least = i, squared
		}
		if p.config.Kernel == RBF {
			r[i] = math.Exp(-0.5 * squared)
		} else {
			r[i] = p.config.Kernel.correlation(squared)
		}
		sum += a * r[i]
	}
	return sum, nearest, least
}

// trendFrom stores the difference f(x) - f(x_i) of the trend functions to sample
// i in dst.
func (p *Process) trendFrom(dst, u []float64, i int) {
	clear(dst)
	if p.config.Trend == Linear {
		for j, l := range p.hyper.Lengths {
			dst[j+1] = l * (u[j] - p.z[i*p.d+j])
		}
	}
}

// deviation returns the standard deviation at a point from the squared scaled
// distance to its nearest sample, delta'R^-1 delta, and f - F'R^-1 r, which it
// overwrites.
func (p *Process) deviation(least, quadratic float64, trend []float64) float64 {
	variance := p.hyper.Nugget + 2*p.config.Kernel.complement(least) - quadratic
	if p.q > 0 {
		forward(p.gram, trend)
		variance += dot(trend, trend)
	}
	return p.scaling.Scale * p.widening * math.Sqrt(p.s2*math.Max(variance, 0))
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}
