package gpr

import (
	"math"

	"rampwright/surrogate"
)

// LogLikelihood returns the log marginal likelihood of outputs y under a
// process of mean zero with covariance variance*c + noise*I,
//
//	L = -y'K^-1 y/2 - log|K|/2 - n/2 log(2 pi)
//
// (Rasmussen & Williams 2006, equation 2.30), and its derivatives by the
// natural logarithms of variance, lengths and noise, in this order (equation
// 5.9). Nothing is scaled, profiled or floored. It returns
// *surrogate.DataError for unusable samples or a covariance without a Cholesky
// factor, and *surrogate.SettingsError for hyperparameters out of range.
func LogLikelihood(kernel Kernel, x [][]float64, y []float64, variance float64, lengths []float64, noise float64) (value float64, gradient []float64, err error) {
	if err := surrogate.Check(x, y, 1); err != nil {
		return 0, nil, err
	}
	problems := Hyper{Lengths: lengths}.problems(len(x[0]))
	if !(variance > 0) || !(noise >= 0) || math.IsInf(variance, 0) || math.IsInf(noise, 0) {
		problems = append(problems, "variance must be positive and noise not negative")
	}
	if problems != nil {
		return 0, nil, &surrogate.SettingsError{Of: "Gaussian process", Problems: problems}
	}
	nugget := noise / variance
	s := newSolver(newSample(x, y, kernel, None))
	s.correlate(lengths, nugget)
	if !s.factorise() || !s.profile() {
		return 0, nil, &surrogate.DataError{What: "the covariance of the samples is singular", Row: -1, Column: -1}
	}
	n := float64(s.n)
	quadratic := n * s.s2 / variance
	value = -0.5*quadratic - 0.5*s.logDet - 0.5*n*math.Log(2*math.Pi*variance)
	s.s2 = variance
	byRatio := make([]float64, s.d+1)
	s.gradient(byRatio, nugget)
	byNoise := byRatio[s.d]
	gradient = append(gradient, 0.5*(quadratic-n)-byNoise)
	gradient = append(gradient, byRatio[:s.d]...)
	return value, append(gradient, byNoise), nil
}
