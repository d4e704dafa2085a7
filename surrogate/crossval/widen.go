package crossval

import (
	"math"

	"rampwright/surrogate"
)

// mostWidening bounds the factor on the deviations of the choice.
const mostWidening = 2

// widening returns the factor on the deviations of the chosen fit: the least
// error of any other kind over its own, within 1..2. The least of several
// leave-one-out errors flatters, the more so the farther it lies below the next
// (our rule; the tests show that 95 % intervals then cover fresh points at 85 %
// or more).
func widening(figures []Figure, chosen int) float64 {
	other := math.Inf(1)
	for _, f := range figures {
		if f.Err == nil && f.Kind != figures[chosen].Kind {
			other = math.Min(other, f.RMSE)
		}
	}
	own := figures[chosen].RMSE
	if math.IsInf(other, 1) || other <= own {
		return 1
	}
	return math.Min(other/own, mostWidening)
}

// blendWidening returns the factor on the deviations of a weighted mean of fits to
// n samples of d inputs, sqrt(n/(n - d - 1)) within 1..2: a degree of freedom for
// each input and the level, as in a linear regression (our rule, tested as above).
func blendWidening(n, d int) float64 {
	return math.Min(math.Sqrt(float64(n)/float64(max(n-d-1, 1))), mostWidening)
}

// widened multiplies the deviations of a fit.
type widened struct {
	surrogate.Fitted
	factor    float64
	deviation []float64
}

func widen(f surrogate.Fitted, factor float64) surrogate.Fitted {
	w := &widened{Fitted: f, factor: factor}
	for _, s := range f.LeaveOneOutDeviation() {
		w.deviation = append(w.deviation, factor*s)
	}
	return w
}

func (w *widened) Predict(x []float64) (mean, deviation float64) {
	mean, deviation = w.Fitted.Predict(x)
	return mean, w.factor * deviation
}

// PredictMany implements surrogate.Batch.
func (w *widened) PredictMany(points [][]float64, mean, deviation []float64, jobs int) {
	surrogate.PredictMany(w.Fitted, points, mean, deviation, jobs)
	for i := range deviation {
		deviation[i] *= w.factor
	}
}

func (w *widened) LeaveOneOutDeviation() []float64 { return w.deviation }
