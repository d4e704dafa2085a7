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

// candidate gathers what is known of a sample: margins, prices, what the surrogates
// say of it.
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
	return c, nil
}

// verify computes the candidates once more, side by side.
func (d *designer) verify(ctx context.Context, candidates []Candidate) error {
	failures := make([]error, len(candidates))
	inSlots(d.settings.Jobs, len(candidates), func(i int) {
		failures[i] = candidates[i].verify(ctx, d.plan.problem)
	})
	for i := range candidates {
		if c := &candidates[i]; c.Second != nil || c.Repetition != NotRepeated {
			d.counts.Verify++
		}
		if failures[i] != nil {
			return failures[i]
		}
	}
	return nil
}

// unpredicted is a prediction of nothing.
func unpredicted(n int) []float64 {
	values := make([]float64, n)
	for i := range values {
		values[i] = math.NaN()
	}
	return values
}

// verify computes the candidate by the second exact route, which is due even when
// the time is up; where the problem has none, once more by the first, which is
// not.
func (c *Candidate) verify(ctx context.Context, problem problems.Problem) error {
	c.RouteGap = math.NaN()
	verifier, ok := problem.(problems.Verifier)
	if !ok {
		return c.repeat(ctx, problem)
	}
	c.Second = problems.NewEvaluation(len(c.Exact.Values))
	if err := verifier.Verify(context.WithoutCancel(ctx), c.X, c.Second); err != nil {
		return err
	}
	c.RouteGap = routeGap(c.Exact, c.Second)
	c.Broken = broken(c.Assessment, c.Second)
	return nil
}

// Judge holds a candidate against other limits than those it was searched with, by
// both routes. Prices are not known of them.
func (c *Candidate) Judge(rows []constraints.Row) {
	c.Assessment, c.Broken = constraints.Assess(rows, c.Exact), nil
	if c.Second != nil {
		c.Broken = broken(c.Assessment, c.Second)
	}
}

// Verified reports whether a design that holds its limits is borne out: by a second
// computation, and by surrogates that foresaw it to the agreement.
func (c *Candidate) Verified(agreement float64) bool {
	return c.confirmed() && c.SurrogateError <= agreement
}

// broken lists the limits that are met but for the values of a second route that
// resolves them better.
func broken(assessment constraints.Assessment, second *problems.Evaluation) []constraints.Check {
	var list []constraints.Check
	for _, first := range assessment.Checks {
		if !first.Met || second.Bound(first.Index) == 0 {
			continue
		}
		finer := constraints.Assess([]constraints.Row{first.Row}, second)
		if check := finer.Checks[0]; !check.Met {
			list = append(list, check)
		}
	}
	return list
}

// Repeater is implemented by a problem whose Evaluate may answer from a store:
// Repeat runs the model itself.
type Repeater interface {
	Repeat(ctx context.Context, x []float64, dst *problems.Evaluation) error
}

// repeat runs the model again and compares to the last bit.
func (c *Candidate) repeat(ctx context.Context, problem problems.Problem) error {
	run := problem.Evaluate
	if repeater, ok := problem.(Repeater); ok {
		run = repeater.Repeat
	}
	again := problems.NewEvaluation(len(c.Exact.Values))
	if err := run(ctx, c.X, again); ctx.Err() != nil {
		return nil
	} else if err != nil {
		return err
	}
	c.Repetition = Same
	for i, v := range c.Exact.Values {
		if w := again.Values[i]; v != w && !(math.IsNaN(v) && math.IsNaN(w)) {
			c.Repetition = Differs
		}
	}
	return nil
}

// confirmed reports whether a second computation bears the candidate out.
func (c *Candidate) confirmed() bool {
	return c.RouteGap <= RouteAgreement && len(c.Broken) == 0 || c.Repetition == Same
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
