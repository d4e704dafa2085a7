package inlet

import (
	"fmt"
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/ramp"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// closure is the frozen contour of a design: the ramp shocks of the
// shock-on-lip Mach number and the design incidence meet in the focus, the lip
// stands there or a setback behind it, and the lip shock is cancelled at the
// shoulder.
type closure struct {
	contour.Inlet
	Design
	Focus   contour.Point
	corners [ramp.MaxRamps]contour.Point
	angles  [ramp.MaxRamps]float64
	lipWave float64 // beta of the lip shock as designed; 0 for an aligned cowl
	wall    float64 // angle of the body behind the shoulder: parallel to the cowl as drawn
	height  float64 // capture height
	err     error   // why the contour does not close, nil if it does
	// moved are the walls of an inlet one part of which was turned on its hinge; nil
	// as designed.
	moved *wave.Geometry
}

// close builds the contour. Quantities of the geometry are missing with c.err
// where it does not close.
func (c *closure) close(r route, g gas.Perfect, d Design, captureHeight, incidence float64) {
	c.Design, c.height, c.err, c.lipWave, c.moved = d, captureHeight, nil, 0, nil
	n := d.Ramps
	c.Corners, c.Angles = c.corners[:n], c.angles[:n]
	c.CowlInner, c.CowlOuter, c.wall = d.Cowl, d.Outer(), d.Cowl
	sum := 0.0
	for i := range n {
		sum += d.Turning[i]
		c.Angles[i] = sum
	}
	c.err = c.place(r, g, incidence)
}

func (c *closure) place(r route, g gas.Perfect, incidence float64) error {
	var waves [ramp.MaxRamps]shock.Oblique
	n := c.Ramps
	if _, err := march(r, g, c.ShockOnLip, incidence, &c.Design, waves[:n]); err != nil {
		return err
	}
	focus, ok := ramp.Focus(c.Corners, waves[:n], incidence, c.height)
	if !ok {
		return &problems.Status{Phrase: "ramp shocks do not rise to the lip"}
	}
	c.Focus = focus
	c.Lip = contour.Point{X: focus.X + c.Setback*c.height, Y: c.height}
	if c.LipTurning < 0 {
		return &problems.Status{Phrase: "cowl turns away from the flow at the lip"}
	}
	if err := c.placeShoulder(r, g, waves[n-1].Mach2); err != nil {
		return err
	}
	c.Throat = r.throatHeight(c)
	for i := range n {
		if !(c.RampLength(i) > 0) {
			return &problems.Status{Phrase: rampName(i) + " has no length"}
		}
	}
	if !(c.Throat > 0) {
		return &problems.Status{Phrase: "duct closed at the shoulder"}
	}
	return nil
}

// placeShoulder ends the last ramp where the lip shock meets it; an aligned cowl
// has no lip shock, and the shoulder is the foot of the normal from the lip.
func (c *closure) placeShoulder(r route, g gas.Perfect, machAhead float64) error {
	last := c.lastRamp()
	if c.LipTurning == 0 {
		along := last.Along(c.Lip)
		sin, cos := math.Sincos(last.Angle)
		c.Shoulder = contour.Point{X: last.Through.X + along*cos, Y: last.Through.Y + along*sin}
		return nil
	}
	wave, err := r.weak(g, machAhead, c.LipTurning)
	if err != nil {
		return detached("lip shock", machAhead, err)
	}
	c.lipWave = wave.WaveAngle
	shoulder, ok := contour.Meet(last, contour.Line{Through: c.Lip, Angle: last.Angle - wave.WaveAngle})
	if !ok {
		return &problems.Status{Phrase: "lip shock does not reach the ramp"}
	}
	c.Shoulder = shoulder
	return nil
}

// lastRamp is the line of ramp n.
func (c *closure) lastRamp() contour.Line {
	n := len(c.Corners)
	return contour.Line{Through: c.Corners[n-1], Angle: c.Angles[n-1]}
}

// cowlLine is the line of the inner cowl surface.
func (c *closure) cowlLine() contour.Line { return contour.Line{Through: c.Lip, Angle: c.CowlInner} }

// throatWall is the line of the body behind the shoulder.
func (c *closure) throatWall() contour.Line {
	return contour.Line{Through: c.Shoulder, Angle: c.wall}
}

// internalContraction is the height of the stream ahead of the lip, normal to
// ramp n's flow, over the throat height.
func (c *closure) internalContraction() float64 { return c.lastRamp().Height(c.Lip) / c.Throat }

// march fills waves with the ramp shocks at a condition. It returns the number
// attached and the reason why the chain ends early, nil if every ramp shock is
// attached and every flow ahead of a shock, the lip's included, is supersonic.
func march(r route, g gas.Perfect, mach, incidence float64, d *Design, waves []shock.Oblique) (attached int, err error) {
	for i := range waves {
		turning := d.flowTurning(i, incidence)
		if turning <= 0 {
			return i, &problems.Status{Phrase: "ramp 1 expands"}
		}
		if !(mach > 1) {
			return i, &problems.Status{Phrase: "flow subsonic ahead of " + rampName(i)}
		}
		wave, err := r.weak(g, mach, turning)
		if err != nil {
			return i, detached(rampName(i), mach, err)
		}
		waves[i] = wave
		mach = wave.Mach2
	}
	if !(mach > 1) {
		return len(waves), &problems.Status{Phrase: "flow subsonic behind the last ramp"}
	}
	return len(waves), nil
}

// flowTurning is the turning of the flow at ramp i (from 0): incidence adds to
// the first.
func (d *Design) flowTurning(i int, incidence float64) float64 {
	if i == 0 {
		return d.Turning[0] + incidence
	}
	return d.Turning[i]
}

func detached(name string, mach float64, err error) error {
	by := math.NaN()
	if d, ok := err.(*shock.Detached); ok {
		by = d.By
	}
	return &problems.Detached{Shock: name, Mach: mach, By: by}
}

// rampName names ramp i (from 0) as stations and members do.
func rampName(i int) string {
	if i >= len(rampNames) {
		return fmt.Sprintf("ramp %d", i+1)
	}
	return rampNames[i]
}

var rampNames = [ramp.MaxRamps]string{
	"ramp 1", "ramp 2", "ramp 3", "ramp 4", "ramp 5", "ramp 6", "ramp 7", "ramp 8",
}
