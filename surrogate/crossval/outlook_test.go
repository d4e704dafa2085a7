package crossval_test

import (
	"math"
	"testing"

	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/doe"
	"rampwright/surrogate/gpr"
	"rampwright/surrogate/pce"
)

// Among samples spread for distance a Gaussian process errs more where one is
// left out than at fresh points; the error expected at fresh points comes closer
// to what they show, and orders the kinds as they do.
func TestErrorAtFreshPoints(t *testing.T) {
	kinds := []surrogate.Model{gpr.Config{Seed: 1}, pce.OLS{}}
	var leftOut, expected, found [2]float64
	for seed := range int64(5) {
		x, y := sampled(40, 5, seed, front)
		for k, kind := range kinds {
			c, err := crossval.Choose(background, []surrogate.Model{kind}, x, y)
			if err != nil {
				t.Fatal(err)
			}
			leftOut[k] += c.Figures[0].RMSE
			expected[k] += c.Figures[0].Fresh
			var truth, predicted []float64
			for _, u := range doe.RandomLatinHypercube(300, 5, doe.Stream(seed, "fresh points")) {
				truth, predicted = append(truth, front(u)), append(predicted, c.Mean(u))
			}
			found[k] += surrogate.RMSE(truth, predicted)
		}
	}
	if math.Abs(expected[0]-found[0]) >= math.Abs(leftOut[0]-found[0]) {
		t.Errorf("Gaussian process: left out %g, expected %g, found %g", leftOut[0], expected[0], found[0])
	}
	if math.Abs(expected[1]/leftOut[1]-1) > 0.1 {
		t.Errorf("least squares: left out %g, expected %g, found %g", leftOut[1], expected[1], found[1])
	}
	if expected[0] > expected[1] || found[0] > found[1] || leftOut[0] < leftOut[1] {
		t.Errorf("left out %v, expected %v, found %v", leftOut, expected, found)
	}
}

// productOfCosines is the product of i cos(i x) (Bratley, Fox & Niederreiter 1992,
// from memory).
func productOfCosines(u []float64) float64 {
	product := 1.0
	for i, v := range u {
		product *= float64(i+1) * math.Cos(float64(i+1)*v)
	}
	return product
}

// Twenty samples of a function that no kind follows, some of them large: the
// choice stands back for the simplest fit, here the mean of the data, and its
// median error is then less than that of the fit it leaves.
func TestStandsBackForTheSimplest(t *testing.T) {
	back, chosen, alone := 0, 0.0, 0.0
	for seed := range int64(6) {
		x, y := sampled(20, 5, seed, productOfCosines)
		settings := crossval.Settings{Candidates: crossval.Default(seed)}
		c, err := settings.Choose(background, x, y)
		if err != nil {
			t.Fatal(err)
		}
		if c.Fitted.Describe() == "constant" {
			back++
		}
		chosen += medianError(c, 5, productOfCosines)
		settings.Alone = true
		if c, err = settings.Choose(background, x, y); err != nil {
			t.Fatal(err)
		}
		alone += medianError(c, 5, productOfCosines)
	}
	if back < 3 || chosen >= alone {
		t.Errorf("%d of 6 stand back; errors %g, of the least leave-one-out error %g", back, chosen/6, alone/6)
	}
}

// A kind by itself has nobody to disagree with: its deviations are widened by
// sqrt(n/nu) t/1.96 with the 97.5 % points of Student's distribution (t = 2.228 at
// 10, 2.042 at 30 degrees of freedom, 12.706 at 1; any table).
func TestWideningOfSmallSamples(t *testing.T) {
	for _, c := range []struct {
		samples, inputs int
		want            float64
	}{
		{13, 2, math.Sqrt(1.3) * 2.228 / 1.960},
		{35, 4, math.Sqrt(35./30) * 2.042 / 1.960},
		{4, 2, 10}, // the bound: 2 x 12.706/1.960
		{3, 4, 10}, // fewer samples than inputs count as one degree of freedom
	} {
		x, y := sampled(c.samples, c.inputs, 1, func(u []float64) float64 { return math.Sin(9*u[0]) + u[1] })
		s := crossval.Settings{Candidates: []surrogate.Model{gpr.Config{Seed: 1}}, Transforms: []crossval.Transform{crossval.Identity}}
		choice, err := s.Choose(background, x, y)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(choice.Widening/c.want-1) > 5e-4 {
			t.Errorf("%d samples of %d inputs: widened by %g, want %g", c.samples, c.inputs, choice.Widening, c.want)
		}
	}
}

// Ten designs of 20 samples in five inputs, too few for any of the kinds: 95 %
// intervals of the choice still cover at least 85 % of fresh points, pooled, and
// not by being boundless: the deviations stay within three times the errors.
func TestIntervalsOfFewSamplesCover(t *testing.T) {
	for name, f := range map[string]func([]float64) float64{
		"front": front,
		// Styblinski & Tang 1990 on -5..5 (from memory)
		"sum of quartics": func(u []float64) float64 {
			sum := 0.0
			for _, v := range u {
				w := 10*v - 5
				sum += (w*w*w*w - 16*w*w + 5*w) / 2
			}
			return sum
		},
		// Giunta & Watson 1998, quasi-sinusoidal (from memory)
		"sum of sines": func(u []float64) float64 {
			sum := 0.0
			for _, v := range u {
				w := math.Sin(16./15*(2*v-1) - 0.7)
				sum += 0.3 + w + w*w
			}
			return sum
		},
	} {
		covered, points := 0, 0
		stated, found := 0.0, 0.0
		for seed := range int64(10) {
			x, y := sampled(20, 5, seed, f)
			c, err := crossval.Settings{Candidates: crossval.Every(seed), Jobs: 2}.Choose(background, x, y)
			if err != nil {
				t.Fatal(err)
			}
			fresh := doe.RandomLatinHypercube(200, 5, doe.Stream(seed, "fresh points"))
			mean, deviation := make([]float64, len(fresh)), make([]float64, len(fresh))
			c.PredictMany(fresh, mean, deviation, 2)
			for i, u := range fresh {
				e := math.Abs(mean[i] - f(u))
				if e <= 1.96*deviation[i] {
					covered++
				}
				points++
				stated, found = math.Hypot(stated, deviation[i]), math.Hypot(found, e)
			}
		}
		if covered < points*85/100 || stated > 3*found {
			t.Errorf("%s: 95 %% intervals cover %d of %d fresh points; deviations %.2f times the errors", name, covered, points, stated/found)
		}
		t.Logf("%s: %d of %d, deviations %.2f times the errors", name, covered, points, stated/found)
	}
}
