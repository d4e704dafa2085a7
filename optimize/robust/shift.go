package robust

import (
	"math"
	"slices"

	"rampwright/problems"
)

// Shift is how far the sides of a limit are moved inside, in the quantity's unit.
type Shift struct {
	Limit     problems.Limit
	Low, High float64 // 0 or more; 0 where the side is absent
}

// shifted is the limit moved inside.
func (s *Shift) shifted() problems.Limit {
	l := s.Limit
	l.Low += s.Low
	l.High -= s.High
	return l
}

// unshifted are the limits as they stand.
func unshifted(limits []limited) []Shift {
	list := make([]Shift, len(limits))
	for i := range limits {
		list[i].Limit = limits[i].Limit
	}
	return list
}

// applied are the limits moved inside.
func applied(shifts []Shift) []problems.Limit {
	list := make([]problems.Limit, len(shifts))
	for i := range shifts {
		list[i] = shifts[i].shifted()
	}
	return list
}

// shift moves the sides of a limit inside by what a share alpha of failing draws
// asks for. Failures of the other side of a limit with two come out of the same
// share, at most half of it.
func (l *limited) shift(s *Shift, rows [][]float64, nominal []float64, alpha float64) {
	low, high := l.side(rows, nominal, -1), l.side(rows, nominal, 1)
	s.Low = low.shift(alpha - min(high.failing(l.High), alpha/2))
	s.High = high.shift(alpha - min(low.failing(-l.Low), alpha/2))
}

// side is one side of a limit over the draws, all values with a sign so that high
// is bad; a draw without a value is the worst.
type side struct {
	present bool
	nominal float64
	sorted  []float64 // the best first; +Inf without a value
	draws   int       // with those in which the limit does not apply
}

// side reads the side of sign -1 (lower) or 1 (upper).
func (l *limited) side(rows [][]float64, nominal []float64, sign float64) side {
	bound := l.High
	if sign < 0 {
		bound = l.Low
	}
	if math.IsInf(bound, 0) {
		return side{}
	}
	s := side{present: true, nominal: l.worst(nominal, sign), draws: len(rows)}
	for _, row := range rows {
		if v := l.worst(row, sign); !math.IsInf(v, -1) {
			s.sorted = append(s.sorted, v)
		}
	}
	slices.Sort(s.sorted)
	return s
}

// worst is the worst member of one row: +Inf where one has no value, -Inf where
// none applies.
func (l *limited) worst(row []float64, sign float64) float64 {
	worst := math.Inf(-1)
	for i := range l.rows {
		switch v := row[l.rows[i].Index]; {
		case math.IsNaN(v):
			return math.Inf(1)
		case !math.IsInf(v, 1):
			worst = math.Max(worst, sign*v)
		}
	}
	return worst
}

// failing is the share of draws beyond a bound, signed as the values.
func (s *side) failing(bound float64) float64 {
	if !s.present {
		return 0
	}
	beyond := len(s.sorted) - upTo(s.sorted, bound)
	return float64(beyond) / float64(s.draws)
}

// upTo returns how many sorted values do not pass the bound.
func upTo(sorted []float64, bound float64) int {
	n, _ := slices.BinarySearchFunc(sorted, bound, func(v, bound float64) int {
		if v <= bound {
			return -1
		}
		return 1
	})
	return n
}

// shift is how far the nominal value must stay inside so that a share alpha of the
// draws lies beyond. Where more draws than that have no value, the share is taken
// of those that have one: what remains is the search's to avoid. A shift within the
// rounding of the value is none.
func (s *side) shift(alpha float64) float64 {
	if !s.present || len(s.sorted) == 0 {
		return 0
	}
	answered := upTo(s.sorted, math.MaxFloat64)
	allowed := int(alpha * float64(s.draws))
	place := len(s.sorted) - 1 - allowed
	if place >= answered {
		place = answered - 1 - int(alpha*float64(answered))
	}
	if place < 0 || math.IsInf(s.nominal, 0) {
		return 0
	}
	if !differs(s.sorted[place], s.nominal) {
		return 0
	}
	return math.Max(0, s.sorted[place]-s.nominal)
}
