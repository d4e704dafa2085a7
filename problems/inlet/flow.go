package inlet

import (
	"context"
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
)

// Station is the state behind one wave. Ratios are to the free stream; numbers of
// the wave that leads into it are NaN where there is none. SI units and radians.
type Station struct {
	Name              string
	Mach              float64
	FlowAngle         float64 // to the x axis
	WaveAngle         float64 // to the flow ahead of the wave
	WaveAngleAbsolute float64 // to the x axis
	NormalMach        float64
	PressureRatio     float64
	TemperatureRatio  float64
	TotalPressure     float64 // ratio
	Pressure          float64 // Pa
	Temperature       float64 // K
}

// Segment is a straight shock as drawn: from the wall or lip it starts at to
// where it ends.
type Segment struct {
	Name     string
	From, To contour.Point
}

// PointFlow is the exact flow at one flight point.
type PointFlow struct {
	Point      Point
	Err        error // why the stream is not attached from free stream to throat; nil if it is
	Stations   []Station
	Shocks     []Segment
	Streamline []contour.Point // of the lip, from ahead of the first shock to the lip; empty where unknown
}

// Status is the word of results: "attached" or the reason.
func (f *PointFlow) Status() string {
	if f.Err == nil {
		return "attached"
	}
	return f.Err.Error()
}

// Flow is one frozen inlet at every flight point.
type Flow struct {
	Design     Design
	Contour    contour.Inlet
	Focus      contour.Point
	ContourErr error // why the contour does not close
	// CowlLength is the outer cowl along x, m.
	CowlLength float64
	Points     []PointFlow
	Evaluation *problems.Evaluation // every quantity, in the problem's order
}

// Flow computes the frozen inlet at x with its stations and drawing lines.
func (p *Problem) Flow(ctx context.Context, x []float64) (*Flow, error) {
	evaluation := problems.NewEvaluation(len(p.quantities))
	if err := p.Evaluate(ctx, x, evaluation); err != nil {
		return nil, err
	}
	var w workspace
	p.freeze(&w, first{}, x)
	flow := &Flow{
		Design: w.design, Contour: w.shape.Inlet, Focus: w.shape.Focus, ContourErr: w.shape.err,
		CowlLength: p.definition.CowlLength * p.definition.CaptureHeight,
		Evaluation: evaluation,
	}
	for i := range p.definition.Points {
		w.flow.point = &p.definition.Points[i]
		w.flow.run()
		flow.Points = append(flow.Points, PointFlow{
			Point: *w.flow.point, Err: w.flow.status(), Stations: w.flow.stations(),
			Shocks: w.flow.segments(), Streamline: w.flow.lipStreamline(),
		})
	}
	return flow, nil
}

// stations lists the states along the flow as far as they are known; the last is
// the throat, behind the terminal shock where there is one.
func (a *analysis) stations() []Station {
	none := math.NaN()
	state := Station{
		Name: "free stream", Mach: a.point.Mach, FlowAngle: a.flowAngle(0),
		WaveAngle: none, WaveAngleAbsolute: none, NormalMach: none,
		PressureRatio: 1, TemperatureRatio: 1, TotalPressure: 1,
	}
	var list []Station
	add := func() {
		state.Pressure = state.PressureRatio * a.point.Pressure
		state.Temperature = state.TemperatureRatio * a.point.Temperature
		list = append(list, state)
	}
	add()
	for i := range a.attached {
		wave := &a.waves[i]
		state.Name, state.Mach = rampName(i), wave.Mach2
		state.WaveAngle, state.WaveAngleAbsolute, state.NormalMach = wave.WaveAngle, state.FlowAngle+wave.WaveAngle, wave.NormalMach
		state.FlowAngle = a.flowAngle(i + 1)
		state.PressureRatio *= wave.Jump.Pressure
		state.TemperatureRatio *= wave.Jump.Temperature
		state.TotalPressure *= wave.Jump.TotalPressure
		add()
	}
	if a.throatErr != nil {
		return list
	}
	if a.design.LipTurning > 0 {
		state.Name, state.Mach = "behind lip shock", a.lip.Mach2
		state.WaveAngle, state.WaveAngleAbsolute, state.NormalMach = a.lip.WaveAngle, state.FlowAngle-a.lip.WaveAngle, a.lip.NormalMach
		state.FlowAngle = a.design.Cowl
		state.PressureRatio *= a.lip.Jump.Pressure
		state.TemperatureRatio *= a.lip.Jump.Temperature
		state.TotalPressure *= a.lip.Jump.TotalPressure
		add()
	}
	if a.def.TerminalShock {
		state.Name, state.Mach = "behind terminal shock", a.throatMach
		state.WaveAngle, state.WaveAngleAbsolute, state.NormalMach = math.Pi/2, state.FlowAngle+math.Pi/2, a.terminalMach
		state.PressureRatio *= a.terminal.Pressure
		state.TemperatureRatio *= a.terminal.Temperature
		state.TotalPressure *= a.terminal.TotalPressure
		add()
	}
	state.Name = "throat"
	state.WaveAngle, state.WaveAngleAbsolute, state.NormalMach = none, none, none
	add()
	return list
}

// segments lists the straight shocks: each ramp shock from its corner to the
// height of the lip, the lip shock from the lip to the wall it meets.
func (a *analysis) segments() []Segment {
	if a.shape.err != nil {
		return nil
	}
	var list []Segment
	level := contour.Line{Through: a.shape.Lip}
	for i := range a.attached {
		end, ok := contour.Meet(level, a.shockLine(i))
		if ok {
			list = append(list, Segment{rampName(i) + " shock", a.shape.Corners[i], end})
		}
	}
	if a.throatErr == nil && a.design.LipTurning > 0 {
		list = append(list, Segment{lipShockName, a.shape.Lip, a.lipFoot()})
	}
	return list
}

// lipStreamline is the captured stream's edge: from half a capture height ahead
// of the first shock, through the ramp shocks, to the lip.
func (a *analysis) lipStreamline() []contour.Point {
	if a.placeErr != nil {
		return nil
	}
	place := a.shape.Lip
	list := []contour.Point{place}
	for i := a.design.Ramps - 1; i >= 0; i-- {
		back, _ := a.streamline(place, i).Reach(a.shockLine(i))
		place = a.upstream(place, i, back)
		list = append(list, place)
	}
	sin, cos := math.Sincos(a.point.Incidence)
	ahead := 0.5*a.shape.height + math.Max(0, place.X)
	list = append(list, contour.Point{X: place.X - ahead*cos, Y: place.Y + ahead*sin})
	for i, j := 0, len(list)-1; i < j; i, j = i+1, j-1 {
		list[i], list[j] = list[j], list[i]
	}
	return list
}
