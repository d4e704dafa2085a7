package wave

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

const degree = math.Pi / 180

// fatal is what testing.T and rapid.T share.
type fatal interface {
	Helper()
	Fatalf(format string, args ...any)
}

func near(t fatal, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Fatalf("%s: %.15g, want %.15g within %g", what, got, want, tolerance)
	}
}

// drawState draws a supersonic flow, its total pressure that of an isentropic
// stream of the Mach number drawn beside it.
func drawState(t *rapid.T, name string) State {
	return State{
		Mach:          rapid.Float64Range(1.05, 9).Draw(t, name+" Mach"),
		FlowAngle:     rapid.Float64Range(-0.15, 0.15).Draw(t, name+" angle"),
		Pressure:      math.Exp(rapid.Float64Range(-2, 2).Draw(t, name+" ln p")),
		TotalPressure: rapid.Float64Range(0.3, 1).Draw(t, name+" recovery"),
	}
}

// A wave along a wall is the oblique shock or the Prandtl-Meyer expansion of
// problems/shock, found there from the turning and here from the pressure.
func TestWallWavesAreShocksAndFans(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := gas.Perfect{Gamma: rapid.Float64Range(1.1, 5.0/3).Draw(t, "gamma"), R: 1}
		s := drawState(t, "ahead")
		flow := newSide(g, s)
		sonic, _ := shock.SonicTurning(g, s.Mach)
		angle := rapid.Float64Range(-0.9, 0.99).Draw(t, "share of the largest turning")
		if angle > 0 {
			angle *= sonic
		} else {
			angle *= shock.PrandtlMeyer(g, math.Inf(1)) - shock.PrandtlMeyer(g, s.Mach)
		}
		q, why := alongWall(&flow, angle)
		if why != solved {
			t.Fatalf("unsolved: %d", why)
		}
		if angle <= 0 {
			mach, ratio, err := shock.Expand(g, s.Mach, -angle)
			if err != nil {
				t.Fatalf("%v", err)
			}
			behind := flow.expanded(q, 1)
			near(t, "Mach number", behind.Mach, mach, 1e-9*mach)
			near(t, "pressure", behind.Pressure, s.Pressure*ratio, 1e-9*s.Pressure)
			near(t, "direction", behind.FlowAngle, s.FlowAngle+angle, 1e-12)
			return
		}
		want, err := shock.Weak(g, s.Mach, angle)
		if err != nil {
			t.Fatalf("%v", err)
		}
		behind, wave := flow.shocked(q, -1)
		near(t, "Mach number", behind.Mach, want.Mach2, 1e-9)
		near(t, "pressure", behind.Pressure, s.Pressure*want.Jump.Pressure, 1e-10*behind.Pressure)
		near(t, "total pressure", behind.TotalPressure, s.TotalPressure*want.Jump.TotalPressure, 1e-10)
		near(t, "direction", behind.FlowAngle, s.FlowAngle-angle, 1e-12)
		near(t, "wave angle", wave, want.WaveAngle, 1e-9)
	})
}

// Two streams that meet share pressure and direction behind their waves; exchanged
// and mirrored they give the mirrored answer.
func TestMeetingStreams(t *testing.T) {
	met := 0
	rapid.Check(t, func(t *rapid.T) {
		lower, upper := newSide(gas.Air, drawState(t, "lower")), newSide(gas.Air, drawState(t, "upper"))
		q, why := meet(&lower, &upper)
		if why != solved {
			if upper.state.FlowAngle >= lower.state.FlowAngle && why != evacuated && lower.sonic() > upper.log && upper.sonic() > lower.log {
				t.Fatalf("diverging streams unsolved: %d", why)
			}
			return
		}
		met++
		under, over := behind(&lower, q, -1), behind(&upper, q, 1)
		near(t, "direction", under.FlowAngle, over.FlowAngle, 1e-12)
		near(t, "pressure", under.Pressure, over.Pressure, 1e-13*over.Pressure)
		if !(under.Mach >= 1-1e-9 && over.Mach >= 1-1e-9) {
			t.Fatalf("subsonic behind: %v and %v", under.Mach, over.Mach)
		}
		a, b := upper.state, lower.state
		a.FlowAngle, b.FlowAngle = -a.FlowAngle, -b.FlowAngle
		lower, upper = newSide(gas.Air, a), newSide(gas.Air, b)
		mirrored, why := meet(&lower, &upper)
		if why != solved {
			t.Fatalf("mirrored: %d", why)
		}
		near(t, "mirrored pressure", mirrored, q, 1e-12)
	})
	if met < 20 {
		t.Errorf("%d pairs met", met)
	}
}

