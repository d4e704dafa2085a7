package wave

import (
	"math"

	"rampwright/problems/contour"
)

// streamline is the lip streamline ahead of the lip, in the frame of the sweep.
type streamline struct {
	// points run upstream: the lip first, the place on the first wave last.
	points  []contour.Point
	regions []int32 // between points i and i+1
	closed  bool    // the free stream was reached
}

// traceLip follows the lip streamline upstream from region to region. A particle
// enters a region through a wave: one that runs up above the region or down below
// it. It never crosses a slip line.
func (c *core) traceLip() streamline {
	line := streamline{points: []contour.Point{c.lip}}
	place, region := c.lip, c.parting.inside
	for region != 0 {
		back, entry := c.entrance(place, region)
		if entry == none {
			return line
		}
		sin, cos := math.Sincos(c.regions[region].FlowAngle)
		place = contour.Point{X: place.X - back*cos, Y: place.Y - back*sin}
		line.points = append(line.points, place)
		line.regions = append(line.regions, region)
		f := &c.fronts[entry]
		region = f.below + f.above - region
	}
	line.closed = true
	return line
}

// entrance returns the front ahead of the lip through which a particle at place
// entered its region, and how far back along its path.
func (c *core) entrance(place contour.Point, region int32) (back float64, entry int32) {
	back, entry = math.Inf(1), none
	sin, cos := math.Sincos(c.regions[region].FlowAngle)
	for i := range c.fronts[:c.before] {
		f := &c.fronts[i]
		up := f.above == region && f.family < 0
		down := f.below == region && f.family > 0
		if !up && !down {
			continue
		}
		// place - back (cos, sin) on the front: height above it is zero.
		approach := sin - f.slope*cos
		if up && !(approach > 0) || down && !(approach < 0) {
			continue
		}
		distance := (place.Y - f.at(place.X)) / approach
		x := place.X - distance*cos
		if distance >= -c.near && distance < back && x >= f.from.X-c.near && x <= f.to.X+c.near {
			back, entry = max(0, distance), int32(i)
		}
	}
	return back, entry
}

// downstream is the direction of the free stream.
func (c *core) downstream() vector { return heads(c.regions[0].FlowAngle) }

// gauge is p - p0 of a region, over p0.
func (c *core) gauge(region int32) float64 { return c.regions[region].Pressure - 1 }

// across is the coordinate of p normal to the free stream, from the leading edge.
func (c *core) across(p contour.Point) float64 {
	e := c.downstream()
	d := step(c.frame.in(c.geometry.Body[0]), p)
	return d.y*e.x - d.x*e.y
}

// entry is the height of the free stream below the streamline, normal to it; NaN
// where the streamline was lost.
func (c *core) entry(line streamline) float64 {
	if !line.closed {
		return math.NaN()
	}
	return c.across(line.points[len(line.points)-1])
}

// push is the gauge force on the captured fluid below the streamline, over p0:
// the pressure force (p - p0)(dy, -dx) of each leg. NaN where it was lost.
func (c *core) push(line streamline) vector {
	if !line.closed {
		return vector{math.NaN(), math.NaN()}
	}
	var sum vector
	for i, region := range line.regions {
		leg := step(line.points[i+1], line.points[i])
		sum = sum.plus(vector{leg.y, -leg.x}.times(c.gauge(region)))
	}
	return sum
}
