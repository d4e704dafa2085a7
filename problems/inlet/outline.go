package inlet

import (
	"cmp"
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/wave"
)

// Outline is an existing inlet given by its walls, in metres: no ramp or cowl of
// it is searched, and every flight point is traced.
type Outline struct {
	Body       []contour.Point // leading edge first
	CowlInner  []contour.Point // lip first
	OuterAngle float64         // outer cowl to the x axis, rad
	ThroatX    float64         // of the vertical averaging plane
}

// shoulder is the index into Body of the corner that ends the compression: the
// last one at or ahead of the throat plane where the body turns away from the
// cowl; without one, the last corner ahead of the plane.
func (o *Outline) shoulder() int {
	last := 1
	for i := 1; i < len(o.Body)-1 && o.Body[i].X <= o.ThroatX; i++ {
		last = i
	}
	for i := last; i > 0; i-- {
		if i+1 < len(o.Body) && heading(o.Body[i], o.Body[i+1]) < heading(o.Body[i-1], o.Body[i])-alignedWithin {
			return i
		}
	}
	return last
}

func heading(a, b contour.Point) float64 { return math.Atan2(b.Y-a.Y, b.X-a.X) }

// Geometry is the outline as a trace takes it.
func (o *Outline) Geometry(outerLength float64) wave.Geometry {
	return wave.Geometry{
		Body: o.Body, CowlInner: o.CowlInner, OuterAngle: o.OuterAngle, OuterLength: outerLength,
		Shoulder: o.shoulder(), Planes: []float64{o.ThroatX},
	}
}

// ramps is the number of straight stretches of the body ahead of the shoulder.
func (o *Outline) ramps() int { return o.shoulder() }

// Crossing returns where body and inner cowl meet behind the throat plane, as far as
// both are given, and the first corner at or behind that place.
func (o *Outline) Crossing() (meeting float64, corner contour.Point, ok bool) {
	corners := slices.Concat(o.Body, o.CowlInner)
	slices.SortStableFunc(corners, func(a, b contour.Point) int { return cmp.Compare(a.X, b.X) })
	end := min(o.Body[len(o.Body)-1].X, o.CowlInner[len(o.CowlInner)-1].X)
	x, open := o.ThroatX, heightBetween(o.Body, o.CowlInner, o.ThroatX)
	for _, c := range corners {
		if !(c.X > x) || c.X > end {
			continue
		}
		ahead, before := x, open
		if x, open = c.X, heightBetween(o.Body, o.CowlInner, c.X); !(open > 0) {
			return ahead + (x-ahead)*before/(before-open), c, true
		}
	}
	return 0, contour.Point{}, false
}

// heightBetween is the vertical distance of the walls at x: the throat height of an
// outline.
func heightBetween(body, cowl []contour.Point, x float64) float64 {
	return heightAt(cowl, x) - heightAt(body, x)
}

// heightAt is y of a wall line at x, prolonged straight past its ends.
func heightAt(points []contour.Point, x float64) float64 {
	i := 1
	for i < len(points)-1 && points[i].X < x {
		i++
	}
	a, b := points[i-1], points[i]
	return a.Y + (b.Y-a.Y)/(b.X-a.X)*(x-a.X)
}

// take is the closure of a given outline: every stretch of the body ahead of the
// shoulder is a ramp, the throat height the vertical one at the averaging plane.
func (c *closure) take(o *Outline) {
	n := o.ramps()
	c.Design, c.err, c.lipWave, c.moved = Design{}, nil, 0, nil
	c.Corners, c.Angles = o.Body[:n], make([]float64, n)
	for i := range n {
		c.Angles[i] = heading(o.Body[i], o.Body[i+1])
	}
	c.Shoulder, c.Lip = o.Body[n], o.CowlInner[0]
	c.CowlInner, c.CowlOuter = heading(o.CowlInner[0], o.CowlInner[1]), o.OuterAngle
	c.height = c.Lip.Y - o.Body[0].Y
	c.Cowl, c.Wedge = c.CowlInner, c.CowlOuter-c.CowlInner
	c.Given = c.Angles[n-1]
	c.LipTurning = c.Given - c.Cowl
	c.Throat = heightBetween(o.Body, o.CowlInner, o.ThroatX)
	if !(c.Throat > 0) {
		c.err = &problems.Status{Phrase: "duct closed at the throat plane"}
	}
}

// unknown is the analysis of a given outline before it is traced.
func (a *analysis) unknown() {
	err := a.shape.err
	if err == nil {
		err = &problems.Status{Phrase: "not traced"}
	}
	a.fail(err)
	a.lipTurning = a.design.LipTurning
	a.outerCowl()
}

// faults lists what no outline can be, each an *Invalid: too few points to index.
// Everything else that a trace refuses is a status of the flow.
func (o *Outline) faults() []error {
	var wrong []error
	if len(o.Body) < 2 {
		wrong = append(wrong, &Invalid{"the body of an outline needs at least two points"})
	}
	if len(o.CowlInner) < 2 {
		wrong = append(wrong, &Invalid{"the inner cowl of an outline needs at least two points"})
	}
	return wrong
}
