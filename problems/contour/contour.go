// Package contour is plain plane geometry: points, straight lines, and the mold
// line of an inlet with its named points. Metres and radians.
package contour

import "math"

// Point is a place in the plane: x downstream, y from the first ramp's leading
// edge toward the cowl.
type Point struct {
	X, Y float64
}

// Line is an infinite straight line through Through at Angle to the x axis.
type Line struct {
	Through Point
	Angle   float64
}

// Meet returns the crossing of two lines; ok is false where they are parallel.
func Meet(a, b Line) (p Point, ok bool) {
	sin, cos := math.Sincos(a.Angle)
	t, ok := a.Reach(b)
	return Point{a.Through.X + t*cos, a.Through.Y + t*sin}, ok
}

// Reach returns the signed distance from a.Through along a to its crossing with
// b; ok is false where they are parallel.
func (a Line) Reach(b Line) (distance float64, ok bool) {
	turn := math.Sin(b.Angle - a.Angle)
	if turn == 0 {
		return math.Inf(1), false
	}
	sin, cos := math.Sincos(b.Angle)
	dx, dy := b.Through.X-a.Through.X, b.Through.Y-a.Through.Y
	return (dx*sin - dy*cos) / turn, true
}

// Height returns the signed distance of p above the line (to its left).
func (a Line) Height(p Point) float64 {
	sin, cos := math.Sincos(a.Angle)
	return (p.Y-a.Through.Y)*cos - (p.X-a.Through.X)*sin
}

// Along returns the signed distance of p along the line from Through.
func (a Line) Along(p Point) float64 {
	sin, cos := math.Sincos(a.Angle)
	return (p.X-a.Through.X)*cos + (p.Y-a.Through.Y)*sin
}

// Distance returns the distance between two points.
func Distance(p, q Point) float64 { return math.Hypot(q.X-p.X, q.Y-p.Y) }

// Inlet is the mold line of a ramp inlet with a straight cowl.
type Inlet struct {
	Corners   []Point   // leading edge first, then the start of each further ramp
	Angles    []float64 // surface angle of each ramp to the x axis
	Shoulder  Point     // end of the last ramp; the body runs parallel to the cowl behind it
	Lip       Point
	CowlInner float64 // angle of the inner cowl surface
	CowlOuter float64 // angle of the outer cowl surface
	Throat    float64 // height between shoulder and inner cowl surface
}

// RampLength returns the length of ramp i (from 0), negative where its end lies
// ahead of its start.
func (c *Inlet) RampLength(i int) float64 {
	end := c.Shoulder
	if i+1 < len(c.Corners) {
		end = c.Corners[i+1]
	}
	return Line{c.Corners[i], c.Angles[i]}.Along(end)
}
