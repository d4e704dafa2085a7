package wave

import (
	"cmp"
	"math"
	"slices"

	"rampwright/problems/contour"
)

// Station is the flow through the duct on the vertical plane at X, m, from body to
// inner cowl.
type Station struct {
	X      float64
	Height float64 // m
	// Mass-averaged, over the free stream: sum(f dm)/sum(dm).
	Recovery  float64
	Mach      float64
	FlowAngle float64 // rad, to the x axis
	// Pressure is averaged over the area, over p0.
	Pressure float64
	// Temperature is averaged over the mass, over T0.
	Temperature float64
	// Worst and Best are the total-pressure ratios of the stream tubes of least and
	// greatest recovery; Distortion their difference over Recovery.
	Worst, Best float64
	Distortion  float64
	// Profile lists the uniform parts of the plane, body to cowl without a gap: what
	// the averages are taken over.
	Profile []Part
	// Closure is that of the captured stream tube between free stream and plane.
	Closure Closure
	Err     error // why the plane was not reached, nil if it was
}

// Part is a uniform part of a plane, between two heights, m, with its share of the
// mass that passes the plane.
type Part struct {
	Low, High float64
	Region    int
	Share     float64
}

// ends are the ends of the vertical plane at x on body and inner cowl, two ties
// behind it, so that a wave that ends at x itself lies ahead of the plane.
func (c *core) ends(x float64) (low, high contour.Point) { return c.vertical(x + 2*c.near) }

// vertical is where the vertical line at x meets body and inner cowl.
func (c *core) vertical(x float64) (low, high contour.Point) {
	body, cowl := height(c.geometry.Body, x), height(c.geometry.CowlInner, x)
	return c.frame.in(contour.Point{X: x, Y: body}), c.frame.in(contour.Point{X: x, Y: cowl})
}

// plane cuts the duct from a on the body to b on the inner cowl.
func (c *core) plane(a, b contour.Point) []band {
	var hits []hit
	for i := range c.fronts {
		f := &c.fronts[i]
		before, after := past(f.from, a, b), past(f.to, a, b)
		if !f.duct || before > 0 == (after > 0) {
			continue
		}
		part := before / (before - after)
		y := f.from.Y + part*(f.to.Y-f.from.Y)
		share := (y - a.Y) / (b.Y - a.Y)
		if share < 0 || share > 1 {
			continue
		}
		h := hit{share: share, front: int32(i), below: f.below, above: f.above}
		if before > 0 { // it runs upstream through the plane, its lower side up
			h.below, h.above = f.above, f.below
		}
		hits = append(hits, h)
	}
	slices.SortFunc(hits, hit.compare)
	return c.bands(hits, a, b)
}

// hit is where a front crosses a plane, share of the way up, and the regions below
// and above it there.
type hit struct {
	share        float64
	front        int32
	below, above int32
}

func (h hit) compare(k hit) int {
	return cmp.Or(cmp.Compare(h.share, k.share), cmp.Compare(h.front, k.front))
}

// bands turns the crossings of a plane into its uniform parts.
func (c *core) bands(hits []hit, a, b contour.Point) []band {
	region := c.bodyRegion(a, b)
	if len(hits) > 0 {
		region = hits[0].below
	}
	from := a
	var cut []band
	for _, h := range hits {
		to := contour.Point{X: a.X + h.share*(b.X-a.X), Y: a.Y + h.share*(b.Y-a.Y)}
		cut = append(cut, band{h.below, from, to})
		from, region = to, h.above
	}
	return append(cut, band{region, from, b})
}

// bodyRegion is the region next to the body just upstream of the line from a to b.
func (c *core) bodyRegion(a, b contour.Point) int32 {
	region := int32(0)
	for _, p := range c.pieces {
		if p.surface == Body && past(p.from, a, b) < 0 {
			region = p.region
		}
	}
	return region
}

// station reads the plane at x; entry is the height of free stream that is captured,
// push the force of the lip streamline on it.
func (c *core) station(x, entry float64, push vector) Station {
	station := Station{X: x}
	low, high := c.ends(x)
	if c.ending != nil && (!c.atLip || max(low.X, high.X) > c.ending.Place.X) {
		station.Err = c.ending
		return station
	}
	cut := c.plane(low, high)
	c.average(&station, cut)
	walls := c.wallForce(Body, low, high).plus(c.wallForce(CowlInner, low, high))
	station.Closure = c.tube(entry, c.through(cut), push.plus(walls))
	return station
}

// tubes joins the bands of a plane that are thinner than a tie, where waves start just
// ahead of it, to the next one above, or to the last.
func (c *core) tubes(cut []band) []band {
	var list []band
	from := cut[0].from
	for _, b := range cut {
		if step(b.from, b.to).length() > c.near {
			list = append(list, band{b.region, from, b.to})
			from = b.to
		}
	}
	if list == nil { // the whole plane is thinner than that
		return cut
	}
	list[len(list)-1].to = cut[len(cut)-1].to
	return list
}

// average fills the averages and the profile of a station from its cut.
func (c *core) average(station *Station, cut []band) {
	var mass, area, recovery, mach, pressure, temperature float64
	var direction vector
	station.Worst, station.Best = math.Inf(1), 0
	for _, b := range c.tubes(cut) {
		s := &c.regions[b.region]
		along := step(b.from, b.to)
		size := along.length()
		u := heads(s.FlowAngle)
		dm := s.massFlux(c.gas) * (u.x*along.y - u.y*along.x)
		mass, area = mass+dm, area+size
		recovery += dm * s.TotalPressure
		mach += dm * s.Mach
		temperature += dm * s.temperature(c.gas, c.free.Mach)
		pressure += size * s.Pressure
		direction = direction.plus(u.times(dm))
		station.Worst, station.Best = min(station.Worst, s.TotalPressure), max(station.Best, s.TotalPressure)
		from, to := c.frame.out(b.from), c.frame.out(b.to)
		station.Profile = append(station.Profile, Part{from.Y, to.Y, int(b.region), dm})
	}
	for i := range station.Profile {
		station.Profile[i].Share /= mass
	}
	station.Height = area
	station.Recovery, station.Mach, station.Temperature = recovery/mass, mach/mass, temperature/mass
	station.Pressure = pressure / area
	station.FlowAngle = math.Atan2(direction.y, direction.x) + c.frame.angle
	station.Distortion = (station.Best - station.Worst) / station.Recovery
}
