package chart

import "math"

// point is a place on the sheet (x right, y down, drawing units) or in the
// inlet (x downstream, y up, metres); each name says which.
type point struct{ x, y float64 }

func (a point) plus(b point) point           { return point{a.x + b.x, a.y + b.y} }
func (a point) minus(b point) point          { return point{a.x - b.x, a.y - b.y} }
func (a point) times(k float64) point        { return point{k * a.x, k * a.y} }
func (a point) dot(b point) float64          { return a.x*b.x + a.y*b.y }
func (a point) distance(b point) float64     { return math.Sqrt(a.minus(b).dot(a.minus(b))) }
func (a point) cross(b point) float64        { return a.x*b.y - a.y*b.x }
func between(a, b point, t float64) point    { return a.plus(b.minus(a).times(t)) }
func clamp(value, low, high float64) float64 { return max(low, min(high, value)) }

// segment is a straight stroke.
type segment struct{ a, b point }

// crosses tells whether two strokes share an inner point.
func (s segment) crosses(o segment) bool {
	d, e := s.b.minus(s.a), o.b.minus(o.a)
	return d.cross(o.a.minus(s.a))*d.cross(o.b.minus(s.a)) < 0 &&
		e.cross(s.a.minus(o.a))*e.cross(s.b.minus(o.a)) < 0
}

// box is an upright rectangle: left, top, width, height.
type box struct{ x, y, w, h float64 }

func (b box) grow(by float64) box { return box{b.x - by, b.y - by, b.w + 2*by, b.h + 2*by} }
func (b box) right() float64      { return b.x + b.w }
func (b box) bottom() float64     { return b.y + b.h }
func (b box) centre() point       { return point{b.x + b.w/2, b.y + b.h/2} }

func (b box) overlaps(o box) bool {
	return b.x < o.right() && o.x < b.right() && b.y < o.bottom() && o.y < b.bottom()
}

func (b box) contains(p point) bool {
	return b.x < p.x && p.x < b.right() && b.y < p.y && p.y < b.bottom()
}

// nearest returns the point of the box closest to p.
func (b box) nearest(p point) point {
	return point{clamp(p.x, b.x, b.right()), clamp(p.y, b.y, b.bottom())}
}

// meets tells whether a stroke enters the box (Liang & Barsky 1984: the stroke's
// parameter is clipped by the four sides in turn).
func (b box) meets(s segment) bool {
	if max(s.a.x, s.b.x) < b.x || min(s.a.x, s.b.x) > b.right() || max(s.a.y, s.b.y) < b.y || min(s.a.y, s.b.y) > b.bottom() {
		return false // most pairs end here
	}
	from, to := 0.0, 1.0
	d := s.b.minus(s.a)
	for _, side := range [4][2]float64{
		{-d.x, s.a.x - b.x}, {d.x, b.right() - s.a.x},
		{-d.y, s.a.y - b.y}, {d.y, b.bottom() - s.a.y},
	} {
		speed, room := side[0], side[1]
		switch {
		case speed == 0 && room < 0:
			return false
		case speed < 0:
			from = max(from, room/speed)
		case speed > 0:
			to = min(to, room/speed)
		}
	}
	return from <= to
}

// inside tells whether p lies in a polygon (even-odd rule).
func inside(polygon []point, p point) bool {
	in := false
	for i, a := range polygon {
		b := polygon[(i+1)%len(polygon)]
		if (a.y > p.y) != (b.y > p.y) && p.x < a.x+(p.y-a.y)/(b.y-a.y)*(b.x-a.x) {
			in = !in
		}
	}
	return in
}
