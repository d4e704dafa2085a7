package envelope_test

import (
	"context"
	"errors"
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/atmosphere"
	"rampwright/problems/envelope"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// threeRamps is an inlet whose shocks meet the lip at Mach 6, as a search for the
// highest recovery under limits on throat, length and cowl found it.
func threeRamps(t *testing.T, more ...inlet.Point) (*inlet.Problem, inlet.Definition) {
	t.Helper()
	cowl := inlet.Fixed(8)
	d := inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.16, Width: 0.2,
		RampAngle: []inlet.Setting{inlet.Fixed(8.0804), inlet.Fixed(7.2237), inlet.Fixed(8.4395)},
		CowlAngle: &cowl, CowlWedge: inlet.Fixed(4), CowlLength: 0.25, ShockOnLip: inlet.Fixed(6), DuctFactor: 1,
		Points: append([]inlet.Point{{Name: "cruise", Mach: 6, Pressure: 1984, Temperature: 223.18}}, more...),
	}
	problem, err := inlet.New(d)
	if err != nil {
		t.Fatal(err)
	}
	return problem, d
}

var heldAir = envelope.Air{Pressure: 1984, Temperature: 223.18}

// TestTheMapIsTheFlow compares the map with the evaluation of the same inlet at
// flight points put there: to the last bit, chain or trace, and traced throughout if
// the points ask for it.
func TestTheMapIsTheFlow(t *testing.T) {
	t.Run("as it comes", func(t *testing.T) { compareMap(t, false) })
	t.Run("traced", func(t *testing.T) { compareMap(t, true) })
}

func compareMap(t *testing.T, asked bool) {
	conditions := []envelope.Condition{{Mach: 4.7, Incidence: 1.5 * degree}, {Mach: 5.9}, {Mach: 6.4, Incidence: -3 * degree}, {Mach: 5.7, Incidence: 4 * degree}, {Mach: 2.1}}
	var points []inlet.Point
	for _, at := range conditions {
		points = append(points, inlet.Point{Name: "p" + string(rune('a'+len(points))), Mach: at.Mach, Incidence: at.Incidence, Pressure: 1984, Temperature: 223.18, Traced: asked})
	}
	problem, _ := threeRamps(t, points...)
	whole := problems.NewEvaluation(len(problem.Quantities()))
	if err := problem.Evaluate(context.Background(), nil, whole); err != nil {
		t.Fatal(err)
	}
	frozen := envelope.Freeze(problem, nil, heldAir, inlet.SearchTrace())
	n := len(frozen.Quantities())
	for k, at := range conditions {
		got := problems.NewEvaluation(n)
		outcome, err := frozen.At(context.Background(), at, got)
		if err != nil {
			t.Fatal(err)
		}
		if asked && !outcome.Traced {
			t.Errorf("%+v is not traced", at)
		}
		for i, q := range frozen.Quantities() {
			want := whole.Values[(k+1)*n+i]
			if math.Float64bits(got.Values[i]) != math.Float64bits(want) && !(math.IsNaN(want) && math.IsNaN(got.Values[i])) {
				t.Errorf("%+v: %s %s is %v on the map, %v in the flow", at, q.Name, q.Member, got.Values[i], want)
			}
		}
	}
}

func smallMap(d inlet.Definition, jobs int) envelope.Settings {
	var limits []problems.Limit
	for _, limit := range append(inlet.HardLimits(d), inlet.DefaultLimits(d)...) {
		if limit.Point == d.Points[0].Name {
			limits = append(limits, limit)
		}
	}
	return envelope.Settings{
		LowMach: 2, HighMach: 6.4, LowIncidence: -4 * degree, HighIncidence: 2 * degree,
		MachPoints: 9, IncidencePoints: 4, Limits: limits, Jobs: jobs,
	}
}

