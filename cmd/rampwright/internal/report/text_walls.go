package report

import (
	"fmt"
	"strings"
)

// walls writes the pressures and forces on the walls of every traced point by segment,
// and which shock falls inside the lip.
func (p *page) walls(points []Point) {
	t := &table{columns: []column{
		{head: "surface,\nsegment"}, {head: "from x\nm", drop: 1}, {head: "to x\nm"}, {head: "least\np/p0"}, {head: "mean\np/p0"}, {head: "greatest\np/p0"}, {head: "force x"}, {head: "force y"},
	}}
	var references []string
	cells := wallCells(points)
	row := 0
	for i := range points {
		trace := points[i].Trace
		if trace == nil || len(trace.Forces) == 0 {
			continue
		}
		t.section(shorten(points[i].Name))
		for _, f := range trace.Forces {
			t.add(append([]string{fmt.Sprintf("%s %d", f.Surface, f.Segment)}, cells[row]...)...)
			row++
		}
		all := trace.ForceSums[len(trace.ForceSums)-1]
		sum := fixed([]float64{float64(all.X), float64(all.Y)}, forceDecimals)
		t.add(allSurfaces, "", "", "", "", "", sum[0], sum[1])
		references = append(references, fmt.Sprintf("%s N at %s", significant(float64(trace.ForceReference)), points[i].Name))
	}
	if row == 0 {
		return
	}
	p.heading("Pressure along the walls")
	p.wrap(indent, "As far as the throat plane or the end of the trace, the outer cowl to its length. Forces are those of p - p0 on the wall over q0 Ac, x downstream, y toward the cowl.", indent)
	p.table(t)
	p.wrap(indent, "q0 Ac: "+strings.Join(references, ", ")+". Every stretch of wall: --json, --waves.", indent)
	p.lipShocks(points)
}

const forceDecimals = 5

// wallCells are the numbers of the table, one row a segment, each column with its own
// decimals.
func wallCells(points []Point) [][]string {
	var columns [7][]float64
	for i := range points {
		if points[i].Trace == nil {
			continue
		}
		for _, f := range points[i].Trace.Forces {
			for k, v := range [...]Number{f.FromM[0], f.ToM[0], f.LeastPressure, f.MeanPressure, f.MostPressure, f.X, f.Y} {
				columns[k] = append(columns[k], float64(v))
			}
		}
	}
	rows := make([][]string, len(columns[0]))
	for k, column := range columns {
		decimals := 4
		if k >= 5 {
			decimals = forceDecimals
		}
		for i, text := range fixed(column, decimals) {
			rows[i] = append(rows[i], text)
		}
	}
	return rows
}

// lipShocks says which shocks fall inside the lip.
func (p *page) lipShocks(points []Point) {
	for i := range points {
		if points[i].Trace == nil {
			continue
		}
		for _, s := range points[i].Trace.LipShocks {
			if s.Inside {
				p.wrap(indent, fmt.Sprintf("%s: the %s falls inside the lip by %s capture heights, along x at lip height.", points[i].Name, s.Name, significant(-float64(s.Clearance))), indent+indent)
			}
		}
	}
}
