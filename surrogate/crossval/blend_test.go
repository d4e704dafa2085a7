package crossval_test

import (
	"math"
	"slices"
	"testing"

	"rampwright/surrogate/crossval"
	"rampwright/surrogate/doe"
)

// front is tanh of the sum of the inputs on -1..1: no kind explains 40 samples of
// it in five inputs.
func front(u []float64) float64 {
	sum := 0.0
	for _, v := range u {
		sum += 2*v - 1
	}
	return math.Tanh(sum)
}

// Where no kind explains the data the choice is a weighted mean: its weights sum
// to 1, its gradient is its derivative, a refit keeps it, and the best fit by
// itself is still to be had.
func TestWeightedMean(t *testing.T) {
	x, y := sampled(41, 5, 14, front)
	settings := crossval.Settings{Candidates: crossval.Default(1)}
	c, err := settings.Choose(background, x[:40], y[:40])
	if err != nil {
		t.Fatal(err)
	}
	sum, members := 0.0, 0
	for _, f := range c.Figures {
		sum += f.Weight
		if f.Weight > 0 {
			members++
		}
	}
	if members < 2 || math.Abs(sum-1) > 1e-12 || c.Quality.Q2 > 0.999 {
		t.Errorf("%d members, weights sum to %g, Q2 %g: %s", members, sum, c.Quality.Q2, c.Describe())
	}
	u, slope := []float64{0.3, 0.7, 0.45, 0.6, 0.2}, make([]float64, 5)
	mean, _ := c.Predict(u)
	if math.Abs(c.Gradient(slope, u)-mean) > 1e-12 || math.Abs(c.Mean(u)-mean) > 1e-12 {
		t.Errorf("means %g, %g, %g", mean, c.Mean(u), c.Gradient(slope, u))
	}
	for j := range u {
		const h = 1e-5
		low, high := slices.Clone(u), slices.Clone(u)
		low[j], high[j] = u[j]-h, u[j]+h
		if numeric := (c.Mean(high) - c.Mean(low)) / (2 * h); math.Abs(numeric-slope[j]) > 1e-6 {
			t.Errorf("input %d: derivative %g, by differences %g", j, slope[j], numeric)
		}
	}
	again, err := c.Refit(background, x, y)
	if err != nil {
		t.Fatal(err)
	}
	for i, f := range again.Figures {
		if (f.Weight > 0) == (f == c.Figures[i]) {
			t.Errorf("line %d of the table: %+v from %+v", i, f, c.Figures[i])
		}
	}
	if len(again.LeaveOneOut()) != 41 {
		t.Errorf("%d leave-one-out predictions", len(again.LeaveOneOut()))
	}
	settings.Alone = true
	alone, err := settings.Choose(background, x[:40], y[:40])
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range alone.Figures {
		if f.Chosen != (f.Weight == 1) || !f.Chosen && f.Weight != 0 {
			t.Errorf("alone: %+v", f)
		}
	}
}

// On functions that no kind explains with 40 samples of five inputs the weighted
// mean errs less than the fit of least leave-one-out error by itself, and its
// 95 % intervals cover fresh points.
func TestWeightedMeanBeatsTheLeastError(t *testing.T) {
	for name, f := range map[string]func([]float64) float64{
		"front":              front,
		"product of cosines": productOfCosines,
	} {
		together, alone := 0.0, 0.0
		covered, points := 0, 0
		for seed := range int64(4) {
			x, y := sampled(40, 5, seed, f)
			settings := crossval.Settings{Candidates: crossval.Default(seed), Jobs: 2}
			c, err := settings.Choose(background, x, y)
			if err != nil {
				t.Fatal(err)
			}
			together += medianError(c, 5, f)
			settings.Alone = true
			if one, err := settings.Choose(background, x, y); err != nil {
				t.Error(err)
			} else {
				alone += medianError(one, 5, f)
			}
			for _, u := range doe.RandomLatinHypercube(200, 5, doe.Stream(seed, "fresh points")) {
				if mean, deviation := c.Predict(u); math.Abs(mean-f(u)) <= 1.96*deviation {
					covered++
				}
				points++
			}
		}
		if together > alone {
			t.Errorf("%s: the weighted mean errs by %.3g, the least error by %.3g", name, together/4, alone/4)
		}
		if covered < points*85/100 {
			t.Errorf("%s: 95 %% intervals cover %d of %d fresh points", name, covered, points)
		}
	}
}
