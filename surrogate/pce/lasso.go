package pce

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// Lasso fits a sparse expansion: the lasso
//
//	minimise |y - b0 - X b|^2/(2n) + alpha |b|_1
//
// with alpha of least cross-validated error puts terms in the order of their
// coefficients, least squares on the first k of them gives the coefficients, and
// k and the level are those of least corrected leave-one-out error. The alpha
// best for predicting keeps more terms than the truth has, and the correction
// would refuse them all together.
type Lasso struct {
	Truncation
	Inputs []Input
	// Folds of the cross-validation; 0 means 5.
	Folds int
	// Terms caps the number of candidate products; 0 means 300.
	Terms int
	// Exactly fixes the level at Degree instead of choosing it.
	Exactly bool
	// Seed deals the folds.
	Seed int64
}

// Kind returns "sparse chaos, lasso".
func (Lasso) Kind() string { return "sparse chaos, lasso" }

const (
	defaultFolds      = 5
	defaultLassoTerms = 300
	pathSteps         = 60   // values of alpha
	pathEnd           = 1e-5 // last alpha relative to the first
)

// Fit implements surrogate.Model.
func (c Lasso) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	return asFitted(c.FitExpansion(ctx, x, y))
}

// FitExpansion is Fit with the concrete type.
func (c Lasso) FitExpansion(ctx context.Context, x [][]float64, y []float64) (*Expansion, error) {
	if c.Folds < 0 {
		return nil, &surrogate.SettingsError{Of: c.Kind(), Problems: []string{fmt.Sprintf("%d folds", c.Folds)}}
	}
	folds, terms := c.Folds, c.Terms
	if folds == 0 {
		folds = defaultFolds
	}
	if terms == 0 {
		terms = defaultLassoTerms
	}
	choose := func(design blas64.General, y []float64) []int {
		return selectByLasso(design, y, folds, c.Seed)
	}
	e, level, err := fitSparse(ctx, c.Truncation, c.Inputs, terms, c.Exactly, choose, lassoFlattery, x, y)
	if err != nil {
		return nil, err
	}
	if level > 0 { // a constant says nothing about the next fit
		c.Degree, c.Exactly = level, true
	}
	e.warm, e.summary = c, termsText(e.largestDegree(), e.active)+", lasso"
	return e, nil
}

// selectByLasso returns the columns with a coefficient at the alpha of least
// mean squared error over the folds, the largest coefficients first. The path of
// a fold ends where the columns exceed 0.8 of its samples.
func selectByLasso(design blas64.General, y []float64, folds int, seed int64) []int {
	n := len(y)
	rows := make([]int, n)
	for i := range rows {
		rows[i] = i
	}
	full := newSums(design, y, rows)
	whole := full.covariance()
	alphas := whole.alphas()
	folds = min(folds, n)
	errors := make([]float64, len(alphas))
	order := doe.Stream(seed, "lasso folds").Perm(n)
	for fold := range folds {
		held := order[fold*n/folds : (fold+1)*n/folds]
		part := newSums(design, y, held)
		training := full.without(part)
		solver := newLassoSolver(training.covariance())
		most, open := int(mostSupport*float64(training.n)), true
		for k, alpha := range alphas {
			if open = open && solver.solve(alpha, foldTolerance) && solver.size() <= most; open {
				errors[k] += training.squaredError(part, solver.b)
			} else {
				errors[k] = math.Inf(1)
			}
		}
	}
	best := 0
	for k, e := range errors {
		if e < errors[best] {
			best = k
		}
	}
	solver := newLassoSolver(whole)
	for _, alpha := range alphas[:best+1] {
		solver.solve(alpha, pathTolerance)
	}
	return solver.support()
}

// alphas returns the descending path: from the least alpha with no coefficient,
// max |Xc'y|/n, to 1e-5 of it, equally spaced in the logarithm.
func (v *covariance) alphas() []float64 {
	alphas := make([]float64, pathSteps)
	for k := range alphas {
		alphas[k] = largestSize(v.moment) * math.Pow(pathEnd, float64(k)/(pathSteps-1))
	}
	return alphas
}

// squaredError returns the sum of squared errors on the held-out samples of the
// coefficients b fitted to the others, from the sums alone:
//
//	sum (y - m - (x - mx)'b)^2, m and mx the means of the training samples.
func (s *sums) squaredError(held *sums, b []float64) float64 {
	n, nh := float64(s.n), float64(held.n)
	constant := s.y / n
	for j, c := range b {
		constant -= c * s.total[j] / n
	}
	sum := held.yy - 2*constant*held.y + nh*constant*constant
	for j, c := range b {
		if c == 0 {
			continue
		}
		sum += 2 * c * (constant*held.total[j] - held.ofY[j])
		row := held.squares[j*held.p : (j+1)*held.p]
		for k, e := range b {
			if e != 0 {
				sum += c * e * row[k]
			}
		}
	}
	return sum
}
