package wave

import (
	"math"

	"rampwright/problems/contour"
)

// Surface names a wetted surface.
type Surface int8

const (
	Body Surface = iota
	CowlInner
	CowlOuter
)

// String returns the name used in tables.
func (s Surface) String() string { return [...]string{"body", "cowl inside", "cowl outside"}[s] }

// wall is a line of straight segments that bounds a stream, in the frame of the
// sweep. The last segment goes on for ever.
type wall struct {
	surface Surface
	points  []contour.Point
	angles  []float64 // of each segment
	slopes  []float64
	segment int           // where the sweep is
	since   contour.Point // where the pressure last changed
}

func newWall(surface Surface, t frame, points []contour.Point) *wall {
	w := &wall{surface: surface}
	for i, p := range points {
		q := t.in(p)
		w.points = append(w.points, q)
		if i > 0 {
			angle := heading(points[i-1], p) - t.angle
			w.angles = append(w.angles, angle)
			w.slopes = append(w.slopes, math.Tan(angle))
		}
	}
	w.since = w.points[0]
	return w
}

// newRay is a wall of one straight segment.
func newRay(surface Surface, start contour.Point, angle float64) *wall {
	return &wall{
		surface: surface, points: []contour.Point{start}, since: start,
		angles: []float64{angle}, slopes: []float64{math.Tan(angle)},
	}
}

// corner returns the end of the segment the sweep is on; ok is false on the last.
func (w *wall) corner() (p contour.Point, ok bool) {
	if w.segment+1 >= len(w.angles) {
		return contour.Point{X: math.Inf(1)}, false
	}
	return w.points[w.segment+1], true
}

// at is the height of the wall at x on the segment the sweep is on.
func (w *wall) at(x float64) float64 {
	p := w.points[w.segment]
	return p.Y + w.slopes[w.segment]*(x-p.X)
}

func (w *wall) angle() float64 { return w.angles[w.segment] }

// hit returns x where the front meets the wall's segment, prolonged; +Inf where
// it runs away from the wall. side is +1 for a wall below the front, -1 above.
func (w *wall) hit(f *front, side float64) float64 {
	approach := side * (w.slopes[w.segment] - f.slope)
	if !(approach > 0) {
		return math.Inf(1)
	}
	gap := side * (f.from.Y - w.at(f.from.X))
	return f.from.X + math.Max(0, gap)/approach
}
