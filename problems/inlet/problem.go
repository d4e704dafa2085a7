package inlet

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sync"

	"rampwright/problems"
	"rampwright/problems/ramp"
)

// Problem is a definition as a search sees it: its searched settings are the
// variables, its catalogue at every flight point and of the geometry the
// quantities. It implements problems.Problem, Explicit and Verifier, and is safe
// for concurrent use.
type Problem struct {
	definition Definition
	variables  []problems.Variable
	quantities []problems.Quantity
	readers    []reader // one a quantity
	explicit   []int    // quantities of the geometry
	// pointQuantities is the catalogue at one point, which the first point heads.
	pointQuantities []problems.Quantity
	pool            sync.Pool
}

// reader finds one quantity: an entry of the catalogue, the member of a group,
// and the flight point (from 0), or -1 for the geometry.
type reader struct {
	entry  *Entry
	member int
	point  int
}

// New returns the problem of a definition.
func New(definition Definition) (*Problem, error) {
	if err := definition.validate(); err != nil {
		return nil, err
	}
	p := &Problem{definition: definition, variables: definition.variables()}
	p.pool.New = func() any { return new(workspace) }
	for i := range definition.Points {
		p.list(PerPoint, i, definition.Points[i].Name)
	}
	perPoint := len(p.quantities) / len(definition.Points)
	p.pointQuantities = slices.Clone(p.quantities[:perPoint])
	for i := range p.pointQuantities {
		p.pointQuantities[i].Point = ""
	}
	first := len(p.quantities)
	p.list(OfGeometry, -1, problems.Geometry)
	for i := first; i < len(p.quantities); i++ {
		p.explicit = append(p.explicit, i)
	}
	return p, nil
}

func (p *Problem) list(scope Scope, point int, name string) {
	for i := range catalogue {
		entry := &catalogue[i]
		if entry.Scope != scope {
			continue
		}
		members := []string{""}
		if entry.Group() {
			members = entry.members(p.definition.ramps())
		}
		for k, member := range members {
			p.quantities = append(p.quantities, problems.Quantity{
				Name: entry.Name, Point: name, Member: member, Unit: entry.Unit, Explicit: scope == OfGeometry,
			})
			p.readers = append(p.readers, reader{entry, k, point})
		}
	}
}

// Definition returns the definition.
func (p *Problem) Definition() Definition { return p.definition }

// Variables returns the searched settings, in the unit their names state.
func (p *Problem) Variables() []problems.Variable { return p.variables }

// Quantities returns the catalogue at every flight point, in order, then that of
// the geometry.
func (p *Problem) Quantities() []problems.Quantity { return p.quantities }

// workspace holds what one evaluation needs.
type workspace struct {
	design Design
	shape  closure
	flow   analysis
}

// Evaluate computes every quantity at x by the first exact route; points beyond the
// chain of straight shocks, and those that ask for it, are traced with the settings
// of a search.
func (p *Problem) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.evaluate(ctx, first{}, x, dst)
}

// Verify computes every quantity at x by the second exact route. The same points are
// traced with the settings of verification, capture and spillage drag come from the
// balances of the trace, and dst.Bounds says how far a value may lie from that of
// Evaluate by the error bounds of both traces.
func (p *Problem) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.evaluate(ctx, second{}, x, dst)
}

func (p *Problem) evaluate(ctx context.Context, r route, x []float64, dst *problems.Evaluation) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	w := p.pool.Get().(*workspace)
	defer p.pool.Put(w)
	p.freeze(w, r, x)
	dst.Bounds = nil
	next := 0
	for i := range p.definition.Points {
		w.flow.point = &p.definition.Points[i]
		w.flow.fly(r.traces())
		from := next
		next = p.read(&w.flow, dst, next, i)
		if w.flow.trace != nil && !w.flow.trace.Settings.WithoutError {
			p.boundTrace(&w.flow, dst, from, i)
		}
	}
	p.read(&w.flow, dst, next, -1)
	w.flow.trace = nil
	return nil
}

