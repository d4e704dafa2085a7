package pce

import (
	"math"
	"testing"
)

// With hardly any penalty and fewer terms than samples a weighted expansion is
// least squares: the same mean, and deviations of the same misfit (they differ by
// how its degrees of freedom are counted). The prior of the degrees left out has
// no part in them.
func TestWeightedExpansionOfFewTermsIsLeastSquares(t *testing.T) {
	x, y := samples(40, 5, 3, func(x []float64) float64 {
		sum := 0.0
		for _, v := range x {
			sum += 2*v - 1
		}
		return math.Tanh(sum)
	})
	line := Truncation{Degree: 1}
	plain := fit(t, OLS{Truncation: line, Exactly: true}, x, y)
	weighted := fit(t, Ridge{Truncation: line, Exactly: true, Growth: 2, Penalty: 1e-9}, x, y)
	for _, u := range append(x[:5:5], make([]float64, 5), []float64{0.3, 0.8, 0.5, 0.1, 0.6}) {
		mean, deviation := plain.Predict(u)
		m, s := weighted.Predict(u)
		if math.Abs(m-mean) > 1e-5 || s < deviation/1.2 || s > 1.2*deviation {
			t.Errorf("at %v: %g +- %g, least squares %g +- %g", u, m, s, mean, deviation)
		}
	}
}
