package optimize

import (
	"context"
	"math"
	"slices"
)

// proposal is a point the search wants evaluated, and what the surrogates say of
// it beforehand.
type proposal struct {
	u         []float64
	predicted []float64 // by quantity index, plain surrogates
	aim       float64   // plain prediction
	expected  float64   // merit by the model that proposed it
	purpose   purpose
	radius    float64 // of the region of a step, of the cloud of a scout or probe
	cut       bool    // a step that failures of the model cut short
	sample    *sample // once evaluated
}

// purpose is why a point is evaluated.
type purpose int

const (
	improving purpose = iota // the best found over the whole box
	stepping                 // from the center, judged by the trust region
	scouting                 // where the surrogates know least
	probing                  // the slopes at a center at rest
)

// propose returns the points of the next round, distinct ones that the infill left
// can pay for. None means that the search is done.
func (d *designer) propose(ctx context.Context) ([]*proposal, error) {
	points, err := d.choose(ctx)
	if err == nil && d.settings.Batch > 0 && len(points) > 0 {
		points, err = d.fill(ctx, points)
	}
	return points[:min(len(points), d.settings.Infill-d.counts.Infill)], err
}

// choose returns the points that matter most now: a step of the corrected surrogates
// from the center; beside it, while the whole box is searched, the best point of
// the surrogates there or a point near the center they know least; beside it or
// alone, while they do not explain the aim, the point of largest expected
// improvement.
func (d *designer) choose(ctx context.Context) ([]*proposal, error) {
	center := d.anchor.sample
	step, err := d.exploit(ctx, center)
	if err != nil {
		return nil, err
	}
	elsewhere, err := d.lookElsewhere(ctx, step)
	if err != nil {
		return nil, err
	}
	if elsewhere != nil && (d.idle || d.atRest(step)) {
		if d.settings.Batch > 0 && !d.atRest(step) && !d.repeats(step.u) {
			return []*proposal{elsewhere, step}, nil
		}
		return []*proposal{elsewhere}, nil
	}
	if d.atRest(step) {
		if err := d.audit(ctx, center); err != nil {
			return nil, err
		}
		switch {
		case d.audited.err > d.settings.Agreement:
			return d.refine(center), nil
		case d.confirmed != center || d.unprobed > 0:
			if probes := d.probe(center); len(probes) > 0 {
				return probes, nil
			}
		}
		return d.challenge(ctx, center)
	}
	if d.repeats(step.u) {
		// The model failed there, or nothing came of it: learn around the center.
		d.radius = math.Max(leastRadius, 0.5*d.radius)
		return d.scouts(center, 2, math.Max(leastScout, math.Min(d.radius, scoutRadius))), nil
	}
	proposals := []*proposal{step}
	if elsewhere != nil {
		return append(proposals, elsewhere), nil
	}
	if d.exploring() {
		wide, err := d.search(ctx)
		if err != nil {
			return nil, err
		}
		if d.worthEvaluating(wide, step) {
			return append(proposals, wide), nil
		}
		proposals = append(proposals, d.scouts(center, 1, math.Min(d.radius, scoutRadius))...)
	}
	return proposals, nil
}

// lookElsewhere returns the point of largest expected improvement while the wide
// surfaces do not explain the aim, nil once nothing promises any.
func (d *designer) lookElsewhere(ctx context.Context, step *proposal) (*proposal, error) {
	if len(d.history) <= wideRounds || d.explains(wellExplained) {
		d.unexplained = !d.explains(explained)
	}
	if !d.unexplained {
		return nil, nil
	}
	p, err := d.improve(ctx)
	d.unexplained = p != nil
	if p != nil && distance(p.u, step.u) < improveApart {
		return nil, err
	}
	return p, err
}

// explains reports whether leave-one-out prediction of the wide surfaces explains
// the aim: what they say of the whole box is a guide.
func (d *designer) explains(share float64) bool {
	for _, i := range d.plan.objective.reads {
		for k := range d.wide.fits {
			if fit := &d.wide.fits[k]; fit.Quantity == i && fit.usable() && !(fit.Choice.Quality.Q2 >= share) {
				return false
			}
		}
	}
	return true
}