// freeze shapes the contour of the design at x.
func (p *Problem) freeze(w *workspace, r route, x []float64) {
	def := &p.definition
	w.design = def.resolve(x)
	if def.Outline != nil {
		w.shape.take(def.Outline)
		w.design = w.shape.Design
	} else {
		w.shape.close(r, def.Gas, w.design, def.CaptureHeight, def.Points[0].Incidence)
	}
	w.flow = analysis{def: def, route: r, shape: &w.shape, design: &w.design, point: &def.Points[0]}
}

// read stores the quantities of one point, starting at index next.
func (p *Problem) read(a *analysis, dst *problems.Evaluation, next, point int) int {
	for ; next < len(p.readers) && p.readers[next].point == point; next++ {
		if value, err := p.readers[next].read(a); err != nil {
			dst.Miss(next, err)
		} else {
			dst.Set(next, value)
		}
	}
	return next
}

func (r *reader) read(a *analysis) (value float64, err error) {
	if r.entry.Group() {
		value, err = r.entry.member(a, r.member)
	} else {
		value, err = r.entry.value(a)
	}
	if err == nil && (math.IsNaN(value) || math.IsInf(value, 0)) {
		err = &problems.Status{Phrase: "not a finite number"}
	}
	return value, err
}

// EvaluateExplicit computes the quantities of the geometry alone: shock theory
// at the shock-on-lip Mach number places them, whatever the true model of the
// flow is.
func (p *Problem) EvaluateExplicit(x []float64, dst *problems.Evaluation) {
	w := p.pool.Get().(*workspace)
	defer p.pool.Put(w)
	p.freeze(w, first{}, x)
	p.read(&w.flow, dst, p.explicit[0], -1)
}

// LinearForm returns an angle of the geometry as a linear form of the variables:
// its value at the origin and along each axis.
func (p *Problem) LinearForm(i int) (a []float64, b float64, ok bool) {
	read := p.readers[i].entry.linear
	if read == nil {
		return nil, 0, false
	}
	x := make([]float64, len(p.variables))
	at := func() float64 {
		design := p.definition.resolve(x)
		return read(&design) / radian
	}
	b = at()
	a = make([]float64, len(x))
	for j := range x {
		x[j] = 1
		a[j] = at() - b
		x[j] = 0
	}
	return a, b, true
}

// Invalid is one reason why no flow can be computed for a definition.
type Invalid struct {
	What string
}

func (e *Invalid) Error() string { return "inlet definition: " + e.What }

// validate reports everything wrong at once, each an *Invalid.
func (d *Definition) validate() error {
	var wrong []error
	require := func(ok bool, format string, arguments ...any) {
		if !ok {
			wrong = append(wrong, &Invalid{fmt.Sprintf(format, arguments...)})
		}
	}
	require(len(d.Points) > 0, "no flight point")
	if d.Outline != nil {
		require(len(d.RampAngle) == 0 && d.CowlAngle == nil && d.LipTurning == nil, "an outline has no ramp angle, cowl angle or lip turning")
		wrong = append(wrong, d.Outline.faults()...)
	} else {
		n := len(d.RampAngle)
		require(n >= 1 && n <= ramp.MaxRamps, "%d ramps, allowed 1 to %d", n, ramp.MaxRamps)
		require((d.CowlAngle == nil) != (d.LipTurning == nil), "exactly one of cowl angle and lip turning is needed")
	}
	require(d.CaptureHeight > 0 && d.Width > 0, "capture height %g m and width %g m must be positive", d.CaptureHeight, d.Width)
	if err := d.Gas.Validate(); err != nil {
		require(false, "%v", err)
	}
	for _, point := range d.Points {
		require(point.Mach > 1 && point.Pressure > 0 && point.Temperature > 0,
			"flight point %s needs Mach above 1 and positive pressure and temperature", point.Name)
	}
	return errors.Join(wrong...)
}
