package envelope

import (
	"context"

	"rampwright/problems"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// Frozen is the inlet of a problem at fixed values of its variables, as a Model:
// the chain of straight shocks where it holds, a trace elsewhere. If a flight point
// of the problem asks for a trace, every condition is traced, so that a map is of
// one kind.
type Frozen struct {
	inlet      *inlet.Frozen
	definition inlet.Definition
	air        Air
	settings   wave.Settings
	quantities []problems.Quantity
}

// Freeze fixes the inlet of a problem at x, in air that follows the Mach number.
// Settings are those of its traces.
func Freeze(problem *inlet.Problem, x []float64, air Air, settings wave.Settings) *Frozen {
	f := &Frozen{inlet: problem.Freeze(x), definition: problem.Definition(), air: air, settings: settings}
	first := f.definition.Points[0].Name
	for _, q := range problem.Quantities() {
		if q.Point == first {
			q.Point = ""
			f.quantities = append(f.quantities, q)
		}
	}
	return f
}

// With is the same inlet with other settings of its traces.
func (f *Frozen) With(settings wave.Settings) *Frozen {
	other := *f
	other.settings = settings
	return &other
}

// Quantities lists those of one condition.
func (f *Frozen) Quantities() []problems.Quantity { return f.quantities }

// Point is a condition in the air it is met in.
func (f *Frozen) Point(at Condition) (inlet.Point, error) {
	p, t, err := f.air.At(f.definition.Gas, at.Mach)
	return inlet.Point{
		Name: "condition", Mach: at.Mach, Incidence: at.Incidence, Pressure: p, Temperature: t, Traced: f.definition.Traces(),
	}, err
}

// At computes the inlet at one condition.
func (f *Frozen) At(ctx context.Context, at Condition, dst *problems.Evaluation) (Outcome, error) {
	point, err := f.Point(at)
	if err != nil {
		return Outcome{}, err
	}
	flow, err := f.inlet.At(ctx, point, f.settings)
	if err != nil {
		return Outcome{}, err
	}
	return take(flow, dst), nil
}

// take copies the values of a flow and returns its outcome.
func take(flow *inlet.PointFlow, dst *problems.Evaluation) Outcome {
	copy(dst.Values, flow.Evaluation.Values)
	copy(dst.Reasons, flow.Evaluation.Reasons)
	if flow.Err != nil && flow.Trace != nil && flow.Trace.Ending != nil {
		return Outcome{&TraceEnded{flow.Err, flow.Trace.Ending}, flow.Traced}
	}
	return Outcome{flow.Err, flow.Traced}
}

// TraceEnded is the status of a traced stream that ended early, with its place.
type TraceEnded struct {
	Status error
	Ending *wave.Ending
}

func (e *TraceEnded) Error() string { return e.Status.Error() }

func (e *TraceEnded) Unwrap() []error { return []error{e.Ending, e.Status} }

// ductShown is how much of the duct behind the shoulder pictures show, throat
// heights.
const ductShown = 4

// Waves traces the inlet at one condition through the throat and ductShown throat
// heights of duct behind it, and returns the geometry it went through.
func (f *Frozen) Waves(at Condition) (wave.Geometry, *wave.Trace, error) {
	shape, err := f.inlet.Contour()
	if err != nil {
		return wave.Geometry{}, nil, err
	}
	g := f.inlet.Geometry()
	g.Planes = append(g.Planes[:1:1], g.Planes[0]+ductShown*shape.Throat)
	trace, err := wave.Run(f.definition.Gas, wave.FreeStream(at), g, f.settings)
	return g, trace, err
}