// behind is the state behind the wave that takes a stream to ln(p/p0) = q.
func behind(s *side, q float64, family int8) State {
	if q > s.log {
		state, _ := s.shocked(q, family)
		return state
	}
	return s.expanded(q, family)
}

// The slope of the turning is its derivative, for shocks, expansions and weak waves
// of either sign.
func TestSlopeOfTheTurning(t *testing.T) {
	for _, mach := range []float64{1.2, 2, 5} {
		s := newSide(gas.Air, State{Mach: mach, Pressure: 1, TotalPressure: 1})
		for _, q := range []float64{-1.5, -0.2, -1e-3, 0, 1e-3, 0.1, 0.9 * s.sonic()} {
			const h = 1e-5
			high, _ := s.turning(q + h)
			low, _ := s.turning(q - h)
			_, slope := s.turning(q)
			near(t, "slope", slope, (high-low)/(2*h), 2e-6*math.Max(slope, s.softness()))
		}
		_, slope := s.turning(0)
		near(t, "slope of a weak wave", slope, s.softness(), 1e-14)
	}
}

// The pressures of sonic and of detached shocks are those of shock.SonicTurning and
// shock.LargestTurning.
func TestLimitingPressures(t *testing.T) {
	for _, mach := range []float64{1.1, 1.6, 3, 8} {
		s := newSide(gas.Air, State{Mach: mach, Pressure: 1, TotalPressure: 1})
		_, wave := shock.SonicTurning(gas.Air, mach)
		near(t, "sonic", math.Exp(s.sonic()), shock.Across(gas.Air, mach*math.Sin(wave)).Pressure, 1e-9)
		turning, wave := shock.LargestTurning(gas.Air, mach)
		near(t, "detachment", math.Exp(s.detachment()), shock.Across(gas.Air, mach*math.Sin(wave)).Pressure, 1e-9)
		largest, _ := s.turning(s.detachment())
		near(t, "largest turning", largest, turning, 1e-12)
	}
}

// What a crossing merges is carried by its strong wave: the streams that enter stay,
// and the jumps add up to the whole.
func TestMergingKeepsTheStreams(t *testing.T) {
	merged := 0
	rapid.Check(t, func(t *rapid.T) {
		lower, upper := newSide(gas.Air, drawState(t, "lower")), newSide(gas.Air, drawState(t, "upper"))
		q, why := meet(&lower, &upper)
		if why != solved {
			return
		}
		var f fan
		threshold := math.Exp(rapid.Float64Range(-12, 1).Draw(t, "ln threshold"))
		f.crossing(&lower, &upper, q, blank, merging{wavelet: 2 * degree, threshold: threshold, reach: 1})
		last := len(f.states) - 1
		if f.states[0] != lower.state || f.states[last] != upper.state || len(f.limbs) != last || last < 1 {
			t.Fatalf("%d fronts between %d states, from %+v to %+v", len(f.limbs), len(f.states), f.states[0], f.states[last])
		}
		for i, l := range f.limbs {
			if l.merged {
				merged++
			}
			if below, above := f.states[i], f.states[i+1]; l.kind == Slip &&
				(math.Abs(below.Pressure-above.Pressure) > 1e-12*above.Pressure || math.Abs(below.FlowAngle-above.FlowAngle) > 1e-12) {
				t.Fatalf("slip line between %+v and %+v", below, above)
			}
		}
	})
	if merged < 20 {
		t.Errorf("%d merged fronts", merged)
	}
}

func BenchmarkRiemannCrossing(b *testing.B) {
	lower := newSide(gas.Air, State{Mach: 3, FlowAngle: 8 * degree, Pressure: 2, TotalPressure: 0.9})
	upper := newSide(gas.Air, State{Mach: 3.4, FlowAngle: -4 * degree, Pressure: 1.5, TotalPressure: 0.95})
	b.ReportAllocs()
	for b.Loop() {
		meet(&lower, &upper)
	}
}

func BenchmarkRiemannWall(b *testing.B) {
	s := newSide(gas.Air, State{Mach: 3, Pressure: 2, TotalPressure: 0.9})
	b.ReportAllocs()
	for b.Loop() {
		alongWall(&s, 8*degree)
	}
}
