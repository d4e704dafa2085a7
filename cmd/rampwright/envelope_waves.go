package main

import (
	"fmt"
	"io"
	"math"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems/contour"
	"rampwright/problems/envelope"
	"rampwright/problems/wave"
)

// wavesViews draws every wave of a trace through its inlet: the whole, and the duct
// from just ahead of the lip.
func wavesViews(title string, at envelope.Condition, geometry wave.Geometry, trace *wave.Trace) (whole, duct []byte, err error) {
	view := wavesView(title, at, geometry, trace)
	if whole, err = sheetOf(view); err != nil {
		return nil, nil, err
	}
	lip, end := geometry.CowlInner[0].X, wallEnd(geometry)
	duct, err = sheetOf(cropped(view, lip-ductLead*(end-lip)))
	return whole, duct, err
}

// ductLead is the part of the drawn duct's length shown ahead of the lip.
const ductLead = 0.3

func sheetOf(view chart.SideView) ([]byte, error) {
	return chart.Alone(func(w io.Writer) error { return chart.WriteSideView(w, view) })
}

func wavesView(title string, at envelope.Condition, geometry wave.Geometry, trace *wave.Trace) chart.SideView {
	end := wallEnd(geometry)
	status := "attached"
	switch {
	case trace.Ending != nil && trace.Stations[0].Err == nil:
		status = "attached as far as the throat plane; behind it " + trace.Ending.Error()
	case trace.Ending != nil:
		status = trace.Ending.Error()
	}
	view := chart.SideView{
		Title:     title,
		Subtitle:  []string{fmt.Sprintf("Mach %.4g, incidence %.3g deg: %s", at.Mach, at.Incidence*degree, status), wavesNote(trace)},
		Incidence: at.Incidence,
		Body:      wallTo(geometry.Body, end), CowlInner: wallTo(geometry.CowlInner, end),
	}
	lip := geometry.CowlInner[0]
	length := math.Max(geometry.OuterLength, 0.1*lip.Y)
	view.CowlOuter = []chart.Vertex{vertex("", lip), vertex("", along(lip, geometry.OuterAngle, length/math.Cos(geometry.OuterAngle)))}
	view.Body[0].Name, view.CowlInner[0].Name = "leading edge", "cowl lip"
	if s := geometry.Shoulder; s > 0 && s < len(view.Body) {
		view.Body[s].Name = "shoulder"
	}
	view.Waves = fronts(trace, end)
	for _, p := range trace.Captured.Streamline {
		view.LipStreamline = append(view.LipStreamline, vertex("", p))
	}
	return view
}

// cropped is the part of a view from x on.
func cropped(view chart.SideView, from float64) chart.SideView {
	view.Body = croppedLine(view.Body, from)
	view.LipStreamline = croppedLine(view.LipStreamline, from)
	var kept []chart.Wave
	for _, w := range view.Waves {
		if w.X2 <= from {
			continue
		}
		if w.X1 < from {
			w.Y1 += (from - w.X1) / (w.X2 - w.X1) * (w.Y2 - w.Y1)
			w.X1 = from
		}
		kept = append(kept, w)
	}
	view.Waves = kept
	return view
}

// croppedLine is the part of a line from x on; nil where one point is left of it.
func croppedLine(line []chart.Vertex, from float64) []chart.Vertex {
	var kept []chart.Vertex
	for i, p := range line {
		if p.X < from {
			continue
		}
		if i > 0 && kept == nil && p.X > from {
			q := line[i-1]
			kept = append(kept, chart.Vertex{X: from, Y: q.Y + (from-q.X)/(p.X-q.X)*(p.Y-q.Y)})
		}
		kept = append(kept, p)
	}
	if len(kept) < 2 {
		return nil
	}
	return kept
}

// wavesNote says what of the trace is drawn and what it found.
func wavesNote(trace *wave.Trace) string {
	note := fmt.Sprintf("Capture %.5g. Drawn: waves whose pressure ratio differs from 1 by more than %g, and slip lines of that jump in total pressure.", trace.Captured.Capture, drawnJump)
	if s := trace.Stations[0]; s.Err == nil {
		note = fmt.Sprintf("Throat averages: recovery %.5g, Mach %.5g. ", s.Recovery, s.Mach) + note
	}
	return note
}

// wallEnd is the x at which walls and waves are cut: the last plane.
func wallEnd(geometry wave.Geometry) float64 { return geometry.Planes[len(geometry.Planes)-1] }

// wallTo lists the points of a wall as far as the end.
func wallTo(points []contour.Point, end float64) []chart.Vertex {
	list := []chart.Vertex{vertex("", points[0])}
	for i, p := range points[1:] {
		before := points[i]
		if p.X >= end || i == len(points)-2 {
			share := (end - before.X) / (p.X - before.X)
			return append(list, chart.Vertex{X: end, Y: before.Y + share*(p.Y-before.Y)})
		}
		list = append(list, vertex("", p))
	}
	return list
}

// drawnJump is the least |p2/p1 - 1| of a wave worth drawing, of a slip line the
// least jump of total pressure.
const drawnJump = 0.01

// fronts lists the fronts of a trace worth drawing, cut at the end. The first front
// of each corner and of the lip carries its name.
func fronts(trace *wave.Trace, end float64) []chart.Wave {
	var list []chart.Wave
	named := map[string]bool{}
	for _, f := range trace.Fronts {
		kind, name := frontKind(f)
		from, to := f.From, f.To
		if !f.Duct && f.Kind != wave.Shock || from.X >= end || jump(trace, f) < drawnJump {
			continue
		}
		if to.X > end {
			share := (end - from.X) / (to.X - from.X)
			to = contour.Point{X: end, Y: from.Y + share*(to.Y-from.Y)}
		}
		if named[name] {
			name = ""
		}
		named[name] = true
		list = append(list, chart.Wave{Name: name, Kind: kind, X1: from.X, Y1: from.Y, X2: to.X, Y2: to.Y})
	}
	return list
}

// jump is how far the pressure ratio of a front, of a slip line that of total
// pressures, is from 1.
func jump(trace *wave.Trace, f wave.Front) float64 {
	below, above := &trace.Regions[f.Below], &trace.Regions[f.Above]
	if f.Kind == wave.Slip {
		return math.Abs(below.TotalPressure/above.TotalPressure - 1)
	}
	return math.Abs(below.Pressure/above.Pressure - 1)
}

// frontKind is how a front is drawn, and its name if it starts on a wall.
func frontKind(f wave.Front) (kind chart.WaveKind, name string) {
	switch {
	case f.Kind == wave.Slip:
		return chart.SlipLine, ""
	case f.Kind == wave.Wavelet:
		return chart.Expansion, ""
	case f.Source > 0:
		return chart.RampShock, fmt.Sprintf("ramp %d shock", f.Source)
	case f.Source == wave.SourceLip:
		return chart.LipShock, "lip shock"
	case f.Source == wave.SourceOuterCowl || !f.Duct:
		return chart.CowlShock, ""
	}
	return chart.DuctShock, ""
}

// waves draws the inlet with every wave at one condition.
func (p *envelopePlan) waves(at envelope.Condition) (whole, duct []byte, err error) {
	geometry, trace, err := p.frozen.Waves(at)
	if err != nil {
		return nil, nil, err
	}
	return wavesViews(p.study.brief.Title, at, geometry, trace)
}
