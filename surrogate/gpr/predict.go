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
	k     []float64 // correlations r with the samples
	white []float64 // L^-1 r
	trend []float64
}

// Mean returns f(x)'beta + sum_i alpha_i c(x, x_i).
func (p *Process) Mean(x []float64) float64 {
	var stack [onStack]float64
	u := p.scaled(stack[:0], x)
	sum := p.trendAt(x)
	if p.config.Kernel == RBF {
		for i, a := range p.alpha {
			sum += a * math.Exp(-0.5*p.squared(u, i))
		}
	} else {
		for i, a := range p.alpha {
			sum += a * p.config.Kernel.correlation(p.squared(u, i))
		}
	}
	return p.scaling.Undo(sum)
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
	sum := p.trendAt(x)
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
	return p.scaling.Undo(sum)
}

// cancelled is the variance ratio below which 1 - r'R^-1 r has lost too many
// digits (its absolute error is a few 1e-16).
const cancelled = 1e-6

// Predict returns the mean and the standard deviation of the noise-free
// process, the uncertainty of the trend included:
//
//	s2 (1 - r'R^-1 r + (f - F'R^-1 r)'(F'R^-1 F)^-1 (f - F'R^-1 r))
//
// (universal kriging; Jones, Schonlau & Welch 1998, equation 9, for a constant).
// times the factor of widen. Where the first part cancels it is computed by
// nearSample. Rounding below zero gives 0.
func (p *Process) Predict(x []float64) (mean, deviation float64) {
	var stack [onStack]float64
	u := p.scaled(stack[:0], x)
	s := p.pool.Get().(*scratch)
	defer p.pool.Put(s)
	sum := p.trendAt(x)
	nearest, least := 0, math.Inf(1)
	for i, a := range p.alpha {
		squared := p.squared(u, i)
		if squared < least {
			nearest, least = i, squared
		}
		s.k[i] = p.config.Kernel.correlation(squared)
		sum += a * s.k[i]
	}
	copy(s.white, s.k)
	forward(p.factor, s.white)
	ofTrend := p.trendVariance(s, x)
	variance := 1 - blas64.Dot(vector(s.white), vector(s.white))
	if variance < cancelled {
		variance = p.nearSample(s, nearest, least)
	}
	return p.scaling.Undo(sum), p.scaling.Scale * p.widening * math.Sqrt(p.s2*math.Max(variance+ofTrend, 0))
}

// trendVariance returns the part of the variance ratio that belongs to the
// unknown trend, from L^-1 r in s.white.
func (p *Process) trendVariance(s *scratch, x []float64) float64 {
	if p.q == 0 {
		return 0
	}
	p.config.Trend.functions(s.trend, x)
	trended := blas64.General{Rows: p.q, Cols: p.n, Stride: p.n, Data: p.trended}
	blas64.Gemv(blas.NoTrans, -1, trended, vector(s.white), 1, vector(s.trend))
	forward(p.gram, s.trend)
	return dot(s.trend, s.trend)
}

// nearSample returns 1 - r'R^-1 r without its cancellation. With r = R e_i +
// delta, i the nearest sample at squared scaled distance least, g the nugget:
//
//	1 - r'R^-1 r = g + 2 (1 - c(x,x_i)) - delta'R^-1 delta
//
// because R_ii = 1 + g and delta_i = -(g + 1 - c(x,x_i)); derived here. It
// overwrites s.white.
func (p *Process) nearSample(s *scratch, i int, least float64) float64 {
	away := p.config.Kernel.complement(least)
	own := p.z[i*p.d : (i+1)*p.d]
	for k := range s.white {
		s.white[k] = s.k[k] - p.config.Kernel.correlation(p.squared(own, k))
	}
	s.white[i] = -(p.hyper.Nugget + away)
	forward(p.factor, s.white)
	return p.hyper.Nugget + 2*away - blas64.Dot(vector(s.white), vector(s.white))
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}
