// Package global searches the unit cube for the best point of a constrained
// objective that may be rugged, multimodal or undefined in places: differential
// evolution (Storn & Price 1997) with feasibility rules (Deb 2000), driven by
// the population loop of a general evolution library. Its answer is a start for
// a local solver, not a converged optimum.
package global

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Objective returns the value to be lowered at x in [0,1]^n and by how much x
// violates its constraints (0 or less: feasible). A result that is not finite
// counts as undefined: infeasible by a large amount. It must not keep x, and
// must be safe for concurrent use when Settings.Jobs is above 1.
type Objective func(x []float64) (f, violation float64)

// Settings steer a search. The zero value asks for the defaults.
//
// A Factor of 0.6 costs a quarter more evaluations and keeps a population from
// contracting early in a narrow, curved feasible strip (measured on g06 and
// Rastrigin's function).
type Settings struct {
	Agents      int         // points in the population, at least 4; default 50
	Generations int         // default 200
	Factor      float64     // weight of the difference, in (0, 2]; default 0.5 (see below)
	Crossover   float64     // probability to take a coordinate of the mutant, in (0, 1]; default 0.9
	Collapse    float64     // largest extent of a collapsed population; default 1e-8
	Separation  float64     // least distance between two of Result.Points; default 0.05
	Points      int         // most points in Result.Points; default 10
	Seed        uint64      // of every random draw
	Jobs        int         // evaluations side by side, default 1; never changes the result
	Seeds       [][]float64 // points planted in the first population, at most Agents
}

// SettingError is one setting out of range.
type SettingError struct {
	Field string
	Why   string
}

func (e *SettingError) Error() string { return e.Field + ": " + e.Why }

// Validate reports everything wrong with the settings at once, each a
// *SettingError.
func (s Settings) Validate() error {
	s = s.withDefaults()
	var wrong []error
	require := func(ok bool, field, format string, args ...any) {
		if !ok {
			wrong = append(wrong, &SettingError{Field: field, Why: fmt.Sprintf(format, args...)})
		}
	}
	require(s.Agents >= 4, "Agents", "%d is below 4", s.Agents)
	require(s.Generations > 0, "Generations", "%d is not positive", s.Generations)
	require(s.Factor > 0 && s.Factor <= 2, "Factor", "%g is not in (0, 2]", s.Factor)
	require(s.Crossover > 0 && s.Crossover <= 1, "Crossover", "%g is not in (0, 1]", s.Crossover)
	require(s.Collapse > 0 && s.Collapse < 1, "Collapse", "%g is not in (0, 1)", s.Collapse)
	require(s.Separation > 0 && s.Separation < 1, "Separation", "%g is not in (0, 1)", s.Separation)
	require(s.Points > 0, "Points", "%d is not positive", s.Points)
	require(s.Jobs > 0, "Jobs", "%d is not positive", s.Jobs)
	require(len(s.Seeds) <= s.Agents, "Seeds", "%d do not fit in %d agents", len(s.Seeds), s.Agents)
	for i, x := range s.Seeds {
		for _, v := range x {
			require(v >= 0 && v <= 1, "Seeds", "point %d leaves the unit cube: %g", i, v)
		}
	}
	return errors.Join(wrong...)
}

// validate adds what depends on the search to the errors of its settings.
func validate(n int, objective Objective, settings Settings) error {
	wrong := []error{settings.Validate()}
	if n < 1 {
		wrong = append(wrong, &SettingError{"dimension", fmt.Sprintf("%d is not positive", n)})
	}
	if objective == nil {
		wrong = append(wrong, &SettingError{"objective", "missing"})
	}
	for i, x := range settings.Seeds {
		if len(x) != n {
			wrong = append(wrong, &SettingError{"Seeds", fmt.Sprintf("point %d has %d entries for %d variables", i, len(x), n)})
		}
	}
	return errors.Join(wrong...)
}

func (s Settings) withDefaults() Settings {
	integer := func(v *int, value int) {
		if *v == 0 {
			*v = value
		}
	}
	number := func(v *float64, value float64) {
		if *v == 0 {
			*v = value
		}
	}
	integer(&s.Agents, 50)
	integer(&s.Generations, 200)
	integer(&s.Points, 10)
	integer(&s.Jobs, 1)
	number(&s.Factor, 0.5)
	number(&s.Crossover, 0.9)
	number(&s.Collapse, 1e-8)
	number(&s.Separation, 0.05)
	return s
}

// Status says how a search ended. In every status X is the best point seen.
type Status int

const (
	// Collapsed: all agents stand together; more generations change nothing.
	Collapsed Status = iota
	// GenerationLimit: the budget ran out.
	GenerationLimit
	// Cancelled: the context ended.
	Cancelled
)

// String returns the word used in reports.
func (s Status) String() string {
	switch s {
	case Collapsed:
		return "collapsed"
	case GenerationLimit:
		return "generation limit"
	case Cancelled:
		return "cancelled"
	default:
		return fmt.Sprintf("status %d", int(s))
	}
}

// Point is a point with what the objective says of it.
type Point struct {
	X         []float64
	F         float64
	Violation float64
}

func (p Point) clone() Point {
	p.X = slices.Clone(p.X)
	return p
}

// Result is the best point seen, and distinct points of the last population from
// which to polish, best first; points at which the objective is undefined are
// not among them.
type Result struct {
	Point
	Points      []Point
	Generations int
	Evaluations int
	Status      Status
}

// Undefined is the value and the violation given to a point at which the
// objective is not finite: above anything a real objective returns, and finite.
const Undefined = math.MaxFloat64

// Better tells whether p precedes q by the feasibility rules: feasible before
// infeasible, then less violation, then the lower value (Deb 2000, from memory).
func (p Point) Better(q Point) bool {
	if p.Violation != q.Violation {
		return p.Violation < q.Violation
	}
	return p.F < q.F
}

// judged returns the point x with the objective's answer made finite.
func judged(x []float64, f, violation float64) Point {
	if math.IsNaN(f) || math.IsInf(f, 0) || math.IsNaN(violation) || math.IsInf(violation, 0) {
		return Point{X: x, F: Undefined, Violation: Undefined}
	}
	return Point{X: x, F: f, Violation: max(violation, 0)}
}
