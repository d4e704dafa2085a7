package optimize

import (
	"context"
	"errors"
	"math"
	"slices"

	"rampwright/optimize/local"
)

// Design runs the main job on a task. The error reports a task or setting that
// makes no sense, or a model that could not be run; a context that ends first
// gives the best so far with status Stopped (deadline) or Interrupted.
func Design(ctx context.Context, task Task, settings Settings, observe Observer) (*Result, error) {
	plan, err := newPlan(task)
	if err != nil {
		return nil, err
	}
	settings = settings.WithDefaults(plan.dimension())
	if err := settings.Validate(plan.dimension()); err != nil {
		return nil, err
	}
	d := &designer{plan: plan, settings: settings, observe: observe, radius: startRadius}
	if err := d.run(ctx); err != nil && ctx.Err() == nil {
		return nil, err
	}
	return d.result(ctx)
}

// designer is a design under way.
type designer struct {
	plan     *plan
	settings Settings
	observe  Observer

	samples  []*sample // every exact evaluation, in order
	training []*sample // those far enough apart to fit
	wide     *surfaces // over the whole box
	near     *surfaces // around the center
	anchor   *anchor   // of the near surfaces, at the center

	penalty    merit
	radius     float64   // of the trust region
	stepErrors []float64 // of the corrected model at the latest step, by quantity

	success     *success     // of the model, nil where it never failed
	acquisition *acquisition // of the latest search for an improvement

	unexplained bool // the wide surfaces are no guide to the aim
	idle        bool // the last round improved the best design by next to nothing

	audited   *audit
	confirmed *sample // a center at rest whose slopes were probed once more
	unprobed  int     // probes it lacks, no room in the rounds so far
	refined   int     // rounds of refinement
	counts    Counts
	sampled   Step // once the samples are evaluated
	history   []Step
	why       string
}

const (
	startRadius = 0.25
	leastRadius = 1e-4
	// apart is the least distance, in the unit cube, between training samples:
	// closer ones add no information and spoil the conditioning of a process.
	apart = 2e-3
)

// run is the main job: sample, fit, then propose, evaluate and learn until the
// surrogates agree at the optimum and nothing improves.
func (d *designer) run(ctx context.Context) error {
	if err := d.sample(ctx); err != nil {
		return err
	}
	for d.counts.Infill < d.settings.Infill {
		if err := d.fit(ctx); err != nil {
			return err
		}
		proposals, err := d.propose(ctx)
		if err != nil {
			return err
		}
		if len(proposals) == 0 {
			if d.why == "" {
				d.why = "no point near the optimum is left that would teach the surrogates more"
			}
			return nil
		}
		if err := d.evaluate(ctx, proposals); err != nil {
			return err
		}
		d.learn(proposals)
	}
	d.why = "all infill evaluations are spent"
	return nil
}

// sample evaluates the starts and the space-filling design.
func (d *designer) sample(ctx context.Context) error {
	// An interruption leaves samples to judge as well.
	defer func() { d.penalty, d.sampled = newMerit(d.plan, d.samples), d.standing() }()
	points := slices.Concat(d.plan.starts, d.plan.design(d.settings.Samples, d.settings.Seed))
	// In slices, so that an interruption loses little and progress shows.
	for len(points) > 0 {
		part := points[:min(len(points), max(sampleSlice, d.settings.Batch))]
		points = points[len(part):]
		samples, err := d.plan.evaluate(ctx, d.settings.Jobs, part)
		d.samples = append(d.samples, samples...)
		d.training = append(d.training, samples...)
		d.counts.Samples += len(samples)
		if err != nil {
			return err
		}
		d.tell("samples")
	}
	return nil
}

// sampleSlice is how many samples are evaluated between two signs of progress, a
// batch at least.
const sampleSlice = 16

// fit brings the surrogates up to the samples: those around the center always,
// those over the whole box while it is searched.
func (d *designer) fit(ctx context.Context) error {
	d.success = d.plan.newSuccess(d.training)
	if d.exploring() || d.unexplained {
		if err := d.fitWide(ctx); err != nil {
			return err
		}
	}
	return d.fitNear(ctx, d.center(), nil)
}

// center is the sample of best merit. Beside a feasible sample one that violates
// limits is a center only within reach of a step: far outside the limits an aim
// may be better without end.
func (d *designer) center() *sample {
	center := d.best()
	if center == nil {
		center = d.samples[0]
	}
	around := center
	for _, s := range d.samples {
		eligible := s.feasible || !around.feasible || distance(s.u, around.u) <= 2*d.radius
		if eligible && d.merit(s) < d.merit(center) {
			center = s
		}
	}
	return center
}

