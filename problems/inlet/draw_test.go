package inlet

import (
	"context"
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/gas"
	"rampwright/problems/ramp"
	"rampwright/problems/shock"
)

// veyric is a Mach 6 article of three ramps, turnings and cowl near its
// optimum, with a take-over point.
func veyric() Definition {
	cowl := Fixed(8)
	return Definition{
		Gas: gas.Air, CaptureHeight: 0.16, Width: 0.20,
		RampAngle: []Setting{Fixed(8.08), Fixed(7.22), Fixed(8.44)},
		CowlAngle: &cowl, CowlWedge: Fixed(4), CowlLength: 0.25,
		ShockOnLip: Fixed(6), DuctFactor: 1,
		Points: []Point{
			{Name: "cruise", Mach: 6, Pressure: 1984, Temperature: 223.18},
			{Name: "takeover", Mach: 4.5, Pressure: 3600, Temperature: 219.4},
		},
	}
}

// lipTurned is veyric with another closing of the duct.
func (d Definition) lipTurned(degrees float64) Definition {
	turning := Fixed(degrees)
	d.CowlAngle, d.LipTurning = nil, &turning
	return d
}

// at is the definition with one flight point at this Mach number and incidence.
func (d Definition) at(mach, incidenceDegrees float64) Definition {
	d.Points = []Point{{Name: "only", Mach: mach, Incidence: incidenceDegrees * radian, Pressure: 1984, Temperature: 223.18}}
	return d
}

// fatal is what testing.T and rapid.T share.
type fatal interface {
	Helper()
	Fatalf(format string, args ...any)
}

func problemOf(t fatal, d Definition) *Problem {
	t.Helper()
	p, err := New(d)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return p
}

// flowAt returns the analysis of a fixed design at flight point i.
func flowAt(t fatal, d Definition, r route, i int) *analysis {
	t.Helper()
	p := problemOf(t, d)
	w := new(workspace)
	p.freeze(w, r, nil)
	w.flow.point = &p.definition.Points[i]
	w.flow.run()
	return &w.flow
}

// evaluated is one evaluation with its quantities found by name.
type evaluated struct {
	t   fatal
	p   *Problem
	dst *problems.Evaluation
}

func evaluate(t fatal, d Definition) evaluated {
	t.Helper()
	p := problemOf(t, d)
	dst := problems.NewEvaluation(len(p.Quantities()))
	if err := p.Evaluate(context.Background(), nil, dst); err != nil {
		t.Fatalf("%v", err)
	}
	return evaluated{t, p, dst}
}

// find returns value and reason of a quantity; a member of a group is named
// "quantity/member".
func (e evaluated) find(point, name string) (float64, error) {
	e.t.Helper()
	for i, q := range e.p.Quantities() {
		full := q.Name
		if q.Member != "" {
			full += "/" + q.Member
		}
		if q.Point == point && full == name {
			return e.dst.Values[i], e.dst.Reasons[i]
		}
	}
	e.t.Fatalf("no quantity %s at %s", name, point)
	return 0, nil
}

// value returns a quantity that must be present.
func (e evaluated) value(point, name string) float64 {
	e.t.Helper()
	value, err := e.find(point, name)
	if err != nil {
		e.t.Fatalf("%s at %s is missing: %v", name, point, err)
	}
	return value
}

// phrase is the status of an error, "" if it has none.
func phrase(err error) string {
	var status *problems.Status
	if errors.As(err, &status) {
		return status.Phrase
	}
	return ""
}

