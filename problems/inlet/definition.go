// Package inlet turns a design (ramp angles, cowl, shock-on-lip Mach) into one
// frozen contour and analyses it at every flight point: stations, the catalogue
// of quantities, capture, spillage, starting, and the default limits.
package inlet

import (
	"slices"

	"rampwright/problems/gas"
)

// Setting is one number of a design: fixed at Value, or searched within
// [Low, High]. It stays in the unit of the brief key it comes from (degrees for
// angles), because the search box is stated and printed in that unit.
type Setting struct {
	Value    float64
	Low      float64
	High     float64
	Searched bool
}

// Fixed returns a setting held at value.
func Fixed(value float64) Setting { return Setting{Value: value, Low: value, High: value} }

// Between returns a searched setting.
func Between(low, high float64) Setting { return Setting{Low: low, High: high, Searched: true} }

// Point is one flight condition, in SI units and radians. Incidence is positive
// when it turns the free stream toward the ramp.
type Point struct {
	Name        string
	Mach        float64
	Incidence   float64 // rad
	Pressure    float64 // Pa, static
	Temperature float64 // K, static
	// Traced asks for a trace of every wave here, whether or not the chain of straight
	// shocks holds: the throat is then an average behind what the lip shock reflects,
	// not the state just behind it.
	Traced bool
}

// Definition is an inlet to be designed and the conditions it meets. The first
// point is the design point: its incidence shapes the contour.
type Definition struct {
	Gas           gas.Perfect
	CaptureHeight float64   // m
	Width         float64   // m
	RampAngle     []Setting // deg, turning of each ramp; 1..8 of them
	// Exactly one of the two closes the duct: the angle of the inner cowl
	// surface to the x axis, or the turning at the lip below the last ramp.
	CowlAngle     *Setting // deg
	LipTurning    *Setting // deg
	CowlWedge     Setting  // deg, outer minus inner cowl angle
	CowlLength    float64  // outer cowl along x, fraction of capture height
	ShockOnLip    Setting  // Mach number at which every ramp shock meets the lip
	LipSetback    Setting  // fraction of capture height
	TerminalShock bool     // a normal shock stands in the throat
	DuctFactor    float64  // total-pressure factor behind the last shock
	// Outline, where it is given, is an existing inlet: there are no ramp angles,
	// cowl angle or lip turning then, and CaptureHeight is that of its lip.
	Outline *Outline
	Points  []Point
}

// Traces reports whether a flight point asks for a trace.
func (d *Definition) Traces() bool {
	return slices.ContainsFunc(d.Points, func(p Point) bool { return p.Traced })
}

// ramps is the number of ramps, of a given outline that of its straight stretches
// ahead of the shoulder.
func (d *Definition) ramps() int {
	if d.Outline != nil {
		return d.Outline.ramps()
	}
	return len(d.RampAngle)
}
