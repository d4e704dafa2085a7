package wave

import (
	"errors"
	"math"
	"slices"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
)

// Trace is the flow through one inlet at one condition.
type Trace struct {
	Gas      gas.Perfect
	Free     FreeStream
	Settings Settings // with defaults filled in
	// Threshold is the largest threshold that was used: above Settings.Threshold
	// where more than half the events were spent.
	Threshold float64
	// Regions[0] is the free stream; fronts and walls refer to regions by index.
	Regions []State
	Fronts  []Front
	Walls   []Wall
	// Ending is why the captured stream did not reach the last plane, OutsideEnding
	// why the flow over the cowl was not followed to its end; nil where they were.
	Ending        *Ending
	OutsideEnding *Ending

	Captured Captured
	Stations []Station // one a plane
	Forces   []Force
	// LipRegion is the region just ahead of the lip whose flow meets the inner cowl,
	// -1 where the lip was not reached.
	LipRegion int
	// LipShocks lists the shocks of the body at the lip, bottom to top.
	LipShocks []LipShock
	// LipShockMiss is the distance from the shoulder to the foot of the lip shock
	// over capture height, negative ahead of it; NaN where none reaches the body.
	LipShockMiss float64

	Spilled Closure // of the stream tube that passes over the lip; NaN where it was not reached
	// OpenMass and OpenMomentum sum what wavelets and merged fronts leave open,
	// front by front without cancelling, in the measure of Closure.
	OpenMass     float64
	OpenMomentum float64
	Dropped      Dropped
	Events       int
	Error        Error
}

// Front is one straight front, in metres.
type Front struct {
	From, To     contour.Point
	Kind         Kind
	Family       int // +1 runs up from its stream, -1 down, 0 slip line
	Below, Above int // regions
	// Source is the body corner a shock started from, leading edge 1; -1 the lip,
	// -2 the outer cowl; 0 where crossings made it.
	Source int
	Merged bool // carries the jump of fronts below the threshold
	Duct   bool // enters the duct or ends ahead of the lip; else outside
}

// Wall is a stretch of surface under one pressure, in metres: of body and inner cowl
// as far as the last plane or the ending, of the outer cowl to its length; surface by
// surface and downstream.
type Wall struct {
	Surface  Surface
	Segment  int // from 1
	From, To contour.Point
	Region   int
}

// Captured is the stream that enters the duct; numbers are NaN where the lip was
// not reached.
type Captured struct {
	// Capture is A0/Ac by the mass that passes under the lip, Traced by following
	// the lip streamline to the free stream.
	Capture float64
	Traced  float64
	// Spillage is the additive drag along the lip streamline, Balance what momentum
	// leaves for it between free stream, body and lip; both on q0 Ac.
	Spillage float64
	Balance  float64
	// Streamline runs from half a capture height ahead of the first wave to the lip;
	// of corners closer than a tie, where waves meet, the last stands for all.
	Streamline []contour.Point
}

// Force is the gauge force p - p0 on what Walls has of one segment, on q0 Ac, x
// downstream.
type Force struct {
	Surface  Surface
	Segment  int // from 1
	From, To contour.Point
	X, Y     float64
}

// TemperatureRatio is T/T0 of a region.
func (t *Trace) TemperatureRatio(region int) float64 {
	return t.Regions[region].temperature(t.Gas, t.Free.Mach)
}

// Run traces the flow of a gas through an inlet. The error reports, all at once,
// input that no trace can use; an ending of the flow is part of the trace.
func Run(fluid gas.Perfect, free FreeStream, geometry Geometry, settings Settings) (*Trace, error) {
	if err := errors.Join(settings.Validate(), geometry.Validate(free, fluid)); err != nil {
		return nil, err
	}
	settings = settings.withDefaults()
	swept := sweepAll(fluid, free, &geometry, settings)
	defer swept.release()
	trace := swept.read()
	swept.leaveFrame(trace)
	if !settings.WithoutError {
		coarse := sweepAll(fluid, free, &geometry, settings.coarser())
		trace.estimate(coarse.read(), swept.blur())
		coarse.release()
	}
	return trace, nil
}