// TestBoundaryPointsKeepTheirMargin evaluates every boundary point again: its margin
// holds there and is lost, or no longer known, a few tolerances away.
func TestBoundaryPointsKeepTheirMargin(t *testing.T) {
	problem, d := threeRamps(t)
	frozen := envelope.Freeze(problem, nil, heldAir, inlet.SearchTrace())
	survey, err := envelope.Run(context.Background(), frozen, smallMap(d, 2))
	if err != nil {
		t.Fatal(err)
	}
	margin := func(line envelope.Line, at envelope.Condition) float64 {
		e := problems.NewEvaluation(len(frozen.Quantities()))
		outcome, err := frozen.At(context.Background(), at, e)
		if err != nil {
			t.Fatal(err)
		}
		if line.Kind == envelope.StreamEnds {
			if outcome.Status != nil {
				return -1
			}
			return 1
		}
		return line.Value(frozen.Quantities(), e)
	}
	kinds := map[envelope.Kind]bool{}
	for _, line := range survey.Lines {
		kinds[line.Kind] = true
		for i, p := range line.Points {
			if i%5 != 0 { // a sample is proof enough
				continue
			}
			// The point went through the units of the map and back: a rounding of 1e-12.
			if m := margin(line, p); !(m >= -1e-9) {
				t.Errorf("%s: margin %g at %+v", line.Name, m, p)
			}
			lost := false
			for _, way := range [][2]float64{{1, 0}, {-1, 0}, {0, 1}, {0, -1}} {
				beside := envelope.Condition{Mach: p.Mach + way[0]*4e-6, Incidence: p.Incidence + way[1]*4e-6*degree}
				lost = lost || !(margin(line, beside) >= 0)
			}
			if !lost {
				t.Errorf("%s: the margin holds all around %+v", line.Name, p)
			}
		}
	}
	for _, kind := range []envelope.Kind{envelope.LipShockDetaches, envelope.LipReflection, envelope.ShocksSwallowed, envelope.StreamEnds, envelope.LimitViolated, envelope.OverIsentropic} {
		if !kinds[kind] {
			t.Errorf("no line of kind %s", kind)
		}
	}
}

func TestJobsDoNotMatter(t *testing.T) {
	problem, d := threeRamps(t)
	frozen := envelope.Freeze(problem, nil, heldAir, inlet.SearchTrace())
	var before *envelope.Survey
	for _, jobs := range []int{1, 3} {
		survey, err := envelope.Run(context.Background(), frozen, smallMap(d, jobs))
		if err != nil {
			t.Fatal(err)
		}
		if before != nil {
			if !reflect.DeepEqual(before.Lines, survey.Lines) || before.Refinements != survey.Refinements {
				t.Error("the lines of one worker and of three differ")
			}
			for i := range survey.Samples {
				for k, v := range survey.Samples[i].Exact.Values {
					if math.Float64bits(v) != math.Float64bits(before.Samples[i].Exact.Values[k]) {
						t.Fatalf("sample %d differs", i)
					}
				}
			}
		}
		before = survey
	}
}

// plane is a margin that is linear in both coordinates, so that its line is known.
type plane struct{ a, b, c float64 }

func (plane) Quantities() []problems.Quantity { return discQuantities[:1] }

func (p plane) margin(at envelope.Condition) float64 { return p.a*at.Mach + p.b*at.Incidence + p.c }

func (p plane) At(_ context.Context, at envelope.Condition, dst *problems.Evaluation) (envelope.Outcome, error) {
	dst.Set(0, p.margin(at))
	return envelope.Outcome{}, nil
}

// TestLinesOfAPlane: the zero of a linear margin is one straight line from border to
// border, and mirrored inputs give mirrored lines.
func TestLinesOfAPlane(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		angle := rapid.Float64Range(0, 2*math.Pi).Draw(t, "direction")
		mach := rapid.Float64Range(3.05, 5.95).Draw(t, "mach")
		incidence := rapid.Float64Range(-3.9, 3.9).Draw(t, "incidence") * degree
		p := plane{a: math.Cos(angle), b: math.Sin(angle) / degree / 2}
		p.c = -p.a*mach - p.b*incidence
		mirrored := p
		mirrored.b = -p.b
		settings := envelope.Settings{LowMach: 3, HighMach: 6, LowIncidence: -4 * degree, HighIncidence: 4 * degree, MachPoints: 9, IncidencePoints: 6}
		ends := func(p plane) [2]envelope.Condition {
			survey, err := envelope.Run(context.Background(), p, settings)
			if err != nil {
				t.Fatal(err)
			}
			if len(survey.Lines) != 1 || survey.Lines[0].Closed {
				t.Fatalf("%d lines of a plane", len(survey.Lines))
			}
			points := survey.Lines[0].Points
			for _, at := range points {
				if m := p.margin(at); !(m >= -1e-12 && m < 4e-6) {
					t.Fatalf("margin %g at %+v", m, at)
				}
			}
			first, last := points[0], points[len(points)-1]
			if first.Mach > last.Mach {
				first, last = last, first
			}
			for _, at := range []envelope.Condition{first, last} {
				border := math.Min(math.Min(at.Mach-3, 6-at.Mach), math.Min(4-at.Incidence/degree, 4+at.Incidence/degree))
				if math.Abs(border) > 1e-5 {
					t.Fatalf("the line ends at %+v inside the map", at)
				}
			}
			return [2]envelope.Condition{first, last}
		}
		one, other := ends(p), ends(mirrored)
		for k := range one {
			if math.Abs(one[k].Mach-other[k].Mach) > 1e-5/math.Max(math.Abs(p.a), 1e-3) && math.Abs(math.Abs(one[k].Incidence)-math.Abs(other[k].Incidence)) > 1e-5 {
				t.Fatalf("mirrored ends %+v and %+v", one, other)
			}
		}
	})
}

