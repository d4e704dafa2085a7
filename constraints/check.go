package constraints

import (
	"errors"
	"math"

	"rampwright/problems"
)

// ActiveMargin is the scaled margin below which a limit counts as active.
const ActiveMargin = 1e-6

// Rounding is the scaled margin below zero that still counts as met: a design
// stated to stand on a limit, such as 8 + 4 = 12 degrees, misses it in the last
// digit.
const Rounding = 1e-14

// Check is a row judged on an evaluation.
type Check struct {
	Row
	Value   float64 // NaN where missing
	Margin  float64 // in the quantity's unit; NaN where missing
	Missing error   // reason of a missing value
	// Applies is false where the quantity is not defined by its own terms; the
	// limit then asks nothing.
	Applies bool
	Met     bool
	Active  bool
	// Price is the gain of the aim for each unit by which the limit is loosened;
	// zero where it is not active, filled by the search.
	Price float64
	// Drives is the index of the variable the limit holds back most, -1 where it has
	// no price; filled by the search.
	Drives int
	// PriceRange is by how much the limit can be loosened, in the quantity's unit,
	// before the gain no longer follows the price, to first order; NaN without a
	// price. PriceEnd tells what ends it. Filled by the search.
	PriceRange float64
	PriceEnd   PriceEnd
}

// PriceEnd is what ends the range of a price.
type PriceEnd struct {
	Kind  PriceEndKind
	Index int // of a check, or of a variable for the ends and bounds
}

// PriceEndKind says in which way the range of a price ends.
type PriceEndKind int

const (
	PriceEndUnknown PriceEndKind = iota
	LimitMet                     // another limit is met
	LowerEndMet                  // a variable reaches the lower end of its range
	UpperEndMet                  // or the upper
	LimitReleased                // another limit the design stood on is left
	BoundReleased                // a variable leaves the end of its range
	PriceFalls                   // the price itself falls as the limit is loosened
	PriceRises                   // or rises
)

// Assessment is every row judged on one evaluation.
type Assessment struct {
	Checks []Check
	// Violation is the sum of scaled violations; a missing value counts as
	// MissingViolation.
	Violation float64
	// Worst is the largest scaled violation.
	Worst    float64
	Feasible bool
}

// MissingViolation is the scaled violation of a limit whose quantity has no
// value: larger than any plausible one, so that a candidate with a known flow is
// always preferred.
const MissingViolation = 10

// Assess judges rows on an evaluation.
func Assess(rows []Row, evaluation *problems.Evaluation) Assessment {
	result := Assessment{Checks: make([]Check, len(rows)), Feasible: true}
	for i := range rows {
		check := judge(&rows[i], evaluation)
		if !check.Met {
			result.Feasible = false
			violation := float64(MissingViolation)
			if check.Missing == nil {
				violation = -check.Margin / check.Scale
			}
			result.Violation += violation
			result.Worst = math.Max(result.Worst, violation)
		}
		result.Checks[i] = check
	}
	return result
}

func judge(row *Row, evaluation *problems.Evaluation) Check {
	check := Check{Row: *row, Value: evaluation.Values[row.Index], Applies: true, Drives: -1, PriceRange: math.NaN()}
	if math.IsNaN(check.Value) {
		check.Margin = math.NaN()
		check.Missing = evaluation.Reasons[row.Index]
		if check.Missing == nil {
			check.Missing = errNoValue
		}
		var notApplicable *problems.NotApplicable
		check.Applies = !errors.As(check.Missing, &notApplicable)
		check.Met = !check.Applies
		return check
	}
	check.Margin = row.Margin(check.Value)
	check.Met = check.Margin >= -Rounding*row.Scale
	check.Active = math.Abs(check.Margin) <= ActiveMargin*row.Scale
	return check
}

var errNoValue = &problems.Status{Phrase: "no value"}
