package optimize

import "math"

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
	s.reach, _ = middle(nearest)
	if !(s.reach > 0) {
		s.reach = apart
	}
	return s
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
