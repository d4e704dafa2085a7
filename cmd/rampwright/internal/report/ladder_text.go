package report

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems"
)

// Text returns the document for a terminal of that width.
func (d *LadderDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.rowCautions(d.Cautions, len(d.studies()))
	p.heading("Ladder of ramps")
	for _, text := range d.Advice {
		p.wrap("  - ", text, "    ")
	}
	p.WriteByte('\n')
	d.table(p)
	d.angles(p)
	d.reasons(p)
	p.WriteByte('\n')
	p.wrap("", d.reference(), "")
	p.assumptions(d.Assumptions)
	return p.String()
}

// shown are the exact quantities of the table: at the design point, of the
// geometry.
var shown = []struct {
	name, head string
	geometry   bool
	drop       int
}{
	{"recovery", "recovery", false, 0},
	{"length_m", "length\nm", true, 0},
	{"total_turning_deg", "turning\ndeg", true, 1},
	{"throat_temperature_K", "throat\nK", false, 0},
	{"throat_pressure_kPa", "throat\nkPa", false, 2},
	{"throat_mach", "throat\nMach", false, 3},
	{selfStartQuantity, "over\nself-start", false, 4},
}

// table writes one row a number of ramps.
func (d *LadderDocument) table(p *page) {
	point := d.study.Definition.Points[0].Name
	t := &table{columns: []column{{head: "ramps"}, {head: "status", left: true}, {head: "gain"}}}
	aimShown := d.Aim.Text == "recovery" && d.Aim.Where == point
	if !aimShown {
		t.columns = append(t.columns, column{head: "aim"})
	}
	for _, s := range shown {
		t.columns = append(t.columns, column{head: s.head, drop: s.drop})
	}
	for _, row := range d.Rows {
		cells := []string{fmt.Sprint(row.Ramps), statusWords(row.Status), significant(float64(row.Gain))}
		if !aimShown {
			cells = append(cells, significant(float64(row.Aim.Exact)))
		}
		for _, s := range shown {
			where := point
			if s.geometry {
				where = problems.Geometry
			}
			cells = append(cells, significant(row.exact(s.name, where)))
		}
		t.add(cells...)
	}
	p.table(t)
}

// exact is a quantity of the row's design, NaN where there is none.
func (row *LadderRow) exact(name, point string) float64 {
	here, _ := row.Exact.Get(point)
	if v, ok := here.Get(name); ok {
		return float64(v)
	}
	return math.NaN()
}

// angles writes the searched values of each row.
func (d *LadderDocument) angles(p *page) {
	p.heading("Searched values")
	for _, row := range d.Rows {
		if len(row.Variables) == 0 {
			continue
		}
		var parts []string
		for _, v := range row.Variables {
			parts = append(parts, v.Name+" "+significant(float64(v.Value)))
		}
		p.wrap(fmt.Sprintf("  %s: ", ramps(row.Ramps)), strings.Join(parts, ", "), "    ")
	}
}

// reasons writes why rows hold no design, and the smallest loosening that would
// give them one.
func (d *LadderDocument) reasons(p *page) {
	headed := false
	for _, row := range d.Rows {
		if row.Reason == "" {
			continue
		}
		if !headed {
			p.heading("Rows without a design that holds every limit")
			headed = true
		}
		p.wrap(fmt.Sprintf("  %s: ", ramps(row.Ramps)), row.Reason+".", "    ")
		for _, r := range row.Relaxation {
			if finite(float64(r.Enough)) {
				p.wrap("    - ", fmt.Sprintf("enough: %s loosened to %s, all else held", r.SideOf, significant(float64(r.Enough))), "      ")
			}
		}
	}
}

// reference says what recoveries are compared with.
func (d *LadderDocument) reference() string {
	point := &d.study.Definition.Points[0]
	text := fmt.Sprintf("Standard recovery at Mach %s: %s (MIL-E-5007D).", plain(point.Mach), significant(float64(d.StandardRecovery)))
	var limits []string
	for _, row := range d.Rows {
		if v := float64(row.EqualStrength); finite(v) {
			limits = append(limits, fmt.Sprintf("%s with %s", significant(v), ramps(row.Ramps)))
		}
	}
	if limits == nil {
		return text + " Equal-strength limit " + d.Limit + "."
	}
	return text + " Equal-strength limit at " + point.Name + ": " + strings.Join(limits, ", ") + " (" + d.Limit + ")."
}

