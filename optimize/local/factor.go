package local

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// factor holds the two matrices of the dual active-set method: J with
// J J' = B^-1, and the upper triangle R of the active normals N in its basis,
//
//	J'N = [R; 0]
//
// Both are updated by Givens rotations as rows enter and leave (Goldfarb &
// Idnani 1983, section 4, from memory). Columns are contiguous.
type factor struct {
	n     int
	basis []float64 // J, column k at basis[k*n:]
	upper []float64 // R, column k at upper[k*n:]
}

func (f *factor) resize(n int) {
	f.n = n
	f.basis = resize(f.basis, n*n)
	f.upper = resize(f.upper, n*n)
}

// start sets J = L^-T from B = L L' and empties R; false when B is not
// positive definite. Column k of J is row k of L^-1, so the row-major inverse
// of L is J by columns.
func (f *factor) start(hessian []float64) bool {
	n := f.n
	for i := range n {
		copy(f.basis[i*n:i*n+i+1], hessian[i*n:i*n+i+1])
		clear(f.basis[i*n+i+1 : (i+1)*n])
	}
	lower, ok := lapack64.Potrf(blas64.Symmetric{Uplo: blas.Lower, N: n, Stride: n, Data: f.basis})
	return ok && lapack64.Trtri(lower)
}

// image stores d = J'a.
func (f *factor) image(d, a []float64) {
	for k := range d {
		d[k] = floats.Dot(f.basis[k*f.n:(k+1)*f.n], a)
	}
}

// imageOfAxis stores d = J'(sign e_j).
func (f *factor) imageOfAxis(d []float64, j int, sign float64) {
	for k := range d {
		d[k] = sign * f.basis[k*f.n+j]
	}
}

// combine adds scale times the columns from place first on, weighted by y.
func (f *factor) combine(dst, y []float64, first int, scale float64) {
	for k := first; k < f.n; k++ {
		floats.AddScaled(dst, scale*y[k], f.basis[k*f.n:(k+1)*f.n])
	}
}

// backSolve solves R x = d for the leading count rows.
func (f *factor) backSolve(x, d []float64, count int) {
	for i := count - 1; i >= 0; i-- {
		sum := d[i]
		for k := i + 1; k < count; k++ {
			sum -= f.upper[k*f.n+i] * x[k]
		}
		x[i] = sum / f.upper[i*f.n+i]
	}
}

// forwardSolve solves R'y = y in place for the leading count rows.
func (f *factor) forwardSolve(y []float64, count int) {
	for i := range count {
		sum := y[i]
		for k := range i {
			sum -= f.upper[i*f.n+k] * y[k]
		}
		y[i] = sum / f.upper[i*f.n+i]
	}
}

// add appends the row with image d as column number count of R, rotating the free
// columns of J so that only d[count] is left of its free part.
func (f *factor) add(d []float64, count int) {
	for k := f.n - 1; k > count; k-- {
		cosine, sine, length := rotation(d[k-1], d[k])
		d[k-1], d[k] = length, 0
		f.rotateBasis(k-1, cosine, sine)
	}
	copy(f.upper[count*f.n:], d[:count+1])
}

// remove takes column k out of the count columns of R and restores its triangle.
func (f *factor) remove(k, count int) {
	n := f.n
	copy(f.upper[k*n:(count-1)*n], f.upper[(k+1)*n:count*n])
	for i := k; i < count-1; i++ {
		cosine, sine, _ := rotation(f.upper[i*n+i], f.upper[i*n+i+1])
		for c := i; c < count-1; c++ {
			column := f.upper[c*n+i : c*n+i+2]
			column[0], column[1] = cosine*column[0]+sine*column[1], cosine*column[1]-sine*column[0]
		}
		f.rotateBasis(i, cosine, sine)
	}
}

// rotateBasis applies a rotation to columns k and k+1 of J.
func (f *factor) rotateBasis(k int, cosine, sine float64) {
	n := f.n
	left, right := f.basis[k*n:(k+1)*n], f.basis[(k+1)*n:(k+2)*n]
	for j, v := range left {
		left[j], right[j] = cosine*v+sine*right[j], cosine*right[j]-sine*v
	}
}

// rotation returns the Givens rotation that turns (a, b) into (length, 0).
func rotation(a, b float64) (cosine, sine, length float64) {
	if b == 0 {
		return 1, 0, a
	}
	length = math.Hypot(a, b)
	return a / length, b / length, length
}
