package optimize

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"
	"sync"

	"rampwright/constraints"
	"rampwright/problems"
	"rampwright/surrogate/doe"
)

// sample is one exact evaluation and what it means.
type sample struct {
	u          []float64
	x          []float64
	evaluation *problems.Evaluation
	values     []float64 // settled: see plan.settle
	aim        float64   // NaN where missing
	violation  float64   // sum of scaled violations
	excess     []float64 // scaled violation by row; NaN where the quantity is missing
	feasible   bool
}

// settle gives a quantity that does not apply the value +Inf, on which no limit
// asks anything; every other missing value stays NaN.
func (p *plan) settle(evaluation *problems.Evaluation) {
	for _, list := range [][]int{p.fitted, p.exact} {
		for _, i := range list {
			var notApplicable *problems.NotApplicable
			if evaluation.Reasons[i] != nil && errors.As(evaluation.Reasons[i], &notApplicable) {
				evaluation.Values[i] = math.Inf(1)
			}
		}
	}
}

func (p *plan) judge(u []float64, evaluation *problems.Evaluation) *sample {
	assessment := constraints.Assess(p.rows, evaluation)
	settled := evaluation.Clone()
	p.settle(settled)
	s := &sample{
		u: u, x: p.denormal(u), evaluation: evaluation, values: settled.Values,
		aim: p.objective.value(settled.Values), violation: assessment.Violation, feasible: assessment.Feasible,
	}
	s.excess = make([]float64, len(p.rows))
	for r, check := range assessment.Checks {
		if !check.Met {
			s.excess[r] = -check.Margin / check.Scale
		}
	}
	if math.IsNaN(s.aim) || math.IsInf(s.aim, 0) {
		s.aim, s.feasible = math.NaN(), false
		s.violation += constraints.MissingViolation
	}
	return s
}

// order puts feasible samples first, the best aim leading, then the others by
// their violation.
func (p *plan) order(a, b *sample) int {
	switch {
	case a.feasible && !b.feasible:
		return -1
	case !a.feasible && b.feasible:
		return 1
	case !a.feasible:
		return cmp.Compare(a.violation, b.violation)
	}
	return cmp.Compare(p.objective.sign()*a.aim, p.objective.sign()*b.aim)
}

// evaluate computes the points exactly, jobs of them at a time, and returns them
// in order. A model that could not be run gives the first error in order, with
// the samples that were done beside it.
func (p *plan) evaluate(ctx context.Context, jobs int, points [][]float64) ([]*sample, error) {
	samples := make([]*sample, len(points))
	failures := make([]error, len(points))
	inSlots(jobs, len(points), func(i int) {
		evaluation := problems.NewEvaluation(len(p.quantities))
		if failures[i] = p.problem.Evaluate(ctx, p.denormal(points[i]), evaluation); failures[i] == nil {
			samples[i] = p.judge(points[i], evaluation)
		}
	})
	for _, err := range failures {
		if err != nil {
			return slices.DeleteFunc(samples, func(s *sample) bool { return s == nil }), err
		}
	}
	return samples, nil
}

// inSlots calls work(i) for i below n on jobs goroutines; each call writes its
// own slot.
func inSlots(jobs, n int, work func(i int)) {
	jobs = min(jobs, n)
	if jobs <= 1 {
		for i := range n {
			work(i)
		}
		return
	}
	var next int
	var lock sync.Mutex
	var group sync.WaitGroup
	for range jobs {
		group.Go(func() {
			for {
				lock.Lock()
				i := next
				next++
				lock.Unlock()
				if i >= n {
					return
				}
				work(i)
			}
		})
	}
	group.Wait()
}

// design chooses n space-filling points among those that keep the linear rows
// and, widened, the limits on explicit quantities; where that region is too
// small for n points, the linear rows alone, then the whole cube.
func (p *plan) design(n int, seed int64) [][]float64 {
	part := newExplicitPart(p)
	values := make([]float64, len(p.quantities))
	near := func(u []float64) bool {
		if !p.insideLinear(u) {
			return false
		}
		part.values(u, values)
		for _, r := range p.curved {
			row := &p.rows[r]
			if row.Quantity.Explicit && !(row.Margin(values[row.Index]) >= -explicitSlack*row.Scale) {
				return false
			}
		}
		return true
	}
	for _, inside := range []func([]float64) bool{near, p.insideLinear} {
		points, err := doe.Inside(n, p.dimension(), nil, inside, doe.Stream(seed, "samples"))
		if err == nil {
			return points
		}
	}
	return doe.LatinHypercube(n, p.dimension(), doe.Stream(seed, "samples"))
}

// takeStarts brings the starts of a task into the unit cube.
func (p *plan) takeStarts(given [][]float64) ([][]float64, error) {
	var starts [][]float64
	for i, x := range given {
		bad := &BadStart{Index: i, Values: len(x), Wanted: p.dimension()}
		if len(x) != p.dimension() {
			return nil, bad
		}
		u := p.normal(x)
		for j, v := range u {
			if math.IsNaN(v) {
				return nil, bad
			}
			u[j] = math.Min(1, math.Max(0, v))
		}
		repeats := func(earlier []float64) bool { return distance(earlier, u) < apart }
		if !slices.ContainsFunc(starts, repeats) {
			starts = append(starts, u)
		}
	}
	return starts, nil
}

// explicitSlack is how far outside a limit on an explicit quantity samples may
// lie, in scaled margin: an optimum often sits on such a limit, and a surrogate
// needs samples on both sides of it.
const explicitSlack = 0.15

// rowViolation is the scaled violation of a row by its margin.
func rowViolation(margin, scale float64) float64 {
	switch {
	case math.IsNaN(margin):
		return constraints.MissingViolation
	case margin < 0:
		return -margin / scale
	}
	return 0
}

// linearViolation sums the violations of the linear rows, each over the length of
// its coefficients.
func (p *plan) linearViolation(u []float64) float64 {
	n, total := p.dimension(), 0.0
	for r, b := range p.linear.B {
		sum := -b
		for j, v := range u {
			sum += p.linear.A[r*n+j] * v
		}
		if sum > 0 {
			row := p.linear.A[r*n : (r+1)*n]
			total += sum / math.Max(1e-12, norm(row))
		}
	}
	return total
}

func norm(v []float64) float64 {
	sum := 0.0
	for _, c := range v {
		sum += c * c
	}
	return math.Sqrt(sum)
}

func distance(a, b []float64) float64 {
	sum := 0.0
	for j := range a {
		sum += (a[j] - b[j]) * (a[j] - b[j])
	}
	return math.Sqrt(sum)
}
