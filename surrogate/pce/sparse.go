package pce

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"rampwright/surrogate"
)

// selector proposes terms of a design matrix (column 0 the constant) for
// standardised outputs, the most important first. Every leading part of the list
// is a candidate.
type selector func(design blas64.General, y []float64) (order []int)

// mostSupport is the largest share of the samples that a sparse expansion may
// have as terms.
const mostSupport = 0.8

// alwaysTried is the level up to which levels without gain do not end the way up.
const alwaysTried = 4

// What the correction leaves. At fresh points of published test functions that
// 40 samples do not explain, root mean square errors were 1.2 (least angle) and
// 1.3 (lasso, which has seen the samples once more in its folds) times the
// corrected leave-one-out errors in the median, those of the other kinds 0.95 to
// 1.17 times their own. The factors put the kinds on one footing.
const (
	leastAngleFlattery = 1.15
	lassoFlattery      = 1.3
)

// sparseFit is a candidate: least squares on selected columns of a level.
type sparseFit struct {
	level   int
	columns []int // the constant first
	factors *qr
	error   float64 // corrected leave-one-out, root mean square
}

// fitSparse fits least squares on selected terms, level by level, and keeps the
// level and support of least corrected leave-one-out error (Blatman & Sudret
// 2011); beyond level 4 it stops after two levels without gain. The levels up to
// there are always tried: x^4 - c x^2 may resemble no lower one.
func fitSparse(ctx context.Context, t Truncation, inputs []Input, most int, exactly bool, choose selector, flattery float64, x [][]float64, y []float64) (*Expansion, int, error) {
	var extra []string
	if most < 0 {
		extra = []string{fmt.Sprintf("%d terms", most)}
	}
	resolved, scaling, scaled, err := prepare(t, inputs, extra, x, y)
	if err != nil {
		return nil, 0, err
	}
	if most == 0 {
		most = defaultTerms
	}
	terms, ends := t.indices(len(resolved), most)
	full := newBasis(resolved, terms)
	design := full.design(x)
	first := 0
	if exactly {
		first = len(ends) - 1
	}
	var best *sparseFit
	for level := first; level < len(ends) && (best == nil || level <= max(best.level+2, alwaysTried)); level++ {
		if err := ctx.Err(); err != nil {
			return nil, 0, err
		}
		if fit := trySupport(design, ends[level], level, choose, scaled); best == nil || fit.error < best.error && best.error > exactError {
			best = fit
		}
	}
	return best.expansion(full, scaling, scaled, y, flattery), best.level, nil
}

// trySupport selects among the first p columns and returns the best support.
func trySupport(design blas64.General, p, level int, choose selector, y []float64) *sparseFit {
	columns := []int{0}
	if p > 1 {
		columns = append(columns, choose(leadingColumns(design, p), y)...)
	}
	columns = columns[:min(len(columns), max(1, int(mostSupport*float64(len(y)))))]
	factors := factorise(pick(design, columns))
	errors, factor := factors.looErrors(y), factors.corrections()
	size, least := 1, math.Inf(1)
	for k, e := range errors {
		if corrected := e * math.Sqrt(factor[k]); corrected < least && least > exactError {
			size, least = k+1, corrected
		}
	}
	return &sparseFit{level: level, columns: columns[:size], factors: factors, error: least}
}

// expansion builds the fitted expansion on the selected columns. Its terms were
// selected on the samples they are fitted to, so plain leave-one-out flatters
// it: residuals are those of the corrected error (times sqrt(T)) and of the
// flattery that the correction leaves, and the variance is T RSS/n.
func (f *sparseFit) expansion(full *basis, scaling surrogate.Scaling, scaled, y []float64, flattery float64) *Expansion {
	keep := make([]bool, len(full.terms))
	for _, t := range f.columns {
		keep[t] = true
	}
	terms, from := closed(full.terms, full, keep)
	place := make(map[int]int, len(from))
	for to, t := range from {
		place[t] = to
	}
	size := len(f.columns)
	r := f.factors.leading(size, scaled)
	if factor := f.factors.corrections()[size-1]; size > 1 && !math.IsInf(factor, 1) {
		r.inflate(flattery*math.Sqrt(factor), math.Sqrt(factor*float64(len(y)-size)/float64(len(y))))
	}
	e := &Expansion{basis: newBasis(full.inputs, terms), scaling: scaling, spread: r, active: size, rank: sparseRank}
	e.scaled = make([]float64, len(terms))
	for k, t := range f.columns {
		r.columns = append(r.columns, place[t])
		e.scaled[place[t]] = r.coefficients[k]
	}
	e.setLeaveOneOut(y, r.looResidual, r.looDeviation)
	return e
}

func leadingColumns(m blas64.General, p int) blas64.General {
	return blas64.General{Rows: m.Rows, Cols: p, Stride: m.Stride, Data: m.Data}
}

// pick returns a copy of the given columns.
func pick(m blas64.General, columns []int) blas64.General {
	out := blas64.General{Rows: m.Rows, Cols: len(columns), Stride: len(columns), Data: make([]float64, m.Rows*len(columns))}
	for i := range m.Rows {
		for k, c := range columns {
			out.Data[i*out.Stride+k] = m.Data[i*m.Stride+c]
		}
	}
	return out
}
