package optimize

import (
	"math"
	"slices"
)

// success estimates the probability that the model gives every value a search
// needs at a point, from where it did and did not (kernel regression, Nadaraya
// 1964 and Watson 1964, from memory) with one more sample everywhere that
// succeeded,
//
//	p(u) = (1 + sum_i w_i s_i)/(1 + sum_i w_i),  w_i = exp(-|u - u_i|^2/(2 l^2))
//
// s_i 1 or 0, l the median distance of a sample from its nearest neighbour. A
// value that is missing is never made up: fits leave the sample out, and a point
// near it is worth less.
type success struct {
	samples []*sample
	failed  []bool
	reach   float64
}

// newSuccess learns from samples; nil where none failed.
func (p *plan) newSuccess(samples []*sample) *success {
	s := &success{samples: samples, failed: make([]bool, len(samples))}
	any := false
	for i, one := range samples {
		s.failed[i] = p.lacks(one)
		any = any || s.failed[i]
	}
	if !any {
		return nil
	}
	if s.reach = spacing(samples); !(s.reach > 0) {
		s.reach = apart
	}
	return s
}

// spacing is the median distance of a sample from its nearest neighbour.
func spacing(samples []*sample) float64 {
	nearest := make([]float64, 0, len(samples))
	for i, a := range samples {
		least := math.Inf(1)
		for k, b := range samples {
			if k != i {
				least = math.Min(least, distance(a.u, b.u))
			}
		}
		nearest = append(nearest, least)
	}
	median, _ := middle(nearest)
	return median
}

// lacks reports whether a value a search needs is missing at a sample.
func (p *plan) lacks(s *sample) bool {
	for _, i := range p.fitted {
		if math.IsNaN(s.values[i]) {
			return true
		}
	}
	return false
}

// at is the probability at u; 1 for a model that never failed.
func (s *success) at(u []float64) float64 {
	if s == nil {
		return 1
	}
	worked, all := 1.0, 1.0
	for i, one := range s.samples {
		d := distance(u, one.u) / s.reach
		w := math.Exp(-d * d / 2)
		all += w
		if !s.failed[i] {
			worked += w
		}
	}
	return worked / all
}

// leastSuccess is the probability below which the search over the whole box stays
// away: a single failure among successes does not bring it there.
const leastSuccess = 0.5

// amongFailures reports whether most of the samples nearest to u have failed, by
// the nearest-neighbour rule (Cover & Hart 1967, from memory): a step there would
// most likely fail as well, while failures by chance rarely stand together.
func (d *designer) amongFailures(u []float64) bool {
	if d.success == nil {
		return false
	}
	var failed [failureNeighbours]bool
	var gaps [failureNeighbours]float64
	for i := range gaps {
		gaps[i] = math.Inf(1)
	}
	for _, s := range d.training {
		gap, lacks := distance(s.u, u), d.plan.lacks(s)
		for i := range gaps {
			if gap < gaps[i] {
				gap, gaps[i], lacks, failed[i] = gaps[i], gap, failed[i], lacks
			}
		}
	}
	n := 0
	for _, f := range failed {
		if f {
			n++
		}
	}
	return 2*n > failureNeighbours
}

const failureNeighbours = 3

// nearestFailure is the failed sample nearest to u.
func (d *designer) nearestFailure(u []float64) *sample {
	var nearest *sample
	for _, s := range d.training {
		if d.plan.lacks(s) && (nearest == nil || distance(s.u, u) < distance(nearest.u, u)) {
			nearest = s
		}
	}
	return nearest
}

// cutShort keeps a search on the center's side of a plane across a share of the way
// to a failure: it may slide along the border of what the model can compute, and
// closes in on it. It reports whether there was none yet for this failure.
func (s *searcher) cutShort(center, failure *sample, share float64) bool {
	if slices.Contains(s.failures, failure) {
		return false
	}
	s.failures = append(s.failures, failure)
	b := 0.0
	for j, f := range failure.u {
		normal := f - center.u[j]
		s.cuts.A = append(s.cuts.A, normal)
		b += normal * (center.u[j] + share*normal)
	}
	s.cuts.B = append(s.cuts.B, b)
	return true
}

// halfway is the share of the way to a failure that a step goes.
const halfway = 0.5
