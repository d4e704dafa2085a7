package brief

import (
	"errors"
	"strings"

	"rampwright/problems"
)

// readAim reads what the search drives.
func (r *reader) readAim(root *node) {
	part := r.child(root, aimPart)
	if part == nil {
		if r.brief.Analytic != nil {
			r.ownAim()
		}
		return
	}
	r.brief.place[aimPart] = part
	direction := "highest"
	switch high, low := part.has("highest"), part.has("lowest"); {
	case high && low:
		r.add(part.key("lowest"), Problem{Message: "the aim has both highest and lowest", Hint: "keep one; limit the other quantity, or trade the two"})
		return
	case !high && !low:
		r.add(part, Problem{Message: "the aim has neither highest nor lowest", Allowed: "exactly one of highest, lowest"})
		return
	case low:
		direction = "lowest"
	}
	n := r.value(part, known(aimPart, direction))
	if n == nil {
		return
	}
	text := strings.Join(strings.Fields(n.text), " ")
	f := r.formulaOf(n)
	if f == nil {
		return
	}
	r.brief.Aim = problems.Aim{Highest: direction == "highest", Text: text}
	r.record("aim."+direction, text, "", n)
	r.placeAim(part, f)
}

// formulaOf compiles the formula of an aim and checks its references.
func (r *reader) formulaOf(n *node) *formula {
	f, err := compileFormula(n.text, r.brief.words)
	var e *formulaError
	if errors.As(err, &e) {
		r.add(r.within(n, e.offset), Problem{Message: e.message, Value: e.value, Hint: e.hint})
		return nil
	}
	if len(f.references) == 0 {
		r.add(n, Problem{Message: "the aim names no quantity", Value: n.text, Hint: r.brief.words.hint})
		return nil
	}
	names, fine := r.brief.pointNames(), true
	for i, ref := range f.references {
		at := r.within(n, f.offsets[i])
		if ref.point != "" && !contains(names, ref.point) {
			r.add(at, Problem{Message: "no flight point is named " + shorten(ref.point, 60), Value: ref.quantity + "@" + ref.point, Allowed: join(names), Hint: nearestHint(ref.point, names)})
			fine = false
		}
		if ref.quantity == "terminal_mach" && !r.brief.Definition.TerminalShock {
			r.add(at, terminalProblem())
			fine = false
		}
	}
	if !fine {
		return nil
	}
	return f
}

// within is the place of a character of a scalar, counted from 0; the scalar
// itself where quotes or line breaks hide it.
func (r *reader) within(n *node, offset int) *node {
	at := *n
	if !n.quoted && strings.HasPrefix(r.textAt(n), n.text) {
		at.column += offset
	}
	return &at
}

func contains(names []string, name string) bool {
	for _, n := range names {
		if n == name {
			return true
		}
	}
	return false
}

// placeAim reads `at` and lays the formula out over the points it takes.
func (r *reader) placeAim(part *node, f *formula) {
	aim, names := &r.brief.Aim, r.brief.pointNames()
	if len(names) == 0 {
		return // reported with flight
	}
	r.brief.aimHasPoint = f.free()
	k := known(aimPart, "at")
	n := r.value(part, k)
	switch {
	case n != nil && !f.free():
		r.add(n, Problem{Message: "at has no effect: every quantity of the aim has its place already", Value: n.text, Hint: "remove at"})
	case !f.free():
		aim.Where = f.home(names[0])
		aim.Parts = []problems.Part{f.part(aim.Where, 1)}
	case n == nil:
		aim.Where = names[0]
		aim.Parts = []problems.Part{f.part(names[0], 1)}
	case n.text == "mean":
		aim.Where, aim.Aggregate = n.text, problems.Mean
		r.weighAim(n, f)
	case n.text == "worst":
		aim.Where, aim.Aggregate = n.text, problems.Worst
		for _, name := range names {
			aim.Parts = append(aim.Parts, f.part(name, 1))
		}
	case contains(names, n.text):
		aim.Where = n.text
		aim.Parts = []problems.Part{f.part(n.text, 1)}
	default:
		r.add(n, Problem{Message: "no flight point is named " + shorten(n.text, 60), Value: n.shown(), Allowed: join(append([]string{"mean", "worst"}, names...)), Hint: nearestHint(n.text, append([]string{"mean", "worst"}, names...))})
	}
	if f.free() {
		r.record(k.Path(), aim.Where, "", n)
	}
}

// weighAim lays a mean out over the points of positive weight.
func (r *reader) weighAim(n *node, f *formula) {
	for _, c := range r.brief.Flight {
		if c.Weight > 0 {
			r.brief.Aim.Parts = append(r.brief.Aim.Parts, f.part(c.Name, c.Weight))
		}
	}
	if len(r.brief.Aim.Parts) == 0 {
		r.add(n, Problem{Message: "a mean needs a point with a weight above 0", Value: n.text, Hint: "give weights in flight"})
	}
}

// free reports whether some quantity of the formula takes the point of the aim.
func (f *formula) free() bool {
	for _, ref := range f.references {
		if ref.point == "" && !ref.geometry {
			return true
		}
	}
	return false
}

// home is where a formula without a free quantity lives.
func (f *formula) home(first string) string {
	for _, ref := range f.references {
		if ref.point != "" {
			return first
		}
	}
	return problems.Geometry
}

// part is the formula at one point.
func (f *formula) part(point string, weight float64) problems.Part {
	part := problems.Part{Point: point, Weight: weight}
	for _, ref := range f.references {
		read := problems.Read{Quantity: ref.quantity, Point: ref.point}
		switch {
		case ref.geometry:
			read.Point = problems.Geometry
		case ref.point == "":
			read.Point = point
		}
		part.Reads = append(part.Reads, read)
	}
	if !f.bare {
		part.Formula = f.evaluate
	}
	return part
}
