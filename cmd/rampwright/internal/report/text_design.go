package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems"
)

// Text returns the document for a terminal of that width.
func (d *DesignDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.cautions(d.Cautions)
	p.heading("Result")
	p.wrap("", d.answer(), "")
	p.WriteByte('\n')
	d.variables(p)
	d.yardstick(p)
	d.confidence(p)
	d.nearby(p)
	d.explained(p)
	d.margins(p)
	d.surrogates(p)
	if d.Inlet != nil {
		p.contour(d.Inlet)
		p.stations(d.Points)
		p.traces(d.Points)
		p.balances(d.Points)
		p.quantities(d.readings, d.Points)
		if text := searchedTrace(d.Best.Traced); text != "" {
			p.WriteByte('\n')
			p.wrap(indent, text, indent)
		}
	} else {
		d.plainQuantities(p)
	}
	p.assumptions(d.Assumptions)
	return p.String()
}

// aimName is the aim as a phrase.
func (d *DesignDocument) aimName() string { return aimPhrase(d.Best.Aim.Text, d.Best.Aim.Where) }

// answer is the result in one sentence.
func (d *DesignDocument) answer() string {
	extreme := extreme(d.Best.Aim.Highest)
	value := significant(float64(d.Best.Aim.Exact))
	switch d.study.Result.Status {
	case optimize.Verified:
		return fmt.Sprintf("Verified: the %s %s found under all limits is %s; two exact routes agree on every quantity%s, and the surrogates foresaw aim and limits within %g.",
			extreme, d.aimName(), value, withinBounds(d.Best.Traced), d.study.Agreement)
	case optimize.NotVerified:
		if c := d.Confidence; c.missed() {
			return fmt.Sprintf("Not verified: a design with %s of %s holds every limit as it stands, but the confidence of %s is not reached%s (see the cautions).", d.aimName(), value, c.percentText(), d.gapText())
		}
		return fmt.Sprintf("Not verified: a design with %s of %s holds every limit, but its evidence has a gap (see the cautions).", d.aimName(), value)
	case optimize.Infeasible:
		return fmt.Sprintf("Infeasible: no design found holds every limit; the one below misses them least, with %s of %s.", d.aimName(), value)
	}
	word := "Stopped by the time limit"
	if d.study.Result.Status == optimize.Interrupted {
		word = "Interrupted"
	}
	if !d.Best.Feasible {
		return fmt.Sprintf("%s before a design held every limit; the one below misses them least, with %s of %s.", word, d.aimName(), value)
	}
	return fmt.Sprintf("%s: the %s %s so far under all limits is %s.", word, extreme, d.aimName(), value)
}

// gapText adds the gap in the evidence of a design to what else keeps it from being
// verified.
func (d *DesignDocument) gapText() string {
	if d.study.Result.Best.Verified(d.study.Agreement) {
		return ""
	}
	return ", and its evidence has a gap"
}

// variables writes the searched values, their ranges, and the bounds they ended on.
func (d *DesignDocument) variables(p *page) {
	t := &table{columns: []column{{head: "searched"}, {head: "value"}, {head: "range"}, {left: true}}}
	for i, v := range d.study.model().Variables() {
		x := d.study.Result.Best.X[i]
		note := ""
		if side, _ := boundSide(v, x); side != "" {
			note = "on its " + side + " end"
		}
		t.add(v.Name, significant(x), bounds(v.Low, v.High), note)
	}
	p.table(t)
}

// yardstick compares with the exact search.
func (d *DesignDocument) yardstick(p *page) {
	var text string
	switch e := &d.ExactSearch; e.Status {
	case "not_run":
		text = "Yardstick: the search on the exact model alone was not run."
	case "infeasible":
		text = "Yardstick: the search on the exact model alone, run afterwards, found no design that holds every limit."
	default:
		text = fmt.Sprintf("Yardstick: the search on the exact model alone, run afterwards and never used, found %s.", significant(float64(e.Aim)))
		if finite(float64(e.Ratio)) {
			text = strings.TrimSuffix(text, ".") + fmt.Sprintf("; this design reaches %.5f of it.", float64(e.Ratio))
		}
	}
	p.WriteByte('\n')
	p.wrap("", text, "")
}

