package optimize

import (
	"errors"
	"fmt"

	"rampwright/problems"
)

// Task is what to search: a problem, the limits on its quantities and the aim.
type Task struct {
	Problem problems.Problem
	Limits  []problems.Limit
	Aim     problems.Aim
	// Starts are designs, in the variables' units, that Design evaluates ahead of
	// its samples and learns from like them: the answer to a neighbouring task. A
	// value outside its range is taken at the nearer end; a design that repeats an
	// earlier one is left out. They count as samples, over Settings.Samples.
	Starts [][]float64
}

// BadStart is a start that is no design of the problem.
type BadStart struct {
	Index  int // in Task.Starts
	Values int // it has
	Wanted int
}

func (e *BadStart) Error() string {
	if e.Values != e.Wanted {
		return fmt.Sprintf("start %d has %d values for %d variables", e.Index, e.Values, e.Wanted)
	}
	return fmt.Sprintf("start %d has a value that is no number", e.Index)
}

// Settings steer a design. The zero value asks for the defaults.
type Settings struct {
	Samples int   // exact evaluations before the first fit; default 15 a variable
	Infill  int   // exact evaluations the search may add; default 10 a variable
	Seed    int64 // of every random choice; default 1
	// Batch is how many exact evaluations a round proposes, for models that run side
	// by side: it saves rounds at the price of evaluations. 0 leaves it to the search,
	// one or two a round. Unlike Jobs it decides what is evaluated.
	Batch     int
	Agreement float64 // largest error of the surrogates at the optimum, scaled; default 1e-3
	Jobs      int     // evaluations and fits run side by side; default 1. No result depends on it
}

// MostBatch bounds the evaluations of a round: beyond it a round learns nothing that
// the next would not choose better.
const MostBatch = 32

const (
	defaultAgreement = 1e-3
	samplesAVariable = 15
	infillAVariable  = 10
)

// WithDefaults fills the zero fields for a problem of n variables.
func (s Settings) WithDefaults(n int) Settings {
	if s.Samples == 0 {
		s.Samples = samplesAVariable * n
	}
	if s.Infill == 0 {
		s.Infill = infillAVariable * n
	}
	if s.Seed == 0 {
		s.Seed = 1
	}
	if s.Agreement == 0 {
		s.Agreement = defaultAgreement
	}
	if s.Jobs == 0 {
		s.Jobs = 1
	}
	return s
}

// Validate reports every setting out of range for a problem of n variables.
func (s Settings) Validate(n int) error {
	var wrong []error
	if least := n + 2; s.Samples < least {
		wrong = append(wrong, fmt.Errorf("samples %d: a fit in %d variables needs at least %d", s.Samples, n, least))
	}
	if s.Infill < 1 {
		wrong = append(wrong, fmt.Errorf("infill %d: at least one evaluation must confirm the optimum", s.Infill))
	}
	if !(s.Agreement > 0 && s.Agreement < 1) {
		wrong = append(wrong, fmt.Errorf("agreement %g is not within (0, 1)", s.Agreement))
	}
	if s.Batch < 0 || s.Batch > MostBatch {
		wrong = append(wrong, fmt.Errorf("batch %d is not within 0 to %d", s.Batch, MostBatch))
	}
	if s.Jobs < 1 {
		wrong = append(wrong, fmt.Errorf("jobs %d: at least one", s.Jobs))
	}
	return errors.Join(wrong...)
}

// ErrNothingToSearch is the answer to a problem without variables.
var ErrNothingToSearch = errors.New("the problem has no searched variable")
