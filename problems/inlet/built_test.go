package inlet

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/wave"
)

// everything scatters.
var everything = Tolerances{RampAngle: 0.1, CowlAngle: 0.1, LipSetback: 0.003, Mach: 0.03, Incidence: 0.5}

func builtOf(t fatal, d Definition, tolerances Tolerances) *Built {
	t.Helper()
	b, err := problemOf(t, d).Built(tolerances)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return b
}

// builtWith evaluates a fixed design with offsets by input name, zero for the rest.
func builtWith(t fatal, b *Built, off map[string]float64) evaluated {
	t.Helper()
	given := make([]float64, len(b.Scatter()))
	for name, v := range off {
		i := slices.IndexFunc(b.Scatter(), func(s problems.Scatter) bool { return s.Name == name })
		if i < 0 {
			t.Fatalf("no input %s", name)
		}
		given[i] = v
	}
	dst := problems.NewEvaluation(len(b.Quantities()))
	if err := b.EvaluateBuilt(context.Background(), nil, given, dst); err != nil {
		t.Fatalf("%v", err)
	}
	return evaluated{t, b.Problem, dst}
}

// Built as drawn is the drawing.
func TestBuiltAsDrawn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := anyDefinition(t)
		drawn, built := evaluate(t, d), builtWith(t, builtOf(t, d, everything), nil)
		for i, q := range drawn.p.Quantities() {
			want, got := drawn.dst.Values[i], built.dst.Values[i]
			if math.IsNaN(want) != math.IsNaN(got) {
				t.Fatalf("%s/%s at %s: %v, drawn %v (%v, %v)", q.Name, q.Member, q.Point, got, want, built.dst.Reasons[i], drawn.dst.Reasons[i])
			}
			if !math.IsNaN(want) && !slices.Contains(tracedAt(drawn), q.Point) {
				within(t, q.Name, got, want, 1e-9*math.Max(1, math.Abs(want)))
			}
		}
	})
}

// tracedAt lists the flight points beyond the chain, where the settings of the
// trace of a built inlet give other numbers.
func tracedAt(e evaluated) []string {
	var names []string
	f := e.p.Freeze(nil)
	for _, point := range e.p.definition.Points {
		if a := f.analysis(point); true {
			if a.run(); a.beyondChain() {
				names = append(names, point.Name)
			}
		}
	}
	return names
}

// A condition that is off is that condition: the contour stays.
func TestBuiltFlownAnotherWay(t *testing.T) {
	d := veyric()
	other := d.Points[1]
	other.Name, other.Mach, other.Incidence = "other", 4.44, 0.7*radian
	d.Points = append(d.Points, other)
	want, got := evaluate(t, d), builtWith(t, builtOf(t, d, everything), map[string]float64{"mach": -0.06, "incidence_deg": 0.7})
	for _, name := range []string{"recovery", "capture", "throat_temperature_K", "lip_clearance/ramp 1 shock", "cowl_attachment_margin_deg", "dynamic_pressure_kPa"} {
		within(t, name, got.value("takeover", name), want.value("other", name), 1e-9*want.value("other", name))
	}
	for _, name := range []string{"length_m", "throat_height_m", "cowl_outer_angle_deg", "total_turning_deg"} {
		within(t, name, got.value(problems.Geometry, name), want.value(problems.Geometry, name), 1e-12)
	}
}

