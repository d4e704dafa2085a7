package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/optimize"
	"rampwright/problems"
)

// worstRows is how many surrogates the text shows beyond those of the aim and of
// the limits the design stands on.
const worstRows = 3

// surrogates compares prediction and exact value where it decides the design:
// for the aim, the binding limits, and the worst predicted quantities.
func (d *DesignDocument) surrogates(p *page) {
	predicted := slices.ContainsFunc(d.study.Result.Best.Predicted, finite)
	if !predicted { // nothing foresaw a design of least violation
		return
	}
	p.heading("Surrogate against exact")
	shown, rest := d.deciding()
	full := d.fitTable(shown, "kind", func(kind string) string { return kind })
	if full.fits(p) {
		p.table(full)
	} else {
		p.table(d.fitTable(shown, "by", initials))
		p.WriteByte('\n')
		p.wrap(indent, legend(shown), indent)
	}
	if rest > 0 {
		p.WriteByte('\n')
		p.wrap(indent, fmt.Sprintf("%d more quantities, none of which binds, were predicted at least as well as the worst of these.", rest), indent)
	}
}

// fitTable has one section a point; kind writes the kind of a surrogate.
func (d *DesignDocument) fitTable(fits []*optimize.Fit, head string, kind func(string) string) *table {
	best := &d.study.Result.Best
	t := &table{columns: []column{
		{head: "quantity"}, {head: head, left: true}, {head: "fitted", left: true, drop: 3}, {head: "samples", drop: 2},
		{head: "Q2"}, {head: "predicted", drop: 1}, {head: "exact"}, {head: "error"},
	}}
	point := ""
	for _, f := range fits {
		q := d.study.model().Quantities()[f.Quantity]
		if q.Point != point {
			point = q.Point
			t.section(point)
		}
		exact, predicted := best.Exact.Values[f.Quantity], best.Predicted[f.Quantity]
		t.add(memberName(q), kind(f.Choice.Kind), f.Choice.Transform.String(), fmt.Sprint(f.Samples),
			fmt.Sprintf("%.4f", f.Choice.Quality.Q2), significant(predicted), significant(exact),
			shortExponent(fmt.Sprintf("%.1e", predicted-exact)))
	}
	return t
}

// deciding chooses the surrogates to show, in the order of the quantities, and
// counts the others.
func (d *DesignDocument) deciding() (shown []*optimize.Fit, rest int) {
	best := &d.study.Result.Best
	scale := map[int]float64{} // of the quantities with a limit
	chosen := map[int]bool{}
	for _, c := range best.Assessment.Checks {
		scale[c.Index] = c.Scale
		chosen[c.Index] = chosen[c.Index] || c.Active || !c.Met
	}
	for i, q := range d.study.model().Quantities() {
		chosen[i] = chosen[i] || d.readByAim(q)
	}
	type predicted struct {
		fit   *optimize.Fit
		error float64
	}
	var others []predicted
	for i := range d.study.Result.Fits {
		f := &d.study.Result.Fits[i]
		e := math.Abs(best.Predicted[f.Quantity] - best.Exact.Values[f.Quantity])
		switch {
		case f.Choice.Fitted == nil || !finite(e):
		case chosen[f.Quantity]:
			shown = append(shown, f)
		default:
			others = append(others, predicted{f, e / scale[f.Quantity]})
		}
	}
	slices.SortStableFunc(others, func(a, b predicted) int {
		switch {
		case a.error > b.error:
			return -1
		case a.error < b.error:
			return 1
		}
		return 0
	})
	for i, o := range others {
		if i < worstRows {
			shown = append(shown, o.fit)
		}
	}
	slices.SortFunc(shown, func(a, b *optimize.Fit) int { return a.Quantity - b.Quantity })
	return shown, max(0, len(others)-worstRows)
}

func (d *DesignDocument) readByAim(q problems.Quantity) bool {
	for _, part := range d.study.Aim.Parts {
		for _, read := range part.Reads {
			if read.Quantity == q.Name && read.Point == q.Point {
				return true
			}
		}
	}
	return false
}

// memberName names a response in a table.
func memberName(q problems.Quantity) string {
	if q.Member == "" {
		return q.Name
	}
	return q.Name + ", " + q.Member
}

// initials shortens a kind to the first letters of its words.
func initials(kind string) string {
	short := ""
	for _, word := range strings.Fields(kind) {
		short += strings.ToUpper(word[:1])
	}
	return short
}

// legend explains the initials of the kinds shown.
func legend(fits []*optimize.Fit) string {
	var lines []string
	for _, f := range fits {
		line := initials(f.Choice.Kind) + " " + f.Choice.Kind
		if !slices.Contains(lines, line) {
			lines = append(lines, line)
		}
	}
	slices.Sort(lines)
	return strings.Join(lines, ", ")
}
