package wave_test

import (
	"context"
	"flag"
	"math"
	"math/rand/v2"
	"testing"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// thorough runs the random tests at their full counts, for minutes.
var thorough = flag.Bool("thorough", false, "run the random tests at their full counts")

func count(few, full int) int {
	if *thorough {
		return full
	}
	return few
}

const degree = math.Pi / 180

// article is a designed inlet, angles in degrees, flown at one condition.
func article(ramps []float64, cowl, shockOnLip, mach, incidence float64) inlet.Definition {
	inner := inlet.Fixed(cowl)
	d := inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.16, Width: 0.20,
		CowlAngle: &inner, CowlWedge: inlet.Fixed(4), CowlLength: 0.25,
		ShockOnLip: inlet.Fixed(shockOnLip), DuctFactor: 1,
		Points: []inlet.Point{
			{Name: "design", Mach: shockOnLip, Pressure: 1984, Temperature: 223.18},
			{Name: "flown", Mach: mach, Incidence: incidence * degree, Pressure: 1984, Temperature: 223.18},
		},
	}
	for _, angle := range ramps {
		d.RampAngle = append(d.RampAngle, inlet.Fixed(angle))
	}
	return d
}

// veyric is a Mach 6 article of three ramps.
func veyric(mach, incidence float64) inlet.Definition {
	return article([]float64{8.08, 7.22, 8.44}, 8, 6, mach, incidence)
}

// chain is the flow of a design by the chain of ramp shocks.
type chain struct {
	*inlet.Flow
	quantities []problems.Quantity
}

func chainOf(t testing.TB, d inlet.Definition) chain {
	t.Helper()
	p, err := inlet.New(d)
	if err != nil {
		t.Fatal(err)
	}
	flow, err := p.Flow(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	return chain{flow, p.Quantities()}
}

// flown is a quantity at the flown condition, NaN where it is missing.
func (c chain) flown(name string) float64 {
	for i, q := range c.quantities {
		if q.Name == name && q.Point == "flown" && q.Member == "" {
			return c.Evaluation.Values[i]
		}
	}
	return math.NaN()
}

// geometry is the contour of the chain with planes that many throat heights
// behind the shoulder.
func (c chain) geometry(planes ...float64) wave.Geometry {
	g := wave.FromContour(&c.Contour, 0.04)
	g.Planes = nil
	for _, k := range planes {
		g.Planes = append(g.Planes, c.Contour.Shoulder.X+k*c.Contour.Throat)
	}
	return g
}

// wedge is a body at one angle below a straight cowl at another, degrees: the
// leading edge in the origin, the lip at (lip, 1).
func wedge(body, cowl, lip float64, planes ...float64) wave.Geometry {
	line := func(p contour.Point, angle float64) []contour.Point {
		return []contour.Point{p, {X: p.X + 5, Y: p.Y + 5*math.Tan(angle*degree)}}
	}
	return wave.Geometry{
		Body: line(contour.Point{}, body), CowlInner: line(contour.Point{X: lip, Y: 1}, cowl),
		OuterAngle: max(cowl, 0) * degree, OuterLength: 0.2, Planes: planes,
	}
}

func fly(t testing.TB, g wave.Geometry, mach, incidence float64, s wave.Settings) *wave.Trace {
	t.Helper()
	trace, err := wave.Run(gas.Air, wave.FreeStream{Mach: mach, Incidence: incidence * degree}, g, s)
	if err != nil {
		t.Fatal(err)
	}
	return trace
}

// fronts lists the fronts of one kind and family, in the order of birth.
func fronts(t *wave.Trace, kind wave.Kind, family int) []wave.Front {
	var list []wave.Front
	for _, f := range t.Fronts {
		if f.Kind == kind && f.Family == family {
			list = append(list, f)
		}
	}
	return list
}

func angleOf(f wave.Front) float64 { return math.Atan2(f.To.Y-f.From.Y, f.To.X-f.From.X) / degree }

func within(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g within %g", what, got, want, tolerance)
	}
}

// sample is a random inlet of one to four ramps at a random condition around its
// shock-on-lip Mach number.
type sample struct {
	chain
	mach, incidence float64
}

// sampleOf draws until a contour closes.
func sampleOf(t testing.TB, rng *rand.Rand) sample {
	between := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	for {
		design := between(3, 7)
		total := between(8, min(28, 6+4*design))
		ramps := make([]float64, 1+rng.IntN(4))
		sum := 0.0
		for i := range ramps {
			ramps[i] = between(0.5, 1.5)
			sum += ramps[i]
		}
		for i := range ramps {
			ramps[i] *= total / sum
		}
		c := chainOf(t, article(ramps, between(0, total-1), design, design, 0))
		if c.ContourErr == nil {
			return sample{c, between(max(1.8, design-1.5), design+1), between(-3, 3)}
		}
	}
}

// outlineOf draws the walls of any inlet, corners both ways.
func outlineOf(rng *rand.Rand) wave.Geometry {
	between := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	walk := func(from contour.Point, segments int, angle, bend float64) []contour.Point {
		points := []contour.Point{from}
		for range segments {
			length := between(0.1, 1.2)
			from = contour.Point{X: from.X + length, Y: from.Y + length*math.Tan(angle*degree)}
			points = append(points, from)
			angle += between(-bend, bend)
		}
		return points
	}
	lip := contour.Point{X: between(0.3, 2.5), Y: 1}
	return wave.Geometry{
		Body:       walk(contour.Point{}, 2+rng.IntN(6), between(-2, 15), 12),
		CowlInner:  walk(lip, 1+rng.IntN(3), between(-8, 15), 8),
		OuterAngle: between(-3, 20) * degree, OuterLength: 0.3,
		Planes: []float64{lip.X + between(0.05, 1), lip.X + between(1, 2)},
	}
}
