package inlet

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sync"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/ramp"
	"rampwright/problems/wave"
)

// Tolerances are the standard deviations of a built and flown inlet, in the units
// of the brief; zero for what is exact.
type Tolerances struct {
	RampAngle  float64 // deg, of each ramp by itself
	CowlAngle  float64 // deg, inner and outer surface together
	LipSetback float64 // fraction of capture height, along x
	Mach       float64 // common to all flight points
	Incidence  float64 // deg, common to all flight points
}

// Built is a problem whose designs are evaluated as built and flown. It implements
// problems.Perturbable and is safe for concurrent use.
//
// A set of offsets changes the drawn contour, which is never focused again: the
// lengths of ramps 1..n-1, the lip and the throat wall stay as drawn, every ramp
// turns with the corner it starts at, and ramp n ends where it meets the throat
// wall. With an aligned cowl that wall is ramp n prolonged: it keeps its direction
// and starts at the end of ramp n, whose length stays. The cowl turns about the
// lip.
type Built struct {
	*Problem
	scatter []problems.Scatter
	slots   []int // of the inputs in offsets
	pool    sync.Pool
}

// offsets are what a built inlet is off by, in the units of the brief: each ramp
// angle, then those named below.
type offsets [ramp.MaxRamps + 4]float64

const (
	offCowl = ramp.MaxRamps + iota
	offSetback
	offMach
	offIncidence
)

// builtWork holds what one evaluation needs.
type builtWork struct {
	workspace
	flown Point
}

// Built returns the problem with tolerances. The error lists, each an *Invalid,
// what cannot be drawn from.
func (p *Problem) Built(t Tolerances) (*Built, error) {
	if err := t.validate(&p.definition); err != nil {
		return nil, err
	}
	b := &Built{Problem: p}
	b.pool.New = func() any { return new(builtWork) }
	add := func(slot int, name, unit string, deviation float64) {
		if deviation > 0 {
			b.scatter = append(b.scatter, problems.Scatter{Name: name, Unit: unit, Deviation: deviation})
			b.slots = append(b.slots, slot)
		}
	}
	for i := range p.definition.RampAngle {
		add(i, fmt.Sprintf("ramp_%d_angle_deg", i+1), "deg", t.RampAngle)
	}
	add(offCowl, "cowl_angle_deg", "deg", t.CowlAngle)
	add(offSetback, "lip_setback", "", t.LipSetback)
	add(offMach, "mach", "", t.Mach)
	add(offIncidence, "incidence_deg", "deg", t.Incidence)
	return b, nil
}

// validate reports everything wrong at once.
func (t Tolerances) validate(d *Definition) error {
	var wrong []error
	for _, v := range []float64{t.RampAngle, t.CowlAngle, t.LipSetback, t.Mach, t.Incidence} {
		if !(v >= 0) || math.IsInf(v, 1) {
			wrong = append(wrong, &Invalid{fmt.Sprintf("a standard deviation of %g", v)})
		}
	}
	if d.Outline != nil && t.RampAngle+t.CowlAngle+t.LipSetback > 0 {
		wrong = append(wrong, &Invalid{"a given outline has no angles or setback that scatter"})
	}
	for _, point := range d.Points {
		if slowest := point.Mach - problems.TruncatedAt*t.Mach; !(slowest > 1) {
			wrong = append(wrong, &Invalid{fmt.Sprintf("flight point %s is flown down to Mach %.4g: the flow must stay supersonic", point.Name, slowest)})
		}
	}
	return errors.Join(wrong...)
}

// Scatter lists the inputs with a tolerance: ramp angles, cowl angle, lip setback,
// Mach number, incidence.
func (b *Built) Scatter() []problems.Scatter { return b.scatter }

// EvaluateBuilt computes every quantity of the design at x as built and flown.
func (b *Built) EvaluateBuilt(ctx context.Context, x, given []float64, dst *problems.Evaluation) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	w := b.pool.Get().(*builtWork)
	defer b.pool.Put(w)
	dst.Bounds = nil
	off := b.offset(w, x, given)
	next := 0
	for i := range b.definition.Points {
		w.fly(b.definition.Points[i], &off)
		w.flow.fly(BuiltTrace())
		next = b.read(&w.flow, dst, next, i)
	}
	b.read(&w.flow, dst, next, -1)
	w.flow.trace = nil
	return nil
}

