package optimize

import (
	"context"
	"math"
)

// learn judges the step against what was expected, moves the trust region, and
// takes the new samples into the training set or the correction.
func (d *designer) learn(proposals []*proposal) {
	before := d.anchor
	for _, p := range proposals {
		if p.exploit {
			d.judgeStep(p, before)
		}
		if d.freshTraining(p.sample.u) {
			d.training = append(d.training, p.sample)
			d.stale++
		}
	}
	if d.stale == 0 && before != nil {
		d.correct(proposals, before)
	}
	d.note(proposals)
	d.tell("infill")
}

// judgeStep compares the gain of a step with the gain expected (trust-region
// ratio, Nocedal & Wright alg. 4.1).
func (d *designer) judgeStep(p *proposal, at *anchor) {
	d.stepErrors = make([]float64, len(d.plan.quantities))
	for k := range d.fits {
		q := d.fits[k].Quantity
		exact := p.sample.values[q]
		if d.fits[k].usable() && !math.IsNaN(exact) && !math.IsInf(exact, 0) {
			d.stepErrors[q] = math.Abs(exact - d.fits[k].Choice.Mean(p.u) - at.at(k, p.u))
		}
	}
	expected := d.merit(at.sample) - p.expected
	gained := d.merit(at.sample) - d.merit(p.sample)
	length := 0.0
	for j := range p.u {
		length = math.Max(length, math.Abs(p.u[j]-at.sample.u[j]))
	}
	switch ratio := gained / expected; {
	case !(expected > 0):
	case ratio < 0.25:
		d.radius = math.Max(leastRadius, 0.5*math.Min(d.radius, length))
	case ratio > 0.75 && length > 0.9*d.radius:
		d.radius = math.Min(1, 2*d.radius)
	}
}

// freshTraining reports whether u is far enough from every training sample.
func (d *designer) freshTraining(u []float64) bool {
	for _, s := range d.training {
		if distance(s.u, u) < apart {
			return false
		}
	}
	return true
}

// correct moves the anchor to the new center with what the step has shown of the
// slopes, without a new fit.
func (d *designer) correct(proposals []*proposal, before *anchor) {
	for _, p := range proposals {
		before.learn(p.sample, d.fits)
	}
	if center := d.center(); center != before.sample {
		d.anchor = newAnchor(center, d.fits, before.tilt)
	}
}

// note appends a line to the history.
func (d *designer) note(proposals []*proposal) {
	step := Step{Evaluations: len(d.samples), Aim: math.NaN(), Violation: d.leastViolation(), Radius: d.radius}
	if best := d.best(); best != nil {
		step.Aim = best.aim
	}
	for _, p := range proposals {
		if p.exploit {
			step.Error = d.surrogateError(p)
		}
	}
	d.history = append(d.history, step)
}

// surrogateError is the largest scaled error of the plain predictions of a
// proposal over aim and limits.
func (d *designer) surrogateError(p *proposal) float64 {
	worst := 0.0
	for k := range d.fits {
		q := d.fits[k].Quantity
		exact, predicted := p.sample.values[q], p.predicted[q]
		if math.IsInf(exact, 1) && math.IsInf(predicted, 1) {
			continue
		}
		if math.IsNaN(exact) || math.IsInf(predicted, 1) {
			return math.Inf(1)
		}
		worst = math.Max(worst, math.Abs(predicted-exact)/d.unit(q))
	}
	return worst
}

// settled reports whether the step changes nothing: it stands at the center, or
// promises less than the tolerance, and the center is feasible and was predicted
// within the agreement.
func (d *designer) settled(step *proposal) bool {
	best := d.best()
	if best == nil || d.center() != best || d.lastError() > d.settings.Agreement {
		return false
	}
	return d.merit(best)-step.expected < settledGain
}

// settledGain is the scaled gain of a step below which it is not worth an exact
// evaluation.
const settledGain = 1e-7

// challenge looks once more over the whole box: a better point elsewhere is
// evaluated, none ends the search.
func (d *designer) challenge(ctx context.Context, center *sample) ([]*proposal, error) {
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
