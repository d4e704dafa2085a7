package report

import (
	"fmt"
	"slices"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/optimize"
)

// Text returns the document for a terminal of that width.
func (d *TradeDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.rowCautions(d.Cautions, len(d.studies()))
	p.heading("Trade of " + d.Between[0].Label() + " and " + d.Between[1].Label())
	p.wrap("", d.answer(), "")
	if len(d.Curve) > 0 {
		p.WriteByte('\n')
		d.table(p)
		d.settings(p)
	} else {
		d.loosening(p)
	}
	p.assumptions(d.Assumptions)
	return p.String()
}

// answer says what the curve is.
func (d *TradeDocument) answer() string {
	switch len(d.Curve) {
	case 0:
		return "No curve: " + d.Why + "."
	case 1:
		return fmt.Sprintf("No trade: one design is best in both, with %s. Where the other direction of a quantity was meant, say so: %s:%s.",
			d.pairText(&d.Curve[0]), d.Between[1].Name, extreme(!d.Between[1].Highest))
	}
	return d.summary() + fmt.Sprintf(" The knee is %s. The curve dominates %s of the rectangle between the best and the worst of both: hypervolume %s, reference %s and %s.",
		d.KneeRule, significant(float64(d.HypervolumeShare)), significant(float64(d.Hypervolume)),
		significant(float64(d.Reference[0].Value)), significant(float64(d.Reference[1].Value)))
}

// summary counts the points and names the ends and the knee.
func (d *TradeDocument) summary() string {
	verified, knee := 0, "no knee"
	for i := range d.Curve {
		if d.Curve[i].Status == optimize.Verified.String() {
			verified++
		}
		if d.Curve[i].Knee {
			knee = fmt.Sprintf("knee at point %d, %s", i+1, d.pairText(&d.Curve[i]))
		}
	}
	text := fmt.Sprintf("%d points, %d of them verified, from %s to %s; %s.", len(d.Curve), verified,
		d.pairText(&d.Curve[0]), d.pairText(&d.Curve[len(d.Curve)-1]), knee)
	if d.study.Cut {
		text += fmt.Sprintf(" Ended early: %d were asked for.", d.study.Asked)
	}
	if d.Dominated > 0 {
		text += fmt.Sprintf(" Left out: %d that another point dominates.", d.Dominated)
	}
	return text
}

func (d *TradeDocument) pairText(row *TradeRow) string {
	parts := make([]string, len(row.Values))
	for i, v := range row.Values {
		parts[i] = v.Name + " " + significant(float64(v.Value))
	}
	return strings.Join(parts, ", ")
}

// table writes the curve, then what binds along it.
func (d *TradeDocument) table(p *page) {
	t := &table{columns: []column{{head: "point"}, {head: d.study.key(0)}, {head: d.study.key(1)}, {head: "gain from next\nfor each " + d.unit()}, {head: "status", left: true}}}
	for i := range d.Curve {
		row := &d.Curve[i]
		t.add(fmt.Sprint(i+1), significant(float64(row.Values[0].Value)), significant(float64(row.Values[1].Value)),
			significant(float64(row.Rate)), statusWords(row.Status))
		if row.Knee {
			t.annotate("knee")
		}
	}
	p.table(t)
	p.heading("What binds along the curve, besides the two")
	for from := 0; from < len(d.Curve); {
		to := from
		for to+1 < len(d.Curve) && slices.Equal(d.Curve[to+1].Active, d.Curve[from].Active) {
			to++
		}
		who := fmt.Sprintf("point %d", from+1)
		if to > from {
			who = fmt.Sprintf("points %d to %d", from+1, to+1)
		}
		what := "nothing"
		if len(d.Curve[from].Active) > 0 {
			what = strings.Join(d.Curve[from].Active, ", ")
		}
		p.wrap("  - ", who+": "+what, "    ")
		from = to + 1
	}
}

func (d *TradeDocument) unit() string {
	if u := d.Between[1].Unit; u != "" {
		return u
	}
	return "unit"
}

// settings writes the searched values of each point.
func (d *TradeDocument) settings(p *page) {
	p.heading("Searched values")
	t := &table{columns: []column{{head: "point"}}}
	for _, v := range d.Curve[0].Variables {
		t.columns = append(t.columns, column{head: strings.ReplaceAll(strings.TrimSuffix(v.Name, "_deg"), "_", "\n")})
	}
	for i := range d.Curve {
		cells := []string{fmt.Sprint(i + 1)}
		for _, v := range d.Curve[i].Variables {
			cells = append(cells, significant(float64(v.Value)))
		}
		t.add(cells...)
	}
	p.table(t)
}

// loosening writes the smallest relaxations that would give a design.
func (d *TradeDocument) loosening(p *page) {
	for _, r := range d.Relaxation {
		if finite(float64(r.Enough)) {
			p.wrap("  - ", fmt.Sprintf("enough: %s loosened to %s, all else held", r.SideOf, significant(float64(r.Enough))), "    ")
		}
	}
}

// CSV writes trade.csv: one row a point; searched values and every exact
// quantity.
func (d *TradeDocument) CSV() []byte {
	header := []string{"point", d.study.key(0), d.study.key(1), "status", "knee", "rate", "active"}
	rows := [][]string{header}
	for i := range d.Curve {
		row := &d.Curve[i]
		cells := []string{fmt.Sprint(i + 1), shortest(float64(row.Values[0].Value)), shortest(float64(row.Values[1].Value)),
			row.Status, fmt.Sprint(row.Knee), shortest(float64(row.Rate)), strings.Join(row.Active, "; ")}
		for _, v := range row.Variables {
			if cells = append(cells, shortest(float64(v.Value))); i == 0 {
				rows[0] = append(rows[0], v.Name)
			}
		}
		for _, point := range row.Exact {
			for _, q := range point.Value {
				if cells = append(cells, shortest(float64(q.Value))); i == 0 {
					rows[0] = append(rows[0], q.Name+"@"+point.Name)
				}
			}
		}
		rows = append(rows, cells)
	}
	return csvBytes(rows)
}

// Picture draws the first quantity against the second.
func (d *TradeDocument) Picture() ([]byte, error) {
	picture := chart.LineChart{
		Title:  d.Title + ": " + d.Between[0].Name + " against " + d.Between[1].Name,
		XLabel: axisName(d.Between[1]),
		YLabel: axisName(d.Between[0]),
	}
	if len(d.Curve) == 0 {
		picture.Subtitle = []string{d.answer()}
		return drawLines(picture)
	}
	picture.Subtitle = []string{d.summary()}
	line := chart.Line{Name: "best designs", Lead: true}
	for i := range d.Curve {
		row := &d.Curve[i]
		p := chart.LinePoint{X: float64(row.Values[1].Value), Y: float64(row.Values[0].Value), Mark: row.Knee}
		if row.Knee {
			p.Note = "knee"
		}
		line.Points = append(line.Points, p)
	}
	if line.Points[0].X > line.Points[len(line.Points)-1].X {
		slices.Reverse(line.Points)
	}
	picture.Low, picture.High = line.Points[0].X, line.Points[len(line.Points)-1].X
	picture.Lines = []chart.Line{line}
	return drawLines(picture)
}

// axisName is a quantity, whose name carries its unit, with the way that is
// better.
func axisName(q Traded) string {
	if q.Highest {
		return q.Label() + " (higher is better)"
	}
	return q.Label() + " (lower is better)"
}
