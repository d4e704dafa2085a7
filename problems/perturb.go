package problems

import "context"

// Scatter is one uncertain input of a built design: an offset from the drawing
// or from the flight condition, normal about 0 with Deviation in Unit, truncated
// at TruncatedAt deviations.
type Scatter struct {
	Name      string
	Unit      string
	Deviation float64
}

// TruncatedAt is where the normal distribution of a Scatter ends, in deviations:
// a part further off is found by inspection, a condition further off is not flown.
const TruncatedAt = 4

// Perturbable is a problem whose designs can be evaluated as built and flown,
// away from the drawing, so that a search of tolerances sees no physics.
type Perturbable interface {
	Problem
	// Scatter lists the uncertain inputs, in a fixed order.
	Scatter() []Scatter
	// EvaluateBuilt fills dst for the design at x with offsets, one an input in its
	// unit. Zero offsets are the design as drawn. Errors are those of Evaluate.
	EvaluateBuilt(ctx context.Context, x, offsets []float64, dst *Evaluation) error
}