// A ramp that is off turns everything behind it; what the drawing fixes stays.
func TestBuiltRamp(t *testing.T) {
	d := veyric()
	drawn := evaluate(t, d)
	built := builtWith(t, builtOf(t, d, everything), map[string]float64{"ramp_2_angle_deg": 0.25})
	geometry := func(e evaluated, name string) float64 { return e.value(problems.Geometry, name) }
	for _, name := range []string{"shortest_ramp_m/ramp 1", "shortest_ramp_m/ramp 2", "lip_x_m", "throat_height_m", "cowl_angle_deg", "cowl_outer_angle_deg"} {
		within(t, name, geometry(built, name), geometry(drawn, name), 1e-12)
	}
	within(t, "turning", geometry(built, "total_turning_deg"), geometry(drawn, "total_turning_deg")+0.25, 1e-9)
	within(t, "lip turning", geometry(built, "lip_turning_deg"), geometry(drawn, "lip_turning_deg")+0.25, 1e-9)

	// The shoulder by hand: from the end of ramp 2, 0.25 deg steeper, along ramp 3 to
	// the wall through the drawn shoulder at 8 deg.
	f := problemOf(t, d).Freeze(nil)
	shape, _ := f.Contour()
	at := func(deg float64) (cos, sin float64) { return math.Cos(deg * radian), math.Sin(deg * radian) }
	cos, sin := at(8.08 + 7.22 + 0.25)
	length := geometry(drawn, "shortest_ramp_m/ramp 2")
	x, y := shape.Corners[1].X+length*cos, shape.Corners[1].Y+length*sin
	cos, sin = at(8.08 + 7.22 + 0.25 + 8.44)
	wallCos, wallSin := at(8)
	along := ((shape.Shoulder.X-x)*wallSin - (shape.Shoulder.Y-y)*wallCos) / (cos*wallSin - sin*wallCos)
	within(t, "length", geometry(built, "length_m"), x+along*cos, 1e-12)
	within(t, "ramp 3", geometry(built, "shortest_ramp_m/ramp 3"), along, 1e-12)
}

// The cowl turns about the lip, the lip moves along x, the throat wall stays.
func TestBuiltCowl(t *testing.T) {
	d := veyric()
	drawn := evaluate(t, d)
	built := builtWith(t, builtOf(t, d, everything), map[string]float64{"cowl_angle_deg": 0.2, "lip_setback": 0.01})
	geometry := func(e evaluated, name string) float64 { return e.value(problems.Geometry, name) }
	within(t, "length", geometry(built, "length_m"), geometry(drawn, "length_m"), 1e-12)
	within(t, "outer cowl", geometry(built, "cowl_outer_angle_deg"), 12.2, 1e-9)
	within(t, "lip", geometry(built, "lip_x_m"), geometry(drawn, "lip_x_m")+0.0016, 1e-12)
	shape, _ := problemOf(t, d).Freeze(nil).Contour()
	sin, cos := math.Sincos(8.2 * radian)
	height := (shape.Lip.Y-shape.Shoulder.Y)*cos - (shape.Lip.X+0.0016-shape.Shoulder.X)*sin
	within(t, "throat", geometry(built, "throat_height_m"), height, 1e-12)
	// The wave tracer sees the wall as drawn.
	b := builtOf(t, d, everything)
	w := new(builtWork)
	b.freeze(&w.workspace, first{}, nil)
	off := offsets{offCowl: 0.2}
	w.shape.build(&off)
	g := w.shape.geometry(&b.definition)
	n := len(g.Body)
	within(t, "direction of the wall", math.Atan2(g.Body[n-1].Y-g.Body[n-2].Y, g.Body[n-1].X-g.Body[n-2].X), 8*radian, 1e-12)
	within(t, "direction of the cowl", math.Atan2(g.CowlInner[1].Y-g.CowlInner[0].Y, g.CowlInner[1].X-g.CowlInner[0].X), 8.2*radian, 1e-12)
}

// An aligned cowl leaves no wall to trim the last ramp by: its length stays, and a
// draw in which the cowl turns away from the flow is traced.
func TestBuiltAlignedCowl(t *testing.T) {
	d := veyric().lipTurned(0).at(6, 0)
	drawn := evaluate(t, d)
	for _, off := range []float64{0.1, -0.1} {
		built := builtWith(t, builtOf(t, d, everything), map[string]float64{"ramp_3_angle_deg": off, "mach": -0.05})
		for _, name := range []string{"shortest_ramp_m/ramp 1", "shortest_ramp_m/ramp 2", "shortest_ramp_m/ramp 3"} {
			within(t, name, built.value(problems.Geometry, name), drawn.value(problems.Geometry, name), 1e-12)
		}
		within(t, "recovery", built.value("only", "recovery"), drawn.value("only", "recovery"), 0.05)
	}
}

