// Package constraints turns limits into rows, one a response, and judges an
// exact evaluation against them: margins, violation, the active set. It knows no
// physics.
package constraints

import (
	"fmt"
	"math"

	"rampwright/problems"
)

// Row is one limit on one response of a problem: a limit on a group becomes a
// row for every member.
type Row struct {
	Index    int // in the problem's quantities
	Quantity problems.Quantity
	Low      float64 // -Inf without a lower side
	High     float64 // +Inf without an upper side
	Kind     problems.LimitKind
	Source   string
	// Scale is what one unit of scaled margin is in the quantity's unit: the
	// larger bound, at least 1.
	Scale float64

	bounds []Bound
}

// Unknown reports a limit that names no quantity of the problem.
type Unknown struct {
	Limit problems.Limit
}

func (e *Unknown) Error() string {
	return fmt.Sprintf("limit on %s at %s: the problem has no such quantity", e.Limit.Quantity, e.Limit.Point)
}

// Rows expands limits over the quantities they name, in the order of the limits.
func Rows(quantities []problems.Quantity, limits []problems.Limit) ([]Row, error) {
	var rows []Row
	for _, limit := range limits {
		found := false
		for i, q := range quantities {
			if q.Name == limit.Quantity && q.Point == limit.Point {
				rows = append(rows, newRow(i, q, limit))
				found = true
			}
		}
		if !found {
			return nil, &Unknown{limit}
		}
	}
	return rows, nil
}

func newRow(i int, q problems.Quantity, limit problems.Limit) Row {
	row := Row{Index: i, Quantity: q, Low: limit.Low, High: limit.High, Kind: limit.Kind, Source: limit.Source, Scale: 1}
	for _, bound := range []Bound{{-1, limit.Low}, {1, limit.High}} {
		if !math.IsInf(bound.At, 0) {
			row.bounds = append(row.bounds, bound)
			row.Scale = math.Max(row.Scale, math.Abs(bound.At))
		}
	}
	return row
}

// Margin returns how far value lies inside the row, in the quantity's unit,
// negative outside. A row without sides has an infinite margin.
func (r *Row) Margin(value float64) float64 {
	return math.Min(value-r.Low, r.High-value)
}

// Bound is one finite side of a row: Sign (value - At) <= 0.
type Bound struct {
	Sign float64 // -1 for a lower side, 1 for an upper
	At   float64
}

// Bounds returns the finite sides, the lower one first; the caller must not
// change them.
func (r *Row) Bounds() []Bound { return r.bounds }
