package crossval

import (
	"context"
	"math/rand/v2"

	"rampwright/surrogate"
)

// Folds deals n samples at random into k groups whose sizes differ by at most
// one, and returns the group of each sample. k is held within 2..n.
func Folds(n, k int, source *rand.Rand) []int {
	k = min(max(k, 2), n)
	group := make([]int, n)
	for place, i := range source.Perm(n) {
		group[i] = place % k
	}
	return group
}

// Predict returns, for each sample, the prediction of a fit to all samples of
// the other folds: k-fold cross-validation, and brute-force leave-one-out when
// every sample is its own fold.
func Predict(ctx context.Context, model surrogate.Model, x [][]float64, y []float64, folds []int) ([]float64, error) {
	k := 0
	for _, f := range folds {
		k = max(k, f+1)
	}
	predicted := make([]float64, len(y))
	for fold := range k {
		var keptX [][]float64
		var keptY []float64
		for i, f := range folds {
			if f != fold {
				keptX, keptY = append(keptX, x[i]), append(keptY, y[i])
			}
		}
		fitted, err := model.Fit(ctx, keptX, keptY)
		if err != nil {
			return nil, err
		}
		for i, f := range folds {
			if f == fold {
				predicted[i] = fitted.Mean(x[i])
			}
		}
	}
	return predicted, nil
}
