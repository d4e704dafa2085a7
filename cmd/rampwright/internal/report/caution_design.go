package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

const (
	lowQ2         = 0.9    // below it a surrogate explains too little to be searched on
	yardstickMiss = 0.9999 // of the exact search's aim
	onBound       = 1e-6   // of a variable's range
)

// cautions lists what a design raises: the Mach number ahead of a terminal shock
// first, how the search ended next, then flow, margins, limits and surrogates.
func (s *Study) cautions() []Caution {
	var list, flow []Caution
	confidence := s.confidenceCautions()
	if s.Confidence.missed() {
		list, confidence = append(list, confidence...), nil
	}
	if s.Problem != nil {
		flow = append(exactCautions(s.Problem, s.Flow), s.noMargin()...)
		flow = append(flow, s.liftedDefaults()...)
	}
	if len(flow) > 0 && flow[0].Rule == "terminal_mach" {
		list, flow = append(list, flow[0]), flow[1:]
	}
	list = append(list, s.endingCautions()...)
	list = append(list, confidence...) // of a design that was not backed off
	list = append(list, flow...)
	list = append(list, s.boundCautions()...)
	list = append(list, s.surrogateCautions()...)
	if list == nil {
		return []Caution{}
	}
	return list
}

// endingCautions say what the result is not.
func (s *Study) endingCautions() []Caution {
	var list []Caution
	add := func(rule, text string, args ...any) {
		list = append(list, Caution{rule, "", fmt.Sprintf(text, args...)})
	}
	best := &s.Result.Best
	switch s.Result.Status {
	case optimize.Infeasible:
		add("infeasible", "No exact evaluation holds every limit; this one misses them least: %s.", unmet(best.Assessment, false))
	case optimize.Stopped:
		add("unfinished", "The search was ended early by the time limit: a better design may exist.")
	case optimize.Interrupted:
		add("unfinished", "The search was interrupted: a better design may exist.")
	}
	switch {
	case best.Repetition == optimize.Same:
		add("one_route", "The problem has no second exact route: run again it gave the same values to the last bit, which checks the repetition and not the model.")
	case best.Repetition == optimize.Differs:
		add("routes_differ", "The problem has no second exact route, and run again it gave other values: do not use these numbers.")
	case math.IsNaN(best.RouteGap):
		add("one_route", "The problem has no second exact route: nothing but its own formula confirms these numbers.")
	case math.IsInf(best.RouteGap, 1):
		add("routes_differ", "Only one of the two exact routes has a value for every quantity: do not use these numbers.")
	case best.RouteGap > optimize.RouteAgreement:
		add("routes_differ", "The two exact routes differ by %.2g, more than %g: do not use these numbers.", best.RouteGap, optimize.RouteAgreement)
	}
	if len(best.Broken) > 0 {
		add("broken_when_resolved", "The search held limits on coarse traces that the fine ones of verification break: %s. Tighten these by the difference and search again.",
			unmet(constraints.Assessment{Checks: best.Broken}, true))
	}
	switch {
	case s.Result.Status == optimize.Verified:
	case math.IsInf(best.SurrogateError, 1):
		add("surrogate_error", "No surrogate foresaw this design: nothing shows that the search knew its surroundings.")
	case best.SurrogateError > s.Agreement:
		add("surrogate_error", "The surrogates missed this design by %.2g of scale, more than the agreement %g: a better one may exist.", best.SurrogateError, s.Agreement)
	}
	if s.Exact != nil && s.Exact.Feasible {
		ratio := s.ratio()
		if ratio < yardstickMiss {
			add("yardstick", "The search on the exact model alone found a better design: this one reaches %.5g of its aim.", ratio)
		} else if !best.Assessment.Feasible {
			add("yardstick", "The search on the exact model alone found a design that holds every limit.")
		}
	}
	return list
}

// unmet names the rows an assessment does not meet, each with the difference where
// that is wanted or lies below the digits of the value.
func unmet(a constraints.Assessment, difference bool) string {
	var names []string
	for _, c := range a.Checks {
		if c.Met {
			continue
		}
		name := responseName(c.Quantity)
		if c.Missing != nil {
			names = append(names, name+" has no value: "+c.Missing.Error())
			continue
		}
		text := fmt.Sprintf("%s is %s, asked %s", name, significant(c.Value), bounds(c.Low, c.High))
		shown := significant(c.Value)
		if difference || shown == significant(c.Low) || shown == significant(c.High) {
			text += " (missed by " + shortExponent(fmt.Sprintf("%.2g", -c.Margin)) + ")"
		}
		names = append(names, text)
	}
	if names == nil {
		return "the aim has no value"
	}
	return strings.Join(names, "; ")
}

func responseName(q problems.Quantity) string {
	name := q.Name
	if q.Member != "" {
		name += " (" + q.Member + ")"
	}
	if q.Point == problems.Geometry {
		return name
	}
	return name + " at " + q.Point
}

