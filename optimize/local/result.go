package local

import (
	"errors"
	"fmt"
	"slices"
)

// Settings steer a solve. The zero value asks for the defaults.
type Settings struct {
	Tolerance   float64 // largest KKT residual of a converged point; default 1e-9
	Feasibility float64 // largest violation of a converged point, constraint units; default 1e-10
	Iterations  int     // quadratic programs before giving up; default 200
	// Rounding is the relative error of f (absolute where |f| < 1) and of a
	// constraint's change across the box; default 1e-12. Sums whose terms cancel
	// have more: say so, or the line search takes their noise for a rise.
	Rounding float64
}

// Validate reports every setting out of range, each a *ProgramError.
func (s Settings) Validate() error {
	var wrong []error
	for _, fraction := range []struct {
		name  string
		value float64
	}{{"Tolerance", s.Tolerance}, {"Feasibility", s.Feasibility}, {"Rounding", s.Rounding}} {
		if !(fraction.value >= 0 && fraction.value < 1) {
			wrong = append(wrong, &ProgramError{fraction.name, fmt.Sprintf("%g is not in [0, 1)", fraction.value)})
		}
	}
	if s.Iterations < 0 {
		wrong = append(wrong, &ProgramError{"Iterations", fmt.Sprintf("%d is negative", s.Iterations)})
	}
	return errors.Join(wrong...)
}

func (s Settings) withDefaults() Settings {
	if s.Tolerance == 0 {
		s.Tolerance = 1e-9
	}
	if s.Feasibility == 0 {
		s.Feasibility = 1e-10
	}
	if s.Iterations == 0 {
		s.Iterations = 200
	}
	if s.Rounding == 0 {
		s.Rounding = 1e-12
	}
	return s
}

// Status says how a solve ended and so what X means.
type Status int

const (
	// Converged: X is feasible and satisfies the first-order conditions.
	Converged Status = iota
	// IterationLimit: X is the last point of an unfinished solve.
	IterationLimit
	// Stalled: rounding or a kink leaves no step that improves X; KKT and
	// Violation say how good it is.
	Stalled
	// Infeasible: X is a stationary point of the l1 violation, which stays
	// above zero near it. Multipliers are those of the violation, not of f.
	Infeasible
	// Inconsistent: box and linear rows have no common point; X is in the box
	// with the least l1 violation of the rows.
	Inconsistent
	// Undefined: the functions have no value or no gradient at the projected start.
	Undefined
	// Cancelled: the context ended; X is the last accepted point, or the start.
	Cancelled
)

// String returns the word used in reports.
func (s Status) String() string {
	switch s {
	case Converged:
		return "converged"
	case IterationLimit:
		return "iteration limit"
	case Stalled:
		return "stalled"
	case Infeasible:
		return "infeasible"
	case Inconsistent:
		return "inconsistent linear rows"
	case Undefined:
		return "undefined start"
	case Cancelled:
		return "cancelled"
	default:
		return fmt.Sprintf("status %d", int(s))
	}
}

// Result is a point and its evidence. Multipliers satisfy, at a converged point,
//
//	grad f + sum_i Multipliers_i grad c_i + AtMost.A' RowsAtMost + Equal.A' RowsEqual + FaceHigh - FaceLow = 0
//
// all of them >= 0 but those of equalities; without grad f where Elastic.
type Result struct {
	X           []float64
	F           float64
	Constraints []float64

	Multipliers []float64
	RowsAtMost  []float64
	RowsEqual   []float64
	FaceLow     []float64
	FaceHigh    []float64

	// Elastic tells that the solve ended while it minimised the violation alone
	// (Infeasible always does): the multipliers and KKT are of that problem.
	Elastic bool
	// KKT is the larger of the scaled stationarity and the scaled
	// complementarity (see kktResidual); NaN where none was measured.
	KKT       float64
	Violation float64 // worst violation of constraints and linear rows

	Iterations int
	Values     int // evaluations of Value
	Gradients  int // evaluations of Gradient
	Status     Status
}

// Clone returns a copy that shares no memory with a Workspace.
func (r *Result) Clone() *Result {
	clone := *r
	for _, s := range []*[]float64{
		&clone.X, &clone.Constraints, &clone.Multipliers,
		&clone.RowsAtMost, &clone.RowsEqual, &clone.FaceLow, &clone.FaceHigh,
	} {
		*s = slices.Clone(*s)
	}
	return &clone
}
