package optimize

import (
	"context"
	"math"
	"slices"

	"rampwright/surrogate"
)

// window is a part of the unit cube, between two corners, that a fit sees as its
// whole cube: lengths far below those of the cube can then be found.
type window struct{ low, width []float64 }

// leastWidth keeps a window from collapsing on samples that share a face.
const leastWidth = 1e-3

// windowAround is the smallest window that holds the points.
func windowAround(points [][]float64) window {
	n := len(points[0])
	w := window{make([]float64, n), make([]float64, n)}
	for j := range n {
		low, high := points[0][j], points[0][j]
		for _, u := range points {
			low, high = math.Min(low, u[j]), math.Max(high, u[j])
		}
		w.low[j], w.width[j] = low, math.Max(leastWidth, high-low)
	}
	return w
}

// closeWindow is the window around points that stand close together, the whole
// cube around others.
func closeWindow(points [][]float64) window {
	if len(points) == 0 {
		return window{}
	}
	w := windowAround(points)
	if slices.Max(w.width) > widestWindow {
		return window{}
	}
	return w
}

// widestWindow is the largest side of a window that is worth its own scale.
const widestWindow = 0.25

// windowed is a fit that sees a window.
type windowed struct {
	window
	fitted surrogate.Fitted
	widen  float64 // factor on its deviations
}

func (w window) fit(ctx context.Context, model surrogate.Model, x [][]float64, y []float64) (*windowed, error) {
	fitted, err := model.Fit(ctx, w.all(x), y)
	if err != nil {
		return nil, err
	}
	return &windowed{w, fitted, widening(fitted, y)}, nil
}

// widening is the root mean square of the standardised leave-one-out residuals,
// at least 1: a fit that errs by more than it says is believed less.
func widening(fitted surrogate.Fitted, y []float64) float64 {
	sum := 0.0
	predicted, deviations := fitted.LeaveOneOut(), fitted.LeaveOneOutDeviation()
	for i, v := range y {
		z := (v - predicted[i]) / deviations[i]
		sum += z * z
	}
	if w := math.Sqrt(sum / float64(len(y))); w > 1 && !math.IsInf(w, 0) {
		return w
	}
	return 1
}

// of returns u as the window sees it.
func (w window) of(u []float64) []float64 {
	if w.width == nil {
		return u
	}
	v := make([]float64, len(u))
	for j := range u {
		v[j] = (u[j] - w.low[j]) / w.width[j]
	}
	return v
}

// all returns the points as the window sees them.
func (w window) all(points [][]float64) [][]float64 {
	inside := make([][]float64, len(points))
	for i, u := range points {
		inside[i] = w.of(u)
	}
	return inside
}

func (f *windowed) predict(u []float64) (mean, deviation float64) {
	mean, deviation = f.fitted.Predict(f.of(u))
	return mean, f.widen * deviation
}