// noMargin names the limits the design stands on, those that no tolerance moves
// apart.
func (s *Study) noMargin() []Caution {
	var all, names, fixed []string
	for _, c := range s.Result.Best.Assessment.Checks {
		name := responseName(c.Quantity)
		if !c.Active || slices.Contains(all, name) {
			continue
		}
		all = append(all, name)
		if s.Moved != nil && !s.Moved[c.Index] {
			fixed = append(fixed, name)
		} else {
			names = append(names, name)
		}
	}
	if all == nil {
		return nil
	}
	text := "A limit is met without margin: " + all[0] + "."
	if len(all) > 1 {
		text = fmt.Sprintf("%d limits are met without margin: %s.", len(all), strings.Join(all, ", "))
	}
	switch {
	case s.Moved == nil && len(all) == 1:
		text += " The brief states no tolerance: whatever scatter moves it will violate it in about half of all built inlets."
	case s.Moved == nil:
		text += " The brief states no tolerance: whatever scatter moves one of them will violate it in about half of all built inlets."
	case len(all) == 1 && fixed == nil:
		text += " It is violated in about half of all built inlets."
	case fixed == nil:
		text += " Each is violated in about half of all built inlets, at least one of them in more."
	case names == nil:
		text += " No stated tolerance moves " + itOrThem(len(fixed)) + "."
	case len(names) == 1:
		text += fmt.Sprintf(" %s is violated in about half of all built inlets; no stated tolerance moves %s.", names[0], strings.Join(fixed, ", "))
	default:
		text += fmt.Sprintf(" Each but %s, which no stated tolerance moves, is violated in about half of all built inlets, at least one of them in more.", strings.Join(fixed, " and "))
	}
	return []Caution{{"no_margin", "", text}}
}

func itOrThem(n int) string {
	if n == 1 {
		return "it"
	}
	return "them"
}

// liftedDefaults names default limits that no row keeps, or only a looser one.
func (s *Study) liftedDefaults() []Caution {
	var lifted, loosened grouped
	kept := false
	for _, d := range inlet.DefaultLimits(s.Problem.Definition()) {
		low, high := math.Inf(-1), math.Inf(1)
		for _, row := range s.Result.Rows {
			if row.Quantity.Name == d.Quantity && row.Quantity.Point == d.Point && row.Kind != problems.Hard {
				low, high = math.Max(low, row.Low), math.Min(high, row.High)
			}
		}
		switch {
		case d.Low > low && math.IsInf(low, -1), d.High < high && math.IsInf(high, 1):
			lifted.add(d.Quantity, d.Point)
		case d.Low > low || d.High < high:
			loosened.add(fmt.Sprintf("%s (%s instead of %s)", d.Quantity, bounds(low, high), bounds(d.Low, d.High)), d.Point)
		default:
			kept = true
		}
	}
	if !kept && loosened.keys == nil {
		return []Caution{{"defaults_lifted", "", "The default limits are switched off: only those of the model itself and of the brief hold."}}
	}
	var list []Caution
	if lifted.keys != nil {
		list = append(list, Caution{"defaults_lifted", "", "Default limits are switched off: " + s.places(&lifted) + "."})
	}
	if loosened.keys != nil {
		list = append(list, Caution{"defaults_loosened", "", "Default limits are loosened: " + s.places(&loosened) + "."})
	}
	return list
}

// places names each key with its points.
func (s *Study) places(g *grouped) string {
	parts := make([]string, len(g.keys))
	for i, key := range g.keys {
		switch points := g.items[key]; {
		case points[0] == problems.Geometry:
			parts[i] = key
		case len(points) > 1 && len(points) == len(s.Flow.Points):
			parts[i] = key + " at every point"
		default:
			parts[i] = key + " at " + strings.Join(points, " and ")
		}
	}
	return strings.Join(parts, ", ")
}

// boundCautions are those of variables at the end of their range, but for an end
// that no brief can move.
func (s *Study) boundCautions() []Caution {
	var list []Caution
	for i, v := range s.model().Variables() {
		side, bound := boundSide(v, s.Result.Best.X[i])
		if side == "" {
			continue
		}
		smallestRamp := strings.HasPrefix(v.Name, "ramp_") && side == "lower"
		if !smallestRamp && s.isWidest(v, bound) {
			continue
		}
		text := fmt.Sprintf("%s ends on the %s end of its range, %g: a wider range may hold a better design.", v.Name, side, bound)
		if smallestRamp {
			text = fmt.Sprintf("%s stands at its smallest angle, %g deg: the search asks to delete this ramp.", v.Name, bound)
		}
		list = append(list, Caution{"on_bound", "", text})
	}
	return list
}

// isWidest reports whether an end of a variable's range is as far as a brief may set it.
func (s *Study) isWidest(v problems.Variable, bound float64) bool {
	if s.Widest == nil {
		return false
	}
	low, high := s.Widest(v)
	return bound == v.Low && bound <= low || bound == v.High && bound >= high
}

// surrogateCautions are those of the surrogates of aim and limits.
func (s *Study) surrogateCautions() []Caution {
	var none, weak []string
	quantities := s.model().Quantities()
	for i := range s.Result.Fits {
		f := &s.Result.Fits[i]
		name := responseName(quantities[f.Quantity])
		switch {
		case f.Err != nil:
			none = append(none, fmt.Sprintf("%s (%v)", name, f.Err))
		case f.Choice.Fitted != nil && f.Choice.Quality.Q2 < lowQ2:
			weak = append(weak, fmt.Sprintf("%s (Q2 %.3f)", name, f.Choice.Quality.Q2))
		}
	}
	var list []Caution
	if none != nil {
		list = append(list, Caution{"no_surrogate", "", "No surrogate for " + strings.Join(none, ", ") + ": judged on exact values only."})
	}
	if weak != nil {
		list = append(list, Caution{"weak_surrogate", "", "Surrogates that explain little of their quantity over the box: " + strings.Join(weak, ", ") + "."})
	}
	return list
}

// boundSide names the end of its range a variable stands on; empty inside.
func boundSide(v problems.Variable, x float64) (side string, bound float64) {
	reach := onBound * (v.High - v.Low)
	switch {
	case x <= v.Low+reach:
		return "lower", v.Low
	case x >= v.High-reach:
		return "upper", v.High
	}
	return "", 0
}