// An aim counts as explained from the share explained of its variance on; once
// it did not, from wellExplained on, because samples crowd around a center.
const (
	explained     = 0.5
	wellExplained = 0.95
)

// probes is how many probes confirm the slopes at rest: a pair, and one a variable
// while the samples are few, which may leave a direction unseen.
func (d *designer) probes() int {
	n := d.plan.dimension()
	if len(d.training) < (n+1)*(n+2) {
		return max(2, n)
	}
	return 2
}

// probe returns the probes that a center at rest still lacks, as many as a round
// holds.
func (d *designer) probe(center *sample) []*proposal {
	if d.confirmed != center {
		d.confirmed, d.unprobed = center, d.probes()
	}
	probes := d.scouts(center, d.unprobed, leastScout)
	for _, p := range probes {
		p.purpose = probing
	}
	d.unprobed = 0
	if most := d.settings.Batch; most > 0 && len(probes) > most {
		probes, d.unprobed = probes[:most], len(probes)-most
	}
	return probes
}

// exploring reports whether the box is still searched widely: in the first
// rounds.
func (d *designer) exploring() bool { return len(d.history) < wideRounds }

const wideRounds = 2

// refine spends a pair of evaluations near the optimum, ever closer, where the
// surrogates know least: they still miss it by more than the agreement.
func (d *designer) refine(center *sample) []*proposal {
	d.refined++
	radius := math.Max(leastScout, scoutRadius*math.Pow(0.8, float64(d.refined)))
	return d.scouts(center, 2, radius)
}

// exploit searches the corrected surrogates within the trust region, and moves the
// weights of the merit after what it found.
func (d *designer) exploit(ctx context.Context, center *sample) (*proposal, error) {
	p, found, err := d.stepOf(ctx, center, d.radius, halfway)
	if err == nil {
		d.penalty.follow(d.plan, center, found)
		p.expected = d.expectedMerit(found)
	}
	return p, err
}

// stepOf searches the corrected surrogates within a radius of the center, and where
// that leads among failures of the model, no further than a share of the way there.
func (d *designer) stepOf(ctx context.Context, center *sample, radius, share float64) (*proposal, *solution, error) {
	land := d.plan.surrogates(d.near.fits, d.anchor)
	s := d.newSearcher(land)
	s.blind = d.blind(d.near)
	d.stayInside(s)
	found, err := d.stepWithin(ctx, s, center, radius)
	for err == nil && d.amongFailures(found.u) {
		failure := d.nearestFailure(found.u)
		if distance(failure.u, center.u) < d.leastApart() || !s.cutShort(center, failure, share) {
			break // close enough: see whether it goes on behind
		}
		found, err = d.stepWithin(ctx, s, center, radius)
	}
	d.counts.Surrogate += land.calls
	if err != nil {
		return nil, nil, err
	}
	p := d.proposal(found.u, d.near)
	p.purpose, p.radius, p.cut, p.expected = stepping, radius, len(s.cuts.B) > 0, d.expectedMerit(found)
	return p, found, nil
}

// stepWithin searches around the center. A solution that the model itself calls
// worse than a feasible center comes of backing off further than the center does,
// or lies in another valley, reached by a first step too long: then the search
// goes up to the limits, and keeps to smaller regions.
func (d *designer) stepWithin(ctx context.Context, s *searcher, center *sample, radius float64) (*solution, error) {
	low, high := make([]float64, len(center.u)), make([]float64, len(center.u))
	for {
		for j, u := range center.u {
			low[j], high[j] = math.Max(0, u-radius), math.Min(1, u+radius)
		}
		found, err := s.polish(ctx, center.u, low, high, s.tight(surrogateSearch))
		if err != nil || !center.feasible || radius <= leastRadius || !(d.expectedMerit(found) > d.merit(center)) {
			return found, err
		}
		if slices.Max(append(s.inside, 0)) > 0 {
			clear(s.inside)
		} else {
			radius = math.Max(leastRadius, radius/8)
		}
	}
}

// newSearcher searches a landscape in the scales of the samples.
func (d *designer) newSearcher(land landscape) *searcher {
	s := newSearcher(d.plan, land, d.penalty.aimScale)
	for q, r := range d.plan.curved {
		s.scale[q] = d.penalty.usual[r]
	}
	return s
}