func TestAirHolds(t *testing.T) {
	air := envelope.Air{Hold: envelope.HeldDynamicPressure, DynamicPressure: 50e3}
	for _, mach := range []float64{3, 4.5, 6, 7} {
		p, temperature, err := air.At(gas.Air, mach)
		if err != nil {
			t.Fatal(err)
		}
		if q := gas.Air.Gamma / 2 * p * mach * mach; math.Abs(q-50e3) > 1e-6 {
			t.Errorf("Mach %g: dynamic pressure %g", mach, q)
		}
		h, err := atmosphere.AltitudeOf(p)
		if err != nil {
			t.Fatal(err)
		}
		if state, _ := atmosphere.At(h); math.Abs(state.Temperature-temperature) > 1e-9 {
			t.Errorf("Mach %g: %g K at the altitude of %g Pa, not %g", mach, temperature, p, state.Temperature)
		}
	}
	var none *envelope.NoAltitude
	if _, _, err := (envelope.Air{Hold: envelope.HeldDynamicPressure, DynamicPressure: 500e3}).At(gas.Air, 1.2); !errors.As(err, &none) || none.Mach != 1.2 {
		t.Errorf("500 kPa at Mach 1.2: %v", err)
	}
	if _, _, err := heldAir.At(gas.Air, 3); err != nil {
		t.Error(err)
	}
}

func TestEverySettingIsChecked(t *testing.T) {
	err := envelope.Settings{LowMach: 7, HighMach: 0.5, LowIncidence: 1, HighIncidence: -1, MachPoints: 1, IncidencePoints: 500, Tolerance: 1, Flatness: 9, Jobs: -1}.Validate()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok || len(joined.Unwrap()) != 9 {
		t.Errorf("not every fault is reported: %v", err)
	}
}

func TestStatesOfEndings(t *testing.T) {
	problem, _ := threeRamps(t)
	frozen := envelope.Freeze(problem, nil, heldAir, inlet.SearchTrace())
	settings := envelope.Settings{LowMach: 1.3, HighMach: 7, LowIncidence: 0, HighIncidence: 2 * degree, MachPoints: 4, IncidencePoints: 2}
	survey, err := envelope.Run(context.Background(), frozen, settings)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []struct {
		i, j  int
		state envelope.State
	}{{0, 0, envelope.RampDetached}, {1, 0, envelope.OverStart}, {3, 1, envelope.Reflection}} {
		if got := survey.At(want.i, want.j); got.State != want.state {
			t.Errorf("Mach %.4g, incidence %.3g deg: %s (%v), want %s", got.Mach, got.Incidence/degree, got.State, got.Status, want.state)
		}
	}
}

// TestACancelledRunEnds: a survey and a schedule end with the error of the context,
// keep nothing, and tell of no step that was not made.
func TestACancelledRunEnds(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	settings := discSettings()
	settings.Jobs, settings.Observe = 2, func(e envelope.Event) {
		if e.Done == 10 {
			cancel()
		}
		if e.Done > 10 {
			t.Errorf("told of step %d of %d after the end", e.Done, e.Total)
		}
	}
	if survey, err := envelope.Run(ctx, disc{}, settings); !errors.Is(err, context.Canceled) || survey != nil {
		t.Errorf("survey %v, error %v", survey, err)
	}
	schedule, err := envelope.Plan(ctx, slope{func(float64) float64 { return 0 }, func(float64) float64 { return 1 }}, slopeSettings(1, 2))
	if !errors.Is(err, context.Canceled) || schedule != nil {
		t.Errorf("schedule %v, error %v", schedule, err)
	}
}
