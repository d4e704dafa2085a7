package crossval

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate"
)

const (
	// unexplained is the leave-one-out error, relative to the spread of the data,
	// from which no fit explains them (Q2 below 0.999): the least of several such
	// errors is then the one most flattered by chance.
	unexplained = 0.03
	// farBehind is the error relative to the least one beyond which a fit has no
	// part in the mean, and steepness the power with which the weight falls.
	farBehind = 2
	steepness = 8
)

// explains reports whether a fit explains the data, so that it needs no others.
func (t *trial) explains(i int) bool {
	scaling, _, constant := surrogate.Standardise(t.y)
	return constant || t.figures[i].RMSE <= unexplained*scaling.Scale
}

// weigh gives the fits their weights in the weighted mean that stands for the
// choice: to every fit whose error is within twice the least, and to the best,
//
//	w_k = e_k^-8 / sum e^-8
//
// with e the error to be expected at fresh points. Our rule: measured on
// published test functions with 20 to 80 samples, the mean comes closer to the
// kind that fresh points show to be best than the fit of least error does.
func (t *trial) weigh(best int) {
	least := math.Inf(1)
	for i, fit := range t.fits {
		if fit != nil {
			least = math.Min(least, t.figures[i].Fresh)
		}
	}
	sum := 0.0
	for i, fit := range t.fits {
		if f := &t.figures[i]; fit != nil && (f.Fresh <= farBehind*least || i == best) {
			f.Weight = math.Pow(least/f.Fresh, steepness)
			sum += f.Weight
		}
	}
	for i := range t.figures {
		t.figures[i].Weight /= sum
	}
}

// blend is a weighted mean of fits,
//
//	m = sum w_k m_k,  s^2 = sum w_k (s_k^2 + (m_k - m)^2)
//
// the moments of their mixture: where the fits disagree the deviation says so.
type blend struct {
	members        []surrogate.Fitted
	weights        []float64
	loo, deviation []float64
}

func newBlend(members []surrogate.Fitted, weights []float64) *blend {
	n := len(members[0].LeaveOneOut())
	b := &blend{members: members, weights: weights, loo: make([]float64, n), deviation: make([]float64, n)}
	means, deviations := make([][]float64, len(members)), make([][]float64, len(members))
	for k, member := range members {
		means[k], deviations[k] = member.LeaveOneOut(), member.LeaveOneOutDeviation()
	}
	b.mix(b.loo, b.deviation, means, deviations)
	return b
}

// mix stores mean and deviation of the mixture, point by point.
func (b *blend) mix(mean, deviation []float64, means, deviations [][]float64) {
	for i := range mean {
		mean[i], deviation[i] = 0, 0
		for k, w := range b.weights {
			mean[i] += w * means[k][i]
		}
		for k, w := range b.weights {
			own := math.Hypot(deviations[k][i], means[k][i]-mean[i])
			deviation[i] = math.Hypot(deviation[i], math.Sqrt(w)*own)
		}
	}
}

// Mean implements surrogate.Fitted.
func (b *blend) Mean(x []float64) float64 {
	mean := 0.0
	for k, member := range b.members {
		mean += b.weights[k] * member.Mean(x)
	}
	return mean
}

// Predict implements surrogate.Fitted.
func (b *blend) Predict(x []float64) (mean, deviation float64) {
	var m, s [1]float64
	b.PredictMany([][]float64{x}, m[:], s[:], 1)
	return m[0], s[0]
}

// PredictMany implements surrogate.Batch.
func (b *blend) PredictMany(points [][]float64, mean, deviation []float64, jobs int) {
	means, deviations := make([][]float64, len(b.members)), make([][]float64, len(b.members))
	for k, member := range b.members {
		means[k], deviations[k] = make([]float64, len(points)), make([]float64, len(points))
		surrogate.PredictMany(member, points, means[k], deviations[k], jobs)
	}
	b.mix(mean, deviation, means, deviations)
}

// Gradient implements surrogate.Fitted.
func (b *blend) Gradient(dst, x []float64) float64 {
	mean, own := 0.0, make([]float64, len(dst))
	clear(dst)
	for k, member := range b.members {
		mean += b.weights[k] * member.Gradient(own, x)
		for j, v := range own {
			dst[j] += b.weights[k] * v
		}
	}
	return mean
}

func (b *blend) LeaveOneOut() []float64          { return b.loo }
func (b *blend) LeaveOneOutDeviation() []float64 { return b.deviation }

// Complexity is that of its most complex member.
func (b *blend) Complexity() int {
	largest := 0
	for _, member := range b.members {
		largest = max(largest, member.Complexity())
	}
	return largest
}

func (b *blend) Describe() string {
	first := 0
	for k, w := range b.weights {
		if w > b.weights[first] {
			first = k
		}
	}
	return fmt.Sprintf("mean of %d fits, %.0f %% %s", len(b.members), 100*b.weights[first], b.members[first].Describe())
}

// Warm refits every member; the weights stay.
func (b *blend) Warm() surrogate.Model {
	m := blendModel{weights: b.weights}
	for _, member := range b.members {
		m.models = append(m.models, member.Warm())
	}
	return m
}

// blendModel is the configuration of a weighted mean.
type blendModel struct {
	models  []surrogate.Model
	weights []float64
}

// Kind implements surrogate.Model.
func (m blendModel) Kind() string { return "weighted mean" }

// Fit implements surrogate.Model; it returns the first error of a member.
func (m blendModel) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	members := make([]surrogate.Fitted, len(m.models))
	for k, model := range m.models {
		var err error
		if members[k], err = model.Fit(ctx, x, y); err != nil {
			return nil, err
		}
	}
	return newBlend(members, m.weights), nil
}