// stayInside backs the active limits off by a tenth of the last prediction error
// there, so that the exact margins of the next step are not negative.
func (d *designer) stayInside(s *searcher) {
	for q, r := range d.plan.curved {
		row := &d.plan.rows[r]
		if e := d.rowError(row.Index); e > 0 {
			s.inside[q] = math.Min(mostInside, 0.1*e/row.Scale)
		}
	}
}

const mostInside = 1e-4

// rowError is the error of the corrected prediction of a quantity at the latest
// step, in its unit; none where the quantity has been recognised since.
func (d *designer) rowError(quantity int) float64 {
	recognised := slices.ContainsFunc(d.near.fits, func(f Fit) bool { return f.Quantity == quantity && f.exact })
	if d.stepErrors == nil || recognised {
		return 0
	}
	return d.stepErrors[quantity]
}

func (d *designer) expectedMerit(found *solution) float64 {
	return d.penalty.of(found.aim, found.excess)
}

// blind reports whether the surfaces cannot predict the aim.
func (d *designer) blind(on *surfaces) bool {
	for _, i := range d.plan.objective.reads {
		for k := range on.fits {
			if on.fits[k].Quantity == i && !on.fits[k].usable() {
				return true
			}
		}
	}
	return false
}

// proposal wraps a point with the plain predictions of surfaces there.
func (d *designer) proposal(u []float64, on *surfaces) *proposal {
	land := d.plan.surrogates(on.fits, nil)
	values := make([]float64, len(d.plan.quantities))
	for i := range values {
		values[i] = math.NaN()
	}
	land.values(u, values)
	d.counts.Surrogate++
	return &proposal{u: u, predicted: values, aim: d.plan.objective.value(values)}
}

// search looks over the whole box on the plain surrogates: evolution, then local
// searches from its distinct points and from the best samples.
func (d *designer) search(ctx context.Context) (*proposal, error) {
	land := d.plan.surrogates(d.wide.fits, nil)
	center := d.center()
	s := d.newSearcher(land)
	s.blind, s.avoid = d.blind(d.wide), d.success
	starts, err := s.explore(ctx, [][]float64{center.u}, uint64(d.settings.Seed)+uint64(len(d.samples)), wideGenerations)
	if err != nil {
		return nil, err
	}
	starts = append(starts, center.u)
	low, high := d.plan.cube()
	var best *solution
	for _, start := range starts[:min(len(starts), wideStarts)] {
		found, err := s.polish(ctx, start, low, high, surrogateSearch)
		if err != nil {
			return nil, err
		}
		if d.success.at(found.u) < leastSuccess {
			found = s.at(start)
		}
		if !math.IsNaN(found.aim) && (best == nil || d.expectedMerit(found) < d.expectedMerit(best)) {
			best = found
		}
	}
	d.counts.Surrogate += land.calls
	if best == nil {
		return nil, nil
	}
	p := d.proposal(best.u, d.wide)
	p.expected = d.expectedMerit(best)
	return p, nil
}

const (
	wideGenerations = 60
	wideStarts      = 6
)

// worthEvaluating reports whether a point found over the whole box promises more
// than the step, and is not the same point.
func (d *designer) worthEvaluating(wide, step *proposal) bool {
	return wide != nil && distance(wide.u, step.u) > improveApart && d.fresh(wide.u)
}

// fresh reports whether no sample stands at u already.
func (d *designer) fresh(u []float64) bool {
	for _, s := range d.samples {
		if distance(s.u, u) < apart {
			return false
		}
	}
	return true
}

// repeats reports whether u was evaluated before, or as good as, where the model
// failed.
func (d *designer) repeats(u []float64) bool {
	for _, s := range d.samples {
		if gap := distance(s.u, u); gap < samePoint || gap < sameFailure && d.plan.lacks(s) {
			return true
		}
	}
	return false
}

// samePoint is the distance in the unit cube below which an evaluation would
// repeat another, sameFailure that below which it would fail as another did.
const (
	samePoint   = 1e-12
	sameFailure = 1e-6
)
