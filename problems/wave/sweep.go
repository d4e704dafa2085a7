package wave

import (
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
)

// stream is a band of flow between two walls, or a wall below and the free stream
// above, with its fronts in order from bottom to top.
type stream struct {
	bottom, top     *wall // top is nil where there is free stream
	first, last     int32
	lowest, highest int32 // regions next to the walls
	queue           queue
	count           int  // fronts alive
	outside         bool // above the lip
	ending          *Ending
}

// piece is a stretch of wall next to one region, in the frame of the sweep.
type piece struct {
	surface  Surface
	segment  int
	from, to contour.Point
	region   int32
}

// sweep is the state of a trace in its own frame, x along the sweep.
type sweep struct {
	gas      gas.Perfect
	settings Settings
	near     float64 // places nearer than this are one
	fronts   []front
	regions  []State
	pieces   []piece
	fan      fan
	events   int
	open     open
	coarsest float64 // threshold so far
}

// cleared returns a sweep for another trace that reuses the slices of s.
func (s *sweep) cleared(fluid gas.Perfect, near float64) sweep {
	return sweep{
		gas: fluid, near: near, fronts: s.fronts[:0], regions: s.regions[:0], pieces: s.pieces[:0],
		fan: fan{states: s.fan.states, limbs: s.fan.limbs, down: s.fan.down, up: s.fan.up},
	}
}

// open sums what wavelets and merged fronts leave open of mass and momentum, each
// front by its length, over p0 hc and the like.
type open struct{ mass, momentum float64 }

// run carries a stream to x = end, or to its ending. An event within `near` of
// stop, the lip, is left for it.
func (s *sweep) run(st *stream, end float64, stop *contour.Point) {
	for st.ending == nil {
		e := s.next(st)
		if !(e.x < end) || (stop != nil && s.close(e.place(s, st), *stop)) {
			return
		}
		s.events++
		switch {
		case s.events > s.settings.Events:
			st.ending = s.spent(st, e, EventBudget)
		case st.count > s.settings.Fronts:
			st.ending = s.spent(st, e, FrontBudget)
		default:
			s.apply(st, e)
		}
	}
}

// apply lets an event happen: every front that passes the place takes part.
func (s *sweep) apply(st *stream, e event) {
	p := e.place(s, st)
	switch e.site {
	case atBottom:
		s.atWall(st, p, st.bottom)
		return
	case atTop:
		s.atWall(st, p, st.top)
		return
	}
	low, high := e.lower, e.upper
	for f := s.fronts[low].prev; f != none && s.through(f, p); f = s.fronts[f].prev {
		low = f
	}
	for f := s.fronts[high].next; f != none && s.through(f, p); f = s.fronts[f].next {
		high = f
	}
	switch {
	case low == st.first && math.Abs(st.bottom.at(p.X)-p.Y) <= s.near:
		s.atWall(st, p, st.bottom)
	case st.top != nil && high == st.last && math.Abs(st.top.at(p.X)-p.Y) <= s.near:
		s.atWall(st, p, st.top)
	default:
		s.cross(st, p, low, high)
	}
}

// through reports whether a front passes p.
func (s *sweep) through(f int32, p contour.Point) bool {
	return math.Abs(s.fronts[f].at(p.X)-p.Y) <= s.near
}

// cross ends fronts low..high in p and sends out the fan between the streams
// below and above them.
func (s *sweep) cross(st *stream, p contour.Point, low, high int32) {
	belowRegion, aboveRegion := s.fronts[low].below, s.fronts[high].above
	lower, upper := newSide(s.gas, s.regions[belowRegion]), newSide(s.gas, s.regions[aboveRegion])
	q, why := meet(&lower, &upper)
	if why != solved {
		st.ending = s.crossingEnding(p, low, high, why)
		return
	}
	came, m := s.arriving(low, high), s.merging(p.X)
	s.fan.crossing(&lower, &upper, q, came, m)
	if why = s.fan.aim(s.gas); why != solved {
		s.fan.whole(&lower, &upper, q, came, m)
		why = s.fan.aim(s.gas)
	}
	if why != solved {
		st.ending = s.crossingEnding(p, low, high, why)
		return
	}
	s.fan.count()
	sources := [3]int16{s.sourceOf(low, high, -1), 0, s.sourceOf(low, high, 1)}
	prev, next := s.fronts[low].prev, s.fronts[high].next
	s.end(st, p, low, high)
	s.place(st, p, prev, next, belowRegion, aboveRegion, sources)
}

