package gpr

import (
	"context"
	"math"

	"rampwright/surrogate"
)

// Fit implements surrogate.Model: maximum posterior likelihood over the
// lengths (and the nugget, if estimated), with trend and variance profiled out
// and a weak prior on the lengths, from several starts.
//
// Constant outputs give a constant with deviation 0. Repeated samples are
// admitted. It returns *surrogate.DataError for fewer than two samples, values
// that are not finite, or a linear trend on collinear inputs, and
// *surrogate.SettingsError for a bad configuration.
func (c Config) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	p, err := c.FitProcess(ctx, x, y)
	if err != nil {
		return nil, err
	}
	return p, nil
}

// FitProcess is Fit with the concrete type.
func (c Config) FitProcess(ctx context.Context, x [][]float64, y []float64) (*Process, error) {
	if err := surrogate.Check(x, y, 2); err != nil {
		return nil, err
	}
	if err := c.Validate(len(x[0])); err != nil {
		return nil, err
	}
	scaling, scaled, constant := surrogate.Standardise(y)
	if c.Trend == None {
		scaling, scaled = aboutZero(y)
		constant = scaling.Scale == 0
	}
	search := &search{config: c, sample: newSample(x, scaled, c.Kernel, c.Trend), jitter: nuggetFloor}
	search.estimate = c.Noise == Estimate
	if c.Noise == Interpolate && !constant && contradictory(x, scaled) {
		search.estimate, search.forced = true, true
	}
	found, err := search.run(ctx, constant)
	if err != nil {
		return nil, err
	}
	return search.process(found, scaling, y)
}

// aboutZero scales outputs by their largest size without moving zero.
func aboutZero(y []float64) (surrogate.Scaling, []float64) {
	largest := 0.0
	for _, v := range y {
		largest = math.Max(largest, math.Abs(v))
	}
	scaled := make([]float64, len(y))
	if largest == 0 {
		return surrogate.Scaling{}, scaled
	}
	for i, v := range y {
		scaled[i] = v / largest
	}
	return surrogate.Scaling{Scale: largest}, scaled
}

// samePoint is the distance below which two samples are one point, and
// sameOutput the standardised difference that is no contradiction there.
const (
	samePoint  = 1e-9
	sameOutput = 1e-7
)

// contradictory reports two samples at one point with different outputs.
func contradictory(x [][]float64, y []float64) bool {
	for i, a := range x {
		for k, b := range x[:i] {
			if math.Abs(y[i]-y[k]) > sameOutput && chebyshev(a, b) <= samePoint {
				return true
			}
		}
	}
	return false
}

func chebyshev(a, b []float64) float64 {
	largest := 0.0
	for j, v := range a {
		largest = math.Max(largest, math.Abs(v-b[j]))
	}
	return largest
}
