package robust

import (
	"context"
	"math"
	"slices"

	"rampwright/problems"
)

// Cut keeps a search where draws have answers. No margin of a limit says how many
// draws have none: their share over the designs x is taken linear around the last
// design,
//
//	u(x) = u(x0) + sum_j slope_j (x_j - x0_j) <= AtMost
//
// with slopes by differences over the same draws.
type Cut struct {
	X      []float64
	Share  float64 // of draws without an answer that a limit needed, at X
	Slope  []float64
	AtMost float64
}

// looser is a cut half way back to the share at the last design.
func (c *Cut) looser() *Cut {
	out := *c
	out.AtMost = (c.AtMost + c.Share) / 2
	return &out
}

// share is the linear share at x.
func (c *Cut) share(x []float64) float64 {
	u := c.Share
	for j, slope := range c.Slope {
		u += slope * (x[j] - c.X[j])
	}
	return u
}

const (
	cutStep    = 0.05 // of a variable's range
	cutAllowed = 0.5  // of the draws that may fail, those without an answer
	cutFactor  = 0.5  // of the share at the last design: slopes reach no farther
)

// cutAt measures the share of draws without an answer at x and its slopes; allowed
// is the share of draws that may fail.
func (b *built) cutAt(ctx context.Context, x []float64, share float64, limits []limited, deviates [][]float64, allowed float64, jobs int) (*Cut, error) {
	variables := b.problem.Variables()
	cut := &Cut{X: x, Share: share, Slope: make([]float64, len(x)), AtMost: math.Max(cutAllowed*allowed, cutFactor*share)}
	for j, v := range variables {
		step := cutStep * (v.High - v.Low)
		if x[j]+step > v.High {
			step = -step
		}
		b.x = slices.Clone(x)
		b.x[j] += step
		draws, err := b.evaluate(ctx, "", deviates, jobs)
		if err != nil {
			return nil, err
		}
		cut.Slope[j] = (unansweredShare(limits, draws.Values) - share) / step
	}
	b.x = x
	return cut, nil
}

// unansweredShare is the share of draws in which some limit was asked of a quantity
// without a value.
func unansweredShare(limits []limited, rows [][]float64) float64 {
	n := 0
	for _, row := range rows {
		if slices.ContainsFunc(limits, func(l limited) bool { return l.judge(row) == unanswered }) {
			n++
		}
	}
	return float64(n) / float64(len(rows))
}

// ShareWithoutAnswer names the quantity of a cut.
const ShareWithoutAnswer = "share_without_answer"

// Guard adds the linear share of a cut to a problem as one more quantity, its last,
// and returns the limit on it. The problem must be one a design search takes; a nil
// cut adds nothing.
func (c *Cut) Guard(problem problems.Problem) (problems.Problem, []problems.Limit) {
	if c == nil {
		return problem, nil
	}
	added := problems.Quantity{Name: ShareWithoutAnswer, Point: problems.Geometry, Explicit: true}
	g := &guarded{Problem: problem, cut: c, quantities: append(slices.Clone(problem.Quantities()), added)}
	limit := problems.Limit{
		Quantity: added.Name, Point: added.Point, Low: math.Inf(-1), High: c.AtMost, Kind: problems.Asked, Source: "confidence",
	}
	if verifier, ok := problem.(problems.Verifier); ok {
		return &verified{g, verifier}, []problems.Limit{limit}
	}
	return g, []problems.Limit{limit}
}

// guarded is a problem with the share of a cut as its last quantity.
type guarded struct {
	problems.Problem
	cut        *Cut
	quantities []problems.Quantity
}

func (g *guarded) Quantities() []problems.Quantity { return g.quantities }

func (g *guarded) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return g.fill(x, dst, func(inner *problems.Evaluation) error { return g.Problem.Evaluate(ctx, x, inner) })
}

// fill runs a route of the problem into all values but the last.
func (g *guarded) fill(x []float64, dst *problems.Evaluation, run func(inner *problems.Evaluation) error) error {
	last := len(g.quantities) - 1
	inner := &problems.Evaluation{Values: dst.Values[:last:last], Reasons: dst.Reasons[:last:last]}
	if err := run(inner); err != nil {
		return err
	}
	if dst.Bounds = nil; inner.Bounds != nil {
		dst.Bounds = append(slices.Clip(inner.Bounds), 0)
	}
	dst.Set(last, g.cut.share(x))
	return nil
}

// EvaluateExplicit implements problems.Explicit.
func (g *guarded) EvaluateExplicit(x []float64, dst *problems.Evaluation) {
	last := len(g.quantities) - 1
	if explicit, ok := g.Problem.(problems.Explicit); ok {
		explicit.EvaluateExplicit(x, &problems.Evaluation{Values: dst.Values[:last:last], Reasons: dst.Reasons[:last:last]})
	}
	dst.Set(last, g.cut.share(x))
}

// LinearForm implements problems.Linear.
func (g *guarded) LinearForm(i int) (a []float64, b float64, ok bool) {
	if i == len(g.quantities)-1 {
		return g.cut.Slope, g.cut.share(make([]float64, len(g.cut.Slope))), true
	}
	if linear, has := g.Problem.(problems.Linear); has {
		return linear.LinearForm(i)
	}
	return nil, 0, false
}

// verified is a guarded problem with a second route.
type verified struct {
	*guarded
	verifier problems.Verifier
}

func (v *verified) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return v.fill(x, dst, func(inner *problems.Evaluation) error { return v.verifier.Verify(ctx, x, inner) })
}
