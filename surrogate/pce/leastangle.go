package pce

import (
	"context"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"rampwright/surrogate"
)

// LeastAngle fits a sparse expansion: least-angle regression (Efron, Hastie,
// Johnstone & Tibshirani 2004) puts the terms in order, least squares on the
// first k of them gives the coefficients, and k and the level are those of
// least corrected leave-one-out error (hybrid least angle; Blatman & Sudret
// 2011).
type LeastAngle struct {
	Truncation
	Inputs []Input
	// Terms caps the number of candidate products; 0 means 800.
	Terms int
	// Exactly fixes the level at Degree instead of choosing it.
	Exactly bool
}

// Kind returns "sparse chaos, least angle".
func (LeastAngle) Kind() string { return "sparse chaos, least angle" }

// Fit implements surrogate.Model.
func (c LeastAngle) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	return asFitted(c.FitExpansion(ctx, x, y))
}

// FitExpansion is Fit with the concrete type.
func (c LeastAngle) FitExpansion(ctx context.Context, x [][]float64, y []float64) (*Expansion, error) {
	choose := func(design blas64.General, y []float64) []int {
		order, _ := newCovariance(design, y).leastAngle(int(mostSupport * float64(len(y))))
		return order
	}
	e, level, err := fitSparse(ctx, c.Truncation, c.Inputs, c.Terms, c.Exactly, choose, leastAngleFlattery, x, y)
	if err != nil {
		return nil, err
	}
	if level > 0 { // a constant says nothing about the next fit
		c.Degree, c.Exactly = level, true
	}
	e.warm, e.summary = c, termsText(e.largestDegree(), e.active)+", least angle"
	return e, nil
}

// leastAngle returns the order in which columns enter (numbered as in the
// design, the constant being 0) and the largest |correlation| c_j/n before each,
// at most steps of them. Columns are not normalised. With A the active columns
// and s the signs of their correlations, coefficients move along
// w = G_AA^-1 s_A, which lowers all active correlations C alike; a column joins
// where its own reaches the common size, after
//
//	gamma = min over j not in A of (C - c_j)/(1 - a_j), (C + c_j)/(1 + a_j),
//	a = G_.A w
//
// (Efron et al. 2004, equation 2.13, scaled so that C falls at unit rate).
func (v *covariance) leastAngle(steps int) (order []int, sizes []float64) {
	p := v.p
	correlation := append([]float64(nil), v.moment...)
	state := make([]columnState, p)
	factor := &growingFactor{}
	signs, direction := make([]float64, 0, steps), make([]float64, p)
	for {
		next, size := -1, 0.0
		for j, c := range correlation {
			if state[j] == waiting && math.Abs(c) > size {
				next, size = j, math.Abs(c)
			}
		}
		if next < 0 || len(order) >= steps || size <= correlationFloor*largestSize(v.moment) {
			return order, sizes
		}
		if !factor.add(v.gramColumn(next, order), v.gram[next*p+next]) {
			state[next] = dependent
			continue
		}
		state[next] = active
		order, sizes = append(order, next+1), append(sizes, size)
		signs = append(signs, math.Copysign(1, correlation[next]))
		w := factor.solve(signs)
		clear(direction)
		for k, column := range order {
			row := v.gram[(column-1)*p : column*p]
			for j, g := range row {
				direction[j] += w[k] * g
			}
		}
		gamma := size
		for j, c := range correlation {
			if state[j] == waiting {
				gamma = math.Min(gamma, positiveRatio(size-c, 1-direction[j], size))
				gamma = math.Min(gamma, positiveRatio(size+c, 1+direction[j], size))
			}
		}
		for j := range correlation {
			correlation[j] -= gamma * direction[j]
		}
	}
}

type columnState uint8

const (
	waiting columnState = iota
	active
	dependent // on the active columns
)

// correlationFloor ends the path where the correlations are rounding.
const correlationFloor = 1e-12

func positiveRatio(a, b, otherwise float64) float64 {
	if b <= 0 || a < 0 {
		return otherwise
	}
	return a / b
}

// gramColumn returns the entries of column j of G at the active columns.
func (v *covariance) gramColumn(j int, order []int) []float64 {
	out := make([]float64, len(order))
	for k, column := range order {
		out[k] = v.gram[j*v.p+column-1]
	}
	return out
}
