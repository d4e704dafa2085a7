// Package front traces the trade between two objectives and measures it: the
// epsilon-constraint method, the points that no other dominates, the area they
// dominate, and the knee. It knows no model: an answer to one question is the
// caller's work.
package front

// Point is the two objectives of one design, both to be lowered.
type Point [2]float64

// dominates reports whether a is nowhere worse than b and somewhere better.
func (a Point) dominates(b Point) bool {
	return a[0] <= b[0] && a[1] <= b[1] && a != b
}
