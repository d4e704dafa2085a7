package inlet

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"rampwright/problems"
	"rampwright/problems/wave"
)

// onLip draws a design whose ramp shocks meet the lip at its flight point, at no
// incidence and without setback: chain and trace are both exact.
func onLip(rng *rand.Rand) Definition {
	between := func(a, b float64) float64 { return a + (b-a)*rng.Float64() }
	mach := between(2.5, 7)
	total := between(6, 4+2.5*mach)
	shares, sum := make([]float64, 1+rng.IntN(4)), 0.0
	for i := range shares {
		shares[i] = between(0.6, 1.4)
		sum += shares[i]
	}
	d := veyric().at(mach, 0).lipTurned(between(0.3, 0.8) * math.Min(total, 18))
	d.RampAngle, d.ShockOnLip, d.TerminalShock = nil, Fixed(mach), rng.IntN(2) == 0
	for _, share := range shares {
		d.RampAngle = append(d.RampAngle, Fixed(total*share/sum))
	}
	return d
}

// asking is the same definition with every wave traced at every point.
func (d Definition) asking() Definition {
	d.Points = slices.Clone(d.Points)
	for i := range d.Points {
		d.Points[i].Traced = true
	}
	return d
}

// Where chain and trace are both exact, a trace that is asked for changes nothing,
// by either route and as built: every quantity to 1e-9, and the same ones missing.
func TestAskedTraceIsTheChainWhereBothAreExact(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	compared := 0
	for compared < 60 {
		d := onLip(rng)
		chain := problemOf(t, d)
		want := problems.NewEvaluation(len(chain.Quantities()))
		if err := chain.Evaluate(context.Background(), nil, want); err != nil {
			t.Fatal(err)
		}
		if flowAt(t, d, first{}, 0).status() != nil {
			continue // a shock detaches: nothing is exact behind it
		}
		compared++
		asked := problemOf(t, d.asking())
		built, err := asked.Built(Tolerances{Mach: 0.01})
		if err != nil {
			t.Fatal(err)
		}
		for route, evaluate := range map[string]func(dst *problems.Evaluation) error{
			"search":       func(dst *problems.Evaluation) error { return asked.Evaluate(context.Background(), nil, dst) },
			"verification": func(dst *problems.Evaluation) error { return asked.Verify(context.Background(), nil, dst) },
			"as built": func(dst *problems.Evaluation) error {
				return built.EvaluateBuilt(context.Background(), nil, []float64{0}, dst)
			},
		} {
			got := problems.NewEvaluation(len(asked.Quantities()))
			if err := evaluate(got); err != nil {
				t.Fatal(err)
			}
			for i, q := range asked.Quantities() {
				if (want.Reasons[i] == nil) != (got.Reasons[i] == nil) {
					t.Fatalf("%s, %+v: %s/%s: %v, of the chain %v", route, d, q.Name, q.Member, got.Reasons[i], want.Reasons[i])
				}
				if want.Reasons[i] == nil {
					within(t, route+": "+q.Name+"/"+q.Member, got.Values[i], want.Values[i], 1e-9*math.Max(1, math.Abs(want.Values[i])))
				}
			}
		}
	}
}

// takeover is a three-ramp design flown well below shock-on-lip: the chain holds
// and its lip shock strikes the ramp ahead of the shoulder.
func takeover() Definition {
	d := veyric()
	d.RampAngle = []Setting{Fixed(7), Fixed(6), Fixed(6)}
	d = d.lipTurned(8)
	d.Points = []Point{d.Points[0], {Name: "takeover", Mach: 5, Pressure: 3000, Temperature: 220}}
	return d
}

// A trace that is asked for is that of the settings of each route, and its throat
// not the chain's: the plane at the shoulder sees what the lip shock reflects.
func TestAskedTraceTellsTheThroat(t *testing.T) {
	d := takeover()
	chain := problemOf(t, d)
	d.Points = slices.Clone(d.Points)
	d.Points[1].Traced = true
	asked := problemOf(t, d)
	frozen := asked.Freeze(nil)
	flow, err := asked.Flow(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	if flow.Points[0].Traced || !flow.Points[1].Traced {
		t.Fatalf("traced %t at cruise, %t at takeover", flow.Points[0].Traced, flow.Points[1].Traced)
	}
	for _, route := range []struct {
		name     string
		settings wave.Settings
		evaluate func(context.Context, []float64, *problems.Evaluation) error
	}{{"search", SearchTrace(), asked.Evaluate}, {"verification", VerifyTrace(), asked.Verify}} {
		dst := problems.NewEvaluation(len(asked.Quantities()))
		if err := route.evaluate(context.Background(), nil, dst); err != nil {
			t.Fatal(err)
		}
		trace, err := frozen.Trace(d.Points[1], route.settings)
		if err != nil {
			t.Fatal(err)
		}
		for i, q := range asked.Quantities() {
			station := trace.Stations[0]
			want, traced := map[string]float64{
				"throat_mach": station.Mach, "shock_recovery": station.Recovery, "lip_shock_miss": math.Abs(trace.LipShockMiss),
				"pressure_ratio": station.Pressure, "temperature_ratio": station.Temperature,
			}[q.Name]
			if traced && q.Point == "takeover" {
				within(t, route.name+": "+q.Name, dst.Values[i], want, 1e-12*want)
			}
		}
		miss := trace.LipShockMiss
		if !(miss < -0.02) {
			t.Errorf("%s: the lip shock misses the shoulder by %v, nothing to see", route.name, miss)
		}
	}
	throat, _ := flow.Points[1].Value("throat_mach")
	plain := mustAt(t, chain.Freeze(nil), takeover().Points[1])
	behind, reason := plain.Value("throat_mach")
	if plain.Traced || reason != nil || !(math.Abs(throat-behind) > 0.01) {
		t.Errorf("throat Mach number traced %v, of the chain %v (%v)", throat, behind, reason)
	}
}

// Where the waves end in a subsonic pocket the chain's throat is no answer to a
// point that asks for the trace: every quantity behind is missing with the reason.
func TestAskedTraceThatEndsIsNotTheChain(t *testing.T) {
	d := takeover()
	d = d.lipTurned(18)
	d.Points = []Point{d.Points[0], {Name: "takeover", Mach: 3, Pressure: 3000, Temperature: 220}}
	plain := mustAt(t, problemOf(t, d).Freeze(nil), d.Points[1])
	if plain.Err != nil || plain.Traced {
		t.Fatalf("the chain: %s, traced %t", plain.Status(), plain.Traced)
	}
	d = d.asking()
	asked := mustAt(t, problemOf(t, d).Freeze(nil), d.Points[1])
	if asked.Err == nil || asked.Trace == nil || asked.Trace.Ending == nil {
		t.Fatalf("traced: %s", asked.Status())
	}
	for _, name := range []string{"recovery", "throat_mach", "throat_pressure_kPa", "kinetic_energy_efficiency"} {
		if value, reason := asked.Value(name); !math.IsNaN(value) || phrase(reason) != asked.Status() {
			t.Errorf("%s %v (%v), the status is %s", name, value, reason, asked.Status())
		}
	}
	for _, name := range []string{"capture", "ramp_attachment_margin_deg", "lip_attachment_margin_deg"} {
		was, _ := plain.Value(name)
		if value, reason := asked.Value(name); reason != nil || math.Abs(value-was) > 1e-9 {
			t.Errorf("%s %v (%v), of the chain %v", name, value, reason, was)
		}
	}
}
