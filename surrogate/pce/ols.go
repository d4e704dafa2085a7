package pce

import (
	"context"
	"math"

	"rampwright/surrogate"
)

// OLS fits an expansion by ordinary least squares. The level of the truncation
// is the one with the least leave-one-out error among those with at least
// SamplesPerTerm samples a term.
type OLS struct {
	Truncation
	Inputs []Input
	// SamplesPerTerm is the oversampling guard; 0 means 2 (common practice).
	// At least 1 is used.
	SamplesPerTerm float64
	// Exactly fixes the level at Degree instead of choosing it.
	Exactly bool
}

// Kind returns "polynomial chaos".
func (OLS) Kind() string { return "polynomial chaos" }

// Fit implements surrogate.Model. One Householder QR of the largest level
// serves all of them, because the levels are nested column by column. Levels
// whose columns depend on one another on these samples (collinear or repeated
// points), or that a single sample alone determines, are passed over; the
// constant always remains, unless Exactly is set, which then ends in a
// *surrogate.DataError.
func (c OLS) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	return asFitted(c.FitExpansion(ctx, x, y))
}

// FitExpansion is Fit with the concrete type.
func (c OLS) FitExpansion(ctx context.Context, x [][]float64, y []float64) (*Expansion, error) {
	var extra []string
	if !(c.SamplesPerTerm >= 0) {
		extra = []string{"samples per term is negative"}
	}
	inputs, scaling, scaled, err := prepare(c.Truncation, c.Inputs, extra, x, y)
	if err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	ratio := c.SamplesPerTerm
	if ratio == 0 {
		ratio = 2
	}
	most := int(float64(len(x)) / math.Max(ratio, 1))
	terms, ends := c.indices(len(inputs), most)
	if c.Exactly && len(ends) <= c.degree() {
		return nil, &surrogate.DataError{What: "too few samples for the degree asked", Row: -1, Column: -1}
	}
	full := newBasis(inputs, terms)
	factors := factorise(full.design(x))
	level, ok := factors.choose(ends, scaled, c.Exactly)
	if !ok {
		return nil, &surrogate.DataError{What: "the samples do not determine an expansion of the degree asked", Row: -1, Column: -1}
	}
	e := &Expansion{basis: full, scaling: scaling, warm: c}
	if ends[level] < len(terms) {
		e.basis = newBasis(inputs, terms[:ends[level]])
	}
	e.solve(factors.leading(ends[level], scaled), y)
	e.summary = termsText(e.largestDegree(), e.active)
	return e, nil
}

// solve takes coefficients, leave-one-out and deviations from a regression on
// all terms of the basis.
func (e *Expansion) solve(r *regression, y []float64) {
	e.regression, e.spread, e.scaled, e.active = r, r, r.coefficients, len(r.coefficients)
	e.setLeaveOneOut(y, r.looResidual, r.looDeviation)
}
