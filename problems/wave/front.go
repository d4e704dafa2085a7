package wave

import (
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
)

// Kind is the kind of a front.
type Kind int8

const (
	Shock   Kind = iota // a compression, exact oblique shock
	Wavelet             // one step of a Prandtl-Meyer fan
	Slip                // slip line: equal pressure and direction on both sides
)

// String returns the name used in tables and drawings.
func (k Kind) String() string { return [...]string{"shock", "expansion", "slip line"}[k] }

// front is a straight discontinuity between two regions, in the frame of the
// sweep. Number and neighbours are indices; none is -1.
type front struct {
	from         contour.Point
	to           contour.Point // where it ended; set when it does
	slope        float64       // dy/dx
	below, above int32         // regions
	prev, next   int32         // neighbours, lower and upper
	source       int16         // see Source
	kind         Kind
	family       int8 // +1 runs up from its stream, -1 down, 0 slip line
	alive        bool
	grounded     bool // ended on the body
	merged       bool // carries the jump of a merged front
	ledger       ledger
	duct         bool // enters the duct, or ends ahead of the lip; else outside
}

const none = int32(-1)

// at is the height of the front at x.
func (f *front) at(x float64) float64 { return f.from.Y + f.slope*(x-f.from.X) }

// closing returns the slope at which the mass flux through a front is equal on
// both sides,
//
//	rho1 u1 sin(sigma - theta1) = rho2 u2 sin(sigma - theta2)
//
// that is the direction of the difference of the two mass flux vectors: exact
// for a shock, and what makes a wavelet conserve mass. ok is false where the
// difference is lost in rounding or points across the sweep.
func closing(g gas.Perfect, a, b *State) (slope float64, ok bool) {
	sinA, cosA := math.Sincos(a.FlowAngle)
	sinB, cosB := math.Sincos(b.FlowAngle)
	fluxA, fluxB := a.massFlux(g), b.massFlux(g)
	dx, dy := fluxB*cosB-fluxA*cosA, fluxB*sinB-fluxA*sinA
	size := math.Abs(dx) + math.Abs(dy)
	if size < 1e-11*fluxA || math.Abs(dx) < 1e-3*size {
		return 0, false
	}
	return dy / dx, true
}

// residual returns what a front of length one at the slope given leaves open:
// mass flux, and momentum flux in x and y over p0, flowing in from a (below)
// less out to b (above). Shocks and slip lines leave rounding.
func residual(g gas.Perfect, a, b *State, slope float64) (mass, momentumX, momentumY float64) {
	length := math.Hypot(1, slope)
	nx, ny := -slope/length, 1/length
	through := func(s *State) (mass, x, y float64) {
		sin, cos := math.Sincos(s.FlowAngle)
		across := cos*nx + sin*ny
		flux := s.flux(g) * across
		return s.massFlux(g) * across, flux*cos + s.Pressure*nx, flux*sin + s.Pressure*ny
	}
	massA, xA, yA := through(a)
	massB, xB, yB := through(b)
	return massA - massB, xA - xB, yA - yB
}