// StraightClearance stores, for each flight point, the least lip clearance of the
// ramp shocks as built and flown when each runs on straight, in capture heights:
// negative where one falls inside the lip, NaN where not every ramp shock is
// attached, and of a given outline, whose shocks only a trace tells. A trace may
// find that shocks merge on the way and pass outside.
func (b *Built) StraightClearance(x, given, dst []float64) {
	if b.definition.Outline != nil {
		for i := range dst {
			dst[i] = math.NaN()
		}
		return
	}
	w := b.pool.Get().(*builtWork)
	defer b.pool.Put(w)
	off := b.offset(w, x, given)
	for i := range dst {
		w.fly(b.definition.Points[i], &off)
		w.flow.marchRamps()
		w.flow.placeLip()
		dst[i] = math.NaN()
		if w.flow.rampErr == nil && w.shape.err == nil {
			dst[i] = slices.Min(w.flow.clearance[:w.design.Ramps])
		}
	}
}

// offset shapes the contour of the design at x with the offsets given, one an input.
func (b *Built) offset(w *builtWork, x, given []float64) offsets {
	var off offsets
	for i, slot := range b.slots {
		off[slot] = given[i]
	}
	b.freeze(&w.workspace, first{}, x)
	if w.shape.err == nil && b.definition.Outline == nil {
		w.shape.build(&off)
		w.design = w.shape.Design
	}
	return off
}

// fly sets the flight point with what it is off by.
func (w *builtWork) fly(point Point, off *offsets) {
	w.flown = point
	w.flown.Mach += off[offMach]
	w.flown.Incidence += off[offIncidence] * radian
	w.flow.point = &w.flown
}

// BuiltTrace are the settings of the traces of a built inlet: wavelets of 4 deg, a
// threshold of 1e-2, no more than 4000 events, no error estimate. One draw among
// thousands needs no more: against fine traces of random draws half of the throat
// recoveries are within 0.3 %, 95 of 100 within 0.9 %, temperatures within 0.2 and
// 0.7 %.
func BuiltTrace() wave.Settings {
	return wave.Settings{Wavelet: 4 * radian, Threshold: 1e-2, Events: 4000, WithoutError: true}
}

// build turns the drawn contour into a built one.
func (c *closure) build(off *offsets) {
	var lengths [ramp.MaxRamps]float64
	for i := range c.Corners {
		lengths[i] = c.RampLength(i)
	}
	wall, aligned := c.throatWall(), c.LipTurning == 0
	end := c.Corners[0]
	total := 0.0
	for i := range c.Corners {
		c.Turning[i] += off[i] * radian
		total += c.Turning[i]
		c.Corners[i], c.Angles[i] = end, total
		sin, cos := math.Sincos(total)
		end = contour.Point{X: end.X + lengths[i]*cos, Y: end.Y + lengths[i]*sin}
	}
	c.Cowl += off[offCowl] * radian
	c.Setback += off[offSetback]
	c.Lip.X += off[offSetback] * c.height
	c.LipTurning = total - c.Cowl
	c.CowlInner, c.CowlOuter = c.Cowl, c.Outer()
	c.Shoulder = end
	if !aligned {
		c.Shoulder, c.err = c.trimmed(wall, mostTrim*lengths[len(c.Corners)-1])
	}
	c.Throat = first{}.throatHeight(c)
	if c.err == nil && !(c.Throat > 0) {
		c.err = &problems.Status{Phrase: "duct closed at the shoulder"}
	}
}

// trimmed is where ramp n, up to the length given, meets the throat wall.
func (c *closure) trimmed(wall contour.Line, longest float64) (contour.Point, error) {
	last := c.lastRamp()
	along, ok := last.Reach(wall)
	if !ok || !(along > 0) || along > longest {
		return c.Shoulder, &problems.Status{Phrase: "the last ramp does not meet the throat wall"}
	}
	shoulder, _ := contour.Meet(last, wall)
	return shoulder, nil
}

// mostTrim is how long the last ramp may become, over its length as drawn: under a
// nearly aligned cowl wall and ramp are nearly parallel.
const mostTrim = 2
