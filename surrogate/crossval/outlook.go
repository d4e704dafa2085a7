package crossval

import (
	"math"

	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// outlook is what a fit predicts at the probes.
type outlook struct {
	mean, deviation []float64
}

// probes are the points at which fits are compared with one another.
const probes = 128

// probesAmong returns points spread evenly over the box that the samples span:
// no fit has seen anything beyond it.
func probesAmong(x [][]float64) [][]float64 {
	points := doe.RandomLatinHypercube(probes, len(x[0]), doe.Stream(0, "probes of a choice"))
	for j := range x[0] {
		low, high := math.Inf(1), math.Inf(-1)
		for _, u := range x {
			low, high = math.Min(low, u[j]), math.Max(high, u[j])
		}
		for _, p := range points {
			p[j] = low + (high-low)*p[j]
		}
	}
	return points
}

func look(fit surrogate.Fitted, points [][]float64) outlook {
	o := outlook{make([]float64, len(points)), make([]float64, len(points))}
	surrogate.PredictMany(fit, points, o.mean, o.deviation, 1)
	return o
}

// leastFraction is the smallest fraction of the deviation at left-out samples
// that a fit is believed to reach between the samples.
const leastFraction = 0.5

// freshError returns the root mean square error to be expected at fresh points
// from that at left-out samples,
//
//	e = e_loo sqrt(s/s_loo), s/s_loo within 1/2..1
//
// with s and s_loo the root mean square deviations that the fit states at the
// probes and at left-out samples. Samples spread for distance lie farther from
// one another than a fresh point lies from them, so that leaving one out opens a
// hole: local fits (Gaussian processes) err there up to twice as much as at fresh
// points, low polynomials hardly more. The root halves the correction, which rests
// on the fit's own word (our rule; the tests compare the choice with the best
// kind). Without a deviation at left-out samples it is e_loo.
func freshError(looError float64, fit surrogate.Fitted, o outlook) float64 {
	leftOut := norm(fit.LeaveOneOutDeviation())
	if leftOut == 0 {
		return looError
	}
	ratio := norm(o.deviation) / leftOut
	return looError * math.Sqrt(math.Min(math.Max(ratio, leastFraction), 1))
}

// norm is the root mean square, without overflow.
func norm(v []float64) float64 {
	sum := 0.0
	for _, e := range v {
		sum = math.Hypot(sum, e)
	}
	return sum / math.Sqrt(float64(len(v)))
}

// significance is the number of standard errors by which a fit must beat the mean
// of the data.
const significance = 1.5

// beatsTheMean reports whether a fit is better than no fit: whether the mean of
//
//	d_i = |y_i - mean of the others| - |y_i - prediction without i|
//
// exceeds 1.5 of its standard errors sd(d)/sqrt(n) (the one-standard-error rule,
// Breiman, Friedman, Olshen & Stone 1984, on paired differences; from memory, the
// factor ours). Where few large outputs make the data, square errors would not
// tell.
func beatsTheMean(y []float64, fit surrogate.Fitted) bool {
	n := float64(len(y))
	if n < 2 {
		return true
	}
	scaling, standard, _ := surrogate.Standardise(y)
	gains, mean := make([]float64, len(y)), 0.0
	for i, left := range fit.LeaveOneOut() {
		gains[i] = math.Abs(standard[i])*n/(n-1) - math.Abs(standard[i]-scaling.Apply(left))
		mean += gains[i] / n
	}
	variance := 0.0
	for _, g := range gains {
		variance += (g - mean) * (g - mean) / (n - 1)
	}
	return mean > significance*math.Sqrt(variance/n)
}