// With ramp 1 too shallow its shock falls inside the lip: the draw is traced, the
// lip clearance says so, what passes the lip is nearly the whole capture height, and
// the throat is that of a fine trace within the bound stated for draws.
func TestBuiltDrawWithShocksInside(t *testing.T) {
	b := builtOf(t, veyric().at(6, 0), everything)
	built := builtWith(t, b, map[string]float64{"ramp_1_angle_deg": -0.2})
	if v := built.value("only", "lip_clearance/ramp 1 shock"); !(v < 0) {
		t.Errorf("clearance %v, want it inside", v)
	}
	within(t, "capture", built.value("only", "capture"), 1, 0.01)
	w := new(builtWork)
	off := b.offset(w, nil, []float64{-0.2, 0, 0, 0, 0, 0, 0})
	w.fly(b.definition.Points[0], &off)
	w.flow.fly(wave.Fine())
	within(t, "recovery", built.value("only", "recovery"), w.flow.shockRecovery, 0.01*w.flow.shockRecovery)
}

// Straight shocks clear the lip by what the chain says at that condition.
func TestBuiltStraightClearance(t *testing.T) {
	d := veyric().at(6, 0)
	for _, mach := range []float64{-0.06, 0.06} {
		var straight [1]float64
		builtOf(t, d, Tolerances{Mach: 0.03}).StraightClearance(nil, []float64{mach}, straight[:])
		a := flowAt(t, d.at(6+mach, 0), first{}, 0)
		within(t, "clearance of straight shocks", straight[0], slices.Min(a.clearance[:3]), 1e-12)
		if straight[0] < 0 != (mach > 0) {
			t.Errorf("off by Mach %v straight shocks clear the lip by %v", mach, straight[0])
		}
	}
}

func TestBuiltInputs(t *testing.T) {
	names := func(tolerances Tolerances) string {
		var list []string
		for _, s := range builtOf(t, veyric(), tolerances).Scatter() {
			list = append(list, s.Name)
		}
		return strings.Join(list, " ")
	}
	if got, want := names(everything), "ramp_1_angle_deg ramp_2_angle_deg ramp_3_angle_deg cowl_angle_deg lip_setback mach incidence_deg"; got != want {
		t.Errorf("inputs %s", got)
	}
	if got := names(Tolerances{Mach: 0.1}); got != "mach" {
		t.Errorf("inputs %s, want mach alone", got)
	}
	_, err := problemOf(t, veyric()).Built(Tolerances{RampAngle: -1, Incidence: math.Inf(1), Mach: 0.9})
	var invalid *Invalid
	joined, ok := err.(interface{ Unwrap() []error })
	if !errors.As(err, &invalid) || !ok || len(joined.Unwrap()) != 3 {
		t.Errorf("three faults: %v", err)
	}
}

func TestBuiltWithoutAWallToMeet(t *testing.T) {
	d := veyric().lipTurned(0.12).at(6, 0)
	built := builtWith(t, builtOf(t, d, everything), map[string]float64{"ramp_3_angle_deg": -0.2})
	if _, err := built.find(problems.Geometry, "length_m"); phrase(err) != "the last ramp does not meet the throat wall" {
		t.Errorf("length is missing because: %v", err)
	}
}

func BenchmarkEvaluateBuiltChain(b *testing.B) { benchmarkBuilt(b, -0.03) }

func BenchmarkEvaluateBuiltTraced(b *testing.B) { benchmarkBuilt(b, 0.03) }

func benchmarkBuilt(b *testing.B, mach float64) {
	built := builtOf(b, veyric().at(6, 0), everything)
	off := make([]float64, len(built.Scatter()))
	off[len(off)-2] = mach
	dst := problems.NewEvaluation(len(built.Quantities()))
	b.ReportAllocs()
	for b.Loop() {
		if err := built.EvaluateBuilt(context.Background(), nil, off, dst); err != nil {
			b.Fatal(err)
		}
	}
}

// Draws as a study makes them: half of them and more are traced.
func BenchmarkEvaluateBuiltDraws(b *testing.B) {
	built := builtOf(b, veyric().at(6, 0), Tolerances{RampAngle: 0.1, Mach: 0.03, Incidence: 0.5})
	source := rand.New(rand.NewPCG(1, 2))
	off := make([]float64, len(built.Scatter()))
	dst := problems.NewEvaluation(len(built.Quantities()))
	b.ReportAllocs()
	for b.Loop() {
		for i, s := range built.Scatter() {
			off[i] = s.Deviation * source.NormFloat64()
		}
		if err := built.EvaluateBuilt(context.Background(), nil, off, dst); err != nil {
			b.Fatal(err)
		}
	}
}
