package local

import (
	"errors"
	"fmt"
	"math"
)

// Rows are linear rows A x compared with B, A row-major with len(B) rows.
type Rows struct {
	A []float64
	B []float64
}

// Program is
//
//	minimise    f(x)
//	subject to  Low <= x <= High
//	            AtMost.A x <= AtMost.B,  Equal.A x = Equal.B
//	            c_i(x) = 0   for the first Equalities constraints
//	            c_i(x) <= 0  for the Inequalities that follow
//
// Low = High holds a variable fixed. The box is the scale of the search: it need
// not be tight, but where a side is infinite the variable should be of order 1.
// Constraints are best stated so that 1 is a large violation: violations and
// multipliers are reported in the units given.
type Program struct {
	Low, High    []float64
	AtMost       Rows
	Equal        Rows
	Equalities   int
	Inequalities int
	// Value stores the constraints in c and returns f. A result that is not
	// finite anywhere marks x as undefined: the line search backs away from it.
	Value func(x, c []float64) float64
	// Gradient stores df/dx in grad and dc_i/dx_j in jac[i*n+j]. It is asked only
	// at the point of the latest Value, so the two may share work.
	Gradient func(x, grad, jac []float64)
}

// Dimension is the number of variables.
func (p *Program) Dimension() int { return len(p.Low) }

// Constraints is the number of nonlinear constraints.
func (p *Program) Constraints() int { return p.Equalities + p.Inequalities }

// ProgramError is one thing wrong with a Program or its start.
type ProgramError struct {
	Field string
	Why   string
}

func (e *ProgramError) Error() string { return e.Field + ": " + e.Why }

// Validate reports everything wrong at once, each a *ProgramError.
func (p *Program) Validate() error {
	var wrong []error
	report := func(field, format string, args ...any) {
		wrong = append(wrong, &ProgramError{Field: field, Why: fmt.Sprintf(format, args...)})
	}
	n := p.Dimension()
	if n == 0 {
		report("Low", "no variables")
	}
	if len(p.High) != n {
		report("High", "has %d entries, Low has %d", len(p.High), n)
	}
	for j := 0; j < min(n, len(p.High)); j++ {
		if low, high := p.Low[j], p.High[j]; !(low <= high) || math.IsInf(low, 1) || math.IsInf(high, -1) {
			report("Low", "variable %d has the empty range [%g, %g]", j, low, high)
		}
	}
	checkRows := func(name string, rows Rows) {
		if len(rows.A) != len(rows.B)*n {
			report(name, "has %d coefficients for %d rows of %d", len(rows.A), len(rows.B), n)
		}
		if !finite(rows.A...) || !finite(rows.B...) {
			report(name, "has a number that is not finite")
		}
	}
	checkRows("AtMost", p.AtMost)
	checkRows("Equal", p.Equal)
	if p.Equalities < 0 || p.Inequalities < 0 {
		report("Equalities", "negative number of constraints")
	}
	if p.Value == nil {
		report("Value", "missing")
	}
	if p.Gradient == nil {
		report("Gradient", "missing")
	}
	return errors.Join(wrong...)
}

// finite tells whether all values are.
func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}
