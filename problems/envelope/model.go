package envelope

import (
	"context"

	"rampwright/problems"
)

// Condition is one point of the map: Mach number, and incidence in radians,
// positive toward the body.
type Condition struct {
	Mach      float64
	Incidence float64
}

// Model is a frozen inlet at any condition. It is safe for concurrent use.
type Model interface {
	// Quantities lists what At fills, in order.
	Quantities() []problems.Quantity
	// At fills dst; the error reports a model that could not be run.
	At(ctx context.Context, at Condition, dst *problems.Evaluation) (Outcome, error)
}

// Outcome is how a flow was found.
type Outcome struct {
	Status error // why the captured stream does not reach the throat, nil where it does
	Traced bool  // wave by wave, not by the chain of straight shocks
}

// Sample is a frozen inlet at one condition.
type Sample struct {
	Condition
	Outcome
	State  State
	Missed []string // the limits that do not hold
	Exact  *problems.Evaluation
}

// sample evaluates a model at one condition.
func (s *survey) sample(ctx context.Context, model Model, at Condition) (Sample, error) {
	exact := problems.NewEvaluation(len(s.quantities))
	outcome, err := model.At(ctx, at, exact)
	if err != nil {
		return Sample{}, err
	}
	sample := Sample{Condition: at, Outcome: outcome, Exact: exact}
	sample.State, sample.Missed = s.stateOf(&sample), s.missedBy(exact)
	return sample, nil
}
