package gpr

import (
	"math"
	"testing"

	"pgregory.net/rapid"
	"rampwright/surrogate/doe"
)

// Many predictions at once are those made one by one, on and between the
// samples, for every kernel and trend, and the same bits for any number of jobs.
func TestPredictManyIsPredict(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.IntRange(1, 3).Draw(t, "inputs")
		n := rapid.IntRange(d+3, 20).Draw(t, "samples")
		seed := rapid.Int64().Draw(t, "seed")
		x := doe.RandomLatinHypercube(n, d, doe.Stream(seed, "samples"))
		y := make([]float64, n)
		for i := range y {
			y[i] = 5 + smooth(append(x[i], 0))
		}
		lengths := make([]float64, d)
		for j := range lengths {
			lengths[j] = rapid.Float64Range(0.1, 2).Draw(t, "length")
		}
		p, err := Config{
			Kernel: Kernel(rapid.IntRange(0, 3).Draw(t, "kernel")), Trend: Trend(rapid.IntRange(0, 2).Draw(t, "trend")),
			Noise: Given, Nugget: 1e-8, Fixed: true, Start: &Hyper{Lengths: lengths, Nugget: 1e-8},
		}.FitProcess(background, x, y)
		if err != nil {
			t.Fatal(err)
		}
		fresh := doe.RandomLatinHypercube(rapid.IntRange(1, 2*tileSize+1).Draw(t, "points"), d, doe.Stream(seed, "points"))
		points := append(append([][]float64{}, x...), fresh...)
		mean, deviation := make([]float64, len(points)), make([]float64, len(points))
		p.PredictMany(points, mean, deviation, 0)
		other, otherDeviation := make([]float64, len(points)), make([]float64, len(points))
		p.PredictMany(points, other, otherDeviation, rapid.IntRange(2, 7).Draw(t, "jobs"))
		spread := p.Hyper().Deviation
		for c, u := range points {
			m, s := p.Predict(u)
			if mean[c] != other[c] || deviation[c] != otherDeviation[c] {
				t.Fatalf("point %d depends on the jobs", c)
			}
			if math.Abs(mean[c]-m) > 1e-12*math.Abs(m) || math.Abs(deviation[c]*deviation[c]-s*s) > 1e-11*spread*spread {
				t.Fatalf("point %d: %g +- %g, one by one %g +- %g", c, mean[c], deviation[c], m, s)
			}
		}
	})
}
