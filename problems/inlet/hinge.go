package inlet

import (
	"fmt"
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/problems/contour"
)

// Hinge is the one part of an inlet that moves in flight.
//
// Ramp k > 0 is the assembly of ramps k to n: it turns as one rigid body about the
// leading corner of ramp k, so that its corners and the shoulder run on circles about
// it and the turnings of the ramps behind k stay. The body wall behind the shoulder
// keeps its direction and follows the shoulder; a seal closes what opens.
//
// Ramp 0 is the cowl: a flap from the lip to abreast of the shoulder turns about the
// lip, outer surface and all. The inner cowl behind the flap keeps its direction and
// follows the flap's end. A given outline has its flap end at the second point of the
// inner cowl.
//
// Nothing else moves, the lip least of all.
type Hinge struct {
	Ramp int
}

// Name is the variable that the angle of the part is: "ramp_2_angle_deg", the
// turning of the ramp from the one before, or "cowl_angle_deg", the inner cowl at the
// lip to the x axis.
func (h Hinge) Name() string {
	if h.Ramp == 0 {
		return "cowl_angle_deg"
	}
	return fmt.Sprintf("ramp_%d_angle_deg", h.Ramp)
}

// NoHinge reports a part that an inlet does not have.
type NoHinge struct {
	Hinge Hinge
	Ramps int
}

func (e *NoHinge) Error() string {
	return fmt.Sprintf("there is no %s to move: the inlet has %d ramps", e.Hinge.Name(), e.Ramps)
}

// Angle is where a part stands in the frozen inlet, rad. Error: *NoHinge, or the
// reason why the contour does not close.
func (f *Frozen) Angle(h Hinge) (float64, error) {
	switch n := len(f.shape.Corners); {
	case f.shape.err != nil:
		return 0, f.shape.err
	case h.Ramp < 0 || h.Ramp > n:
		return 0, &NoHinge{h, n}
	case h.Ramp == 0:
		return f.shape.CowlInner, nil
	case h.Ramp == 1:
		return f.shape.Angles[0], nil
	}
	return f.shape.Angles[h.Ramp-1] - f.shape.Angles[h.Ramp-2], nil
}

// Move turns a part of the frozen inlet to an angle, rad. The result is traced at
// every condition, the unmoved position included; its contour may not close, which
// its quantities then say. Errors are those of Angle.
func (f *Frozen) Move(h Hinge, angle float64) (*Frozen, error) {
	now, err := f.Angle(h)
	if err != nil {
		return nil, err
	}
	c := *f.shape
	c.Corners, c.Angles = slices.Clone(c.Corners), slices.Clone(c.Angles)
	walls := f.Geometry()
	walls.Body, walls.CowlInner, walls.Planes = slices.Clone(walls.Body), slices.Clone(walls.CowlInner), slices.Clone(walls.Planes)
	c.moved = &walls
	if h.Ramp == 0 {
		c.turnCowl(angle - now)
	} else {
		c.turnRamps(h.Ramp, angle-now)
	}
	if f.problem.definition.Outline != nil {
		c.Throat = heightBetween(walls.Body, walls.CowlInner, walls.Planes[0])
	}
	if !(c.Throat > 0) {
		c.err = &problems.Status{Phrase: "duct closed at the shoulder"}
	}
	return &Frozen{problem: f.problem, design: c.Design, shape: &c}, nil
}

// turnRamps turns ramps k to n about the leading corner of ramp k.
func (c *closure) turnRamps(k int, by float64) {
	walls, n := c.moved, len(c.Corners)
	pivot := c.Corners[k-1]
	for i := k; i < n; i++ {
		c.Corners[i] = turned(c.Corners[i], pivot, by)
	}
	for i := k - 1; i < n; i++ {
		c.Angles[i] += by
	}
	before := c.Shoulder
	c.Shoulder = turned(c.Shoulder, pivot, by)
	shift := contour.Point{X: c.Shoulder.X - before.X, Y: c.Shoulder.Y - before.Y}
	for i := range walls.Body {
		switch {
		case i < k:
		case i <= n:
			walls.Body[i] = turned(walls.Body[i], pivot, by)
		default:
			walls.Body[i] = shifted(walls.Body[i], shift)
		}
	}
	for i := range walls.Planes {
		walls.Planes[i] += shift.X
	}
	if c.Ramps > 0 {
		c.Turning[k-1] += by
	} else {
		c.Given += by
	}
	c.LipTurning += by
	c.Throat -= across(shift, c.CowlInner)
}

// turnCowl turns the flap of the cowl about the lip.
func (c *closure) turnCowl(by float64) {
	walls := c.moved
	end, duct := c.flapEnd(), heading(walls.CowlInner[len(walls.CowlInner)-2], walls.CowlInner[len(walls.CowlInner)-1])
	moved := turned(end, c.Lip, by)
	shift := contour.Point{X: moved.X - end.X, Y: moved.Y - end.Y}
	inner := []contour.Point{c.Lip, moved}
	for _, p := range walls.CowlInner[1:] {
		if p != end && p.X > end.X {
			inner = append(inner, shifted(p, shift))
		}
	}
	walls.CowlInner = inner
	walls.OuterAngle += by
	c.CowlInner += by
	c.CowlOuter += by
	c.Cowl += by
	c.LipTurning -= by
	c.Throat += across(shift, duct)
}

// flapEnd is abreast of the shoulder on the inner cowl of a design, and the second
// point of the inner cowl of a given outline.
func (c *closure) flapEnd() contour.Point {
	if c.Ramps == 0 {
		return c.moved.CowlInner[1]
	}
	wall := c.cowlLine()
	length := wall.Along(c.Shoulder)
	sin, cos := math.Sincos(wall.Angle)
	return contour.Point{X: c.Lip.X + length*cos, Y: c.Lip.Y + length*sin}
}

// turned rotates a point about a pivot.
func turned(p, pivot contour.Point, by float64) contour.Point {
	sin, cos := math.Sincos(by)
	dx, dy := p.X-pivot.X, p.Y-pivot.Y
	return contour.Point{X: pivot.X + dx*cos - dy*sin, Y: pivot.Y + dx*sin + dy*cos}
}

func shifted(p, by contour.Point) contour.Point { return contour.Point{X: p.X + by.X, Y: p.Y + by.Y} }

// across is the part of a shift normal to a direction, to its left.
func across(shift contour.Point, direction float64) float64 {
	sin, cos := math.Sincos(direction)
	return shift.Y*cos - shift.X*sin
}

// OfGeometry returns the quantities of the frozen geometry.
func (f *Frozen) OfGeometry() ([]problems.Quantity, *problems.Evaluation) {
	p := f.problem
	first := p.explicit[0]
	whole := problems.NewEvaluation(len(p.quantities))
	p.read(f.analysis(p.definition.Points[0]), whole, first, -1)
	return p.quantities[first:], &problems.Evaluation{Values: whole.Values[first:], Reasons: whole.Reasons[first:]}
}
