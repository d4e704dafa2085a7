package main

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
)

// traded is one of the two quantities.
type traded struct {
	report.Traded
	members []int // in the problem's quantities
	places  []problems.Quantity
}

func (q *traded) direction() string {
	if q.Highest {
		return "highest"
	}
	return "lowest"
}

// sign turns the quantity into something to lower.
func (q *traded) sign() float64 {
	if q.Highest {
		return -1
	}
	return 1
}

// value is the quantity of an evaluation, of a group the least member; NaN where
// one is missing.
func (q *traded) value(e *problems.Evaluation) float64 {
	least := math.Inf(1)
	for _, i := range q.members {
		least = math.Min(least, e.Values[i])
	}
	return least
}

// aim drives the quantity: of a group the least member.
func (q *traded) aim() problems.Aim {
	aim := problems.Aim{Highest: q.Highest, Text: q.Name, Where: q.At}
	for _, p := range q.places {
		aim.Parts = append(aim.Parts, problems.Part{
			Point: p.Point, Weight: 1, Reads: []problems.Read{{Quantity: p.Name, Point: p.Point, Member: p.Member}},
		})
	}
	if len(aim.Parts) > 1 {
		aim.Aggregate = problems.Worst
	}
	return aim
}

// limit asks that the quantity to be lowered is at most eps.
func (q *traded) limit(eps float64) problems.Limit {
	l := problems.Limit{Quantity: q.Name, Point: q.At, Low: math.Inf(-1), High: eps, Source: "trade"}
	if q.Highest {
		l.Low, l.High = -eps, math.Inf(1)
	}
	return l
}

// narrowed adds a limit: within one that holds there already, or as a new row. A
// limit of the model itself stays beside it.
func narrowed(limits []problems.Limit, more problems.Limit) []problems.Limit {
	limits = slices.Clone(limits)
	for i := range limits {
		l := &limits[i]
		if l.Quantity == more.Quantity && l.Point == more.Point && l.Kind != problems.Hard {
			l.Low, l.High = math.Max(l.Low, more.Low), math.Min(l.High, more.High)
			l.Source = more.Source
			return limits
		}
	}
	return append(limits, more)
}

func sideText(l problems.Limit) string {
	if math.IsInf(l.Low, -1) {
		return fmt.Sprintf("<= %.6g", l.High)
	}
	return fmt.Sprintf(">= %.6g", l.Low)
}

// lowerIsBetter are the quantities a designer wants small; every other is wanted
// large unless --between says so.
var lowerIsBetter = []string{
	"length_m", "length_ratio", "lip_x_m", "entropy_rise", "spillage_drag", "cowl_drag", "lip_shock_miss",
	"cowl_angle_deg", "cowl_outer_angle_deg", "total_turning_deg", "lip_turning_deg", "terminal_mach", "throat_mach", "lip_mach",
	"total_contraction", "internal_contraction", "internal_contraction_over_self_start",
	"internal_contraction_over_isentropic", "total_contraction_over_started",
}

// tradedPair reads --between.
func (s *study) tradedPair(text string) (pair [2]traded, err error) {
	if text == "" {
		return pair, &usageError{"--between is missing: name the two quantities", "write --between recovery,length_m; rampwright quantities lists them"}
	}
	names := strings.Split(text, ",")
	if len(names) != 2 {
		return pair, &usageError{fmt.Sprintf("--between %q does not name two quantities", text), "write --between recovery,length_m; rampwright quantities lists them"}
	}
	var wrong []error
	for i, name := range names {
		q, err := s.tradedQuantity(strings.TrimSpace(name))
		if err != nil {
			wrong = append(wrong, err)
			continue
		}
		pair[i] = q
	}
	if wrong != nil {
		return pair, &usageError{"--between: " + strings.ReplaceAll(errors.Join(wrong...).Error(), "\n", "; "), "rampwright quantities lists them"}
	}
	if pair[0].Name == pair[1].Name && pair[0].At == pair[1].At {
		return pair, &usageError{"--between: " + pair[0].Label() + " cannot be traded against itself", ""}
	}
	return pair, nil
}

// tradedQuantity reads NAME[@POINT][:highest|:lowest].
func (s *study) tradedQuantity(text string) (traded, error) {
	rest, way, told := strings.Cut(text, ":")
	name, point, _ := strings.Cut(rest, "@")
	q := traded{Traded: report.Traded{Name: name, Highest: !slices.Contains(lowerIsBetter, name)}}
	if told {
		if way != "highest" && way != "lowest" {
			return q, fmt.Errorf("%q: a quantity is wanted highest or lowest, not %q", text, way)
		}
		q.Highest = way == "highest"
	}
	for i, c := range s.model.Quantities() {
		if c.Name != name || point != "" && c.Point != point {
			continue
		}
		if len(q.members) > 0 && c.Point != q.At {
			break // the first point, where none is named
		}
		q.At, q.Unit = c.Point, c.Unit
		q.members, q.places = append(q.members, i), append(q.places, c)
	}
	switch {
	case len(q.members) == 0:
		return q, fmt.Errorf("the problem has no quantity %s", rest)
	case len(q.members) > 1 && !q.Highest:
		return q, fmt.Errorf("%s is the least of several: it can only be wanted highest", name)
	}
	return q, nil
}
