package wave

import (
	"slices"

	"rampwright/problems/contour"
)

// carried is what flows through a cut: mass over that of the free stream, with
// the length of the cut; momentum with gauge pressure over p0; total enthalpy,
// mass-weighted, over that of the free stream.
type carried struct {
	mass     float64
	momentum vector
	energy   float64
}

// through sums the flow that crosses a cut from left to right, seen along the
// cut: bands run from its lower to its upper end.
//
//	mass sum rho u n,  momentum sum (rho u (u n) + (p - p0) n),  energy sum rho u n ht
//
// ht/ht0 is rebuilt from entropy, T/T0 = (p/p0)^((g-1)/g) (pt/pt0)^(-(g-1)/g),
// and the Mach number: a check on both.
func (c *core) through(cut []band) carried {
	var sum carried
	free := c.regions[0].massFlux(c.gas)
	for _, b := range cut {
		s := &c.regions[b.region]
		along := step(b.from, b.to)
		normal := vector{along.y, -along.x}
		u := heads(s.FlowAngle)
		across := u.dot(normal)
		mass := s.massFlux(c.gas) * across / free
		sum.mass += mass
		sum.momentum = sum.momentum.plus(u.times(s.flux(c.gas) * across)).plus(normal.times(s.Pressure - 1))
		sum.energy += mass * s.enthalpy(c.gas, c.free.Mach)
	}
	return sum
}

// wallForce is the gauge force over p0 on the fluid of the wall pieces of a
// surface up to the cut, the line from `low` to `high`; pieces that reach past it
// are cut there.
func (c *core) wallForce(surface Surface, low, high contour.Point) vector {
	var sum vector
	for _, p := range c.pieces {
		if p.surface != surface {
			continue
		}
		if d, ok := clip(p.from, p.to, low, high); ok {
			sum = sum.plus(c.pieceForce(p, d))
		}
	}
	return sum
}

// pieceForce is the gauge force over p0 on the fluid of a length of wall: the
// fluid lies above the body and the outer cowl, below the inner cowl.
func (c *core) pieceForce(p piece, length vector) vector {
	side := 1.0
	if p.surface == CowlInner {
		side = -1
	}
	return vector{-length.y, length.x}.times(side * c.gauge(p.region))
}

// clip returns the part of a wall piece upstream of the line from low to high; ok
// is false where nothing is.
func clip(from, to, low, high contour.Point) (length vector, ok bool) {
	a, b := past(from, low, high), past(to, low, high)
	length = step(from, to)
	switch {
	case a >= 0:
		return vector{}, false
	case b > 0:
		return length.times(a / (a - b)), true
	}
	return length, true
}

// past is positive for p downstream, to the right, of the line from low to
// high: the cross product with it.
func past(p, low, high contour.Point) float64 {
	d, e := step(low, high), step(low, p)
	return d.y*e.x - d.x*e.y
}

// Closure is what the conservation laws leave open over a stream tube: mass over
// that of the free stream through the capture area, energy over its total
// enthalpy, momentum over q0 Ac.
type Closure struct {
	Mass     float64
	Momentum float64
	Energy   float64
}

// tube closes a stream tube: what enters with the free stream over `entry` normal
// to it, what leaves through the cut, and the force on its fluid in between.
func (c *core) tube(entry float64, out carried, force vector) Closure {
	momentum := c.downstream().times(c.regions[0].flux(c.gas) * entry)
	open := out.momentum.plus(momentum.plus(force).times(-1))
	height := c.geometry.captureHeight()
	return Closure{
		Mass:     (out.mass - entry) / height,
		Momentum: open.length() / (c.dynamic() * height),
		Energy:   (out.energy - entry) / height,
	}
}

// dynamic is the dynamic pressure of the free stream over p0.
func (c *core) dynamic() float64 { return c.gas.DynamicPressure(1, c.free.Mach) }

// wetted lists the wall pieces that Trace.Walls and Trace.Forces speak of, surface by
// surface and downstream: body and inner cowl as far as the last plane or the ending,
// the outer cowl to its length. Pieces shorter than a tie, where waves meet in a
// corner or a corner stands in the plane, are left out.
func (c *core) wetted() []piece {
	low, high := c.vertical(slices.Max(c.geometry.Planes))
	list := c.ahead(nil, Body, low, high)
	list = c.ahead(list, CowlInner, low, high)
	tip := c.geometry.outerEnd()
	over := contour.Point{X: tip.X, Y: tip.Y + c.geometry.captureHeight()}
	return c.ahead(list, CowlOuter, c.frame.in(tip), c.frame.in(over))
}

// ahead appends the pieces of a surface upstream of the line from low to high; one
// that reaches past it is cut there.
func (c *core) ahead(list []piece, surface Surface, low, high contour.Point) []piece {
	for _, p := range c.pieces {
		if p.surface != surface {
			continue
		}
		if d, ok := clip(p.from, p.to, low, high); ok && d.length() > c.near {
			p.to = contour.Point{X: p.from.X + d.x, Y: p.from.Y + d.y}
			list = append(list, p)
		}
	}
	return list
}

// forces sums the gauge force on wall pieces by segment, in their order.
func (c *core) forces(pieces []piece) []Force {
	var list []Force
	scale := -1 / (c.dynamic() * c.geometry.captureHeight()) // on the wall, not the fluid
	for _, p := range pieces {
		at := len(list) - 1
		if at < 0 || list[at].Surface != p.surface || list[at].Segment != p.segment+1 {
			list = append(list, Force{Surface: p.surface, Segment: p.segment + 1, From: c.frame.out(p.from)})
			at++
		}
		f := c.pieceForce(p, step(p.from, p.to)).times(scale)
		list[at].To = c.frame.out(p.to)
		list[at].X += f.x*c.frame.cos - f.y*c.frame.sin
		list[at].Y += f.y*c.frame.cos + f.x*c.frame.sin
	}
	return list
}
