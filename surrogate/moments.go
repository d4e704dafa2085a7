package surrogate

import "math"

// Moments are mean and standard deviation of a function under a distribution
// of its inputs, as estimated from draws, with the standard errors of the
// estimates.
type Moments struct {
	Mean           float64
	Deviation      float64
	MeanError      float64
	DeviationError float64
	Draws          int
}

// Sampled returns the Monte Carlo moments of f over the given draws:
//
//	mean error s/sqrt(n);  deviation error sqrt((m4/s^4 - (n-3)/(n-1))/n) s/2,
//
// m4 the fourth central moment (variance of a sample variance, first order;
// e.g. Mood, Graybill & Boes, from memory). Values are scaled before squaring.
// Fewer than two draws have deviation and errors NaN.
func Sampled(f func(u []float64) float64, draws [][]float64) Moments {
	values := make([]float64, len(draws))
	for i, u := range draws {
		values[i] = f(u)
	}
	scaling, scaled, constant := Standardise(values)
	m := Moments{Mean: scaling.Center, Draws: len(draws)}
	if len(draws) < 2 {
		m.Deviation, m.MeanError, m.DeviationError = math.NaN(), math.NaN(), math.NaN()
		return m
	}
	if constant {
		return m
	}
	n := float64(len(draws))
	fourth := 0.0
	for _, v := range scaled {
		fourth += v * v * v * v / n
	}
	m.Deviation = scaling.Scale * math.Sqrt(n/(n-1))
	m.MeanError = m.Deviation / math.Sqrt(n)
	m.DeviationError = m.Deviation / 2 * math.Sqrt(math.Max(fourth-(n-3)/(n-1), 0)/n)
	return m
}
