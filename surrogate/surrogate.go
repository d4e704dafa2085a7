// Package surrogate states what every surrogate kind offers: an immutable
// configuration that fits, and a fitted model that predicts.
//
// Inputs are points of the unit cube: the caller scales its box to [0,1]^d.
// Outputs are in the caller's own unit; a kind standardises them inside and
// undoes it on the way out.
package surrogate

import "context"

// Model is a configuration. It never changes; Fit returns a new value.
type Model interface {
	// Kind is the short name shown in tables: "polynomial chaos", "Gaussian process".
	Kind() string
	// Fit fits to n samples x[i] in [0,1]^d with finite outputs y[i]. It returns
	// *DataError for data no fit can use, and the context's error when cancelled.
	Fit(ctx context.Context, x [][]float64, y []float64) (Fitted, error)
}

// Fitted is a fitted model, safe for concurrent use.
type Fitted interface {
	// Predict returns the mean and the standard deviation at x.
	Predict(x []float64) (mean, deviation float64)
	// Gradient stores d(mean)/dx in dst (length d) and returns the mean.
	Gradient(dst, x []float64) float64
	// LeaveOneOut returns the closed-form leave-one-out predictions, one a sample.
	LeaveOneOut() []float64
	// Complexity orders kinds when their errors tie: smaller is simpler.
	Complexity() int
	// Describe returns a short description: "degree 4, 70 terms".
	Describe() string
}