// anyDefinition draws a design of 1..8 ramps whose shocks are attached at its
// shock-on-lip Mach number of 2..10, at incidence 0, setback 0, with one flight
// point there. Each turning is halved until it leaves enough Mach number and the
// whole turning below 50 deg.
func anyDefinition(t *rapid.T) Definition {
	g := gas.Perfect{R: gas.SpecificConstantAir}
	g.Gamma = rapid.OneOf(rapid.Just(1.4), rapid.Float64Range(1.1, 5.0/3)).Draw(t, "gamma")
	mach := rapid.OneOf(rapid.SampledFrom([]float64{2, 10}), rapid.Float64Range(2, 10)).Draw(t, "shock-on-lip Mach number")
	n := rapid.IntRange(1, ramp.MaxRamps).Draw(t, "ramps")
	share := rapid.OneOf(rapid.SampledFrom([]float64{0.01, 0.6}), rapid.Float64Range(0.01, 0.6))
	d := Definition{
		Gas: g, DuctFactor: 0.97, ShockOnLip: Fixed(mach), LipSetback: Fixed(0),
		CaptureHeight: rapid.SampledFrom([]float64{0.02, 0.16, 1, 5}).Draw(t, "capture height"),
		Width:         rapid.Float64Range(0.1, 2).Draw(t, "width"),
		CowlWedge:     Fixed(rapid.Float64Range(0, 6).Draw(t, "wedge")),
		CowlLength:    rapid.Float64Range(0, 1).Draw(t, "cowl length"),
		TerminalShock: rapid.Bool().Draw(t, "terminal shock"),
		Points:        []Point{{Name: "design", Mach: mach}},
	}
	d.Points[0].Pressure = rapid.Float64Range(500, 1e5).Draw(t, "pressure")
	d.Points[0].Temperature = rapid.Float64Range(200, 310).Draw(t, "temperature")
	total := 0.0
	for range n {
		theta := share.Draw(t, "share of the sonic turning") * sonicTurning(g, mach)
		wave, err := shock.Weak(g, mach, theta)
		for err != nil || wave.Mach2-1.2 < 0.3*(mach-1.2) || total+theta > 50*radian {
			theta /= 2
			wave, err = shock.Weak(g, mach, theta)
		}
		d.RampAngle = append(d.RampAngle, Fixed(theta/radian))
		mach, total = wave.Mach2, total+theta
	}
	kappa := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(0.02, 0.9)).Draw(t, "share of the sonic turning at the lip")
	return d.lipTurned(kappa * sonicTurning(g, mach) / radian)
}

func sonicTurning(g gas.Perfect, mach float64) float64 {
	turning, _ := shock.SonicTurning(g, mach)
	return turning
}

// flown adds a flight point below shock-on-lip with incidence, moves the design
// incidence and sets the lip back: anything the model may meet.
func flown(t *rapid.T, d Definition) Definition {
	lip := d.ShockOnLip.Value
	other := d.Points[0]
	other.Name = "other"
	other.Mach = rapid.OneOf(rapid.Just(lip), rapid.Float64Range(1.3+0.5*(lip-1.3), lip)).Draw(t, "other Mach number")
	incidence := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(-1, 1))
	d.Points[0].Incidence = incidence.Draw(t, "design incidence") * radian
	other.Incidence = incidence.Draw(t, "other incidence") * radian
	d.Points = append([]Point(nil), d.Points[0], other)
	d.LipSetback = Fixed(rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(0, 0.03)).Draw(t, "setback"))
	return d
}

// flownInOrder is flown where most draws keep the lip in the last ramp's flow:
// no slower than 0.85 of the shock-on-lip Mach number, with more incidence than
// the design point's only as far below it, and set back only where the wave from
// the focus leaves upward, phi_n above the Mach angle.
func flownInOrder(t *rapid.T, d Definition) Definition {
	lip, slight := d.ShockOnLip.Value, d.RampAngle[0].Value*radian/2
	incidence := rapid.Float64Range(-math.Min(slight, 0.02), 0.02).Draw(t, "incidence")
	d.Points[0].Incidence = incidence
	other := d.Points[0]
	other.Name = "other"
	other.Mach = rapid.OneOf(rapid.Just(lip), rapid.Float64Range(0.85*lip, lip)).Draw(t, "other Mach number")
	other.Incidence += rapid.Float64Range(0, 0.05).Draw(t, "more incidence") * (1 - other.Mach/lip)
	d.Points = []Point{d.Points[0], other}
	a := flowAt(t, d, first{}, 1)
	if a.rampErr == nil && (a.design.Ramps == 1 || a.design.TotalTurning() >= math.Asin(1/a.lipMach)) {
		d.LipSetback = Fixed(rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(0, 0.03)).Draw(t, "setback"))
	}
	return d
}

// share counts how many draws reach what a property is about.
type share struct{ reached, drawn int }

func (s *share) count(reached bool) bool {
	s.drawn++
	if reached {
		s.reached++
	}
	return reached
}

// atLeast fails where too many draws were of no use.
func (s *share) atLeast(t *testing.T, least float64) {
	t.Helper()
	if got := float64(s.reached) / float64(s.drawn); !(got >= least) {
		t.Errorf("only %.3g of %d draws reach the property, want %v", got, s.drawn, least)
	}
}

func within(t fatal, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Fatalf("%s: %v, want %v within %g (off by %.3g)", what, got, want, tolerance, got-want)
	}
}
