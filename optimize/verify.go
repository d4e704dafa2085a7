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
		X: s.x, Exact: s.evaluation, AimExact: s.aim, AimPredicted: math.NaN(), SurrogateError: math.Inf(1),
		Assessment: constraints.Assess(d.plan.rows, s.evaluation),
	}
	if len(d.training) > d.plan.dimension()+2 { // fewer, after an interruption, fit nothing
		if err := d.audit(context.WithoutCancel(ctx), s); err != nil {
			return c, err
		}
		c.Predicted, c.AimPredicted, c.SurrogateError = d.audited.predicted, d.audited.aim, d.audited.err
		// The audit left the sample out; its prices are slopes that know it.
		if err := d.fitNear(context.WithoutCancel(ctx), s, nil); err != nil {
			return c, err
		}
		d.pricesAt(s, c.Assessment.Checks)
	} else {
		c.Predicted = unpredicted(len(d.plan.quantities))
	}
	// The evidence is due even when the time is up.
	if err := c.verify(context.WithoutCancel(ctx), d.plan.problem); err != nil {
		return c, err
	}
	if c.Second != nil {
		d.counts.Verify++
	}
	return c, nil
}

// unpredicted is a prediction of nothing.
func unpredicted(n int) []float64 {
	values := make([]float64, n)
	for i := range values {
		values[i] = math.NaN()
	}
	return values
}

// verify computes the candidate by the second exact route, where the problem has
// one.
func (c *Candidate) verify(ctx context.Context, problem problems.Problem) error {
	c.RouteGap = math.NaN()
	verifier, ok := problem.(problems.Verifier)
	if !ok {
		return nil
	}
	c.Second = problems.NewEvaluation(len(c.Exact.Values))
	if err := verifier.Verify(ctx, c.X, c.Second); err != nil {
		return err
	}
	c.RouteGap = routeGap(c.Exact, c.Second)
	return nil
}

// routeGap is the largest difference between two evaluations beyond the bounds of
// the second, relative to values above 1. A value without a finite bound agrees
// with nothing.
func routeGap(a, b *problems.Evaluation) float64 {
	gap := 0.0
	for i, v := range a.Values {
		w := b.Values[i]
		if math.IsNaN(v) != math.IsNaN(w) {
			return math.Inf(1)
		}
		if !math.IsNaN(v) {
			beyond := math.Max(0, math.Abs(v-w)-b.Bound(i))
			if math.IsInf(b.Bound(i), 1) {
				beyond = math.Inf(1)
			}
			gap = math.Max(gap, beyond/math.Max(1, math.Abs(v)))
		}
	}
	return gap
}
