package problems

import (
	"context"
	"math"
)

// Variable is one searched input: its box is closed, Low < High, in Unit.
type Variable struct {
	Name string
	Unit string
	Low  float64
	High float64
}

// Geometry is the point of quantities that belong to the frozen geometry and
// not to a flight point.
const Geometry = "geometry"

// Quantity names one response of a problem.
//
// A quantity that is "the least over" several shocks or ramps is a group: each
// member is a Quantity of its own with the same Name and Point, told apart by
// Member; Member is empty for a quantity that stands alone.
type Quantity struct {
	Name   string // catalogue name, unit suffix included
	Point  string // flight point, or Geometry
	Member string // "ramp 2", "lip shock", ..; empty when it stands alone
	Unit   string // "" for a ratio
	// Explicit marks a quantity that costs no run of the true model: it follows
	// from the variables alone (turning, lengths, contraction) and is imposed
	// exactly, never through a surrogate. See the Explicit interface.
	Explicit bool
}

// Evaluation is the caller's buffer for one design: Values[i] and Reasons[i]
// belong to quantity i of the problem. A missing value is NaN with its reason;
// a present one has a nil reason.
type Evaluation struct {
	Values  []float64
	Reasons []error
	// Bounds is filled by a Verifier where both routes are numerical: how far value
	// i may lie from that of Evaluate by the error bounds of both, beyond rounding.
	// It is nil where every value is exact.
	Bounds []float64
}

// NewEvaluation returns a buffer for n quantities, every value missing.
func NewEvaluation(n int) *Evaluation {
	e := &Evaluation{Values: make([]float64, n), Reasons: make([]error, n)}
	e.Clear()
	return e
}

// Clear marks every value as missing without a reason.
func (e *Evaluation) Clear() {
	for i := range e.Values {
		e.Values[i] = math.NaN()
		e.Reasons[i] = nil
	}
	e.Bounds = nil
}

// Set stores a present value.
func (e *Evaluation) Set(i int, value float64) { e.Values[i], e.Reasons[i] = value, nil }

// Miss marks value i as missing for the reason given.
func (e *Evaluation) Miss(i int, reason error) { e.Values[i], e.Reasons[i] = math.NaN(), reason }

// Widen adds to the bound of value i.
func (e *Evaluation) Widen(i int, by float64) {
	if e.Bounds == nil {
		e.Bounds = make([]float64, len(e.Values))
	}
	e.Bounds[i] += by
}

// Bound returns the bound of value i, 0 where it is exact.
func (e *Evaluation) Bound(i int) float64 {
	if e.Bounds == nil {
		return 0
	}
	return e.Bounds[i]
}

// Clone returns an independent copy.
func (e *Evaluation) Clone() *Evaluation {
	return &Evaluation{
		Values:  append([]float64(nil), e.Values...),
		Reasons: append([]error(nil), e.Reasons...),
		Bounds:  append([]float64(nil), e.Bounds...),
	}
}

// Problem is the true model as a search sees it. Variables and Quantities are
// fixed for its lifetime and in a fixed order. Implementations are safe for
// concurrent use.
type Problem interface {
	Variables() []Variable
	Quantities() []Quantity
	// Evaluate fills dst (sized for Quantities) at x (one value a variable).
	// A design that physics refuses is a filled evaluation with reasons, not an
	// error; the error reports a model that could not be run (cancelled
	// context, a failing external program).
	Evaluate(ctx context.Context, x []float64, dst *Evaluation) error
}

// Explicit is implemented by a problem with quantities marked Explicit.
// EvaluateExplicit fills only those entries of dst, at no cost in model runs.
type Explicit interface {
	EvaluateExplicit(x []float64, dst *Evaluation)
}

// Linear is implemented by a problem some of whose explicit quantities are linear
// in the variables, so that a search can keep limits on them at every step.
// LinearForm returns quantity i as sum(a_j x_j) + b, or ok false.
type Linear interface {
	LinearForm(i int) (a []float64, b float64, ok bool)
}

// Verifier is implemented by a problem that can be computed by a second exact
// route which shares nothing with Evaluate but constants and definitions. Both must
// agree to rounding and, where dst carries Bounds, to those.
type Verifier interface {
	Verify(ctx context.Context, x []float64, dst *Evaluation) error
}
