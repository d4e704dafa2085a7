package envelope

import (
	"context"
	"math"

	"rampwright/problems"
)

// Kind says what a boundary separates; its text is the stable name of results.
type Kind string

const (
	RampShockDetaches Kind = "ramp_shock_detaches"
	LipShockDetaches  Kind = "lip_shock_detaches"
	LipReflection     Kind = "lip_reflection_margin_zero"
	OverSelfStart     Kind = "over_the_self_start_limit"
	OverIsentropic    Kind = "over_the_isentropic_ceiling"
	ShocksSwallowed   Kind = "shocks_swallowed"
	LimitViolated     Kind = "limit"
	StreamEnds        Kind = "stream_ends"
)

// Line is one stretch of a boundary.
type Line struct {
	Kind   Kind
	Name   string // what happens there; of a limit the limit
	Points []Condition
	// Margin is the greatest margin left at a point, in the unit of Quantity; 0 where
	// the end of the stream was bisected and there is no margin.
	Margin   float64
	Quantity string
	Closed   bool

	margin margin
}

// Value is the margin the line is the zero of, at an evaluation of the quantities
// given; NaN where it is not known, and of a line without a margin.
func (l *Line) Value(quantities []problems.Quantity, e *problems.Evaluation) float64 {
	if l.Kind == StreamEnds {
		return math.NaN()
	}
	m := marginOf(quantities, l.margin.quantity, l.margin.low, l.margin.high)
	return m.value(e)
}

// boundary is one signed function of the map.
type boundary struct {
	kind   Kind
	name   string
	margin margin // none of StreamEnds
	value  func(*Sample) float64
}

// fixedBoundaries are those every inlet has, whatever its limits.
var fixedBoundaries = []struct {
	kind      Kind
	name      string
	quantity  string
	low, high float64
}{
	{RampShockDetaches, "ramp shock detaches", rampMargin, 0, math.Inf(1)},
	{LipShockDetaches, "lip shock detaches", lipMargin, 0, math.Inf(1)},
	{LipReflection, "lip shock cannot reflect regularly", reflection, 0, math.Inf(1)},
	{ShocksSwallowed, "ramp shock enters the lip", clearance, 0, math.Inf(1)},
	{OverSelfStart, "over the self-start limit", overStart, math.Inf(-1), 1},
	{OverIsentropic, "over the isentropic ceiling", overCeiling, math.Inf(-1), 1},
}

// boundaries lists the signed functions of the map: the fixed ones, the limits that
// say something else, and whether the stream reaches the throat, which no margin
// announces.
func (s *survey) boundaries() []boundary {
	var list []boundary
	known := map[string]bool{}
	add := func(kind Kind, name string, m margin) {
		if key := m.name(); len(m.indices) > 0 && !known[key] {
			known[key] = true
			list = append(list, boundary{kind, name, m, func(x *Sample) float64 { return m.value(x.Exact) }})
		}
	}
	for _, b := range fixedBoundaries {
		add(b.kind, b.name, marginOf(s.quantities, b.quantity, b.low, b.high))
	}
	for _, m := range s.limits {
		add(LimitViolated, m.name(), m)
	}
	list = append(list, boundary{StreamEnds, "stream ends ahead of the throat", margin{}, func(x *Sample) float64 {
		if x.Status != nil {
			return -1
		}
		return 1
	}})
	return list
}

// trace follows every boundary. Roots of all edges, then chords and loose ends of
// all lines, are shared out among the workers; each fills its own slot.
func (s *survey) trace(ctx context.Context, samples []Sample) ([]Line, error) {
	kinds := s.boundaries()
	tracers := make([]*tracer, len(kinds))
	for i, b := range kinds {
		tracers[i] = s.newTracer(ctx, b, samples)
	}
	var roots []rootTask
	for _, t := range tracers {
		for k := range t.crossed {
			roots = append(roots, rootTask{t, k})
		}
	}
	if err := s.each(ctx, "boundary points", "point", len(roots), func(i int) error { return roots[i].solve() }); err != nil {
		return nil, err
	}
	var pieces []*piece
	for _, t := range tracers {
		t.pieces = t.assemble()
		pieces = append(pieces, t.pieces...)
	}
	if err := s.each(ctx, "boundary lines", "line", len(pieces), func(i int) error { return pieces[i].draw() }); err != nil {
		return nil, err
	}
	var lines []Line
	for i, t := range tracers {
		for _, p := range t.pieces {
			if p.first {
				lines = append(lines, Line{Kind: kinds[i].kind, Name: kinds[i].name, Quantity: kinds[i].margin.quantity, Closed: p.closed, margin: kinds[i].margin})
			}
			s.extend(&lines[len(lines)-1], p)
		}
	}
	return lines, nil
}

