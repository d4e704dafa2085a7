package optimize

import (
	"context"
	"slices"
	"sort"

	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// surfaces are the surrogates of all fitted quantities on one set of samples.
type surfaces struct {
	fits    []Fit
	members []*sample
	chosen  []*sample // the members when the kinds were chosen
}

// fitWide fits over the training samples of the whole box; the kinds are chosen
// once and again when the samples have grown by a quarter.
func (d *designer) fitWide(ctx context.Context) error {
	fitted, err := d.fitSurfaces(ctx, wideKinds(d.settings.Seed), d.wide, d.spread(), 0.8, nil)
	d.wide = fitted
	return err
}

// mostWide bounds the samples of the wide surfaces, whose cost grows with the
// cube of their number: they guide the search, and the near ones decide.
const mostWide = 300

// spread returns the training samples, or a space-filling choice of mostWide.
func (d *designer) spread() []*sample {
	if len(d.training) <= mostWide {
		return slices.Clone(d.training)
	}
	points := make([][]float64, len(d.training))
	for i, s := range d.training {
		points[i] = s.u
	}
	rows := doe.SpreadRows(mostWide, nil, points)
	slices.Sort(rows)
	members := make([]*sample, len(rows))
	for k, i := range rows {
		members[k] = d.training[i]
	}
	return members
}

// fitNear fits over the training samples nearest to a center, without one of
// them where asked; the anchor is set anew where the surfaces changed.
func (d *designer) fitNear(ctx context.Context, center, without *sample) error {
	members := d.nearest(center, without)
	polynomials := d.polynomials(ctx, without)
	fitted, err := d.fitSurfaces(ctx, nearKinds(d.settings.Seed), d.near, members, 0.5, polynomials)
	if err != nil {
		return err
	}
	if fitted != d.near {
		d.near, d.anchor = fitted, nil
	}
	if d.anchor == nil || d.anchor.sample != center {
		d.anchor = newAnchor(center, d.near.fits, nil)
	}
	return nil
}

// fitSurfaces fits on the members: not at all where nothing changed, from the
// earlier hyperparameters where at least the share given of the members stood
// there when the kinds were chosen, by a new choice otherwise.
func (d *designer) fitSurfaces(ctx context.Context, kinds []surrogate.Model, before *surfaces, members []*sample, share float64, known []*Fit) (*surfaces, error) {
	if before != nil && common(before.members, members) == len(members) && len(members) == len(before.members) {
		return before, nil
	}
	next := &surfaces{members: members, chosen: members}
	var earlier []Fit
	if before != nil && float64(common(before.chosen, members)) >= share*float64(len(members)) {
		earlier, next.chosen = before.fits, before.chosen
	}
	fits, err := d.plan.fitAll(ctx, d.settings.Jobs, kinds, members, earlier, known, known != nil)
	if err != nil {
		return before, err
	}
	next.fits = fits
	return next, nil
}

// neighbours is how many samples the near surfaces are fitted to: the terms of a
// full quadratic in n variables, and ten. Twice the terms follow an optimum among
// widely spread values too loosely (measured on problem 100 of Hock &
// Schittkowski and the tension spring).
func neighbours(n int) int { return (n+1)*(n+2)/2 + 10 }

// nearest returns the training samples nearest to the center, in the order they
// were evaluated.
func (d *designer) nearest(center, without *sample) []*sample {
	order := make([]int, 0, len(d.training))
	for i, s := range d.training {
		if s != without {
			order = append(order, i)
		}
	}
	sort.SliceStable(order, func(a, b int) bool {
		return distance(d.training[order[a]].u, center.u) < distance(d.training[order[b]].u, center.u)
	})
	order = order[:min(len(order), neighbours(d.plan.dimension()))]
	sort.Ints(order)
	members := make([]*sample, len(order))
	for k, i := range order {
		members[k] = d.training[i]
	}
	return members
}

// common counts the samples in both lists.
func common(a, b []*sample) int {
	in := make(map[*sample]bool, len(a))
	for _, s := range a {
		in[s] = true
	}
	n := 0
	for _, s := range b {
		if in[s] {
			n++
		}
	}
	return n
}
