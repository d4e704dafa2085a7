package crossval_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"
	"rampwright/surrogate/crossval"
)

// Whatever the samples (few, repeated, collinear, on a grid, with outliers,
// steps and constants), every kind ends in a fit without NaN or infinity or in
// an error kept in the table; the choice, its refit and its predictions stay
// finite, corners included.
func TestAnyDataEndsWell(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, n := rapid.IntRange(1, 3).Draw(t, "inputs"), rapid.IntRange(2, 14).Draw(t, "samples")
		coordinate := rapid.SampledFrom([]float64{0, 0.25, 0.5, 1, 1.0 / 3, 0.999999999})
		if rapid.Bool().Draw(t, "spread") {
			coordinate = rapid.Float64Range(0, 1)
		}
		output := rapid.SampledFrom([]float64{0, 1, -1, 0.5, 1e-9, 0.999, 1e6, 1e-300})
		if rapid.Bool().Draw(t, "smooth") {
			output = rapid.Float64Range(0.1, 0.9)
		}
		x, y := make([][]float64, n), make([]float64, n)
		for i := range x {
			for range d {
				x[i] = append(x[i], coordinate.Draw(t, "x"))
			}
			y[i] = output.Draw(t, "y")
		}
		c, err := crossval.Choose(background, crossval.Every(1), x, y)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range c.Figures {
			if f.Err == nil && (math.IsNaN(f.RMSE) || math.IsInf(f.RMSE, 0)) {
				t.Fatalf("%s %v: error %g", f.Kind, f.Transform, f.RMSE)
			}
		}
		again, err := c.Refit(background, x, y)
		if err != nil {
			t.Fatal(err)
		}
		slope := make([]float64, d)
		for _, f := range []crossval.Choice{c, again} {
			for _, u := range append(x, make([]float64, d), x[0]) {
				mean, deviation := f.Predict(u)
				for _, v := range append(slope, mean, deviation, f.Mean(u), f.Gradient(slope, u)) {
					if math.IsNaN(v) || math.IsInf(v, 0) {
						t.Fatalf("%s %v, %s at %v: %g +- %g, slopes %v", f.Kind, f.Transform, f.Describe(), u, mean, deviation, slope)
					}
				}
			}
		}
	})
}