// merit orders samples, the least first.
func (d *designer) merit(s *sample) float64 { return d.penalty.of(s.aim, s.excess) }

// best is the best feasible sample, nil before the first.
func (d *designer) best() *sample {
	var best *sample
	for _, s := range d.samples {
		if s.feasible && (best == nil || d.plan.objective.better(s.aim, best.aim)) {
			best = s
		}
	}
	return best
}

// evaluate computes the proposals exactly.
func (d *designer) evaluate(ctx context.Context, proposals []*proposal) error {
	points := make([][]float64, len(proposals))
	for i, p := range proposals {
		points[i] = p.u
	}
	samples, err := d.plan.evaluate(ctx, d.settings.Jobs, points)
	d.samples = append(d.samples, samples...)
	d.counts.Infill += len(samples)
	if len(samples) > 0 {
		d.counts.Rounds++
	}
	if err != nil {
		return err
	}
	for i, s := range samples {
		proposals[i].sample = s
	}
	return nil
}

func (d *designer) tell(phase string) {
	if d.observe == nil {
		return
	}
	event := Event{
		Phase: phase, Evaluations: len(d.samples), Planned: len(d.plan.starts) + d.settings.Samples + d.settings.Infill,
		Aim: math.NaN(), Violation: d.leastViolation(),
	}
	if best := d.best(); best != nil {
		event.Aim = best.aim
	}
	d.observe(event)
}

func (d *designer) leastViolation() float64 {
	least := math.Inf(1)
	for _, s := range d.samples {
		least = math.Min(least, s.violation)
	}
	return least
}

// result closes the design: candidates verified, the status decided.
func (d *designer) result(ctx context.Context) (*Result, error) {
	if len(d.samples) == 0 {
		return nil, errors.Join(ErrNothingEvaluated, ctx.Err())
	}
	r := &Result{Rows: d.plan.rows, Sampled: d.sampled, History: d.history, Why: d.why}
	for _, s := range d.finalists() {
		candidate, err := d.candidate(ctx, s)
		if err != nil {
			return nil, err
		}
		r.Candidates = append(r.Candidates, candidate)
	}
	if err := d.verify(ctx, r.Candidates); err != nil {
		return nil, err
	}
	r.Best = r.Candidates[0]
	if ctx.Err() == nil { // else the fits of the last round stand
		if err := d.fitWide(ctx); err != nil {
			return nil, err
		}
	}
	if d.wide != nil {
		r.Fits = d.wide.fits
	}
	for i, s := range d.samples {
		purpose := "sample"
		if i >= d.counts.Samples {
			purpose = "infill"
		}
		r.Samples = append(r.Samples, Sample{purpose, s.x, s.evaluation})
	}
	r.Counts = d.counts
	r.Status = d.status(ctx, &r.Best)
	return r, nil
}

// ErrNothingEvaluated is the answer of a search whose context ended before the
// first exact evaluation.
var ErrNothingEvaluated = errors.New("the search ended before the first design was evaluated")

func (d *designer) status(ctx context.Context, best *Candidate) Status {
	switch {
	case errors.Is(context.Cause(ctx), context.DeadlineExceeded):
		return Stopped
	case ctx.Err() != nil:
		return Interrupted
	case !best.Assessment.Feasible:
		return Infeasible
	case !best.Verified(d.settings.Agreement):
		return NotVerified
	}
	return Verified
}

const (
	finalistCount = 3
	finalistApart = 0.05 // in the unit cube
)

// finalists are the best sample and distinct feasible runners-up; where nothing
// is feasible, the sample of least violation alone.
func (d *designer) finalists() []*sample {
	ordered := slices.Clone(d.samples)
	slices.SortStableFunc(ordered, d.plan.order)
	list := ordered[:1:1]
	for _, s := range ordered[1:] {
		if len(list) == finalistCount || !s.feasible {
			break
		}
		distinct := true
		for _, other := range list {
			distinct = distinct && distance(s.u, other.u) > finalistApart
		}
		if distinct {
			list = append(list, s)
		}
	}
	return list
}

// Local searches are tight: a solution's last digits decide whether its exact
// margins are negative. Sums of a surrogate cancel, so its values are rougher
// than those of the model.
var (
	surrogateSearch = local.Settings{Tolerance: 1e-8, Iterations: 100, Rounding: 5e-11}
	exactPolish     = local.Settings{Tolerance: 1e-8, Iterations: 100}
)
