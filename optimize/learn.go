package optimize

import (
	"context"
	"math"
)

// learn judges the step against what was expected, moves the trust region, and
// takes the new samples into the training set or the correction.
func (d *designer) learn(proposals []*proposal) {
	before, fitted := d.anchor, len(d.training)
	if step := d.judged(proposals); step != nil {
		d.radius = step.radius
		d.judgeStep(step)
	}
	for _, p := range proposals {
		if d.apartFromTraining(p.sample.u) {
			d.training = append(d.training, p.sample)
		}
	}
	if len(d.training) == fitted {
		d.correct(proposals, before)
	}
	d.penalty.rescale(d.samples)
	d.reopen(before.sample)
	d.idle = d.standsStill()
	d.note(proposals)
	d.tell("infill")
}

// judged is the step of a round that the trust region follows: the one of best merit,
// or the shortest where none betters the center; nil without a step.
func (d *designer) judged(round []*proposal) *proposal {
	var best, shortest *proposal
	for _, p := range round {
		if p.purpose != stepping {
			continue
		}
		if best == nil || d.merit(p.sample) < d.merit(best.sample) {
			best = p
		}
		if shortest == nil || p.radius < shortest.radius {
			shortest = p
		}
	}
	if best != nil && !(d.merit(best.sample) < d.merit(d.anchor.sample)) {
		return shortest
	}
	return best
}

// judgeStep compares the gain of a step with the gain expected (trust-region
// ratio, Nocedal & Wright alg. 4.1).
func (d *designer) judgeStep(p *proposal) {
	d.stepErrors = make([]float64, len(d.plan.quantities))
	for k := range d.near.fits {
		fit := &d.near.fits[k]
		exact := p.sample.values[fit.Quantity]
		if fit.usable() && !math.IsNaN(exact) && !math.IsInf(exact, 0) {
			d.stepErrors[fit.Quantity] = math.Abs(exact - fit.mean(p.u) - d.anchor.at(k, p.u))
		}
	}
	expected := d.merit(d.anchor.sample) - p.expected
	gained := d.merit(d.anchor.sample) - d.merit(p.sample)
	length := extent(p.u, d.anchor.sample.u)
	switch ratio := gained / expected; {
	case !(expected > 0):
	case ratio < 0.25:
		d.radius = math.Max(leastRadius, 0.5*d.radius)
	case ratio > 0.75 && length > heldBack*d.radius:
		d.radius = math.Min(1, 2*d.radius)
	}
}

// standsStill reports whether the last round improved the best design by less
// than idleShare.
func (d *designer) standsStill() bool {
	best := d.best()
	if best == nil || len(d.history) == 0 {
		return false
	}
	before := d.history[len(d.history)-1].Aim
	return d.plan.objective.gain(best.aim, before) <= idleShare*math.Abs(best.aim)
}

const idleShare = 1e-3

// reopen widens the trust region after a jump: a center that no step led to has
// nothing to do with how far steps were to be trusted elsewhere.
func (d *designer) reopen(before *sample) {
	if jump := distance(d.center().u, before.u) / 2; jump > 2*d.radius {
		d.radius = math.Min(startRadius, jump)
	}
}

// apartFromTraining reports whether u is far enough from every training sample.
func (d *designer) apartFromTraining(u []float64) bool {
	least := d.leastApart()
	for _, s := range d.training {
		if distance(s.u, u) < least {
			return false
		}
	}
	return true
}

// leastApart is the distance from which on two samples tell something different.
func (d *designer) leastApart() float64 { return math.Min(apart, d.radius/apartOfRadius) }

// apartOfRadius relates the distance of training samples to the trust region, once
// that is small: its model has to follow what happens within it.
const apartOfRadius = 8

// correct moves the anchor to the new center with what the step has shown of the
// slopes, without a new fit.
func (d *designer) correct(proposals []*proposal, before *anchor) {
	for _, p := range proposals {
		before.learn(p.sample, d.near.fits)
	}
	if center := d.center(); center != before.sample {
		d.anchor = newAnchor(center, d.near.fits, before.tilt)
	}
}

// standing is where the search stands: a line of the history before any surrogate has
// proposed.
func (d *designer) standing() Step {
	step := Step{Evaluations: len(d.samples), Aim: math.NaN(), Violation: d.leastViolation(), Radius: d.radius, Error: math.NaN()}
	if best := d.best(); best != nil {
		step.Aim = best.aim
	}
	return step
}

// note appends a line to the history.
func (d *designer) note(proposals []*proposal) {
	step := d.standing()
	for _, p := range proposals {
		if p.purpose == stepping && math.IsNaN(step.Error) {
			step.Error = d.surrogateError(p.sample, p.predicted)
		}
	}
	d.history = append(d.history, step)
}

// surrogateError is the largest scaled difference of predictions from the exact
// values of a sample, over aim and limits.
func (d *designer) surrogateError(s *sample, predicted []float64) float64 {
	worst := 0.0
	for _, q := range d.plan.fitted {
		exact, guess := s.values[q], predicted[q]
		if math.IsInf(exact, 1) && math.IsInf(guess, 1) {
			continue // does not apply, and was never fitted
		}
		if math.IsNaN(exact) || math.IsInf(guess, 1) {
			return math.Inf(1)
		}
		worst = math.Max(worst, math.Abs(guess-exact)/d.unit(q))
	}
	return worst
}

// audit is what surrogates fitted to every other sample say of one sample.
type audit struct {
	sample    *sample
	near      *surfaces
	predicted []float64 // by quantity index
	aim       float64
	err       float64 // see surrogateError
}

// audit predicts a sample by near surfaces that have not seen it, and leaves
// them in place: the evidence of a result is the surrogates it was checked with.
func (d *designer) audit(ctx context.Context, s *sample) error {
	if d.audited != nil && d.audited.sample == s && d.audited.near == d.near {
		return nil
	}
	if err := d.fitNear(ctx, s, s); err != nil {
		return err
	}
	p := d.proposal(s.u, d.near)
	d.audited = &audit{sample: s, near: d.near, predicted: p.predicted, aim: p.aim, err: d.surrogateError(s, p.predicted)}
	return nil
}

// atRest reports whether the step from a feasible center promises nothing.
func (d *designer) atRest(step *proposal) bool {
	best := d.best()
	if best == nil || d.center() != best {
		return false
	}
	least := settledGain
	if distance(step.u, best.u) < settledStep {
		least = math.Max(least, settledShare*math.Abs(best.aim)/d.penalty.aimScale)
	}
	return d.merit(best)-step.expected < least
}

// The gain of a step is not worth an exact evaluation below settledGain, scaled;
// of a step shorter than settledStep, below settledShare of the aim.
const (
	settledGain  = 1e-10
	settledStep  = 3e-5
	settledShare = 1e-9
)

// challenge looks once more over the whole box: a better point elsewhere is
// evaluated, none ends the search.
func (d *designer) challenge(ctx context.Context, center *sample) ([]*proposal, error) {
	if err := d.fitWide(ctx); err != nil {
		return nil, err
	}
	wide, err := d.search(ctx)
	if err != nil {
		return nil, err
	}
	if wide != nil && d.fresh(wide.u) && wide.expected < d.merit(center)-challengeGain {
		return []*proposal{wide}, nil
	}
	d.why = "surrogates and exact values agree at the optimum and no step improves it"
	return nil, nil
}

// challengeGain is the scaled gain a point elsewhere must promise.
const challengeGain = 1e-5
