package report

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems/envelope"
)

// Map draws map.svg: the states, the boundaries, and the flight points.
func (d *EnvelopeDocument) Map() ([]byte, error) {
	s := &d.study.Survey.Settings
	m := chart.RegionMap{
		Title:    d.Title + ": operating map",
		Subtitle: []string{d.held()},
		X:        d.machSpan(),
		Y:        chart.Span{Label: "incidence, deg", Low: gridDegrees(s.LowIncidence), High: gridDegrees(s.HighIncidence)},
		NX:       s.MachPoints, NY: s.IncidencePoints,
		DotName: "every limit holds",
	}
	for state := range envelope.States {
		m.Classes = append(m.Classes, state.String())
	}
	for j := range m.NY {
		for i := range m.NX {
			sample := d.study.Survey.At(i, j)
			m.Cells, m.Dots = append(m.Cells, int(sample.State)), append(m.Dots, len(sample.Missed) == 0)
		}
	}
	for _, line := range d.Boundary {
		points := make([][2]float64, len(line.Points))
		for i, p := range line.Points {
			points[i] = [2]float64{float64(p[0]), float64(p[1])}
		}
		m.Lines = append(m.Lines, chart.RegionLine{Name: line.Name, Strong: line.Kind != string(envelope.LimitViolated), Points: points})
	}
	if all := len(m.Lines); all > chart.MostRegionLines {
		m.Lines = longestLines(m, chart.MostRegionLines)
		m.Subtitle = append(m.Subtitle, fmt.Sprintf("The %d longest of %d lines are drawn; boundary.csv has all.", len(m.Lines), all))
	}
	for _, p := range d.study.Definition.Points {
		inside := p.Mach >= s.LowMach && p.Mach <= s.HighMach && p.Incidence >= s.LowIncidence && p.Incidence <= s.HighIncidence
		if inside {
			m.Places = append(m.Places, chart.Vertex{Name: p.Name, X: p.Mach, Y: degrees(p.Incidence)})
		}
	}
	return chart.Alone(func(w io.Writer) error { return chart.WriteRegionMap(w, m) })
}

// longestLines are n lines of a map in their order: those that run farthest, in
// shares of its sides.
func longestLines(m chart.RegionMap, n int) []chart.RegionLine {
	lengths := make([]float64, len(m.Lines))
	for i, line := range m.Lines {
		for k := 1; k < len(line.Points); k++ {
			p, q := line.Points[k-1], line.Points[k]
			lengths[i] += math.Hypot((q[0]-p[0])/(m.X.High-m.X.Low), (q[1]-p[1])/(m.Y.High-m.Y.Low))
		}
	}
	order := make([]int, len(m.Lines))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(lengths[b], lengths[a]) })
	kept := order[:n]
	slices.Sort(kept)
	lines := make([]chart.RegionLine, n)
	for i, k := range kept {
		lines[i] = m.Lines[k]
	}
	return lines
}

func (d *EnvelopeDocument) machSpan() chart.Span {
	s := &d.study.Survey.Settings
	return chart.Span{Label: "free-stream Mach number", Low: s.LowMach, High: s.HighMach}
}

// curve lists n points of a line, with a gap where y is missing.
func curve(n int, at func(i int) (x, y float64)) []chart.LinePoint {
	var points []chart.LinePoint
	gap := false
	for i := range n {
		x, y := at(i)
		if !finite(y) {
			gap = true
			continue
		}
		points = append(points, chart.LinePoint{X: x, Y: y, Gap: gap && points != nil})
		gap = false
	}
	return points
}

// curvesShown is how many incidences a picture against Mach number has at most.
const curvesShown = 5

// Against draws a quantity against Mach number at a few incidences of the grid.
func (d *EnvelopeDocument) Against(quantity, label string) ([]byte, error) {
	c := chart.LineChart{
		Title: d.Title + ": " + label, Subtitle: []string{d.held()},
		XLabel: "free-stream Mach number", YLabel: label,
		Low: d.study.Survey.Settings.LowMach, High: d.study.Survey.Settings.HighMach,
	}
	m := len(d.Grid.IncidenceDeg)
	last := -1
	for k := range min(m, curvesShown) {
		j := k
		if m > curvesShown {
			j = int(math.Round(float64(k) / (curvesShown - 1) * float64(m-1)))
		}
		if j == last {
			continue
		}
		last = j
		line := chart.Line{Name: fmt.Sprintf("incidence %.3g deg", float64(d.Grid.IncidenceDeg[j]))}
		line.Points = curve(len(d.Grid.Mach), func(i int) (x, y float64) {
			row := &d.Rows[i*m+j]
			return float64(row.Mach), row.value(quantity)
		})
		if line.Points != nil {
			c.Lines = append(c.Lines, line)
		}
	}
	return drawLines(c)
}
