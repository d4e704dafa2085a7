package wave

import (
	"errors"
	"fmt"
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
)

// FreeStream is one flight condition: Mach number above 1 and incidence, rad,
// positive where it turns the stream toward the body.
type FreeStream struct {
	Mach      float64
	Incidence float64
}

// Geometry is an inlet of straight walls, in metres. Both wall lines run
// downstream and continue straight past their last point.
type Geometry struct {
	Body      []contour.Point // leading edge first
	CowlInner []contour.Point // lip first
	// OuterAngle is the direction of the outer cowl, rad, OuterLength its length
	// along x.
	OuterAngle  float64
	OuterLength float64
	// Shoulder is the index into Body of the corner that ends the compression;
	// 0 stands for the last convex corner.
	Shoulder int
	// Planes are the x of the averaging planes, behind the lip.
	Planes []float64
}

// FromContour is the geometry of a designed inlet with the outer cowl as long as
// given, and its averaging plane at the shoulder.
func FromContour(c *contour.Inlet, outerLength float64) Geometry {
	body := append(append([]contour.Point(nil), c.Corners...), c.Shoulder)
	length := contour.Distance(c.Lip, c.Shoulder)
	sin, cos := math.Sincos(c.CowlInner)
	along := func(p contour.Point) contour.Point {
		return contour.Point{X: p.X + length*cos, Y: p.Y + length*sin}
	}
	return Geometry{
		Body:       append(body, along(c.Shoulder)),
		CowlInner:  []contour.Point{c.Lip, along(c.Lip)},
		OuterAngle: c.CowlOuter, OuterLength: outerLength,
		Shoulder: len(c.Corners),
		Planes:   []float64{c.Shoulder.X},
	}
}

// captureHeight is the height of the lip above the leading edge.
func (g *Geometry) captureHeight() float64 { return g.CowlInner[0].Y - g.Body[0].Y }

// shoulder resolves the zero value of Shoulder: the last corner where the body
// turns away from the flow, or else the last point but one.
func (g *Geometry) shoulder() int {
	if g.Shoulder > 0 {
		return g.Shoulder
	}
	for i := len(g.Body) - 2; i > 0; i-- {
		if heading(g.Body[i], g.Body[i+1]) < heading(g.Body[i-1], g.Body[i])-1e-12 {
			return i
		}
	}
	return max(0, len(g.Body)-2)
}

func heading(a, b contour.Point) float64 { return math.Atan2(b.Y-a.Y, b.X-a.X) }

// Validate reports, all at once, what no trace can use. Body, inner cowl as far as
// the last plane, and free stream must lie within 100 deg of each other.
func (g *Geometry) Validate(stream FreeStream, fluid gas.Perfect) error {
	var faults []error
	fault := func(format string, args ...any) { faults = append(faults, fmt.Errorf(format, args...)) }
	if err := fluid.Validate(); err != nil {
		faults = append(faults, err)
	}
	if !(stream.Mach > 1 && stream.Mach <= 50) {
		fault("free-stream Mach number %v outside (1, 50]", stream.Mach)
	}
	if !(math.Abs(stream.Incidence) <= 0.5) {
		fault("incidence %v rad outside [-0.5, 0.5]", stream.Incidence)
	}
	if !(g.OuterLength >= 0) || math.IsInf(g.OuterLength, 1) {
		fault("outer cowl length %v m is not a length", g.OuterLength)
	}
	if !(math.Abs(g.OuterAngle) < math.Pi/2) {
		fault("outer cowl angle %v rad points upstream", g.OuterAngle)
	}
	if len(g.Planes) == 0 {
		fault("no averaging plane")
	}
	before := len(faults)
	faults = append(faults, wallFaults("body", g.Body)...)
	faults = append(faults, wallFaults("inner cowl", g.CowlInner)...)
	if len(faults) > before {
		return errors.Join(faults...)
	}
	if g.Shoulder < 0 || g.Shoulder >= len(g.Body) {
		fault("shoulder %d is no corner of the body", g.Shoulder)
	}
	faults = append(faults, g.placeFaults(stream)...)
	return errors.Join(faults...)
}

// wallFaults checks one wall line by itself.
func wallFaults(name string, points []contour.Point) []error {
	if len(points) < 2 {
		return []error{fmt.Errorf("%s has %d points, needs 2", name, len(points))}
	}
	var faults []error
	for i, p := range points {
		if math.IsNaN(p.X+p.Y) || math.IsInf(p.X+p.Y, 0) {
			faults = append(faults, fmt.Errorf("%s point %d is not finite", name, i+1))
		}
		if i > 0 && !(p.X > points[i-1].X) {
			faults = append(faults, fmt.Errorf("%s point %d does not lie downstream of the one before", name, i+1))
		}
	}
	return faults
}

// placeFaults checks walls, lip and planes against each other.
func (g *Geometry) placeFaults(stream FreeStream) []error {
	var faults []error
	fault := func(format string, args ...any) { faults = append(faults, fmt.Errorf(format, args...)) }
	height, lip := g.captureHeight(), g.CowlInner[0]
	if !(height > 0) {
		return []error{fmt.Errorf("the lip is not above the leading edge")}
	}
	if len(g.Planes) == 0 {
		return nil
	}
	low, high := g.directions(stream)
	if high-low > widest {
		fault("directions of walls and free stream differ by %.3g rad, at most %.3g", high-low, widest)
		return faults
	}
	t := g.frame(stream)
	if lip.X-g.Body[0].X <= tie*height || t.in(lip).X-t.in(g.Body[0]).X <= tie*height {
		fault("the lip does not lie downstream of the leading edge")
	} else if !g.follows(t, stream) {
		fault("the outer cowl at %.3g rad points across the flow", g.OuterAngle)
	}
	last := lip.X
	for i, x := range g.Planes {
		if !(x > lip.X) || x > lip.X+1000*height {
			fault("plane %d at x %v m does not lie behind the lip", i+1, x)
			continue
		}
		last = math.Max(last, x)
	}
	if x, ok := g.closes(last); ok {
		fault("body and inner cowl meet at x %.6g m, ahead of the last plane", x)
	}
	return faults
}

// tie is how near, in capture heights, fronts, corners and lip count as one place.
const tie = 1e-9

// closes returns the first corner at or behind the lip and ahead of x = last, or
// that end itself, where the body is not below the inner cowl.
func (g *Geometry) closes(last float64) (x float64, ok bool) {
	lip := g.CowlInner[0].X
	worst := math.Inf(1)
	check := func(at float64) {
		if at >= lip && at <= last && !(height(g.CowlInner, at)-height(g.Body, at) > tie*g.captureHeight()) {
			worst = math.Min(worst, at)
		}
	}
	check(lip)
	check(last)
	for _, p := range g.Body {
		check(p.X)
	}
	for _, p := range g.CowlInner {
		check(p.X)
	}
	return worst, !math.IsInf(worst, 1)
}

// height is y of a wall line at x, prolonged straight on both ends.
func height(points []contour.Point, x float64) float64 {
	i := 1
	for i < len(points)-1 && points[i].X < x {
		i++
	}
	a, b := points[i-1], points[i]
	return a.Y + (b.Y-a.Y)/(b.X-a.X)*(x-a.X)
}

// outerEnd is the end of the outer cowl.
func (g *Geometry) outerEnd() contour.Point {
	lip := g.CowlInner[0]
	return contour.Point{X: lip.X + g.OuterLength, Y: lip.Y + g.OuterLength*math.Tan(g.OuterAngle)}
}
