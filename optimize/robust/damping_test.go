package robust

import (
	"context"
	"math"
	"testing"

	"rampwright/problems"
)

// steep scatters the more the larger x is, so steeply that margins asked for at one
// design ask for far too much, then for far too little.
func steep() *plain {
	return &plain{scatter: scattered(1), quantities: named("y", "fixed"), value: func(x, e []float64, dst *problems.Evaluation) {
		dst.Set(0, x[0]+e[0]*math.Max(0.02, 0.1+0.95*(x[0]-0.8)))
		dst.Set(1, x[0])
	}}
}

// The largest x whose draws keep y <= 1 with the probability aimed at solves
//
//	x + q (0.1 + 0.95 (x - 0.8)) = 1
//
// Margins that swing between two designs come to rest there, not at the more
// careful of the two.
func TestBackOffThatSwings(t *testing.T) {
	for name, limits := range map[string][]problems.Limit{
		"free":      {atMost("y", 1)},
		"no escape": {atMost("y", 1), atLeast("fixed", 0.7)}, // the first margins ask for x = 0.5
	} {
		t.Run(name, func(t *testing.T) {
			searches := 0
			b := backOff(t, Goal{Problem: steep(), Limits: limits, Confidence: 0.95, Highest: true,
				Nominal: Found{X: []float64{1}, Feasible: true, Aim: 1}}, func(ctx context.Context, q Question) (Found, error) {
				searches++
				return highestUnder(ctx, q)
			})
			q := Quantile(b.Aimed)
			near(t, "x", b.Rounds[b.Chosen].X[0], (1-q*(0.1-0.95*0.8))/(1+0.95*q), 0.02)
			if !b.Met || searches > mostRounds+mostRetreats {
				t.Errorf("met %v after %d searches: %s", b.Met, searches, b.Why)
			}
		})
	}
}
