package main

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"sync"
	"sync/atomic"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/surrogate"
	"rampwright/surrogate/doe"
	"rampwright/surrogate/gpr"
)

// fitsPlan is a study of learning curves to be run.
type fitsPlan struct {
	model      problems.Problem
	quantities []int // indices in the model's quantities
	kinds      []surrogate.Model
	counts     []int
	designs    int
	testPoints int
	inert      int     // inputs no quantity depends on
	noise      float64 // standard deviation added to the samples
	accuracy   float64
	seed       int64
	jobs       int
}

// intervalPoints is the largest number of test points the intervals are judged
// at: deviations cost far more than means.
const intervalPoints = 512

// runFits runs a study and, where inert inputs or noise were added, the same
// without them. The figures depend on the plan alone, not on its jobs; the
// seconds do not. A context that ends first leaves the designs that were
// finished; where there is none, the error is errNothingFitted.
//
// What was fitted is told to observe, if it is not nil, from one goroutine.
func runFits(ctx context.Context, plan *fitsPlan, observe func(done, total int)) (*report.FitsStudy, error) {
	plans := []*fitsPlan{plan}
	if plan.inert > 0 || plan.noise > 0 {
		plain := *plan
		plain.inert, plain.noise = 0, 0
		plans = append(plans, &plain)
	}
	done, total := 0, len(plans)*len(plan.counts)*plan.designs*len(plan.quantities)
	advance := func() {
		if done++; observe != nil {
			observe(done, total)
		}
	}
	study := &report.FitsStudy{Setup: plan.setup()}
	for i, p := range plans {
		run, err := newFitsRun(ctx, p)
		if err == nil {
			err = run.all(ctx, advance)
		}
		if err != nil && ctx.Err() == nil {
			return nil, err
		}
		study.Stopped = ctx.Err() != nil
		if i == 0 && study.Stopped && !run.hasFits() {
			return nil, errNothingFitted
		}
		study.ModelRuns += run.modelRuns
		if i == 0 {
			study.Curves, study.Moments = run.curves(), run.moments()
		} else if run.hasFits() {
			study.Plain = run.curves()
		}
	}
	return study, nil
}

var errNothingFitted = errors.New("stopped before a single design was fitted")

func (p *fitsPlan) setup() report.FitsSetup {
	s := report.FitsSetup{
		Counts: p.counts, Designs: p.designs, TestPoints: p.testPoints, InertInputs: p.inert,
		Noise: report.Number(p.noise), Accuracy: report.Number(p.accuracy), IntervalsOn: min(p.testPoints, intervalPoints),
	}
	for _, v := range p.model.Variables() {
		s.Inputs = append(s.Inputs, v.Name)
	}
	for _, kind := range p.kinds {
		s.Kinds = append(s.Kinds, kind.Kind())
	}
	return s
}

// fitsRun is a study under way.
type fitsRun struct {
	*fitsPlan
	tests     [][]float64 // in the unit cube, inert inputs last
	exact     [][]float64 // [quantity][test point], NaN where missing
	cells     []fitsCell
	modelRuns int
}

// fitsCell is one design with its samples and, slot by slot, what became of the
// fits to each quantity.
type fitsCell struct {
	count, design int
	x             [][]float64
	y             [][]float64 // [quantity][sample], noise included
	done          []*fitsOutcome
}

// hasFits reports whether some fit was finished.
func (r *fitsRun) hasFits() bool {
	for i := range r.cells {
		for _, outcome := range r.cells[i].done {
			if outcome != nil {
				return true
			}
		}
	}
	return false
}

// newFitsRun evaluates the test points, drawn evenly and independently, so that
// their averages have the errors of plain Monte Carlo. The run it returns beside
// an error has fitted nothing.
func newFitsRun(ctx context.Context, plan *fitsPlan) (*fitsRun, error) {
	r := &fitsRun{fitsPlan: plan}
	source := doe.Stream(plan.seed, "fits test points")
	for range plan.testPoints {
		r.tests = append(r.tests, uniform(source, r.dimension()))
	}
	var err error
	if r.exact, err = r.evaluate(ctx, r.tests); err != nil {
		return r, err
	}
	for _, n := range plan.counts {
		for k := range plan.designs {
			r.cells = append(r.cells, fitsCell{count: n, design: k, done: make([]*fitsOutcome, len(plan.quantities))})
		}
	}
	return r, nil
}

// dimension is the number of inputs, the inert ones included.
func (p *fitsPlan) dimension() int { return len(p.model.Variables()) + p.inert }

func uniform(source *rand.Rand, n int) []float64 {
	u := make([]float64, n)
	for j := range u {
		u[j] = source.Float64()
	}
	return u
}

