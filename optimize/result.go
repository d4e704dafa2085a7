package optimize

import (
	"fmt"

	"rampwright/constraints"
	"rampwright/problems"
)

// Status says how a design ended and so what Best means.
type Status int

const (
	// Verified: both exact routes agree on Best (where the problem has but one, it
	// gave the same values again), every limit holds exactly, and the surrogates
	// predicted it within the agreement asked for.
	Verified Status = iota
	// NotVerified: Best holds every limit, but the surrogates missed it by more
	// than the agreement, or the exact routes or the repetition differ.
	NotVerified
	// Infeasible: no exact evaluation holds every limit; Best has the least sum
	// of scaled violations.
	Infeasible
	// Stopped: time ran out; Best is the best evaluation so far: feasible, or the
	// one of least violation.
	Stopped
	// Interrupted: the user stopped it; Best as for Stopped.
	Interrupted
)

// String returns the word used in results.
func (s Status) String() string {
	switch s {
	case Verified:
		return "verified"
	case NotVerified:
		return "not_verified"
	case Infeasible:
		return "infeasible"
	case Stopped:
		return "stopped"
	case Interrupted:
		return "interrupted"
	default:
		return fmt.Sprintf("status %d", int(s))
	}
}

// Repetition says what a second run of the one exact route showed: that the model
// is one, and not what the model is worth.
type Repetition int

const (
	// NotRepeated: a second route stands in its place, or the search was ended.
	NotRepeated Repetition = iota
	// Same: every value came out the same to the last bit.
	Same
	// Differs: some value did not.
	Differs
)

// Candidate is one design with its evidence.
type Candidate struct {
	X      []float64 // in the variables' units
	Exact  *problems.Evaluation
	Second *problems.Evaluation // by the second route; nil where the problem has none
	// RouteGap is the largest relative difference between the routes; NaN without
	// a second one, +Inf where only one has a value.
	RouteGap float64
	// Broken are the limits that hold on Exact and not on Second, among those on
	// quantities that the second route resolves better (Evaluation.Bounds).
	Broken []constraints.Check
	// Repetition is what a problem without a second route gave when it was run again.
	Repetition Repetition
	// Predicted is what the surrogates said of X before its exact evaluation
	// joined them, by quantity index: the exact value for explicit quantities,
	// NaN for those without a surrogate.
	Predicted    []float64
	AimExact     float64
	AimPredicted float64
	// SurrogateError is the largest error of Predicted over aim and limits,
	// scaled.
	SurrogateError float64
	Assessment     constraints.Assessment
}

// Sample is one exact evaluation and what it was for.
type Sample struct {
	Purpose    string // "sample" or "infill"
	X          []float64
	Evaluation *problems.Evaluation
}

// Counts are the evaluations spent, by purpose.
type Counts struct {
	Samples   int
	Infill    int
	Rounds    int // of infill: what a round proposes is evaluated side by side
	Verify    int // by the second route
	Surrogate int
}

// Step is one line of a design's history.
type Step struct {
	Evaluations int
	Aim         float64 // best feasible so far; NaN before the first
	Violation   float64 // least so far
	Error       float64 // of the surrogates at the latest proposal, scaled
	Radius      float64 // of the trust region, in unit-cube lengths
}

// Result is the outcome of a design and its evidence.
type Result struct {
	Status     Status
	Best       Candidate
	Candidates []Candidate // Best first, then distinct runners-up
	Fits       []Fit
	Counts     Counts
	Sampled    Step   // where the samples left the search
	History    []Step // a line a round of infill
	Rows       []constraints.Row
	Samples    []Sample // every exact evaluation, in order
	// Why is one sentence on the way the search ended.
	Why string
}

// Event is something an observer may show. Events come from one goroutine, in an
// order that does not depend on the number of workers.
type Event struct {
	Phase       string // "samples", "fits", "infill", "verify"
	Evaluations int
	Planned     int // evaluations if all infill is spent
	Aim         float64
	Violation   float64
}

// Observer receives events; nil ignores them.
type Observer func(Event)
