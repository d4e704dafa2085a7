package pce

import (
	"math"
	"slices"
)

// Truncation says which products of polynomials an expansion may use. The
// product of degrees a_1..a_d belongs to level p when
//
//	(a_1^q + .. + a_d^q)^(1/q) <= p   (slack 1e-9)
//
// the hyperbolic index sets of Blatman & Sudret (2011); q = 1 is the total
// degree. The zero value is total degree up to 10 without other restriction.
type Truncation struct {
	// Degree is the largest level p; 0 means 10, and at most 30 is used.
	Degree int
	// Norm is q, in (0, 1]; 0 means 1. Smaller favours low interaction.
	Norm float64
	// Interactions is the largest number of inputs in one product; 0 means all.
	Interactions int
}

const (
	defaultDegree = 10
	levelSlack    = 1e-9
)

func (t Truncation) degree() int {
	if t.Degree == 0 {
		return defaultDegree
	}
	return min(t.Degree, degreeCap)
}

// index holds the degrees of one product, one an input.
type index []uint8

func (a index) total() int {
	sum := 0
	for _, k := range a {
		sum += int(k)
	}
	return sum
}

// indices lists the products of d inputs level by level, within a level in
// lexicographic order, and the number of products up to and including each
// level. It stops before the level that would exceed most products; level 0,
// the constant, is always there.
func (t Truncation) indices(d, most int) (all []index, ends []int) {
	q := t.Norm
	if q == 0 {
		q = 1
	}
	interactions := t.Interactions
	if interactions == 0 {
		interactions = d
	}
	power := func(v float64) float64 {
		if q == 1 {
			return v
		}
		return math.Pow(v, q)
	}
	for level := 0; level <= t.degree(); level++ {
		outer, inner, room := power(float64(level)+levelSlack), power(float64(level-1)+levelSlack), most-len(all)
		if level == 0 {
			inner, room = -1, 1
		}
		fresh := shell(d, interactions, inner, outer, power, room)
		if fresh == nil {
			break
		}
		all = append(all, fresh...)
		ends = append(ends, len(all))
	}
	return all, ends
}

// shell lists the indices with inner < sum power(a_j) <= outer, or nil when
// there are more than most of them.
func shell(d, interactions int, inner, outer float64, power func(float64) float64, most int) []index {
	var found []index
	current := make(index, d)
	complete := true
	var walk func(j, left int, sum float64)
	walk = func(j, left int, sum float64) {
		if !complete {
			return
		}
		if j == d {
			if sum > inner {
				found = append(found, slices.Clone(current))
				complete = len(found) <= most
			}
			return
		}
		for k := 0; k <= degreeCap; k++ {
			next, room := sum, left
			if k > 0 {
				next, room = sum+power(float64(k)), left-1
			}
			if next > outer || room < 0 {
				break
			}
			current[j] = uint8(k)
			walk(j+1, room, next)
		}
		current[j] = 0
	}
	walk(0, interactions, 0)
	if !complete {
		return nil
	}
	return found
}