// evaluate computes the quantities at points of the unit cube, side by side.
func (r *fitsRun) evaluate(ctx context.Context, points [][]float64) ([][]float64, error) {
	variables := r.model.Variables()
	values := make([][]float64, len(r.quantities))
	for k := range values {
		values[k] = make([]float64, len(points))
	}
	failures := make([]error, r.jobs)
	var group sync.WaitGroup
	for job := range r.jobs {
		group.Go(func() {
			evaluation := problems.NewEvaluation(len(r.model.Quantities()))
			x := make([]float64, len(variables))
			for i := job; i < len(points) && failures[job] == nil; i += r.jobs {
				for j, v := range variables {
					x[j] = v.Low*(1-points[i][j]) + v.High*points[i][j]
				}
				failures[job] = r.model.Evaluate(ctx, x, evaluation)
				for k, q := range r.quantities {
					values[k][i] = evaluation.Values[q]
				}
			}
		})
	}
	group.Wait()
	r.modelRuns += len(points)
	for _, err := range failures {
		if err != nil {
			return nil, err
		}
	}
	return values, nil
}

// all makes every design, then fits each quantity on each, few samples first.
// Fits run side by side and fill their slot; the progress is told from here.
func (r *fitsRun) all(ctx context.Context, advance func()) error {
	for i := range r.cells {
		if err := r.sample(ctx, &r.cells[i]); err != nil {
			return err
		}
	}
	total := len(r.cells) * len(r.quantities)
	finished := make(chan struct{}, total)
	var next atomic.Int64
	var group sync.WaitGroup
	for range r.jobs {
		group.Go(func() {
			for {
				task := int(next.Add(1)) - 1
				if task >= total {
					return
				}
				cell, k := &r.cells[task/len(r.quantities)], task%len(r.quantities)
				if outcome := r.fit(ctx, cell, k); ctx.Err() == nil {
					cell.done[k] = outcome
				}
				finished <- struct{}{}
			}
		})
	}
	for range total {
		<-finished
		advance()
	}
	group.Wait()
	return nil
}

// sample makes and evaluates one design: a Latin hypercube, improved for
// distance, with noise of the purpose's own stream.
func (r *fitsRun) sample(ctx context.Context, c *fitsCell) error {
	purpose := fmt.Sprintf("fits design %d of %d samples", c.design+1, c.count)
	c.x = doe.LatinHypercube(c.count, r.dimension(), doe.Stream(r.seed, purpose))
	y, err := r.evaluate(ctx, c.x)
	if err != nil {
		return err
	}
	if r.noise > 0 {
		source := doe.Stream(r.seed, purpose+", noise")
		for k := range y {
			for i := range y[k] {
				y[k][i] += r.noise * source.NormFloat64()
			}
		}
	}
	c.y = y
	return nil
}

// noisy lets a Gaussian process find the noise where there is some.
func (p *fitsPlan) noisy(kind surrogate.Model) surrogate.Model {
	if config, ok := kind.(gpr.Config); ok && p.noise > 0 {
		config.Noise = gpr.Estimate
		return config
	}
	return kind
}

// present keeps the points with a value.
func present(x [][]float64, y []float64) (keptX [][]float64, keptY []float64) {
	for i, v := range y {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			keptX, keptY = append(keptX, x[i]), append(keptY, v)
		}
	}
	return keptX, keptY
}

// curves gathers the scores of the finished fits, in the order of the plan.
func (r *fitsRun) curves() []report.FitsCurve {
	var curves []report.FitsCurve
	for k, q := range r.quantities {
		_, sound := present(r.tests, r.exact[k])
		curve := report.FitsCurve{
			Quantity: r.model.Quantities()[q], Missing: len(r.tests) - len(sound),
			Spread: surrogate.Sampled(func(v []float64) float64 { return v[0] }, columnOf(sound)).Deviation,
		}
		for kind := range len(r.kinds) + 1 {
			for _, n := range r.counts {
				cell := report.FitsCell{Samples: n}
				if kind < len(r.kinds) {
					cell.Kind = r.kinds[kind].Kind()
				}
				for i := range r.cells {
					if outcome := r.cells[i].done[k]; r.cells[i].count == n && outcome != nil {
						cell.Scores = append(cell.Scores, outcome.scores[kind])
					}
				}
				curve.Cells = append(curve.Cells, cell)
			}
		}
		curves = append(curves, curve)
	}
	return curves
}

// columnOf turns numbers into points of one coordinate.
func columnOf(values []float64) [][]float64 {
	points := make([][]float64, len(values))
	for i := range values {
		points[i] = values[i : i+1]
	}
	return points
}
