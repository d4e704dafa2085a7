package inlet

import (
	"math"

	"rampwright/problems/contour"
)

// capturedStream finds capture and spillage drag where the lip stands in the
// undisturbed flow of the last ramp.
func (a *analysis) capturedStream() {
	a.captureErr = a.placeErr
	if a.captureErr == nil {
		a.capture, a.spillage = a.route.captured(a)
	}
}

// traced follows the lip streamline upstream through shocks n..1 and returns
//
//	capture  = (y cos(alpha) + x sin(alpha)) / hc           at its point on shock 1
//	spillage = sum (p_i - p0) dn_i / (q0 hc),  dn = dy cos(alpha) + dx sin(alpha)
//
// Source: geometry; Sibulkin, NACA Report 1187 (additive drag).
func (a *analysis) traced() (capture, spillage float64) {
	place := a.shape.Lip
	pressure := 1.0 // of ramp i over free stream, built from the last ramp down
	for _, wave := range a.waves[:a.design.Ramps] {
		pressure *= wave.Jump.Pressure
	}
	sum := 0.0
	for i := a.design.Ramps - 1; i >= 0; i-- {
		back, _ := a.streamline(place, i).Reach(a.shockLine(i))
		before := a.upstream(place, i, back)
		sum += (pressure - 1) * (a.across(place) - a.across(before))
		pressure /= a.waves[i].Jump.Pressure
		place = before
	}
	height := a.shape.height
	return a.across(place) / height, sum / height / a.def.Gas.DynamicPressure(1, a.point.Mach)
}

// across is the coordinate of p normal to the free stream.
func (a *analysis) across(p contour.Point) float64 {
	sin, cos := math.Sincos(a.point.Incidence)
	return p.Y*cos + p.X*sin
}

// balanced closes mass and momentum over the stream tube between free stream,
// ramp walls, the normal from ramp n's line to the lip, and the lip streamline:
//
//	capture  = (rho u)_n h_n / ((rho u)_0 hc),  h_n the height of the lip above ramp n
//	along the free stream:
//	rho0 u0^2 A0 - rho_n u_n^2 h_n cos(phi_n + alpha) + pressure forces = 0
//
// with gauge pressures p - p0, so that the force of the lip streamline, the
// spillage drag, is what remains. Ramp n's wall ends at the foot of that normal;
// its line may be prolonged there because the flow is uniform.
func (a *analysis) balanced() (capture, spillage float64) {
	g, n := a.def.Gas, a.design.Ramps
	alpha := a.point.Incidence
	pressure, density, sound := 1.0, 1.0, 1.0 // of ramp i over free stream
	wall := 0.0                               // gauge force of the ramp walls against the stream, over p0
	foot := a.footOfLip()
	for i := range n {
		jump := a.waves[i].Jump
		pressure *= jump.Pressure
		density *= jump.Density
		sound *= jump.Temperature
		end := foot
		if i+1 < n {
			end = a.shape.Corners[i+1]
		}
		wall += (pressure - 1) * (a.across(end) - a.across(a.shape.Corners[i]))
	}
	height := a.shape.lastRamp().Height(a.shape.Lip)
	mach := a.lipMach
	capture = density * mach * math.Sqrt(sound) * height / (a.point.Mach * a.shape.height)

	// Momentum and gauge pressure through the exit normal, along the free stream.
	cos := math.Cos(a.shape.Angles[n-1] + alpha)
	exit := (g.Gamma*pressure*mach*mach + pressure - 1) * height * cos
	entry := g.Gamma * a.point.Mach * a.point.Mach * capture * a.shape.height
	// wall pushes upstream on the stream, the lip streamline downstream.
	drag := exit - entry + wall
	return capture, drag / a.shape.height / g.DynamicPressure(1, a.point.Mach)
}

// footOfLip is the foot of the normal from the lip to ramp n's line.
func (a *analysis) footOfLip() contour.Point {
	last := a.shape.lastRamp()
	along := last.Along(a.shape.Lip)
	return a.upstream(last.Through, a.design.Ramps-1, along)
}
