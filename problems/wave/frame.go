package wave

import (
	"math"
	"slices"

	"rampwright/problems/contour"
)

// widest is the largest difference of direction a sweep can follow, rad.
const widest = 100 * math.Pi / 180

// directions returns the least and greatest direction of free stream, body and
// inner cowl as far as the last plane.
func (g *Geometry) directions(stream FreeStream) (low, high float64) {
	low, high = -stream.Incidence, -stream.Incidence
	last := slices.Max(g.Planes)
	for _, points := range [][]contour.Point{g.Body, g.CowlInner} {
		for i := 1; i < len(points) && (i == 1 || points[i-1].X < last); i++ {
			angle := heading(points[i-1], points[i])
			low, high = math.Min(low, angle), math.Max(high, angle)
		}
	}
	return low, high
}

// frame is the frame of a sweep, turned by angle, rad.
type frame struct{ angle, sin, cos float64 }

// frame sweeps along the middle of the directions, so that waves nearly normal to a
// steep ramp still run downstream.
func (g *Geometry) frame(stream FreeStream) frame {
	low, high := g.directions(stream)
	return frameAt((low + high) / 2)
}

func frameAt(angle float64) frame {
	sin, cos := math.Sincos(angle)
	return frame{angle, sin, cos}
}

// leans are the angles to lean the sweep by, rad, one after another, where a wave
// leans upstream of it.
var leans = [...]float64{0.3, -0.3, 0.6, -0.6}

// follows reports whether a sweep in the frame passes the leading edge before the
// lip and runs down every wall.
func (g *Geometry) follows(t frame, stream FreeStream) bool {
	low, high := g.directions(stream)
	reach := widest * 0.8
	return t.in(g.CowlInner[0]).X-t.in(g.Body[0]).X > tie*g.captureHeight() &&
		high-t.angle < reach && t.angle-low < reach && math.Abs(g.OuterAngle-t.angle) < reach
}

// in takes a point into the frame, out takes it back.
func (t frame) in(p contour.Point) contour.Point {
	return contour.Point{X: p.X*t.cos + p.Y*t.sin, Y: p.Y*t.cos - p.X*t.sin}
}

func (t frame) out(p contour.Point) contour.Point {
	return contour.Point{X: p.X*t.cos - p.Y*t.sin, Y: p.Y*t.cos + p.X*t.sin}
}
