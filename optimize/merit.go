package optimize

import (
	"math"
	"slices"

	"rampwright/constraints"
)

// merit is the exact l1 penalty function (Nocedal & Wright eq. 17.22) that orders
// samples and judges steps:
//
//	sign aim/aimScale + sum_r weight_r excess_r
//
// with excess_r the scaled violation of row r. It is exact while every weight
// stays above the scaled multiplier of its row (thm. 17.3). Equations from memory.
type merit struct {
	sign     float64
	aimScale float64
	// usual is, by row, how far its quantity usually lies from the limit, at least
	// Row.Scale: a limit at 0 says nothing of what a large violation is.
	usual  []float64
	weight []float64 // by row
}

// leastWeight is the weight of a violation as large as is usual, before prices
// are known.
const leastWeight = 10

// withoutAim is the scaled aim of a sample that has none.
const withoutAim = 1e3

// newMerit takes its scales from the samples: for the aim the distance of the
// median from the best, and for each row the median distance of its quantity from
// the nearer bound. Medians, because one sample far out would make every gain near
// the optimum look small.
func newMerit(p *plan, samples []*sample) merit {
	m := merit{sign: p.objective.sign(), aimScale: 1, usual: make([]float64, len(p.rows)), weight: make([]float64, len(p.rows))}
	if spread := m.spread(samples); spread > 0 {
		m.aimScale = spread
	}
	for r := range p.rows {
		row := &p.rows[r]
		var distances []float64
		for _, s := range samples {
			distances = append(distances, math.Abs(row.Margin(s.evaluation.Values[row.Index])))
		}
		m.usual[r] = row.Scale
		if middle, _ := middle(distances); middle > row.Scale {
			m.usual[r] = middle
		}
		m.weight[r] = leastWeight * row.Scale / m.usual[r]
	}
	return m
}

// spread is the distance of the median aim from the best, NaN without any.
func (m *merit) spread(samples []*sample) float64 {
	aims := make([]float64, len(samples))
	for i, s := range samples {
		aims[i] = m.sign * s.aim
	}
	median, least := middle(aims)
	return median - least
}

// rescale widens the scale of the aim where the samples have turned out to spread
// far more: a wild aim far outside the limits would outweigh them.
func (m *merit) rescale(samples []*sample) {
	if spread := m.spread(samples); spread > rescaleFrom*m.aimScale {
		m.aimScale = spread
	}
}

// rescaleFrom is the growth of the spread that is followed.
const rescaleFrom = 2

// middle returns the upper median and the least of the finite values, NaN without
// any.
func middle(values []float64) (median, least float64) {
	finite := slices.DeleteFunc(slices.Clone(values), func(v float64) bool { return math.IsNaN(v) || math.IsInf(v, 0) })
	if len(finite) == 0 {
		return math.NaN(), math.NaN()
	}
	slices.Sort(finite)
	return finite[len(finite)/2], finite[0]
}

// of is the merit of an aim, NaN where there is none, and the excess of the rows,
// NaN where a quantity is missing.
func (m *merit) of(aim float64, excess []float64) float64 {
	sum := m.sign * aim / m.aimScale
	if math.IsNaN(aim) {
		sum = withoutAim
	}
	for r, e := range excess {
		if math.IsNaN(e) {
			sum += leastWeight * constraints.MissingViolation
		} else {
			sum += m.weight[r] * e
		}
	}
	return sum
}

// follow moves the weights after a local search that leads from one sample to a
// solution: twice the scaled multiplier, approached from above by a factor of
// weightFade a step, so that a guess too high wears off; and where the search
// gives up aim to lower the violation, high enough that the merit falls by at
// least half of what the violation saves (eq. 18.36).
func (m *merit) follow(p *plan, from *sample, to *solution) {
	for r, price := range to.prices {
		if from.excess[r] == 0 {
			m.weight[r] /= weightFade
		}
		m.weight[r] = math.Max(m.weight[r], 2*price*p.rows[r].Scale/m.aimScale)
	}
	saved, loss := 0.0, m.sign*(to.aim-from.aim)/m.aimScale
	for r, e := range from.excess {
		if change := m.weight[r] * (e - to.excess[r]); !math.IsNaN(change) {
			saved += change
		}
	}
	if !(saved > 0 && loss > saved/2) {
		return
	}
	for r, e := range from.excess {
		if e > to.excess[r] {
			m.weight[r] *= 2 * loss / saved
		}
	}
}

// weightFade was chosen among 1, 2 and 4 on constrained problems of the
// literature: heavy weights make the steps creep along curved limits.
const weightFade = 4