// CSV writes ladder.csv: one row a number of ramps; searched values and every
// exact quantity, empty where a row has none.
func (d *LadderDocument) CSV() []byte {
	header := []string{"ramps", "status", "reason", "aim_exact", "aim_predicted", "gain", "ramp_at_minimum", "equal_strength"}
	var variables []string
	for _, row := range d.Rows { // the row of most ramps has every variable
		names := make([]string, len(row.Variables))
		for i, v := range row.Variables {
			names[i] = v.Name
		}
		if len(names) > len(variables) {
			variables = names
		}
	}
	header = append(header, variables...)
	columns := d.columns()
	for _, c := range columns {
		header = append(header, c[0]+"@"+c[1])
	}
	rows := [][]string{header}
	for _, row := range d.Rows {
		cells := []string{fmt.Sprint(row.Ramps), row.Status, row.Reason, shortest(float64(row.Aim.Exact)), shortest(float64(row.Aim.Predicted)),
			shortest(float64(row.Gain)), strings.Trim(fmt.Sprint(row.RampAtMinimum), "[]"), shortest(float64(row.EqualStrength))}
		for _, name := range variables {
			cells = append(cells, valueText(row.Variables, name))
		}
		for _, c := range columns {
			cells = append(cells, shortest(row.exact(c[0], c[1])))
		}
		rows = append(rows, cells)
	}
	return csvBytes(rows)
}

// columns lists quantity and point of every exact value.
func (d *LadderDocument) columns() [][2]string {
	for _, row := range d.Rows {
		if len(row.Exact) == 0 {
			continue
		}
		var list [][2]string
		for _, point := range row.Exact {
			for _, q := range point.Value {
				list = append(list, [2]string{q.Name, point.Name})
			}
		}
		return list
	}
	return nil
}

// valueText is a value by name, empty where there is none.
func valueText(values Object[Number], name string) string {
	if v, ok := values.Get(name); ok {
		return shortest(float64(v))
	}
	return ""
}

func csvBytes(rows [][]string) []byte {
	var b bytes.Buffer
	if err := csv.NewWriter(&b).WriteAll(rows); err != nil {
		panic("report: memory always takes a row: " + err.Error())
	}
	return b.Bytes()
}

// Picture draws recovery at the design point against the number of ramps.
func (d *LadderDocument) Picture() ([]byte, error) {
	point := &d.study.Definition.Points[0]
	designs := chart.Line{Name: "this brief", Lead: true}
	limit := chart.Line{Name: "equal-strength limit"}
	var without []string
	for _, row := range d.Rows {
		x := float64(row.Ramps)
		if v := row.exact("recovery", point.Name); row.Feasible && finite(v) {
			designs.Points = append(designs.Points, chart.LinePoint{X: x, Y: v, Note: significant(v)})
		} else {
			without = append(without, fmt.Sprintf("%s %s", ramps(row.Ramps), statusWords(row.Status)))
		}
		if v := float64(row.EqualStrength); finite(v) {
			limit.Points = append(limit.Points, chart.LinePoint{X: x, Y: v})
		}
	}
	picture := chart.LineChart{
		Title:  d.Title + ": recovery against ramps",
		XLabel: "ramps", YLabel: "recovery at " + point.Name, WholeX: true,
		Levels: []chart.Level{{Name: "standard recovery", Y: float64(d.StandardRecovery)}},
		Low:    float64(d.Rows[0].Ramps), High: float64(d.Rows[len(d.Rows)-1].Ramps),
	}
	picture.Subtitle = append(picture.Subtitle, fmt.Sprintf("%s, Mach %s; aim: %s %s", point.Name, plain(point.Mach), extreme(d.Aim.Highest), aimPhrase(d.Aim.Text, d.Aim.Where)))
	if without != nil {
		picture.Subtitle = append(picture.Subtitle, "no design holds every limit: "+strings.Join(without, ", "))
	}
	picture.Subtitle = append(picture.Subtitle, strings.Replace("equal-strength limit: "+d.Limit, ": not drawn", " not drawn", 1))
	for _, line := range []chart.Line{designs, limit} {
		if line.Points != nil {
			picture.Lines = append(picture.Lines, line)
		}
	}
	return drawLines(picture)
}

// drawLines returns a picture as a file of SVG.
func drawLines(picture chart.LineChart) ([]byte, error) {
	return chart.Alone(func(w io.Writer) error { return chart.WriteLineChart(w, picture) })
}

func extreme(highest bool) string {
	if highest {
		return "highest"
	}
	return "lowest"
}

// aimPhrase is an aim in words.
func aimPhrase(text, where string) string {
	switch where {
	case "", problems.Geometry:
		return text
	case "mean":
		return "weighted mean of " + text + " over the flight points"
	case "worst":
		return "worst " + text + " of the flight points"
	}
	return text + " at " + where
}
