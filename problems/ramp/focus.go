package ramp

import (
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/shock"
)

// Focus returns the corners of a chain whose shocks all meet in one point at
// height captureHeight: the first corner is the origin, corner i+1 lies where
// ramp i meets the line through the focus at the absolute angle
// phi_i + beta_(i+1). The free stream flows at angle -incidence; waves[0]
// turns it onto the first ramp. ok is false where the first shock does not rise
// above the x axis or a corner cannot be placed.
//
// Source: geometry of straight shocks, xF = hc / tan(beta_1 - incidence).
func Focus(corners []contour.Point, waves []shock.Oblique, incidence, captureHeight float64) (focus contour.Point, ok bool) {
	first := waves[0].WaveAngle - incidence
	if !(first > 0) {
		return contour.Point{}, false
	}
	focus = contour.Point{X: captureHeight / math.Tan(first), Y: captureHeight}
	corners[0] = contour.Point{}
	angle := -incidence
	for i := range len(waves) - 1 {
		angle += waves[i].Turning
		corner, meets := contour.Meet(
			contour.Line{Through: corners[i], Angle: angle},
			contour.Line{Through: focus, Angle: angle + waves[i+1].WaveAngle})
		if !meets {
			return focus, false
		}
		corners[i+1] = corner
	}
	return focus, true
}
