package wave

import (
	"math"

	"rampwright/problems/contour"
)

// arrival is a shock that runs up from a body corner, where the lip is reached.
type arrival struct {
	source int16
	line   contour.Line // in the frame
	inside bool         // below the lip
}

// arrivals lists the shocks of body corners that still run when the lip is
// reached, bottom to top.
func (c *core) arrivals(ahead *stream) []arrival {
	var list []arrival
	for f := ahead.first; f != none; f = c.fronts[f].next {
		a := &c.fronts[f]
		if a.kind == Shock && a.family > 0 && a.source > 0 {
			list = append(list, arrival{
				source: a.source,
				line:   contour.Line{Through: a.from, Angle: math.Atan(a.slope)},
				inside: a.at(c.lip.X) < c.lip.Y-c.near,
			})
		}
	}
	return list
}

// LipShock is a shock of the body where it reaches the lip.
type LipShock struct {
	// Corner counts the body corner it comes from, leading edge 1; shocks that
	// merged count as the strongest of them.
	Corner int
	// Clearance is the distance along x from the shock, at lip height, to the lip,
	// over capture height: negative where it falls inside the lip.
	Clearance float64
	Inside    bool
}

// lipShocks takes the arrivals into the axes of the inlet.
func (c *core) lipShocks() []LipShock {
	var list []LipShock
	lip := c.geometry.CowlInner[0]
	for _, a := range c.arrived {
		line := contour.Line{Through: c.frame.out(a.line.Through), Angle: a.line.Angle + c.frame.angle}
		distance, _ := contour.Line{Through: lip}.Reach(line)
		list = append(list, LipShock{
			Corner: int(a.source), Clearance: -distance / c.geometry.captureHeight(), Inside: a.inside,
		})
	}
	return list
}

// shoulderMiss returns the distance from the shoulder to where the lip shock
// first meets the body, over capture height, negative ahead of the shoulder; NaN
// where there is none or it ends before the body.
func (c *core) shoulderMiss() float64 {
	shoulder := c.frame.in(c.geometry.Body[c.geometry.shoulder()])
	for i := c.before; i < len(c.fronts); i++ {
		f := &c.fronts[i]
		if f.source != sourceLip || f.kind != Shock || f.family > 0 || !f.grounded {
			continue
		}
		return math.Copysign(contour.Distance(shoulder, f.to), f.to.X-shoulder.X) / c.geometry.captureHeight()
	}
	return math.NaN()
}
