package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
)

// mapSection draws the aim over pairs of variables by both models.
func (r *result) mapSection() chapter {
	s := chapter{ID: "maps", Head: "Maps"}
	if r.review == nil {
		s.say(words(fromThePast))
		return s
	}
	var figures []htmlFigure
	for i, m := range r.review.Maps {
		figures = append(figures, htmlFigure{Picture: drawn(func(w io.Writer) error { return chart.WriteFieldPair(w, r.fieldPair(i, &m)) })})
	}
	if figures == nil {
		return s
	}
	s.say(words("The aim over two searched values, the others as in the design. Hatched: some limit is broken, as each model sees it; limits on quantities without a surrogate are left out on its side. Blank: no value. Ringed: the design. Colours span the exact values; a surrogate beyond them keeps the last colour."))
	s.figures(false, figures...)
	if len(figures) < r.review.Pairs {
		s.say(words("Of "), countCell(int64(r.review.Pairs), "review", "pairs"), words(" pairs the first are shown."))
	}
	return s
}

func (r *result) fieldPair(i int, m *Map) chart.FieldPair {
	value := func(name string) float64 {
		v, ok := r.Best.Variables.Get(name)
		if !ok {
			return math.NaN()
		}
		return float64(v)
	}
	pair := chart.FieldPair{
		ID: fmt.Sprintf("forbidden-%d", i), Title: "Aim over " + m.X + " and " + m.Y, Label: r.aimTitle(),
		X: r.axis(m.X), Y: r.axis(m.Y), Cells: m.Cells,
		Best: [2]float64{value(m.X), value(m.Y)}, BestName: "the design",
	}
	for k, f := range []*MapField{&m.Surrogate, &m.Exact} {
		field := chart.Field{Name: [2]string{"surrogate", "exact"}[k]}
		for _, v := range f.Aim {
			field.Values = append(field.Values, float64(v))
		}
		for _, mark := range f.Forbidden {
			field.Forbidden = append(field.Forbidden, mark == '1')
		}
		pair.Fields[k] = field
	}
	return pair
}

func (r *result) aimTitle() string {
	var b strings.Builder
	for _, c := range r.aimCells() {
		b.WriteString(c.Text)
	}
	return b.String()
}

func (r *result) axis(name string) chart.Span {
	for _, v := range r.review.Variables {
		if v.Name == name {
			return chart.Span{Label: withUnit(name, v.Unit), Low: float64(v.Low), High: float64(v.High)}
		}
	}
	return chart.Span{Label: name}
}

// tracedCurve says that a curve is traced throughout.
func tracedCurve(o *OffDesign) string {
	if !o.Traced {
		return ""
	}
	return " Every Mach number is traced, as the brief asks at a flight point; one that keeps the chain may lie off its table."
}

// offDesignSection draws the frozen inlet between the Mach numbers flown.
func (r *result) offDesignSection() chapter {
	s := chapter{ID: "off-design", Head: "Off design"}
	if r.review == nil || r.review.OffDesign == nil {
		return s
	}
	o := r.review.OffDesign
	own := map[int]string{}
	for _, p := range o.Own {
		if own[p.Index] != "" {
			own[p.Index] += ", "
		}
		own[p.Index] += p.Name
	}
	c := chart.LineChart{
		Title: "The frozen inlet over Mach number", Subtitle: []string{fmt.Sprintf("incidence %s deg; recovery where the stream is attached", significant(float64(o.IncidenceDeg)))},
		XLabel: "free-stream Mach number", YLabel: "ratio", Low: float64(o.Mach[0]), High: float64(o.Mach[len(o.Mach)-1]),
	}
	for _, line := range []struct {
		name   string
		values []Number
	}{{"recovery", o.Recovery}, {"capture", o.Capture}} {
		var points []chart.LinePoint
		for i, v := range line.values {
			if finite(float64(v)) {
				points = append(points, chart.LinePoint{X: float64(o.Mach[i]), Y: float64(v), Note: own[i], Mark: own[i] != ""})
			}
		}
		if points != nil {
			c.Lines = append(c.Lines, chart.Line{Name: line.name, Lead: c.Lines == nil, Points: points})
		}
	}
	s.figures(false, htmlFigure{Picture: drawn(func(w io.Writer) error { return chart.WriteLineChart(w, c) }),
		Caption: []cell{words("Ringed: flight points of the brief at this incidence."), words("%s", tracedCurve(o))}})
	var gaps [][]cell
	for i, status := range o.Status {
		if status != "attached" && (i == 0 || o.Status[i-1] != status) {
			gaps = append(gaps, []cell{words("From Mach "), number(o.Mach[i], "review", "off_design", "mach", i), words(" on: "), quoted(status, "review", "off_design", "status", i)})
		}
	}
	if len(gaps) > 0 && len(gaps) <= 6 {
		s.list(gaps)
	}
	return s
}

// progressSection draws how the search came to its end.
func (r *result) progressSection() chapter {
	s := chapter{ID: "progress", Head: "Progress of the search"}
	var aim, violation, miss []chart.LinePoint
	for _, step := range r.History {
		x := float64(step.Evaluations)
		aim = rising(aim, x, float64(step.Aim))
		violation = rising(violation, x, float64(step.Violation))
		if step.Error > 0 {
			miss = rising(miss, x, math.Log10(float64(step.Error)))
		}
	}
	add := func(title, label, name string, points []chart.LinePoint) {
		if len(points) == 0 {
			return
		}
		c := chart.LineChart{Title: title, XLabel: "exact evaluations", YLabel: label, WholeX: true,
			Low: points[0].X, High: points[len(points)-1].X, Lines: []chart.Line{{Name: name, Lead: true, Points: thinned(points)}}}
		s.figures(false, htmlFigure{Picture: drawn(func(w io.Writer) error { return chart.WriteLineChart(w, c) })})
	}
	add("Best design so far that holds every limit", "aim: "+r.Best.Aim.Text, "aim", aim)
	if len(aim) == 0 {
		add("Least sum of scaled violations so far", "sum of scaled violations", "violation", violation)
	}
	add("Error of the surrogates at the latest proposal", "decimal logarithm of the scaled error", "error", miss)
	return s
}

// rising appends a point where it is finite and to the right of the last; one at
// the same place takes its place.
func rising(points []chart.LinePoint, x, y float64) []chart.LinePoint {
	if !finite(y) || !finite(x) {
		return points
	}
	if last := len(points) - 1; last >= 0 && points[last].X >= x {
		points[last].Y = y
		return points
	}
	return append(points, chart.LinePoint{X: x, Y: y})
}

// thinned keeps at most as many points as a line takes, the last among them.
func thinned(points []chart.LinePoint) []chart.LinePoint {
	const most = 180
	if len(points) <= most {
		return points
	}
	var kept []chart.LinePoint
	for k := range most {
		kept = append(kept, points[k*(len(points)-1)/(most-1)])
	}
	return kept
}