// tracer is the search for one boundary.
type tracer struct {
	level
	lattice
	crossed  []int // edges with a change of sign
	vertices []vertex
	found    []bool
	pieces   []*piece
}

func (s *survey) newTracer(ctx context.Context, b boundary, samples []Sample) *tracer {
	t := &tracer{
		level: level{
			tolerance: min(s.settings.Tolerance/s.step.Mach, s.settings.Tolerance*radian/s.step.Incidence),
			flatness:  s.settings.Flatness,
			width:     float64(s.settings.MachPoints - 1), height: float64(s.settings.IncidencePoints - 1),
		},
		lattice: lattice{nx: s.settings.MachPoints, ny: s.settings.IncidencePoints, values: make([]float64, len(samples))},
	}
	for i := range samples {
		t.values[i] = b.value(&samples[i])
	}
	t.value = func(p place) (float64, error) {
		sample, err := s.sample(ctx, s.rough, s.condition(p))
		if err != nil {
			return 0, err
		}
		s.evaluations.Add(1)
		return b.value(&sample), nil
	}
	t.crossed = t.crossings()
	t.vertices, t.found = make([]vertex, len(t.crossed)), make([]bool, len(t.crossed))
	return t
}

// rootTask is the root on one crossed edge.
type rootTask struct {
	*tracer
	k int
}

func (r rootTask) solve() (err error) {
	ends, _ := r.ends(r.crossed[r.k])
	r.vertices[r.k], r.found[r.k], err = r.root(r.at(ends[0]), r.at(ends[1]), r.values[ends[0]], r.values[ends[1]])
	return err
}

// piece is one chord of a line to be refined, or a loose end to be followed.
type piece struct {
	*tracer
	p, q     vertex
	loose    bool // follow from p along the direction
	along    place
	backward bool // the points come last first
	first    bool // of its line
	closed   bool
	points   []vertex // behind p, up to and with q
}

// draw refines a chord or follows a loose end.
func (c *piece) draw() (err error) {
	if c.loose {
		c.points, err = c.follow(c.p, c.along, c.whole)
		return err
	}
	c.points, err = c.refine(c.p, c.q, 0)
	c.points = append(c.points, c.q)
	return err
}

// assemble cuts the chains of the roots found into pieces.
func (t *tracer) assemble() []*piece {
	rooted := map[int]bool{}
	of := map[int]vertex{}
	for k, edge := range t.crossed {
		if t.found[k] {
			rooted[edge], of[edge] = true, t.vertices[k]
		}
	}
	var pieces []*piece
	for _, c := range t.chains(rooted) {
		line := make([]vertex, len(c.edges))
		for i, edge := range c.edges {
			line[i] = of[edge]
		}
		from := len(pieces)
		if c.looseStart {
			pieces = append(pieces, &piece{tracer: t, p: line[0], loose: true, backward: true, along: outward(line, 0, 1)})
		}
		// The first point is a piece without length, so that a line of one point stands.
		pieces = append(pieces, &piece{tracer: t, p: line[0], q: line[0]})
		for i := 1; i < len(line); i++ {
			pieces = append(pieces, &piece{tracer: t, p: line[i-1], q: line[i]})
		}
		if last := len(line) - 1; c.looseEnd {
			pieces = append(pieces, &piece{tracer: t, p: line[last], loose: true, along: outward(line, last, last-1)})
		}
		pieces[from].first, pieces[from].closed = true, len(c.edges) > 1 && c.edges[0] == c.edges[len(c.edges)-1]
	}
	return pieces
}

// outward is the direction in which a line leaves its end: away from the point
// beside it, or across the slope of a line of one point.
func outward(line []vertex, end, beside int) place {
	if beside >= 0 && beside < len(line) {
		d := line[end].minus(line[beside].place)
		if size := d.length(); size > 0 {
			return d.times(1 / size)
		}
	}
	up := line[end].uphill
	if end == 0 && beside == 1 {
		return place{up.y, -up.x}
	}
	return place{-up.y, up.x}
}

// nearest is how far apart two points of a line must lie to be two, cells.
const nearest = 1e-6

// extend appends the points of a piece to a line.
func (s *survey) extend(line *Line, p *piece) {
	points := p.points
	if p.backward {
		points = make([]vertex, len(p.points))
		for i, v := range p.points {
			points[len(points)-1-i] = v
		}
	}
	for _, v := range points {
		at := s.condition(v.place)
		if n := len(line.Points); n > 0 {
			last := line.Points[n-1]
			if math.Hypot((at.Mach-last.Mach)/s.step.Mach, (at.Incidence-last.Incidence)/s.step.Incidence) < nearest {
				continue
			}
		}
		line.Points = append(line.Points, at)
		if line.Kind != StreamEnds {
			line.Margin = max(line.Margin, v.left)
		}
	}
}

const radian = math.Pi / 180
