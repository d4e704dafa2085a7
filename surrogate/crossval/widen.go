package crossval

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
	"rampwright/surrogate"
)

const (
	// outvoted is the error relative to the least one beyond which a fit has no
	// say in the deviation.
	outvoted = 3
	// mostWidening bounds the factor on the deviations of the choice.
	mostWidening = 10
)

// widening returns the factor on the deviations of the choice with outlook own:
// that of disagreement, times that of small samples; within 1..10.
func (t *trial) widening(own outlook) float64 {
	return math.Min(t.disagreement(own)*smallSample(len(t.x), len(t.x[0])), mostWidening)
}

// disagreement returns how much wider than its own word the choice's error must be
// taken because other fits, which explain the samples nearly as well, say
// otherwise: the root mean square over the probes of
//
//	s^2 = sum v_k (s_k^2 + (m_k - m)^2),  v_k = e_k^-2 / sum e^-2
//
// over that of the choice's own deviations, at least 1, with m its mean and m_k,
// s_k, e_k mean, deviation and leave-one-out error of every fit within three times
// the least error (the variance of a model average, Buckland, Burnham & Augustin
// 1997, from memory; here with weights by inverse mean square error). The least of
// several leave-one-out errors flatters, and so does the deviation that goes with
// it; the disagreement does not. It is 1 where the samples are met exactly.
func (t *trial) disagreement(own outlook) float64 {
	least := math.Inf(1)
	for i, fit := range t.fits {
		if fit != nil {
			least = math.Min(least, t.figures[i].RMSE)
		}
	}
	stated := norm(own.deviation)
	if least <= t.exact || stated == 0 {
		return 1
	}
	sum, all := 0.0, 0.0
	for i, fit := range t.fits {
		if fit == nil || t.figures[i].RMSE > outvoted*least {
			continue
		}
		ratio := least / t.figures[i].RMSE
		apart := make([]float64, probes)
		for p := range apart {
			apart[p] = math.Hypot(t.outlooks[i].deviation[p], t.outlooks[i].mean[p]-own.mean[p])
		}
		sum = math.Hypot(sum, ratio*norm(apart))
		all += ratio * ratio
	}
	return math.Max(1, sum/math.Sqrt(all)/stated)
}

// smallSample returns the factor for a deviation that n samples of d inputs have
// told,
//
//	sqrt(n/nu) t(0.975, nu)/1.96,  nu = n - d - 1, at least 1
//
// as in a linear regression: a degree of freedom for each input and the level, and
// Student's quantile for the normal one (e.g. Draper & Smith; from memory).
func smallSample(n, d int) float64 {
	freedom := float64(max(n-d-1, 1))
	student := distuv.StudentsT{Sigma: 1, Nu: freedom}.Quantile(0.975)
	return math.Sqrt(float64(n)/freedom) * student / distuv.UnitNormal.Quantile(0.975)
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
