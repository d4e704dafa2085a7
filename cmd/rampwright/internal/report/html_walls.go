package report

import (
	"io"
	"math"

	"rampwright/cmd/rampwright/internal/chart"
)

// walls draws and tables the pressures on the walls of the traced points of a document.
func (s *chapter) walls(file string, points []Point) {
	shown := false
	for i := range points {
		p := &points[i]
		if p.Trace == nil || len(p.Trace.Walls) == 0 {
			continue
		}
		shown = true
		name := quoted(p.Name, file, "points", i, "name")
		s.figures(false, htmlFigure{
			Picture: drawn(func(w io.Writer) error { return chart.WriteLineChart(w, wallChart(p)) }),
			Caption: []cell{words("Static pressure along the walls at "), name, words(" over that of the free stream, as far as the throat plane or the end of the trace.")},
		})
		s.table(p.Trace.forceTable(name, file, i))
	}
	if shown {
		s.say(words("Forces are those of the gauge pressure on the wall over q0 Ac, x downstream, y toward the cowl; every stretch of wall and every stream tube of the throat plane stands in the JSON."))
	}
}

// forceTable lists pressures and forces by segment, then the sums by surface of more
// than one, and over all.
func (t *Trace) forceTable(point cell, file string, i int) *htmlTable {
	at := func(key ...any) []any { return append([]any{"points", i, "trace"}, key...) }
	table := &htmlTable{
		Caption: []cell{words("Walls at "), point, words(", q0 Ac "), number(t.ForceReference, file, at("force_reference_N")...), words(" N")},
		Head:    columnHeads(1, "surface", "segment", "from x, m", "to x, m", "least p/p0", "mean p/p0", "greatest p/p0", "force x", "force y", "force x, N", "force y, N"),
	}
	for k, f := range t.Forces {
		in := func(key ...any) []any { return at(append([]any{"forces", k}, key...)...) }
		table.Rows = append(table.Rows, append([]cell{
			quoted(f.Surface, file, in("surface")...), countCell(int64(f.Segment), file, in("segment")...),
			number(f.FromM[0], file, in("from_m", 0)...), number(f.ToM[0], file, in("to_m", 0)...),
			number(f.LeastPressure, file, in("least_pressure_ratio")...), number(f.MeanPressure, file, in("mean_pressure_ratio")...),
			number(f.MostPressure, file, in("greatest_pressure_ratio")...),
		}, f.cells(file, in())...))
	}
	segments := map[string]int{}
	for _, f := range t.Forces {
		segments[f.Surface]++
	}
	blank := cell{Text: "", Number: true}
	for k, f := range t.ForceSums {
		if segments[f.Surface] == 1 {
			continue
		}
		in := at("force_sums", k)
		row := []cell{{Parts: []cell{words("sum, "), quoted(f.Surface, file, append(in[:len(in):len(in)], "surface")...)}}, blank, blank, blank, blank, blank, blank}
		table.Rows = append(table.Rows, append(row, f.cells(file, in)...))
	}
	return table
}

// cells are the components of a force at a place of a document.
func (f *Force) cells(file string, path []any) []cell {
	at := func(key string) []any { return append(path[:len(path):len(path)], key) }
	return []cell{
		number(f.X, file, at("force_x")...), number(f.Y, file, at("force_y")...),
		number(f.XN, file, at("force_x_N")...), number(f.YN, file, at("force_y_N")...),
	}
}

// logFrom is the ratio of greatest to least pressure from which its axis is
// logarithmic.
const logFrom = 3

// wallChart draws the pressure against x, a line a surface.
func wallChart(p *Point) chart.LineChart {
	walls := p.Trace.Walls
	c := chart.LineChart{
		Title: "Pressure along the walls: " + p.Name, Subtitle: []string{pointLine(p)},
		XLabel: "x, m", YLabel: "static pressure over that of the free stream", Levels: []chart.Level{{Name: "free stream", Y: 1}},
		Low: float64(walls[0].FromM[0]), High: float64(walls[0].ToM[0]),
	}
	low, high := 1.0, 1.0
	for i, w := range walls {
		if i == 0 || walls[i-1].Surface != w.Surface {
			c.Lines = append(c.Lines, chart.Line{Name: w.Surface, Lead: i == 0, Steps: true})
		}
		line := &c.Lines[len(c.Lines)-1]
		line.Points = append(line.Points, chart.LinePoint{X: float64(w.FromM[0]), Y: float64(w.PressureRatio)})
		if i+1 == len(walls) || walls[i+1].Surface != w.Surface {
			line.Points = append(line.Points, chart.LinePoint{X: float64(w.ToM[0]), Y: float64(w.PressureRatio)})
		}
		low, high = math.Min(low, float64(w.PressureRatio)), math.Max(high, float64(w.PressureRatio))
	}
	c.LogY = high >= logFrom*low
	return c
}
