package main

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/cmd/rampwright/internal/handoff"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems/contour"
	"rampwright/problems/inlet"
)

const degree = 180 / math.Pi

// sideView draws the inlet at one flight point: mold line, waves, lip streamline and
// the names of the stations.
func sideView(title, caution string, flow *inlet.Flow, at *inlet.PointFlow) ([]byte, error) {
	shape := &flow.Contour
	outer := along(shape.Lip, shape.CowlOuter, math.Max(flow.CowlLength, 0.1*shape.Lip.Y)/math.Cos(shape.CowlOuter))
	view := chart.SideView{
		Title:     title,
		Subtitle:  []string{fmt.Sprintf("%s, Mach %.4g, incidence %.3g deg: %s", at.Point.Name, at.Point.Mach, at.Point.Incidence*degree, at.Status())},
		Caution:   caution,
		Incidence: at.Point.Incidence,
		CowlOuter: []chart.Vertex{vertex("", shape.Lip), vertex("", outer)},
		Stations:  stationPlaces(flow, at),
	}
	view.Body, view.CowlInner = walls(flow)
	view.Waves = waves(at, view.Body[len(view.Body)-1].X)
	if at.Traced {
		view.Subtitle = append(view.Subtitle, "traced wave by wave; waves of pressure ratios within 2 % of 1 are left out")
	}
	if at.Behind != nil {
		view.Subtitle = append(view.Subtitle, "ends behind the throat plane: "+at.Behind.Error())
	}
	for _, p := range at.Streamline {
		view.LipStreamline = append(view.LipStreamline, vertex("", p))
	}
	return chart.Alone(func(w io.Writer) error { return chart.WriteSideView(w, view) })
}

// walls are the body and the inner cowl as drawn, named where a label is due.
func walls(flow *inlet.Flow) (inner, cowl []chart.Vertex) {
	shape := &flow.Contour
	if o := flow.Outline; o != nil {
		for i, p := range o.Body {
			name := ""
			if i < len(shape.Corners) {
				name = cornerName(i)
			} else if p == shape.Shoulder {
				name = "shoulder"
			}
			inner = append(inner, vertex(name, p))
		}
		for _, p := range o.CowlInner {
			cowl = append(cowl, vertex("", p))
		}
	} else {
		behind := ductLength(shape)
		inner = body(shape, behind)
		cowl = []chart.Vertex{vertex("", shape.Lip), vertex("", along(shape.Lip, shape.CowlInner, innerLength(shape, behind)))}
	}
	inner[0].Name, cowl[0].Name = "leading edge", "cowl lip"
	return inner, cowl
}

// waves are the shocks of a point and, of a traced one, the rays of its fans. A
// shock that others cut into pieces is named at the first.
func waves(at *inlet.PointFlow, end float64) []chart.Wave {
	var list []chart.Wave
	named := map[string]bool{}
	for _, s := range at.Shocks {
		if s.From.X > end {
			continue
		}
		wave := chart.Wave{Name: s.Name, Kind: waveKind(s), X1: s.From.X, Y1: s.From.Y, X2: s.To.X, Y2: s.To.Y}
		if named[s.Name] {
			wave.Name = ""
		}
		named[s.Name] = true
		list = append(list, wave)
	}
	return list
}

func waveKind(s inlet.Segment) chart.WaveKind {
	switch {
	case s.Expansion:
		return chart.Expansion
	case s.Name == "":
		return chart.DuctShock
	case s.Name == "lip shock":
		return chart.LipShock
	case s.Name == "outer cowl shock":
		return chart.CowlShock
	}
	return chart.RampShock
}

// ductLength is how much of the duct behind the shoulder is drawn and handed
// over: four throat heights.
func ductLength(shape *contour.Inlet) float64 { return 4 * shape.Throat }

// body is the ramp surface from the leading edge, past the shoulder into the
// duct.
func body(shape *contour.Inlet, behind float64) []chart.Vertex {
	var list []chart.Vertex
	for i, c := range shape.Corners {
		list = append(list, vertex(cornerName(i), c))
	}
	return append(list, vertex("shoulder", shape.Shoulder), vertex("", along(shape.Shoulder, shape.CowlInner, behind)))
}

func cornerName(i int) string {
	if i == 0 {
		return "leading edge"
	}
	return fmt.Sprintf("corner %d", i+1)
}

