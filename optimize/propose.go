package optimize

import (
	"context"
	"fmt"
	"math"
	"slices"

	"rampwright/constraints"
	"rampwright/surrogate/doe"
)

// proposal is a point the search wants evaluated, and what the surrogates say of
// it beforehand.
type proposal struct {
	u         []float64
	predicted []float64 // by quantity index, plain surrogates
	aim       float64   // plain prediction
	expected  float64   // merit by the model that proposed it
	exploit   bool      // a step from the center, judged by the trust region
	sample    *sample   // once evaluated
}

// propose returns the points to evaluate next: a step of the corrected surrogates
// from the center; beside it, while the whole box is searched, the best point of
// the surrogates there or a point near the center they know least; beside it or
// alone, while they do not explain the aim, the point of largest expected
// improvement. None means that the search is done.
func (d *designer) propose(ctx context.Context) ([]*proposal, error) {
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
		return d.affordable([]*proposal{elsewhere}), nil
	}
	if d.atRest(step) {
		if err := d.audit(ctx, center); err != nil {
			return nil, err
		}
		switch {
		case d.audited.err > d.settings.Agreement:
			return d.refine(center), nil
		case d.confirmed != center:
			d.confirmed = center
			if probes := d.scouts(center, d.probes(), leastScout); len(probes) > 0 {
				return d.affordable(probes), nil
			}
		}
		return d.challenge(ctx, center)
	}
	if d.repeats(step.u) {
		// The model failed there, or nothing came of it: learn around the center.
		d.radius = math.Max(leastRadius, 0.5*d.radius)
		return d.affordable(d.scouts(center, 2, math.Max(leastScout, math.Min(d.radius, scoutRadius)))), nil
	}
	proposals := []*proposal{step}
	if elsewhere != nil {
		return d.affordable(append(proposals, elsewhere)), nil
	}
	if d.exploring() {
		wide, err := d.search(ctx)
		if err != nil {
			return nil, err
		}
		if d.worthEvaluating(wide, step) {
			return d.affordable(append(proposals, wide)), nil
		}
		proposals = append(proposals, d.scouts(center, 1, math.Min(d.radius, scoutRadius))...)
	}
	return d.affordable(proposals), nil
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
	if p != nil && distance(p.u, step.u) < 10*apart {
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

// exploring reports whether the box is still searched widely: in the first
// rounds.
func (d *designer) exploring() bool { return len(d.history) < wideRounds }

const wideRounds = 2

// refine spends a pair of evaluations near the optimum, ever closer, where the
// surrogates know least: they still miss it by more than the agreement.
func (d *designer) refine(center *sample) []*proposal {
	d.refined++
	radius := math.Max(leastScout, scoutRadius*math.Pow(0.8, float64(d.refined)))
	return d.affordable(d.scouts(center, 2, radius))
}

// affordable cuts proposals to the infill left.
func (d *designer) affordable(proposals []*proposal) []*proposal {
	return proposals[:min(len(proposals), d.settings.Infill-d.counts.Infill)]
}

// exploit searches the corrected surrogates within the trust region.
func (d *designer) exploit(ctx context.Context, center *sample) (*proposal, error) {
	land := d.plan.surrogates(d.near.fits, d.anchor)
	s := d.newSearcher(land)
	s.blind = d.blind(d.near)
	d.stayInside(s)
	found, err := d.stepWithin(ctx, s, center, d.radius)
	if err != nil {
		return nil, err
	}
	d.counts.Surrogate += land.calls
	d.penalty.follow(d.plan, center, found)
	p := d.proposal(found.u, d.near)
	p.exploit = true
	p.expected = d.expectedMerit(found)
	return p, nil
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
	s.blind = d.blind(d.wide)
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
	return wide != nil && distance(wide.u, step.u) > 10*apart && d.fresh(wide.u)
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

// repeats reports whether u was evaluated before.
func (d *designer) repeats(u []float64) bool {
	for _, s := range d.samples {
		if distance(s.u, u) < samePoint {
			return true
		}
	}
	return false
}

// samePoint is the distance in the unit cube below which an evaluation would
// repeat another.
const samePoint = 1e-12

// scouts are up to n points near the center that the surrogates know least: of a
// cloud within the radius, those with the largest scaled deviation over aim and
// limits that keep the linear rows and stand apart.
func (d *designer) scouts(center *sample, n int, radius float64) []*proposal {
	source := doe.Stream(d.settings.Seed, fmt.Sprintf("scouts %d", d.counts.Infill))
	cloud := doe.RandomLatinHypercube(scoutCloud, len(center.u), source)
	doubts := make([]float64, len(cloud))
	for i, u := range cloud {
		for j := range u {
			u[j] = math.Min(1, math.Max(0, center.u[j]+(2*u[j]-1)*radius))
		}
		if d.plan.insideLinear(u) && d.fresh(u) {
			doubts[i] = d.doubt(u)
		}
	}
	var chosen []*proposal
	for len(chosen) < n {
		best := -1
		for i, doubt := range doubts {
			if doubt > 0 && (best < 0 || doubt > doubts[best]) {
				best = i
			}
		}
		if best < 0 {
			break
		}
		chosen = append(chosen, d.proposal(cloud[best], d.near))
		for i, u := range cloud {
			if distance(u, cloud[best]) < radius/2 {
				doubts[i] = 0
			}
		}
	}
	return chosen
}

const (
	scoutCloud  = 64
	leastScout  = 4 * apart
	scoutRadius = 0.1
)

// doubt is the largest scaled deviation of the surrogates at u.
func (d *designer) doubt(u []float64) float64 {
	most := 0.0
	for k := range d.near.fits {
		fit := &d.near.fits[k]
		if !fit.usable() {
			continue
		}
		most = math.Max(most, fit.deviation(u)/d.unit(fit.Quantity))
	}
	return most
}

// unit is the scale of a quantity: of the first row on it, or the aim's. A limit
// at 0 has no scale of its own; what is usual stands in.
func (d *designer) unit(quantity int) float64 {
	for _, r := range d.plan.curved {
		row := &d.plan.rows[r]
		if row.Index != quantity {
			continue
		}
		if slices.ContainsFunc(row.Bounds(), func(b constraints.Bound) bool { return b.At != 0 }) {
			return row.Scale
		}
		return d.penalty.usual[r]
	}
	return d.penalty.aimScale
}
