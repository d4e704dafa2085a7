package wave

import (
	"math"

	"rampwright/problems/contour"
)

// site is where the next event of a stream happens.
type site int8

const (
	crossing site = iota
	atBottom
	atTop
)

func (k site) String() string { return [...]string{"crossing", "body", "cowl inside"}[k] }

// event is the next thing to happen in a stream.
type event struct {
	x      float64
	site   site
	corner bool
	meeting
}

// place is where the event happens.
func (e event) place(s *sweep, st *stream) contour.Point {
	switch e.site {
	case atBottom:
		return onWall(st.bottom, e)
	case atTop:
		return onWall(st.top, e)
	}
	return contour.Point{X: e.x, Y: s.fronts[e.lower].at(e.x)}
}

func onWall(w *wall, e event) contour.Point {
	if p, ok := w.corner(); ok && e.corner {
		return p
	}
	return contour.Point{X: e.x, Y: w.at(e.x)}
}

// next returns the earliest event of a stream, x +Inf where nothing happens any
// more. Ties go to walls, bottom first.
func (s *sweep) next(st *stream) event {
	best := event{x: math.Inf(1)}
	for len(st.queue) > 0 {
		m := st.queue[0]
		if s.fronts[m.lower].alive && s.fronts[m.upper].alive && s.fronts[m.lower].next == m.upper {
			best = event{x: m.x, site: crossing, meeting: m}
			break
		}
		st.queue.pop()
	}
	if st.top != nil {
		best = s.wallEvent(st.top, st.last, -1, atTop, best)
	}
	return s.wallEvent(st.bottom, st.first, 1, atBottom, best)
}

func (s *sweep) wallEvent(w *wall, nearest int32, side float64, where site, best event) event {
	if p, ok := w.corner(); ok && p.X <= best.x {
		best = event{x: p.X, site: where, corner: true}
	}
	if nearest != none {
		if x := w.hit(&s.fronts[nearest], side); x <= best.x && !(best.corner && best.site == where && x == best.x) {
			best = event{x: x, site: where}
		}
	}
	return best
}

func (s *sweep) close(p, q contour.Point) bool {
	return math.Abs(p.X-q.X) <= s.near && math.Abs(p.Y-q.Y) <= s.near
}