// threshold is the strength below which fronts are merged: the setting until half
// the events are spent, then rising without bound toward the end of the budget, so
// that a flow too rich for it is followed more coarsely instead of given up.
func (s *sweep) threshold() float64 {
	half, left := float64(s.settings.Events)/2, float64(s.settings.Events-s.events)
	s.coarsest = max(s.coarsest, s.settings.Threshold*max(1, half/max(left, 1)))
	return s.coarsest
}

// refine changes the resolution of what follows.
func (s *sweep) refine(settings Settings) { s.settings, s.coarsest = settings, settings.Threshold }

// merging is the resolution of a crossing at x.
func (s *sweep) merging(x float64) merging {
	threshold := s.threshold()
	return merging{wavelet: s.settings.Wavelet, threshold: threshold, reach: gathering * threshold * s.near / tie, x: x}
}

// arriving joins the ledgers of the slip lines among fronts low..high.
func (s *sweep) arriving(low, high int32) ledger {
	came := blank
	for f := low; ; f = s.fronts[f].next {
		if s.fronts[f].family == 0 {
			came = came.plus(s.fronts[f].ledger)
		}
		if f == high {
			return came
		}
	}
}

// sourceOf is the source of the strongest shock of a family among fronts
// low..high, 0 if there is none.
func (s *sweep) sourceOf(low, high int32, family int8) int16 {
	var source int16
	best := 0.0
	for f := low; ; f = s.fronts[f].next {
		a := &s.fronts[f]
		if a.kind == Shock && a.family == family {
			ratio := s.regions[a.below].Pressure / s.regions[a.above].Pressure
			if ratio = max(ratio, 1/ratio); ratio > best {
				best, source = ratio, a.source
			}
		}
		if f == high {
			return source
		}
	}
}

// end closes fronts low..high in p.
func (s *sweep) end(st *stream, p contour.Point, low, high int32) {
	for f := low; ; {
		a := &s.fronts[f]
		a.alive, a.to = false, p
		s.sumOpen(a)
		st.count--
		if f == high {
			return
		}
		f = a.next
	}
}

// sumOpen adds what an ended front left open.
func (s *sweep) sumOpen(f *front) {
	if f.kind != Wavelet && !f.merged {
		return
	}
	mass, x, y := residual(s.gas, &s.regions[f.below], &s.regions[f.above], f.slope)
	length := contour.Distance(f.from, f.to)
	s.open.mass += math.Abs(mass) * length
	s.open.momentum += math.Hypot(x, y) * length
}

// place makes fronts and regions of the fan in p, between neighbours prev and
// next. The outermost states of the fan are the regions given.
func (s *sweep) place(st *stream, p contour.Point, prev, next, below, above int32, sources [3]int16) {
	last := len(s.fan.limbs) - 1
	for i, l := range s.fan.limbs {
		over := above
		if i < last || above == none {
			over = int32(len(s.regions))
			s.regions = append(s.regions, s.fan.states[i+1])
		}
		id := int32(len(s.fronts))
		s.fronts = append(s.fronts, front{
			from: p, slope: l.slope, below: below, above: over, prev: prev, next: none,
			source: sources[l.family+1], kind: l.kind, family: l.family, alive: true, merged: l.merged, ledger: l.ledger, duct: !st.outside,
		})
		s.link(st, prev, id)
		s.schedule(st, prev, id)
		st.count++
		prev, below = id, over
	}
	s.link(st, prev, next)
	s.schedule(st, prev, next)
}

// link makes low and high neighbours; none stands for the wall.
func (s *sweep) link(st *stream, low, high int32) {
	if low == none {
		st.first = high
	} else {
		s.fronts[low].next = high
	}
	if high == none {
		st.last = low
	} else {
		s.fronts[high].prev = low
	}
}

// schedule enters the meeting of two neighbours, if they approach.
func (s *sweep) schedule(st *stream, low, high int32) {
	if low == none || high == none {
		return
	}
	a, b := &s.fronts[low], &s.fronts[high]
	approach := a.slope - b.slope
	if !(approach > 0) {
		return
	}
	x := math.Max(a.from.X, b.from.X)
	gap := b.at(x) - a.at(x)
	st.queue.push(meeting{x: x + math.Max(0, gap)/approach, lower: low, upper: high})
}
