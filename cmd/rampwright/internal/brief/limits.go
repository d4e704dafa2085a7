package brief

import (
	"math"

	"rampwright/problems"
)

// none is the word for a side a limit does not have.
const none = "none"

// spot is where a limit holds.
type spot struct{ quantity, point string }

// sides says which sides a row states, none included.
type sides struct{ low, high bool }

// readLimits reads the rows and keeps, for each quantity and point, the last
// row that names it.
func (r *reader) readLimits(root *node) {
	r.brief.replaced = map[spot]sides{}
	for _, row := range r.entries(root, limits) {
		r.readLimit(row)
	}
}

// readLimit reads one row.
func (r *reader) readLimit(row *node) {
	before := len(r.problems)
	quantity, ok := r.quantityOf(row)
	low, statedLow := r.side(row, "at_least", -unbounded)
	high, statedHigh := r.side(row, "at_most", unbounded)
	if !statedLow && !statedHigh && !row.has("at_least") && !row.has("at_most") {
		r.add(row, Problem{Message: "the row has neither at_least nor at_most", Hint: "`at_most: none` lifts a default limit"})
	}
	if low >= high && finite(low) && finite(high) {
		r.add(row.get("at_least"), Problem{Message: "no value can keep both sides: at_least must be below at_most", Value: exactNumber(low) + " and " + exactNumber(high)})
	}
	points := r.pointsOf(row, ok && quantity.geometry)
	if !ok || len(r.problems) > before {
		return
	}
	if quantity.name == "terminal_mach" && !r.brief.Definition.TerminalShock && (finite(low) || finite(high)) {
		r.add(row.get("quantity"), terminalProblem())
		return
	}
	for _, point := range points {
		r.setLimit(problems.Limit{Quantity: quantity.name, Point: point, Low: low, High: high, Kind: problems.Asked, Source: row.origin()}, sides{statedLow, statedHigh}, row)
	}
}

func terminalProblem() Problem {
	return Problem{Message: "terminal_mach has no value without a terminal shock", Value: "terminal_mach", Hint: "set terminal_shock: true in inlet, or limit throat_mach"}
}

// setLimit puts a limit in place of an earlier one on the same quantity and
// point, at the end of the order.
func (r *reader) setLimit(limit problems.Limit, stated sides, row *node) {
	kept := r.brief.Limits[:0]
	for _, l := range r.brief.Limits {
		if l.Quantity != limit.Quantity || l.Point != limit.Point {
			kept = append(kept, l)
		}
	}
	r.brief.Limits = append(kept, limit)
	r.brief.replaced[spot{limit.Quantity, limit.Point}] = stated
	r.brief.place[limitPath(limit)] = row
}

// quantityOf reads the name of a quantity.
func (r *reader) quantityOf(row *node) (noun, bool) {
	n := r.value(row, known(limits, "quantity"))
	if n == nil {
		return noun{}, false
	}
	quantity, ok := r.brief.words.find(n.text)
	if !ok {
		r.add(n, r.brief.words.unknown(n.text))
	}
	return quantity, ok
}

// side reads one side of a limit; absent and none are the infinity given.
func (r *reader) side(row *node, name string, absent float64) (v float64, stated bool) {
	k := known(limits, name)
	n := r.value(row, k)
	if n == nil {
		return absent, false
	}
	if n.text == none && !n.quoted {
		return absent, true
	}
	v, ok := r.decimalOf(n, k, name)
	if !ok {
		return absent, false
	}
	return v, true
}

// pointsOf reads where a limit holds.
func (r *reader) pointsOf(row *node, geometry bool) []string {
	n := row.get("at")
	switch {
	case n == nil && geometry:
		return []string{problems.Geometry}
	case n == nil:
		return r.brief.pointNames()[:min(1, len(r.brief.pointNames()))]
	case geometry:
		r.add(n, Problem{Message: "this quantity belongs to the geometry: it has one value, at no point", Value: n.shown(), Hint: "remove at"})
		return nil
	case n.shape == scalar && n.text == "every":
		return r.brief.pointNames()
	case n.shape == scalar:
		return r.pointNamed(nil, n)
	case n.shape == mapping:
		r.wrongShape(n, "at", sequence)
		return nil
	}
	var points []string
	for _, item := range n.items {
		if item.shape != scalar {
			r.wrongShape(item, "an entry of at", scalar)
			continue
		}
		points = r.pointNamed(points, item)
	}
	return points
}

// pointNamed appends the point a node names; a limit holds at points only.
func (r *reader) pointNamed(points []string, n *node) []string {
	names := r.brief.pointNames()
	for _, name := range points {
		if name == n.text {
			r.add(n, Problem{Message: "point " + name + " is listed twice", Value: name})
			return points
		}
	}
	for _, name := range names {
		if name == n.text {
			return append(points, name)
		}
	}
	p := Problem{Message: "no flight point is named " + shorten(n.text, 60), Value: n.shown(), Allowed: join(append([]string{"every"}, names...)), Hint: nearestHint(n.text, names)}
	switch n.text {
	case "mean", "worst":
		p.Hint = "a limit holds at points; mean and worst are for aims"
	case "every":
		p.Hint = "write `at: every` without a list"
	}
	r.add(n, p)
	return points
}

// Resolve returns every limit in force: the hard ones, the default ones that no
// row of the brief replaces (none when defaults is false), and those asked for,
// in this order. hard and standard are the model's lists.
func (b *Brief) Resolve(hard, standard []problems.Limit) []problems.Limit {
	all := append([]problems.Limit(nil), hard...)
	for _, l := range standard {
		if _, replaced := b.replaced[spot{l.Quantity, l.Point}]; b.Defaults && !replaced {
			all = append(all, l)
		}
	}
	for _, l := range b.Limits {
		if !math.IsInf(l.Low, -1) || !math.IsInf(l.High, 1) {
			all = append(all, l)
		}
	}
	return all
}
