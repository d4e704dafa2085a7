// Package surrogate states what every surrogate kind offers: an immutable
// configuration that fits, and a fitted model that predicts. Around it stand
// the checks on data, the scalings, the figures of quality that every kind
// shares, and the judgement of how far a prediction can be trusted.
//
// Inputs are points of the unit cube: the caller scales its box to [0,1]^d.
// Outputs are in the caller's own unit; a kind standardises them inside and
// undoes it on the way out.
package surrogate

import (
	"context"
	"sync"
)

// Model is a configuration. It never changes; Fit returns a new value.
type Model interface {
	// Kind is the short name shown in tables: "polynomial chaos", "Gaussian process".
	Kind() string
	// Fit fits to n samples x[i] in [0,1]^d with finite outputs y[i]. It returns
	// *DataError for data no fit can use, and the context's error when cancelled.
	Fit(ctx context.Context, x [][]float64, y []float64) (Fitted, error)
}

// Fitted is a fitted model, safe for concurrent use. Points have the dimension
// of the samples; a wrong length is a programmer's mistake and panics.
type Fitted interface {
	// Mean returns the mean at x. It does not allocate and costs far less than
	// Predict.
	Mean(x []float64) float64
	// Predict returns the mean and the standard deviation at x.
	Predict(x []float64) (mean, deviation float64)
	// Gradient stores d(mean)/dx in dst (length d) and returns the mean.
	Gradient(dst, x []float64) float64
	// LeaveOneOut returns the closed-form leave-one-out predictions, one a
	// sample. The caller must not change the slice.
	LeaveOneOut() []float64
	// LeaveOneOutDeviation returns their standard deviations.
	LeaveOneOutDeviation() []float64
	// Complexity orders kinds when their errors tie: smaller is simpler.
	Complexity() int
	// Describe returns a short description: "degree 4, 70 terms".
	Describe() string
	// Warm returns the configuration that refits this very structure cheaply,
	// starting from what this fit found, after a few samples were added.
	Warm() Model
}

// Batch is implemented by fits that predict many points faster than one by one.
type Batch interface {
	// PredictMany stores the means and standard deviations at the points in mean
	// and deviation, which have their length, on up to jobs goroutines (0 means
	// 1). The result does not depend on their number.
	PredictMany(points [][]float64, mean, deviation []float64, jobs int)
}

// PredictMany predicts many points by any fit: by its own PredictMany where it
// has one, else one by one, shared among the jobs (see Batch).
func PredictMany(f Fitted, points [][]float64, mean, deviation []float64, jobs int) {
	if batch, ok := f.(Batch); ok {
		batch.PredictMany(points, mean, deviation, jobs)
		return
	}
	if len(mean) != len(points) || len(deviation) != len(points) {
		panic("surrogate: results of the wrong length")
	}
	jobs = max(jobs, 1)
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			for i := job; i < len(points); i += jobs {
				mean[i], deviation[i] = f.Predict(points[i])
			}
		})
	}
	group.Wait()
}
