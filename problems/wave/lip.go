package wave

import "rampwright/problems/contour"

// Sources of fronts other than body corners, which count from 1; see Front.Source.
const (
	SourceLip       = -1
	SourceOuterCowl = -2
)

const (
	sourceLip   int16 = SourceLip
	sourceOuter int16 = SourceOuterCowl
)

// parting is where the stream ahead meets the lip: fronts up to below pass under
// it, from above on they pass over it, and those between end on it. The regions
// are the ones that meet the inner and the outer cowl.
type parting struct {
	below, above        int32 // fronts
	inside, outside     int32 // regions
	under, over, struck int   // fronts counted
}

// part finds where the lip parts the fronts of a stream; those within `near`
// of it strike it.
func (s *sweep) part(ahead *stream, lip contour.Point) parting {
	p := parting{below: none, inside: ahead.lowest}
	f := ahead.first
	for ; f != none && s.fronts[f].at(lip.X) < lip.Y-s.near; f = s.fronts[f].next {
		p.below, p.inside = f, s.fronts[f].above
		p.under++
	}
	p.outside = p.inside
	for ; f != none && s.fronts[f].at(lip.X) <= lip.Y+s.near; f = s.fronts[f].next {
		p.outside = s.fronts[f].above
		p.struck++
	}
	p.above = f
	p.over = ahead.count - p.under - p.struck
	return p
}

// split parts the stream ahead in two at the lip and turns both along the cowl.
func (s *sweep) split(ahead *stream, p parting, lip contour.Point, inner, outer *wall) (duct, outside stream) {
	duct = stream{
		bottom: ahead.bottom, top: inner, first: ahead.first, last: p.below,
		lowest: ahead.lowest, highest: p.inside, count: p.under,
	}
	outside = stream{
		bottom: outer, first: p.above, last: ahead.last,
		lowest: p.outside, highest: ahead.highest, count: p.over, outside: true,
	}
	if p.struck > 0 {
		low, high := ahead.first, ahead.last
		if p.below != none {
			low = s.fronts[p.below].next
		}
		if p.above != none {
			high = s.fronts[p.above].prev
		}
		s.end(ahead, lip, low, high)
	}
	if p.below == none {
		duct.first = none
	} else {
		s.fronts[p.below].next = none
	}
	if p.above == none {
		outside.last = none
	} else {
		s.fronts[p.above].prev = none
	}
	for f := outside.first; f != none; f = s.fronts[f].next {
		s.fronts[f].duct = false
	}
	s.reschedule(&duct)
	s.reschedule(&outside)
	s.turnAlong(&duct, lip, inner, p.inside, sourceLip, false)
	s.turnAlong(&outside, lip, outer, p.outside, sourceOuter, false)
	return duct, outside
}

// reschedule fills the queue of a stream that was just cut off.
func (s *sweep) reschedule(st *stream) {
	if st.first == none {
		return
	}
	for f := s.fronts[st.first].next; f != none; f = s.fronts[f].next {
		s.schedule(st, s.fronts[f].prev, f)
	}
}

// band is the part of a cut that lies in one region.
type band struct {
	region   int32
	from, to contour.Point
}

// slice cuts a stream at x, from y = low to y = high, in the frame of the sweep.
func (s *sweep) slice(st *stream, x, low, high float64) []band {
	var bands []band
	from, region := contour.Point{X: x, Y: low}, st.lowest
	for f := st.first; f != none; f = s.fronts[f].next {
		to := contour.Point{X: x, Y: min(max(s.fronts[f].at(x), from.Y), high)}
		bands = append(bands, band{region, from, to})
		from, region = to, s.fronts[f].above
	}
	return append(bands, band{region, from, contour.Point{X: x, Y: high}})
}

// finish ends every front and wall of a stream at x.
func (s *sweep) finish(st *stream, x float64) {
	for f := st.first; f != none; f = s.fronts[f].next {
		a := &s.fronts[f]
		a.alive, a.to = false, contour.Point{X: x, Y: a.at(x)}
		s.sumOpen(a)
	}
	for _, w := range []*wall{st.bottom, st.top} {
		if w != nil {
			s.closePiece(st, w, contour.Point{X: x, Y: w.at(x)})
		}
	}
}
