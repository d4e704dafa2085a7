package wave

import (
	"math"

	"rampwright/problems/contour"
)

// vector is a force, a momentum flux or a step.
type vector struct{ x, y float64 }

func (v vector) plus(w vector) vector   { return vector{v.x + w.x, v.y + w.y} }
func (v vector) times(k float64) vector { return vector{k * v.x, k * v.y} }
func (v vector) dot(w vector) float64   { return v.x*w.x + v.y*w.y }
func (v vector) length() float64        { return math.Hypot(v.x, v.y) }

// heads is the unit vector at an angle to the x axis.
func heads(angle float64) vector {
	sin, cos := math.Sincos(angle)
	return vector{cos, sin}
}

// step leads from one point to another.
func step(from, to contour.Point) vector { return vector{to.X - from.X, to.Y - from.Y} }
