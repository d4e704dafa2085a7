package wave

import (
	"sync"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
)

// core is one sweep carried to its end, before anything is read off it. Places
// are in the frame of the sweep.
type core struct {
	sweep
	asked    Settings
	geometry *Geometry
	free     FreeStream
	frame    frame
	lip      contour.Point
	// ending is why the captured stream did not reach the last plane, nil if it did.
	ending    *Ending
	atLip     bool // the lip was reached: what follows is known
	parting   parting
	arrived   []arrival // shocks at the lip
	lipCut    []band    // from body to lip
	before    int       // fronts made ahead of the lip
	blurAhead float64   // threshold up to the lip
	outside   stream
	// topCut runs from the outer cowl, where the outside ends, into the free stream.
	topCut []band
}

// cores keeps the slices of finished sweeps for the next.
var cores = sync.Pool{New: func() any { return new(core) }}

// sweepAll traces a validated geometry in the frame of its walls or, where a wave
// leans upstream there, in one that leans with it. The core is given back by
// release.
func sweepAll(fluid gas.Perfect, free FreeStream, g *Geometry, settings Settings) *core {
	t := g.frame(free)
	first := sweepIn(t, fluid, free, g, settings)
	for _, lean := range leans {
		if !first.steep() {
			break
		}
		u := frameAt(t.angle + lean)
		if !g.follows(u, free) {
			continue
		}
		again := sweepIn(u, fluid, free, g, settings)
		if !again.steep() {
			first, again = again, first
		}
		again.release()
	}
	return first
}

// steep reports whether the captured stream ended at a wave that leans upstream of
// the sweep, and another sweep may help: in nearly sonic flow the waves of both
// families stand across every sweep.
func (c *core) steep() bool {
	return c.ending != nil && c.ending.Reason == SteepWave && c.ending.State.Mach >= nearlySonic
}

func sweepIn(t frame, fluid gas.Perfect, free FreeStream, g *Geometry, settings Settings) *core {
	c := cores.Get().(*core)
	*c = core{
		sweep:    c.sweep.cleared(fluid, tie*g.captureHeight()),
		geometry: g, free: free, frame: t, lip: t.in(g.CowlInner[0]), asked: settings,
	}
	c.refine(settings.ahead())
	c.regions = append(c.regions, State{Mach: free.Mach, FlowAngle: -free.Incidence - t.angle, Pressure: 1, TotalPressure: 1})

	ahead := stream{bottom: newWall(Body, t, g.Body), first: none, last: none}
	c.turnAlong(&ahead, ahead.bottom.points[0], ahead.bottom, 0, 1, false)
	c.run(&ahead, c.lip.X+c.near, &c.lip)
	c.before = len(c.fronts)
	if ahead.ending != nil {
		c.ending = ahead.ending
		c.finish(&ahead, ahead.ending.Place.X)
		return c
	}
	c.meetLip(&ahead)
	return c
}

func (c *core) release() {
	c.geometry = nil
	cores.Put(c)
}

// meetLip parts the stream at the lip and traces both parts to their ends.
func (c *core) meetLip(ahead *stream) {
	c.atLip = true
	c.blurAhead = c.coarsest
	c.refine(c.asked)
	c.parting = c.part(ahead, c.lip)
	c.arrived = c.arrivals(ahead)
	c.lipCut = c.slice(ahead, c.lip.X, ahead.bottom.at(c.lip.X), c.lip.Y)

	inner := newWall(CowlInner, c.frame, c.geometry.CowlInner)
	outer := newRay(CowlOuter, c.lip, c.geometry.OuterAngle-c.frame.angle)
	duct, outside := c.split(ahead, c.parting, c.lip, inner, outer)
	name(duct.ending, "lip")
	name(outside.ending, "outer cowl")

	ductEnd, outsideEnd := c.reach()
	c.run(&duct, ductEnd, nil)
	c.ending = duct.ending
	if c.ending != nil {
		ductEnd = c.ending.Place.X
	}
	c.finish(&duct, ductEnd)

	c.run(&outside, outsideEnd, nil)
	if outside.ending != nil {
		outsideEnd = outside.ending.Place.X
	}
	c.topCut = c.sliceOutside(&outside, outsideEnd)
	c.finish(&outside, outsideEnd)
	c.outside = outside
}

func name(e *Ending, site string) {
	if e != nil {
		e.Site = site
	}
}

// sliceOutside cuts the outside from the outer cowl to a capture height above
// its last front.
func (c *core) sliceOutside(outside *stream, x float64) []band {
	low := outside.bottom.at(x)
	high := low
	if outside.last != none {
		high = max(high, c.fronts[outside.last].at(x))
	}
	return c.slice(outside, x, low, high+c.geometry.captureHeight())
}

// reach returns x where duct and outside are traced to: past both ends of every
// plane, and to the end of the outer cowl.
func (c *core) reach() (duct, outside float64) {
	duct = c.lip.X
	for _, x := range c.geometry.Planes {
		low, high := c.ends(x)
		duct = max(duct, low.X, high.X)
	}
	return duct + c.near, max(duct, c.frame.in(c.geometry.outerEnd()).X) + c.near
}
