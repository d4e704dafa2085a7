package optimize

import (
	"context"
	"fmt"
	"math"
)

// round is what is evaluated side by side, being gathered. Its points stand apart
// from each other and, but for steps, from every sample.
type round struct {
	*designer
	points []*proposal
}

// fill adds to the points that matter most what else is worth a run beside them, up
// to Settings.Batch: a bolder step where the trust region held the step back; while
// the whole box is searched, further points of expected improvement; a more timid
// step; and scouts around the place where the step is expected to land, so that the
// next round finds the surrogates good there. Gains and slopes of a round are then
// learned together, and about half as many rounds lead to an optimum with four points
// a round (measured, see BenchmarkEvaluationsToTheOptimum). Probes of a center at
// rest stay alone: they confirm, and more of them would teach nothing.
func (d *designer) fill(ctx context.Context, points []*proposal) ([]*proposal, error) {
	r := &round{designer: d}
	for _, p := range points {
		if r.room() > 0 && r.distinct(p.u) {
			r.points = append(r.points, p)
		}
	}
	step := r.step()
	if step == nil && r.points[0].purpose == probing {
		return r.points, nil
	}
	fillers := []func(context.Context, *proposal) error{r.bolder, r.improvements, r.timid}
	for _, add := range fillers {
		if err := add(ctx, step); err != nil {
			return nil, err
		}
	}
	r.scoutsAhead(step)
	return r.points, nil
}

// step is the exploitation step of the round, nil without one.
func (r *round) step() *proposal {
	for _, p := range r.points {
		if p.purpose == stepping {
			return p
		}
	}
	return nil
}

// room is how many points the round has left.
func (r *round) room() int { return r.settings.Batch - len(r.points) }

// bolder adds the step in a region twice as wide where the step ends at the border
// of its own; where failures cut it short, one that goes closer to them.
func (r *round) bolder(ctx context.Context, step *proposal) error {
	switch {
	case step == nil || r.room() < 1:
		return nil
	case step.cut:
		return r.addStep(ctx, step.radius, 1.5*halfway)
	case r.length(step) <= heldBack*step.radius:
		return nil
	}
	return r.addStep(ctx, math.Min(1, 2*step.radius), halfway)
}

// timid adds the step in a quarter of the region where there is room for it beside a
// scout a variable: a step too long costs rounds until the region has shrunk. Where
// failures cut the step short, it adds one that keeps further from them.
func (r *round) timid(ctx context.Context, step *proposal) error {
	if step == nil || r.room() < 1 {
		return nil
	}
	if step.cut {
		return r.addStep(ctx, step.radius, halfway/2)
	}
	radius := r.radius / 4
	if r.room() <= r.plan.dimension() || radius < leastRadius || r.length(step) <= radius {
		return nil
	}
	return r.addStep(ctx, radius, halfway)
}

// heldBack is the share of the trust region from which on a step was held back by it.
const heldBack = 0.9

func (r *round) addStep(ctx context.Context, radius, share float64) error {
	p, _, err := r.stepOf(ctx, r.anchor.sample, radius, share)
	if err == nil && r.distinct(p.u) && r.fresh(p.u) {
		r.points = append(r.points, p)
	}
	return err
}

// length of a step, in the measure of the trust region.
func (r *round) length(step *proposal) float64 { return extent(step.u, r.anchor.sample.u) }

// improvements adds points of largest expected improvement, each as if the earlier
// ones of the round had given what is predicted of them (kriging believer:
// Ginsbourger, Le Riche & Carraro 2010, from memory), up to improvedShare of the
// batch.
func (r *round) improvements(ctx context.Context, _ *proposal) error {
	believed := 0
	for r.unexplained && len(r.points) < int(improvedShare*float64(r.settings.Batch)) {
		for _, p := range r.points[believed:] {
			if err := r.acquisition.believe(ctx, p.u); err != nil {
				return err
			}
		}
		believed = len(r.points)
		p, err := r.improveOn(ctx, r.acquisition, r.points)
		if err != nil || p == nil {
			return err
		}
		r.points = append(r.points, p)
	}
	return nil
}

// improvedShare was chosen among 1/2, 3/4 and 1 on problem g08.
const improvedShare = 0.75

// scoutsAhead fills the round with scouts around where the step lands, within half
// its length; without a step around the first point: as far as it scouts itself, or
// as far as scouts go.
func (r *round) scoutsAhead(step *proposal) {
	at, radius := r.points[0].u, math.Min(r.radius, scoutRadius)
	switch {
	case step != nil:
		at, radius = step.u, math.Min(scoutRadius, r.length(step)/2)
	case r.points[0].purpose == scouting:
		at, radius = r.anchor.sample.u, r.points[0].radius
	}
	r.points = append(r.points, r.scoutsIn(&cloud{
		at: at, reach: r.evenReach(at, math.Max(leastScout, radius)),
		purpose: fmt.Sprintf("round %d", r.counts.Infill), beside: r.points,
	}, r.room())...)
}

// distinct reports whether u stands apart from the points of the round.
func (r *round) distinct(u []float64) bool {
	for _, p := range r.points {
		if distance(p.u, u) < apart {
			return false
		}
	}
	return true
}

// evenReach is how far scouts go along each variable around a point: as far as the
// radius along those to which aim and limits respond least, less along the others,
// so that each changes them alike; leastReach of the radius at least.
//
//	reach_j = radius min(1, s/s_j),  s_j = max_k |dm_k/du_j|/unit_k,  s = geometric mean of s_j
func (d *designer) evenReach(at []float64, radius float64) []float64 {
	steepness := make([]float64, len(at))
	slopes := make([]float64, len(at))
	for k := range d.near.fits {
		fit := &d.near.fits[k]
		if !fit.usable() {
			continue
		}
		fit.gradient(slopes, at)
		addScaled(slopes, 1, d.anchor.tilt[k])
		for j, slope := range slopes {
			steepness[j] = math.Max(steepness[j], math.Abs(slope)/d.unit(fit.Quantity))
		}
	}
	mean := 0.0
	for _, s := range steepness {
		mean += math.Log(math.Max(s, tiny)) / float64(len(at))
	}
	reach := make([]float64, len(at))
	for j, s := range steepness {
		reach[j] = radius * math.Max(leastReach, math.Min(1, math.Exp(mean)/math.Max(s, tiny)))
	}
	return reach
}

const leastReach = 0.01

// extent is the largest difference of two points along a variable.
func extent(a, b []float64) float64 {
	most := 0.0
	for j := range a {
		most = math.Max(most, math.Abs(a[j]-b[j]))
	}
	return most
}
