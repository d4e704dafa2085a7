package robust

import (
	"math"

	"rampwright/constraints"
	"rampwright/problems"
)

// Probability is how often a limit holds. A limit on a group holds where every
// member keeps it.
type Probability struct {
	Limit problems.Limit
	// Affected is false for a limit that no tolerance moves: Pass is then 1 or 0,
	// without error.
	Affected   bool
	Pass       float64
	Error      float64 // standard error from the number of draws
	Unanswered int     // draws in which it was asked of a quantity without a value: not held
}

// limited is a limit with its rows.
type limited struct {
	problems.Limit
	rows []constraints.Row
}

// limitedBy expands limits into rows, each limit keeping its own.
func limitedBy(quantities []problems.Quantity, limits []problems.Limit) ([]limited, error) {
	var list []limited
	for _, limit := range limits {
		if math.IsInf(limit.Low, -1) && math.IsInf(limit.High, 1) {
			continue
		}
		rows, err := constraints.Rows(quantities, []problems.Limit{limit})
		if err != nil {
			return nil, err
		}
		list = append(list, limited{limit, rows})
	}
	return list, nil
}

// verdict is how a limit stands in one draw.
type verdict int

const (
	held verdict = iota
	broken
	unanswered
)

// judge judges a limit on one row of draws.
func (l *limited) judge(row []float64) verdict {
	worst := held
	for i := range l.rows {
		r := &l.rows[i]
		switch v := row[r.Index]; {
		case math.IsNaN(v):
			worst = max(worst, unanswered)
		case math.IsInf(v, 1): // does not apply
		case r.Margin(v) < -constraints.Rounding*r.Scale:
			worst = max(worst, broken)
		}
	}
	return worst
}

// margin is the least margin of the limit in one row of draws, in the quantity's
// unit: NaN where a member has no value, +Inf where none applies.
func (l *limited) margin(row []float64) float64 {
	least := math.Inf(1)
	for i := range l.rows {
		switch v := row[l.rows[i].Index]; {
		case math.IsNaN(v):
			return v
		case !math.IsInf(v, 1):
			least = math.Min(least, l.rows[i].Margin(v))
		}
	}
	return least
}

// margins describes the margin of each limit over draws.
func margins(limits []limited, rows [][]float64, nominal []float64) []Summary {
	list := make([]Summary, len(limits))
	for i := range limits {
		values := make([]float64, len(rows))
		for k, row := range rows {
			values[k] = limits[i].margin(row)
		}
		list[i] = summarise(values, limits[i].margin(nominal))
	}
	return list
}

// affected reports whether some draw moves a quantity of the limit from its value
// as drawn.
func (l *limited) affected(rows [][]float64, nominal []float64) bool {
	for i := range l.rows {
		q := l.rows[i].Index
		for _, row := range rows {
			if differs(row[q], nominal[q]) {
				return true
			}
		}
	}
	return false
}

// passes counts how often each limit, and all of them at once, hold over draws.
func passes(limits []limited, rows [][]float64, nominal []float64) (each []Probability, joint Probability) {
	each = make([]Probability, len(limits))
	together := make([]bool, len(rows))
	for k := range together {
		together[k] = true
	}
	for i := range limits {
		l := &limits[i]
		counts := [unanswered + 1]int{}
		for k, row := range rows {
			v := l.judge(row)
			counts[v]++
			together[k] = together[k] && v == held
		}
		each[i] = NewProbability(counts[held], len(rows))
		each[i].Limit, each[i].Unanswered, each[i].Affected = l.Limit, counts[unanswered], l.affected(rows, nominal)
		if !each[i].Affected {
			each[i].Error = 0
		}
		joint.Affected = joint.Affected || each[i].Affected
	}
	all := 0
	for _, ok := range together {
		if ok {
			all++
		}
	}
	affected := joint.Affected
	joint = NewProbability(all, len(rows))
	joint.Affected = affected
	return each, joint
}

// NewProbability is a share of n draws with its standard error,
//
//	sqrt(p (1 - p)/n) with (k + 1/2)/(n + 1) for p,
//
// the mean of Jeffreys' posterior (Brown, Cai & DasGupta 2001, from memory), which
// is not zero where no draw failed.
func NewProbability(k, n int) Probability {
	p := (float64(k) + 0.5) / (float64(n) + 1)
	return Probability{Pass: float64(k) / float64(n), Error: math.Sqrt(p * (1 - p) / float64(n))}
}
