package wave

import (
	"math"

	"rampwright/problems/contour"
)

// atWall ends the fronts that reach the wall in p, moves on to the next segment
// where p is its corner, and turns the stream that is left along the wall. A
// reflected wave keeps the source of the strongest shock that came in; one that
// leaves a body corner has that corner's number.
func (s *sweep) atWall(st *stream, p contour.Point, w *wall) {
	corner, ok := w.corner()
	turns := ok && s.close(corner, p)
	if turns {
		p = corner
	}
	low, high, region := s.landed(st, p, w)
	hit := low != none && high != none
	s.closePiece(st, w, p)
	var source int16
	if hit {
		source = s.sourceOf(low, high, -s.familyOff(st, w))
		prev, next := s.fronts[low].prev, s.fronts[high].next
		s.end(st, p, low, high)
		s.ground(low, high, w)
		s.link(st, prev, next)
	}
	if turns {
		w.segment++
		if w.surface == Body {
			source = int16(w.segment + 1)
		}
	}
	if w == st.bottom {
		st.lowest = region
	} else {
		st.highest = region
	}
	s.turnAlong(st, p, w, region, source, hit)
}

// landed returns the fronts that pass p, counted from the wall, and the region
// beyond them. Without any, low or high is none.
func (s *sweep) landed(st *stream, p contour.Point, w *wall) (low, high, region int32) {
	if w == st.bottom {
		low, high, region = st.first, none, st.lowest
		for f := st.first; f != none && s.through(f, p); f = s.fronts[f].next {
			high, region = f, s.fronts[f].above
		}
		return low, high, region
	}
	low, high, region = none, st.last, st.highest
	for f := st.last; f != none && s.through(f, p); f = s.fronts[f].prev {
		low, region = f, s.fronts[f].below
	}
	return low, high, region
}

// familyOff is the family of the waves that leave a wall.
func (s *sweep) familyOff(st *stream, w *wall) int8 {
	if w == st.bottom {
		return 1
	}
	return -1
}

// ground marks fronts that ended on the body.
func (s *sweep) ground(low, high int32, w *wall) {
	for f := low; w.surface == Body; f = s.fronts[f].next {
		s.fronts[f].grounded = true
		if f == high {
			return
		}
	}
}

// closePiece records the stretch of wall up to p.
func (s *sweep) closePiece(st *stream, w *wall, p contour.Point) {
	region := st.lowest
	if w == st.top {
		region = st.highest
	}
	if p != w.since {
		s.pieces = append(s.pieces, piece{w.surface, w.segment, w.since, p, region})
	}
	w.since = p
}

// turnAlong sends the wave out of p that turns a region along the wall.
func (s *sweep) turnAlong(st *stream, p contour.Point, w *wall, region int32, source int16, hit bool) {
	state := s.regions[region]
	family := s.familyOff(st, w)
	turning := float64(family) * (w.angle() - state.FlowAngle)
	if math.Abs(turning) <= aligned {
		return
	}
	flow := newSide(s.gas, state)
	q, why := alongWall(&flow, turning)
	if why != solved {
		st.ending = s.wallEnding(p, w, state, turning, hit, why)
		return
	}
	s.fan.offWall(&flow, q, family, s.settings.Wavelet)
	if why = s.fan.aim(s.gas); why != solved {
		st.ending = s.wallEnding(p, w, state, turning, hit, why)
		return
	}
	sources := [3]int16{source, 0, source}
	if w == st.top {
		s.place(st, p, st.last, none, region, none, sources)
		st.highest = s.fronts[st.last].above
		return
	}
	wallRegion := int32(len(s.regions))
	s.regions = append(s.regions, s.fan.states[0])
	s.place(st, p, none, st.first, wallRegion, region, sources)
	st.lowest = wallRegion
}

// aligned is the angle between flow and wall, rad, that is rounding: a cancelled
// shock leaves no wave.
const aligned = 1e-12
