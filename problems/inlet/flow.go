package inlet

import (
	"context"
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/wave"
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
// where it ends. Of a traced point it is a piece between two crossings, or a ray of
// an expansion; pieces that crossings and reflections made have no name.
type Segment struct {
	Name      string
	From, To  contour.Point
	Expansion bool
}

// PointFlow is the flow of a frozen inlet at one condition.
type PointFlow struct {
	Point      Point
	Err        error // why the stream is not attached from free stream to throat; nil if it is
	Stations   []Station
	Shocks     []Segment
	Streamline []contour.Point // of the lip, from ahead of the first shock to the lip; empty where unknown
	// Traced says that the quantities of the captured stream are those of Trace: the
	// chain of straight shocks has no answer here, or the point asks for the trace.
	Traced bool
	// Trace is every wave through the contour: of a traced point, and in Flow beside
	// the chain where its lip shock misses the shoulder; else nil.
	Trace *wave.Trace
	// Behind is why the captured stream does not go on down the duct behind the throat
	// plane of a point with a trace; nil where it does as far as drawings reach, and
	// behind a terminal shock.
	Behind *wave.Ending
	// Quantities and Evaluation hold the catalogue at this point, in one order.
	Quantities []problems.Quantity
	Evaluation *problems.Evaluation
}

// Status is the word of results: "attached" or the reason.
func (f *PointFlow) Status() string {
	if f.Err == nil {
		return "attached"
	}
	return f.Err.Error()
}

// Value returns a quantity of the point by its name, of a group the least member
// that has a value; NaN with the reason where it is missing.
func (f *PointFlow) Value(name string) (value float64, reason error) {
	value, reason = math.NaN(), &problems.NotApplicable{Why: "no such quantity"}
	for i := range f.Quantities {
		if f.Quantities[i].Name != name {
			continue
		}
		v, err := f.Evaluation.Values[i], f.Evaluation.Reasons[i]
		switch {
		case err == nil && !(value <= v):
			value, reason = v, nil
		case math.IsNaN(value):
			reason = err
		}
	}
	return value, reason
}

// Member returns the value of one member of a group; see Value.
func (f *PointFlow) Member(name, member string) (value float64, reason error) {
	for i := range f.Quantities {
		if q := &f.Quantities[i]; q.Name == name && q.Member == member {
			return f.Evaluation.Values[i], f.Evaluation.Reasons[i]
		}
	}
	return math.NaN(), &problems.NotApplicable{Why: "no such quantity"}
}

// Flow is one frozen inlet at every flight point.
type Flow struct {
	Design     Design
	Contour    contour.Inlet
	Focus      contour.Point
	ContourErr error    // why the contour does not close
	Outline    *Outline // the walls of an existing inlet; nil for a design
	// CowlLength is the outer cowl along x, m.
	CowlLength float64
	Points     []PointFlow
	Evaluation *problems.Evaluation // every quantity, in the problem's order
}

// Flow computes the frozen inlet at x with its stations and drawing lines. Points
// beyond the chain and those that ask for it are traced with the settings of
// verification; so is a point whose lip shock misses the shoulder, for comparison
// only.
func (p *Problem) Flow(ctx context.Context, x []float64) (*Flow, error) {
	return p.FlowBy(ctx, x, VerifyTrace())
}

// FlowBy is Flow with other settings of the traces.
func (p *Problem) FlowBy(ctx context.Context, x []float64, settings wave.Settings) (*Flow, error) {
	frozen := p.Freeze(x)
	flow := &Flow{
		Design: frozen.design, Contour: frozen.shape.Inlet, Focus: frozen.shape.Focus, ContourErr: frozen.shape.err,
		Outline: p.definition.Outline, CowlLength: p.definition.CowlLength * frozen.shape.height,
		Evaluation: problems.NewEvaluation(len(p.quantities)),
	}
	next := 0
	for i := range p.definition.Points {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		a := frozen.analysis(p.definition.Points[i])
		a.fly(settings)
		next = p.read(a, flow.Evaluation, next, i)
		point := p.pointFlow(a)
		if a.trace == nil && a.missesShoulder() {
			point.Trace, _ = a.tracing(settings) // without one nothing is compared
		}
		if point.Trace != nil {
			a.goOn(point)
		}
		flow.Points = append(flow.Points, *point)
	}
	p.read(frozen.analysis(p.definition.Points[0]), flow.Evaluation, next, -1)
	return flow, nil
}

// missesShoulder reports whether the chain holds and its lip shock is not
// cancelled at the shoulder.
func (a *analysis) missesShoulder() bool {
	return a.status() == nil && a.shape.err == nil && a.lipTurning > 0 && a.miss > placeTolerance
}

// Frozen is one inlet whose contour no longer changes, for any condition. It is
// safe for concurrent use.
type Frozen struct {
	problem *Problem
	design  Design
	shape   *closure
}

// Freeze shapes the contour of the design at x, one value a variable; nil for a
// problem without.
func (p *Problem) Freeze(x []float64) *Frozen {
	w := new(workspace)
	p.freeze(w, first{}, x)
	return &Frozen{problem: p, design: w.design, shape: &w.shape}
}

// Contour returns the frozen contour and the reason why it does not close, nil if
// it does.
func (f *Frozen) Contour() (contour.Inlet, error) { return f.shape.Inlet, f.shape.err }

// Geometry returns the frozen contour as a trace takes it.
func (f *Frozen) Geometry() wave.Geometry { return f.shape.geometry(&f.problem.definition) }

// At computes the inlet at any condition: the chain of straight shocks where it
// holds and no trace is asked for, else a trace by the settings given. A flow that
// ends early is an answer with its reason in Err (and, of a traced one, its place in
// Trace.Ending); the error is that of the context.
func (f *Frozen) At(ctx context.Context, point Point, settings wave.Settings) (*PointFlow, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	a := f.analysis(point)
	a.fly(settings)
	return f.problem.pointFlow(a), nil
}

// Trace traces the inlet at any condition, whether or not the chain holds there.
// The error reports a contour or condition that no trace can use.
func (f *Frozen) Trace(point Point, settings wave.Settings) (*wave.Trace, error) {
	if f.shape.err != nil {
		return nil, f.shape.err
	}
	return f.analysis(point).tracing(settings)
}

// At computes the inlet of the design at x under any condition; see Frozen.At.
// Freeze once to ask for many conditions.
func (p *Problem) At(ctx context.Context, x []float64, point Point, settings wave.Settings) (*PointFlow, error) {
	return p.Freeze(x).At(ctx, point, settings)
}

func (f *Frozen) analysis(point Point) *analysis {
	return &analysis{def: &f.problem.definition, route: first{}, shape: f.shape, design: &f.design, point: &point}
}

// pointFlow takes the flow of one point off its analysis.
func (p *Problem) pointFlow(a *analysis) *PointFlow {
	f := &PointFlow{
		Point: *a.point, Err: a.status(), Traced: a.trace != nil, Trace: a.trace,
		Quantities: p.pointQuantities, Evaluation: problems.NewEvaluation(len(p.pointQuantities)),
	}
	p.read(a, f.Evaluation, 0, 0)
	if f.Traced {
		f.Stations, f.Shocks, f.Streamline = a.tracedStations(), a.tracedSegments(a.trace), a.trace.Captured.Streamline
	} else {
		f.Stations, f.Shocks, f.Streamline = a.stations(), a.segments(), a.lipStreamline()
	}
	return f
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
			list = append(list, Segment{Name: rampName(i) + " shock", From: a.shape.Corners[i], To: end})
		}
	}
	if a.throatErr == nil && a.design.LipTurning > 0 {
		list = append(list, Segment{Name: lipShockName, From: a.shape.Lip, To: a.lipFoot()})
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