// read takes the numbers off a finished sweep; leaveFrame adds the picture.
func (c *core) read() *Trace {
	t := &Trace{
		Gas: c.gas, Free: c.free, Settings: c.asked, Threshold: max(c.coarsest, c.blurAhead), Dropped: c.fan.dropped, Events: c.events,
		LipRegion: -1, LipShocks: c.lipShocks(), Ending: c.ending, OutsideEnding: c.outside.ending,
		Captured:     Captured{Capture: math.NaN(), Traced: math.NaN(), Spillage: math.NaN(), Balance: math.NaN()},
		LipShockMiss: c.shoulderMiss(),
		Spilled:      Closure{math.NaN(), math.NaN(), math.NaN()},
		Error:        Error{Capture: math.NaN(), Spillage: math.NaN()},
	}
	var push vector
	entry := math.NaN()
	if c.atLip {
		t.LipRegion = int(c.parting.inside)
		line := c.traceLip()
		push = c.push(line)
		entry = c.capture(&t.Captured, line, push)
		t.Spilled = c.spilled(line, push)
	}
	for _, x := range c.geometry.Planes {
		t.Stations = append(t.Stations, c.station(x, entry, push))
	}
	height := c.geometry.captureHeight()
	t.OpenMass = c.open.mass / c.regions[0].massFlux(c.gas) / height
	t.OpenMomentum = c.open.momentum / c.dynamic() / height
	return t
}

// capture fills the captured stream and returns the height it takes of the free
// stream, by mass.
func (c *core) capture(to *Captured, line streamline, push vector) float64 {
	height, e := c.geometry.captureHeight(), c.downstream()
	lip := c.through(c.lipCut)
	first := line.points[len(line.points)-1]
	to.Capture = lip.mass / height
	to.Traced = c.entry(line) / height
	to.Spillage = push.dot(e) / (c.dynamic() * height)
	low := c.lipCut[0].from
	walls := c.wallForce(Body, low, c.lip)
	left := lip.momentum.plus(walls.times(-1)).dot(e) - c.regions[0].flux(c.gas)*lip.mass
	to.Balance = left / (c.dynamic() * height)

	ahead := height / 2
	start := contour.Point{X: first.X - ahead*e.x, Y: first.Y - ahead*e.y}
	to.Streamline = append(to.Streamline, c.frame.out(start))
	for i, p := range slices.Backward(line.points) {
		if i == 0 || step(p, line.points[i-1]).length() > c.near {
			to.Streamline = append(to.Streamline, c.frame.out(p))
		}
	}
	return lip.mass
}

// spilled closes the tube between the lip streamline, the outer cowl and a
// streamline above every wave.
func (c *core) spilled(line streamline, push vector) Closure {
	low, high := c.topCut[0].from, c.topCut[len(c.topCut)-1].to
	entry := c.across(high) - c.entry(line)
	return c.tube(entry, c.through(c.topCut), c.wallForce(CowlOuter, low, high).plus(push.times(-1)))
}

// leaveFrame copies regions, fronts, walls with their forces, and endings into the axes
// of the inlet.
func (c *core) leaveFrame(t *Trace) {
	t.Regions = slices.Clone(c.regions)
	for i := range t.Regions {
		t.Regions[i].FlowAngle += c.frame.angle
	}
	t.Fronts = make([]Front, len(c.fronts))
	for i := range c.fronts {
		f := &c.fronts[i]
		t.Fronts[i] = Front{
			From: c.frame.out(f.from), To: c.frame.out(f.to), Kind: f.kind, Family: int(f.family),
			Below: int(f.below), Above: int(f.above), Source: int(f.source), Merged: f.merged, Duct: f.duct,
		}
	}
	wetted := c.wetted()
	t.Forces = c.forces(wetted)
	t.Walls = make([]Wall, 0, len(wetted))
	for _, p := range wetted {
		t.Walls = append(t.Walls, Wall{p.surface, p.segment + 1, c.frame.out(p.from), c.frame.out(p.to), int(p.region)})
	}
	for _, e := range []*Ending{t.Ending, t.OutsideEnding} {
		if e != nil {
			e.Place = c.frame.out(e.Place)
			e.BehindLip = (e.Place.X - c.geometry.CowlInner[0].X) / c.geometry.captureHeight()
			e.State.FlowAngle += c.frame.angle
		}
	}
}
