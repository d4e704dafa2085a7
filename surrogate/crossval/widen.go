package crossval

import (
	"math"

	"rampwright/surrogate"
)

// mostWidening bounds the factor on the deviations of the chosen fit.
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

func (w *widened) LeaveOneOutDeviation() []float64 { return w.deviation }
