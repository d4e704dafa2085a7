package pce

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// Ridge fits an expansion by penalised least squares,
//
//	minimise |y - b0 - X b|^2 + lambda sum_a (W_a b_a)^2,  W_a = growth^|a|,
//
// with the constant b0 free and |a| the total degree. Weights that grow with
// the degree state that smooth functions have fast decaying coefficients; the
// fit then equals a Gaussian process with the kernel
// sum_a growth^(-2|a|) psi_a psi_a', so fewer samples than terms are no
// obstacle. Level, growth and lambda are those of least leave-one-out error. A
// trial costs one eigendecomposition of n x n: meant for up to some 500 samples.
type Ridge struct {
	Truncation
	Inputs []Input
	// Growth fixes the base of the weights; 0 chooses it within 1.25..32. 1 is
	// plain ridge regression.
	Growth float64
	// Penalty fixes lambda; 0 chooses it.
	Penalty float64
	// Terms caps the number of products; 0 means 800.
	Terms int
	// Exactly fixes the level at Degree instead of choosing it.
	Exactly bool
}

// Kind returns "weighted chaos".
func (Ridge) Kind() string { return "weighted chaos" }

const (
	leastGrowth  = 1.25
	mostGrowth   = 32
	defaultTerms = 800
	// levelGain is the relative increase of the leave-one-out error that ends the
	// way down the levels.
	levelGain = 1e-3
)

// growths are the bases tried first.
var growths = []float64{1.7, 2.5, 4, 6.5, 11}

// Fit implements surrogate.Model.
func (c Ridge) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	return asFitted(c.FitExpansion(ctx, x, y))
}

// FitExpansion is Fit with the concrete type.
func (c Ridge) FitExpansion(ctx context.Context, x [][]float64, y []float64) (*Expansion, error) {
	inputs, scaling, scaled, err := prepare(c.Truncation, c.Inputs, c.ownProblems(), x, y)
	if err != nil {
		return nil, err
	}
	most := c.Terms
	if most == 0 {
		most = defaultTerms
	}
	terms, ends := c.indices(len(inputs), most)
	if c.Exactly && len(ends) <= c.degree() {
		return nil, &surrogate.DataError{What: "more terms than the cap for the degree asked", Row: -1, Column: -1}
	}
	full := newBasis(inputs, terms)
	best, err := c.search(ctx, full, ends, x, scaled)
	if err != nil {
		return nil, err
	}
	e := &Expansion{basis: full, scaling: scaling, rank: ridgeRank}
	if end := ends[best.level]; end < len(terms) {
		e.basis = newBasis(inputs, terms[:end])
	}
	k := best.finish(e.basis, x, scaled)
	e.scaled, e.spread, e.active = k.coefficients, k, len(k.coefficients)
	e.setLeaveOneOut(y, k.looResidual, k.looDeviation)
	e.summary = fmt.Sprintf("%s, growth %.3g", termsText(e.largestDegree(), e.active), best.growth)
	e.warm = c
	if best.level > 0 { // a constant says nothing about the next fit
		c.Growth, c.Degree, c.Exactly = best.growth, best.level, true
		e.warm = c
	}
	return e, nil
}

func (c Ridge) ownProblems() []string {
	var problems []string
	if !(c.Growth == 0 || c.Growth >= 1 && c.Growth <= 1e6) {
		problems = append(problems, fmt.Sprintf("growth %g is not within 1..1e6", c.Growth))
	}
	if !(c.Penalty >= 0) || math.IsInf(c.Penalty, 0) {
		problems = append(problems, fmt.Sprintf("penalty %g is negative or not finite", c.Penalty))
	}
	if c.Terms < 0 {
		problems = append(problems, fmt.Sprintf("%d terms", c.Terms))
	}
	return problems
}

// searchSubset is the number of samples above which the growth is searched on a
// space-filling subset of that many.
const searchSubset = 150

// search finds growth first, then the level. Each step keeps the fit of least
// leave-one-out error.
func (c Ridge) search(ctx context.Context, full *basis, ends []int, x [][]float64, y []float64) (*kernelFit, error) {
	grams := newGrams(full, ends, x)
	top := len(ends) - 1
	if c.Growth > 0 {
		return c.searchLevel(ctx, grams, top, c.Growth, y)
	}
	if len(x) <= searchSubset {
		growth, err := c.searchGrowth(ctx, grams, top, y)
		if err != nil {
			return nil, err
		}
		return c.searchLevel(ctx, grams, top, growth, y)
	}
	partX, partY := make([][]float64, searchSubset), make([]float64, searchSubset)
	for i, r := range doe.SpreadRows(searchSubset, nil, x) {
		partX[i], partY[i] = x[r], y[r]
	}
	growth, err := c.searchGrowth(ctx, newGrams(full, ends, partX), top, partY)
	if err != nil {
		return nil, err
	}
	return c.searchLevel(ctx, grams, top, growth, y)
}

// searchGrowth tries the bases of the weights at the largest level, then closer
// ones around the best.
func (c Ridge) searchGrowth(ctx context.Context, grams *grams, top int, y []float64) (float64, error) {
	best, least := 0.0, math.Inf(1)
	try := func(growth float64) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		fit, err := grams.fit(top, growth, c.Penalty, y)
		if err == nil && fit.error < least {
			best, least = growth, fit.error
		}
		return err
	}
	for _, growth := range growths {
		if err := try(growth); err != nil {
			return 0, err
		}
	}
	for _, factor := range []float64{1.25, 0.8} {
		if err := try(min(max(best*factor, leastGrowth), mostGrowth)); err != nil {
			return 0, err
		}
	}
	return best, nil
}

// searchLevel goes down from the largest level as long as that does not raise
// the error.
func (c Ridge) searchLevel(ctx context.Context, grams *grams, top int, growth float64, y []float64) (*kernelFit, error) {
	best, err := grams.fit(top, growth, c.Penalty, y)
	if err != nil || c.Exactly {
		return best, err
	}
	for level := top - 1; level >= 0; level-- {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		fit, err := grams.fit(level, growth, c.Penalty, y)
		if err != nil {
			return nil, err
		}
		if fit.error > best.error*(1+levelGain)+exactError {
			break
		}
		if fit.error <= best.error+exactError {
			best = fit
		}
	}
	return best, nil
}
