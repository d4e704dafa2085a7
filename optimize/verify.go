package optimize

import (
	"context"
	"math"

	"rampwright/constraints"
	"rampwright/problems"
)

// RouteAgreement is the largest relative difference between the two exact routes
// of a verified design.
const RouteAgreement = 1e-10

// candidate closes the evidence on a sample: the second route, margins, prices.
func (d *designer) candidate(ctx context.Context, s *sample) (Candidate, error) {
	c := Candidate{
		X: s.x, Exact: s.evaluation, RouteGap: math.NaN(),
		AimExact: s.aim, AimPredicted: math.NaN(), SurrogateError: math.Inf(1),
		Assessment: constraints.Assess(d.plan.rows, s.evaluation),
	}
	if err := d.audit(context.WithoutCancel(ctx), s); err != nil {
		return c, err
	}
	c.Predicted, c.AimPredicted, c.SurrogateError = d.audited.predicted, d.audited.aim, d.audited.err
	d.pricesAt(s, c.Assessment.Checks)
	if verifier, ok := d.plan.problem.(problems.Verifier); ok {
		// The evidence is due even when the time is up.
		c.Second = problems.NewEvaluation(len(d.plan.quantities))
		if err := verifier.Verify(context.WithoutCancel(ctx), s.x, c.Second); err != nil {
			return c, err
		}
		d.counts.Verify++
		c.RouteGap = routeGap(c.Exact, c.Second)
	}
	return c, nil
}

// routeGap is the largest difference between two evaluations, relative to values
// above 1.
func routeGap(a, b *problems.Evaluation) float64 {
	gap := 0.0
	for i, v := range a.Values {
		w := b.Values[i]
		if math.IsNaN(v) != math.IsNaN(w) {
			return math.Inf(1)
		}
		if !math.IsNaN(v) {
			gap = math.Max(gap, math.Abs(v-w)/math.Max(1, math.Abs(v)))
		}
	}
	return gap
}
