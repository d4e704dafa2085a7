package crossval

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate"
)

// Transform is the scale on which an output is fitted.
type Transform int

const (
	// Identity fits the output as it is.
	Identity Transform = iota
	// Log fits its natural logarithm; outputs must be positive.
	Log
	// Logit fits log(y/(1-y)); outputs must lie between 0 and 1.
	Logit
)

// Transforms lists them all, the simplest first.
var Transforms = []Transform{Identity, Log, Logit}

// String returns the name used in tables.
func (t Transform) String() string {
	switch t {
	case Log:
		return "log"
	case Logit:
		return "logit"
	default:
		return "identity"
	}
}

// TransformError reports an output outside the domain of its transform.
type TransformError struct {
	Transform Transform
	Row       int
	Value     float64
}

func (e *TransformError) Error() string {
	return fmt.Sprintf("sample %d: output %g has no %s", e.Row, e.Value, e.Transform)
}

// Valid returns nil when every output lies in the domain.
func (t Transform) Valid(y []float64) error {
	for i, v := range y {
		if t == Log && !(v > 0) || t == Logit && !(v > 0 && v < 1) {
			return &TransformError{t, i, v}
		}
	}
	return nil
}

func (t Transform) apply(y float64) float64 {
	switch t {
	case Log:
		return math.Log(y)
	case Logit:
		return math.Log(y) - math.Log1p(-y)
	default:
		return y
	}
}

// largestExponent bounds the transformed value on its way back: e^700 is just
// below the largest floating-point number.
const largestExponent = 700

// undo returns the output of a transformed value and its derivative. Beyond
// the largest exponent the output is held and the derivative is 0.
func (t Transform) undo(v float64) (y, slope float64) {
	if t == Identity {
		return v, 1
	}
	held := math.Min(math.Max(v, -largestExponent), largestExponent)
	if t == Log {
		y = math.Exp(held)
		slope = y
	} else {
		y = 1 / (1 + math.Exp(-held))
		slope = y * (1 - y)
	}
	if held != v {
		slope = 0
	}
	return y, slope
}

// Transformed is a configuration that fits the transformed output. Its fit
// predicts in the unit of the output: the mean is the transformed mean taken
// back (the median of the prediction), the deviation follows by first order.
type Transformed struct {
	Model     surrogate.Model
	Transform Transform
}

// Kind returns the kind of the model.
func (m Transformed) Kind() string { return m.Model.Kind() }

// Fit implements surrogate.Model; it returns *TransformError for an output
// outside the domain.
func (m Transformed) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	if err := surrogate.Check(x, y, 1); err != nil {
		return nil, err
	}
	if err := m.Transform.Valid(y); err != nil {
		return nil, err
	}
	if m.Transform == Identity {
		return m.Model.Fit(ctx, x, y)
	}
	moved := make([]float64, len(y))
	for i, v := range y {
		moved[i] = m.Transform.apply(v)
	}
	inner, err := m.Model.Fit(ctx, x, moved)
	if err != nil {
		return nil, err
	}
	f := &transformed{Fitted: inner, transform: m.Transform, loo: make([]float64, len(y)), deviation: make([]float64, len(y))}
	for i, v := range inner.LeaveOneOut() {
		value, slope := m.Transform.undo(v)
		f.loo[i], f.deviation[i] = value, slope*inner.LeaveOneOutDeviation()[i]
	}
	return f, nil
}

// transformed takes a fit back to the unit of the output.
type transformed struct {
	surrogate.Fitted
	transform      Transform
	loo, deviation []float64
}

func (f *transformed) Mean(x []float64) float64 {
	y, _ := f.transform.undo(f.Fitted.Mean(x))
	return y
}

func (f *transformed) Predict(x []float64) (mean, deviation float64) {
	v, s := f.Fitted.Predict(x)
	y, slope := f.transform.undo(v)
	return y, slope * s
}

// PredictMany implements surrogate.Batch.
func (f *transformed) PredictMany(points [][]float64, mean, deviation []float64, jobs int) {
	surrogate.PredictMany(f.Fitted, points, mean, deviation, jobs)
	for i, v := range mean {
		y, slope := f.transform.undo(v)
		mean[i], deviation[i] = y, slope*deviation[i]
	}
}

func (f *transformed) Gradient(dst, x []float64) float64 {
	y, slope := f.transform.undo(f.Fitted.Gradient(dst, x))
	for j := range dst {
		dst[j] *= slope
	}
	return y
}

func (f *transformed) LeaveOneOut() []float64          { return f.loo }
func (f *transformed) LeaveOneOutDeviation() []float64 { return f.deviation }

func (f *transformed) Describe() string {
	return f.Fitted.Describe() + " of the " + f.transform.String()
}

func (f *transformed) Warm() surrogate.Model { return Transformed{f.Fitted.Warm(), f.transform} }
