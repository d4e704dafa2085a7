package pce

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

const (
	// leverageFloor is the least 1 - h_i for which leaving sample i out still
	// leaves a solvable problem.
	leverageFloor = 1e-10
	// rankFloor is the least |R_kk| relative to its column: the guard
	// cond < 1e8 of the design matrix, column by column.
	rankFloor = 1e-8
	// exactError is the standardised leave-one-out error that counts as exact,
	// so that rounding does not choose between levels that all reproduce the data.
	exactError = 1e-10
)

// qr is a Householder factorisation of a design matrix, Q explicit.
type qr struct {
	q, r        blas64.General
	independent int // leading columns that are independent
}

// factorise returns the factors of m (at least as many rows as columns), which
// it overwrites.
func factorise(m blas64.General) *qr {
	n, p := m.Rows, m.Cols
	norms := make([]float64, p)
	for i := range n {
		for k, v := range m.Data[i*m.Stride : i*m.Stride+p] {
			norms[k] += v * v
		}
	}
	tau, work := make([]float64, p), make([]float64, 64*max(n, p))
	lapack64.Geqrf(m, tau, work, len(work))
	r := blas64.General{Rows: p, Cols: p, Stride: p, Data: make([]float64, p*p)}
	for i := range p {
		copy(r.Data[i*p+i:(i+1)*p], m.Data[i*m.Stride+i:i*m.Stride+p])
	}
	lapack64.Orgqr(m, tau, work, len(work))
	independent := 0
	for independent < p && math.Abs(r.Data[independent*p+independent]) > rankFloor*math.Sqrt(norms[independent]) {
		independent++
	}
	return &qr{q: m, r: r, independent: independent}
}

// choose returns the level with the least leave-one-out error of the
// standardised outputs, or the last one when it alone is asked.
func (f *qr) choose(ends []int, y []float64, last bool) (level int, ok bool) {
	errors := f.looErrors(y)
	best := math.Inf(1)
	for l, end := range ends {
		if end > len(errors) || last && l < len(ends)-1 {
			continue
		}
		if err := errors[end-1]; err < best && best > exactError {
			best, level, ok = err, l, true
		}
	}
	return level, ok
}

// looErrors returns the root mean square leave-one-out residual e_i/(1 - h_i)
// of least squares on the first 1, 2, .. independent columns; it is infinite
// where a sample determines a column alone.
func (f *qr) looErrors(y []float64) []float64 {
	residual, leverage := append([]float64(nil), y...), make([]float64, len(y))
	errors := make([]float64, f.independent)
	for k := range errors {
		f.project(k, residual, leverage)
		errors[k] = looError(residual, leverage)
	}
	return errors
}

// corrections returns the factors
//
//	T = n/(n-P) (1 + tr((Psi'Psi)^-1))
//
// on the mean squared leave-one-out error for P = 1, 2, .. columns, which
// penalise terms that few samples carry (Chapelle, Vapnik & Bengio 2002; Blatman
// & Sudret 2011); infinite for P >= n. tr((Psi'Psi)^-1) is the squared Frobenius
// norm of R^-1, whose columns do not change as more are added.
func (f *qr) corrections() []float64 {
	n, p := f.q.Rows, f.independent
	inverse := blas64.General{Rows: p, Cols: p, Stride: p, Data: make([]float64, p*p)}
	for k := range p {
		inverse.Data[k*p+k] = 1
	}
	r := blas64.Triangular{Uplo: blas.Upper, Diag: blas.NonUnit, N: p, Stride: f.r.Stride, Data: f.r.Data}
	blas64.Trsm(blas.Left, blas.NoTrans, 1, r, inverse)
	factors := make([]float64, p)
	trace := 0.0
	for k := range p {
		for i := range k + 1 {
			v := inverse.Data[i*p+k]
			trace += v * v
		}
		factors[k] = math.Inf(1)
		if n > k+1 {
			factors[k] = float64(n) / float64(n-k-1) * (1 + trace)
		}
	}
	return factors
}

// project takes column k of Q out of the residual and adds it to the leverage.
func (f *qr) project(k int, residual, leverage []float64) {
	stride := f.q.Stride
	dot := 0.0
	for i, v := range residual {
		dot += f.q.Data[i*stride+k] * v
	}
	for i := range residual {
		q := f.q.Data[i*stride+k]
		residual[i] -= dot * q
		leverage[i] += q * q
	}
}

func looError(residual, leverage []float64) float64 {
	sum := 0.0
	for i, e := range residual {
		room := 1 - leverage[i]
		if room < leverageFloor {
			return math.Inf(1)
		}
		sum += (e / room) * (e / room)
	}
	return math.Sqrt(sum / float64(len(residual)))
}