// margins writes the limits point by point: the unmet first, then those the
// design stands on, then by margin. Of a group it shows the member with the
// least margin; of the limits of the model, only those that bind.
func (d *DesignDocument) margins(p *page) {
	p.heading("Limits")
	held := 0
	t := &table{columns: []column{{head: "limit"}, {head: "bound"}, {head: "value"}, {head: "margin"}, {head: "from", left: true}}}
	for _, point := range d.study.points() {
		checks, quiet := tightest(d.study.Result.Best.Assessment.Checks, point)
		held += quiet
		if len(checks) > 0 {
			t.section(point)
		}
		for _, c := range checks {
			t.add(memberName(c.Quantity), bounds(c.Low, c.High), significant(c.Value), marginText(&c), originText(&c))
			t.annotate(d.how(&c))
		}
	}
	if len(t.rows) == 0 {
		p.wrap(indent, "none beyond the search box", indent)
	} else {
		p.table(t)
	}
	if held > 0 {
		p.WriteByte('\n')
		p.wrap(indent, fmt.Sprintf("%d limits of the model itself hold as well.", held), indent)
	}
}

// tightest chooses the checks to show of one point, and counts the limits of the
// model that are left out because they hold.
func tightest(all []constraints.Check, point string) (shown []constraints.Check, quiet int) {
	for _, c := range all {
		binds := !c.Met || c.Active
		last := len(shown) - 1
		switch {
		case c.Quantity.Point != point, math.IsInf(c.Low, -1) && math.IsInf(c.High, 1):
		case c.Kind == problems.Hard && !binds:
			quiet++
		case !binds && last >= 0 && sameLimit(&shown[last], &c):
			if c.Margin < shown[last].Margin || !shown[last].Applies {
				shown[last] = c
			}
		default:
			shown = append(shown, c)
		}
	}
	slices.SortStableFunc(shown, func(a, b constraints.Check) int {
		if a, b := urgency(&a), urgency(&b); a != b {
			return a - b
		}
		switch x, y := a.Margin/a.Scale, b.Margin/b.Scale; {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	return shown, quiet
}

// sameLimit reports whether b is another member of the limit of a, which does not
// bind.
func sameLimit(a, b *constraints.Check) bool {
	return a.Met && !a.Active && a.Quantity.Name == b.Quantity.Name && a.Kind == b.Kind && a.Low == b.Low && a.High == b.High
}

func urgency(c *constraints.Check) int {
	switch {
	case !c.Met:
		return 0
	case c.Active:
		return 1
	case c.Applies:
		return 2
	}
	return 3
}

func marginText(c *constraints.Check) string {
	if c.Active {
		return "0"
	}
	return significant(c.Margin)
}

func originText(c *constraints.Check) string {
	if c.Source != "" {
		return c.Source
	}
	return c.Kind.String()
}

// how says in words how a limit stands.
func (d *DesignDocument) how(c *constraints.Check) string {
	switch {
	case c.Missing != nil && c.Applies:
		return "not met: " + c.Missing.Error()
	case c.Missing != nil:
		return c.Missing.Error()
	case !c.Met:
		return "not met"
	case c.Active && c.Price > 0:
		return "on the limit: " + d.price(c) + "; holds " + d.study.model().Variables()[c.Drives].Name
	case c.Active:
		return "on the limit"
	}
	return ""
}

// price is what loosening a limit gains, in words, and how far.
func (d *DesignDocument) price(c *constraints.Check) string {
	unit := c.Quantity.Unit
	if unit == "" {
		unit = "unit"
	}
	what := d.Best.Aim.Text
	if strings.ContainsAny(what, " +-*/^(@") {
		what = "of the aim"
	}
	price := fmt.Sprintf("%.3g %s per %s", c.Price, what, unit)
	end := d.study.priceEnd(c)
	switch {
	case end == "":
		return price
	case c.PriceRange <= constraints.ActiveMargin*c.Scale && c.PriceEnd.Kind <= constraints.UpperEndMet:
		return price + " together with " + end + ", alone nothing"
	}
	return fmt.Sprintf("%s for the next %s%s, then %s", price, aboutText(c.PriceRange), spaced(c.Quantity.Unit), end)
}

// spaced is a unit behind its number.
func spaced(unit string) string {
	if unit == "" {
		return ""
	}
	return " " + unit
}

// priceEnd says what ends the range of a price, empty where none is known.
func (s *Study) priceEnd(c *constraints.Check) string {
	end := c.PriceEnd
	variable := func() string { return s.model().Variables()[end.Index].Name }
	limit := func() string {
		q := s.Result.Best.Assessment.Checks[end.Index].Quantity
		if q.Point == problems.Geometry {
			return memberName(q)
		}
		return memberName(q) + " at " + q.Point
	}
	switch end.Kind {
	case constraints.LimitMet:
		return limit()
	case constraints.LowerEndMet:
		return "the lower end of " + variable()
	case constraints.UpperEndMet:
		return "the upper end of " + variable()
	case constraints.LimitReleased:
		return limit() + " lets go"
	case constraints.BoundReleased:
		return variable() + " leaves its end"
	case constraints.PriceFalls:
		return "less"
	case constraints.PriceRises:
		return "more"
	}
	return ""
}