// innerLength ends the inner cowl surface abreast of the body's end.
func innerLength(shape *contour.Inlet, behind float64) float64 {
	wall := contour.Line{Through: shape.Lip, Angle: shape.CowlInner}
	return wall.Along(along(shape.Shoulder, shape.CowlInner, behind))
}

func along(p contour.Point, angle, distance float64) contour.Point {
	sin, cos := math.Sincos(angle)
	return contour.Point{X: p.X + distance*cos, Y: p.Y + distance*sin}
}

func vertex(name string, p contour.Point) chart.Vertex {
	return chart.Vertex{Name: name, X: p.X, Y: p.Y}
}

// stationPlaces puts each station's name into its region: ahead of the first
// shock, above the middle of each ramp, and in the duct.
func stationPlaces(flow *inlet.Flow, at *inlet.PointFlow) []chart.Vertex {
	shape := &flow.Contour
	height := shape.Lip.Y
	places := []chart.Vertex{{Name: "free stream", X: 0.02 * shape.Lip.X, Y: 0.75 * height}}
	for i := range shape.Corners {
		if i+1 >= len(at.Stations) || !strings.HasPrefix(at.Stations[i+1].Name, "ramp ") {
			return places
		}
		end := shape.Shoulder
		if i+1 < len(shape.Corners) {
			end = shape.Corners[i+1]
		}
		start := shape.Corners[i]
		middle := contour.Point{X: (start.X + 2*end.X) / 3, Y: (start.Y + 2*end.Y) / 3}
		places = append(places, vertex(at.Stations[i+1].Name, along(middle, shape.Angles[i]+math.Pi/2, 0.03*height)))
	}
	if at.Traced {
		return places // what lies in the duct is not uniform
	}
	if last := at.Stations[len(at.Stations)-1]; last.Name == "throat" {
		places = append(places, vertex("throat", along(along(shape.Shoulder, shape.CowlInner, 2*shape.Throat), shape.CowlInner+math.Pi/2, shape.Throat/2)))
	}
	return places
}

// profile lists the mold line for the hand-over, surface by surface.
func profile(flow *inlet.Flow) ([]byte, error) {
	shape := &flow.Contour
	behind := ductLength(shape)
	var points []handoff.ProfilePoint
	add := func(surface, name string, p contour.Point) {
		points = append(points, handoff.ProfilePoint{Surface: surface, Name: name, X: p.X, Y: p.Y})
	}
	for i, c := range shape.Corners {
		add("body", cornerName(i), c)
	}
	add("body", "shoulder", shape.Shoulder)
	add("body", "duct end", along(shape.Shoulder, shape.CowlInner, behind))
	add("cowl inner", "lip", shape.Lip)
	add("cowl inner", "duct end", along(shape.Lip, shape.CowlInner, innerLength(shape, behind)))
	add("cowl outer", "lip", shape.Lip)
	add("cowl outer", "outer end", along(shape.Lip, shape.CowlOuter, flow.CowlLength/math.Cos(shape.CowlOuter)))
	var out bytes.Buffer
	if err := handoff.WriteProfile(&out, points); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

// stations lists the states of every flight point for the hand-over, as the
// document has them.
func stations(flow []report.Point) ([]byte, error) {
	var points []handoff.FlightPoint
	for _, p := range flow {
		point := handoff.FlightPoint{
			Name: p.Name, Mach: float64(p.Mach), IncidenceDeg: float64(p.IncidenceDeg), Status: p.Status,
		}
		for _, s := range p.Stations {
			point.Stations = append(point.Stations, handoff.Station{
				Name: s.Name, Mach: float64(s.Mach), FlowAngleDeg: float64(s.FlowAngleDeg),
				WaveAngleDeg: float64(s.WaveAngleDeg), WaveAngleAbsoluteDeg: float64(s.WaveAngleAbsoluteDeg),
				NormalMach: float64(s.NormalMach), StaticPressureRatio: float64(s.StaticPressureRatio),
				StaticTemperatureRatio: float64(s.StaticTemperatureRatio), TotalPressureRatio: float64(s.TotalPressureRatio),
				PressureKPa: float64(s.PressureKPa), TemperatureK: float64(s.TemperatureK),
			})
		}
		points = append(points, point)
	}
	var out bytes.Buffer
	if err := handoff.WriteStations(&out, points); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}
