package optimize

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// A merit takes its scales from medians: one sample far out moves none of them.
func TestMeritScales(t *testing.T) {
	p := mustPlan(t, disk(1))
	var samples []*sample
	for i := range 9 {
		u := []float64{float64(i) / 8, 0.5}
		found, err := p.evaluate(t.Context(), 1, [][]float64{u})
		if err != nil {
			t.Fatal(err)
		}
		samples = append(samples, found...)
	}
	before := newMerit(p, samples)
	samples[0].aim, samples[0].evaluation.Values[1] = -1e9, 1e9
	after := newMerit(p, samples)
	if after.aimScale > 2*before.aimScale || after.usual[0] > 2*before.usual[0] {
		t.Errorf("aim scale %g and usual distance %g become %g and %g", before.aimScale, before.usual[0], after.aimScale, after.usual[0])
	}
	if empty := newMerit(p, nil); empty.aimScale != 1 || empty.usual[0] != p.rows[0].Scale {
		t.Errorf("without samples: %+v", empty)
	}
}

// After a search that gives up aim for feasibility the merit prefers its answer,
// whatever the weights were; and weights never fall below twice the multiplier.
func TestMeritFollowsTheMultipliers(t *testing.T) {
	p := mustPlan(t, disk(1))
	rapid.Check(t, func(t *rapid.T) {
		m := merit{sign: 1, aimScale: 1, usual: []float64{1}, weight: []float64{rapid.Float64Range(1e-6, 1e3).Draw(t, "weight")}}
		excess := rapid.Float64Range(1e-6, 1e3).Draw(t, "excess")
		left := excess * rapid.Float64Range(0, 0.9).Draw(t, "left")
		price := rapid.Float64Range(0, 100).Draw(t, "price")
		from := &sample{aim: 0, excess: []float64{excess}}
		to := &solution{aim: rapid.Float64Range(0, 1e3).Draw(t, "loss"), excess: []float64{left}, prices: []float64{price}}
		m.follow(p, from, to)
		if !(m.of(to.aim, to.excess) <= m.of(from.aim, from.excess)) || m.weight[0] < 2*price {
			t.Errorf("weight %g: merit %g before, %g after", m.weight[0], m.of(from.aim, from.excess), m.of(to.aim, to.excess))
		}
	})
	missing := merit{sign: 1, aimScale: 1, weight: []float64{1e-9}}
	if got := missing.of(math.NaN(), []float64{math.NaN()}); got < withoutAim {
		t.Errorf("a sample without values has the merit %g", got)
	}
}
