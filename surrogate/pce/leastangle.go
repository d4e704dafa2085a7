package pce

import (
	"context"
	"fmt"
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
	choose := func(design blas64.General, y []float64) ([]int, bool) {
		order, _ := newCovariance(design, y).leastAngle(int(mostSupport * float64(len(y))))
		return order, true
	}
	e, level, err := fitSparse(ctx, c.Truncation, c.Inputs, c.Terms, c.Exactly, choose, x, y)
	if err != nil {
		return nil, err
	}
	c.Degree, c.Exactly = level, level > 0
	e.warm, e.summary = c, fmt.Sprintf("%s, least angle", termsText(e.largestDegree(), e.active))
	return e, nil
}

// covariance holds the products of a design matrix with its columns and the
// outputs, both centred: G = Xc'Xc/n, c = Xc'y/n, without the constant.
type covariance struct {
	p      int
	gram   []float64 // p x p, by rows
	moment []float64 // p
	size   float64   // y'y/n, centred
}

// newCovariance forms the products; column 0 of the design is the constant.
func newCovariance(design blas64.General, y []float64) *covariance {
	rows := make([]int, design.Rows)
	for i := range rows {
		rows[i] = i
	}
	return newSums(design, y, rows).covariance()
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
	first := v.moment
	for {
		next, size := -1, 0.0
		for j, c := range correlation {
			if state[j] == waiting && math.Abs(c) > size {
				next, size = j, math.Abs(c)
			}
		}
		if next < 0 || len(order) >= steps || size <= correlationFloor*largestSize(first) {
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

// dependenceFloor is the least squared pivot relative to the column.
const dependenceFloor = 1e-10

// correlationFloor ends the path where the correlations are rounding.
const correlationFloor = 1e-12

func positiveRatio(a, b, otherwise float64) float64 {
	if b <= 0 || a < 0 {
		return otherwise
	}
	return a / b
}

func largestSize(v []float64) float64 {
	largest := 0.0
	for _, c := range v {
		largest = math.Max(largest, math.Abs(c))
	}
	return largest
}

// gramColumn returns the entries of column j of G at the active columns.
func (v *covariance) gramColumn(j int, order []int) []float64 {
	out := make([]float64, len(order))
	for k, column := range order {
		out[k] = v.gram[j*v.p+column-1]
	}
	return out
}

// growingFactor is a Cholesky factor that grows by one row at a time.
type growingFactor struct {
	rows [][]float64
}

// add appends a column with the given products with the earlier ones and
// itself; false, and no change, when it depends on them.
func (f *growingFactor) add(products []float64, own float64) bool {
	row := append(append(make([]float64, 0, len(products)+1), products...), 0)
	left := own
	for i, r := range f.rows {
		for k := range i {
			row[i] -= r[k] * row[k]
		}
		row[i] /= r[i]
		left -= row[i] * row[i]
	}
	if !(left > dependenceFloor*own) {
		return false
	}
	row[len(products)] = math.Sqrt(left)
	f.rows = append(f.rows, row)
	return true
}

// solve returns the solution of (L L') w = b.
func (f *growingFactor) solve(b []float64) []float64 {
	w := append([]float64(nil), b...)
	for i, r := range f.rows {
		for k := range i {
			w[i] -= r[k] * w[k]
		}
		w[i] /= r[i]
	}
	for i := len(f.rows) - 1; i >= 0; i-- {
		w[i] /= f.rows[i][i]
		for k := range i {
			w[k] -= f.rows[i][k] * w[i]
		}
	}
	return w
}
