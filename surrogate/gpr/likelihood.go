package gpr

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// solver evaluates the profile likelihood of one sample. It holds the working
// space of one goroutine; nothing is allocated after newSolver.
type solver struct {
	*sample
	r       blas64.Triangular // correlation, then its Cholesky factor, then its inverse
	slopes  []float64         // kernel sensitivity of each pair
	inverse []float64         // 1/l_j^2
	white   []float64         // L^-1 y, then residuals
	trended []float64         // (L^-1 F)', q x n by rows
	gram    blas64.Triangular // Cholesky factor of F' R^-1 F
	beta    []float64         // trend coefficients
	alpha   []float64         // R^-1 (y - F beta)
	logDet  float64           // log |R|
	s2      float64           // process variance, standardised
}

func newSolver(s *sample) *solver {
	triangle := func(n int) blas64.Triangular {
		return blas64.Triangular{Uplo: blas.Lower, Diag: blas.NonUnit, N: n, Stride: max(n, 1), Data: make([]float64, n*n)}
	}
	return &solver{
		sample: s, r: triangle(s.n), slopes: make([]float64, s.n*(s.n-1)/2),
		inverse: make([]float64, s.d), white: make([]float64, s.n),
		trended: make([]float64, s.n*s.q), gram: triangle(s.q),
		beta: make([]float64, s.q), alpha: make([]float64, s.n),
	}
}

// correlate fills R = C + g I and the sensitivities of its entries.
func (s *solver) correlate(lengths []float64, nugget float64) {
	for j, l := range lengths {
		s.inverse[j] = 1 / (l * l)
	}
	rbf := s.kernel == RBF
	d, inverse, pair := s.d, s.inverse, 0
	for i := range s.n {
		row := s.r.Data[i*s.r.Stride : i*s.r.Stride+i+1]
		row[i] = 1 + nugget
		for k := range row[:i] {
			squared := 0.0
			for j, v := range s.squares[pair*d : pair*d+d] {
				squared += v * inverse[j]
			}
			c := s.kernel.correlation(squared)
			row[k] = c
			if rbf {
				s.slopes[pair] = c
			} else {
				s.slopes[pair] = s.kernel.sensitivity(squared)
			}
			pair++
		}
	}
}

// factorise replaces R by its Cholesky factor; false when it has none.
func (s *solver) factorise() bool {
	_, ok := lapack64.Potrf(blas64.Symmetric{Uplo: blas.Lower, N: s.n, Stride: s.r.Stride, Data: s.r.Data})
	if !ok {
		return false
	}
	s.logDet = 0
	for i := range s.n {
		s.logDet += 2 * math.Log(s.r.Data[i*s.r.Stride+i])
	}
	return true
}

// profile solves for trend and variance from the factor:
//
//	beta = (F'R^-1 F)^-1 F'R^-1 y,  s2 = (y - F beta)' R^-1 (y - F beta)/n
//
// (Jones, Schonlau & Welch 1998, equations 5 and 6, for a constant). It leaves
// alpha = R^-1 (y - F beta); false when the samples do not determine the trend.
func (s *solver) profile() bool {
	n, q := s.n, s.q
	copy(s.white, s.y)
	forward(s.r, s.white)
	if q > 0 {
		copy(s.trended, s.f)
		trended := blas64.General{Rows: q, Cols: n, Stride: n, Data: s.trended}
		blas64.Trsm(blas.Right, blas.Trans, 1, s.r, trended)
		gram := blas64.Symmetric{Uplo: blas.Lower, N: q, Stride: q, Data: s.gram.Data}
		blas64.Syrk(blas.NoTrans, 1, trended, 0, gram)
		if !s.factoriseGram(gram) {
			return false
		}
		blas64.Gemv(blas.NoTrans, 1, trended, vector(s.white), 0, vector(s.beta))
		s.solveGram(s.beta)
		blas64.Gemv(blas.Trans, -1, trended, vector(s.beta), 1, vector(s.white))
	}
	quadratic := 0.0
	for _, w := range s.white {
		quadratic += w * w
	}
	s.s2 = quadratic / float64(n)
	copy(s.alpha, s.white)
	backward(s.r, s.alpha)
	return true
}

// factoriseGram replaces F'R^-1 F by its Cholesky factor; false when the trend
// functions depend on one another at the samples.
func (s *solver) factoriseGram(gram blas64.Symmetric) bool {
	largest := 0.0
	for j := range s.q {
		largest = math.Max(largest, gram.Data[j*s.q+j])
	}
	if _, ok := lapack64.Potrf(gram); !ok {
		return false
	}
	for j := range s.q {
		if pivot := gram.Data[j*s.q+j]; pivot*pivot < trendFloor*largest {
			return false
		}
	}
	return true
}

// trendFloor is the least squared pivot of F'R^-1 F, relative to its largest
// diagonal: below it the inputs are collinear.
const trendFloor = 1e-13

// solveGram overwrites v by (F'R^-1 F)^-1 v.
func (s *solver) solveGram(v []float64) {
	forward(s.gram, v)
	backward(s.gram, v)
}

// smallestVariance keeps the logarithm finite where the trend alone reproduces
// the data to rounding.
const smallestVariance = 1e-30

// value returns the profile log likelihood
//
//	L = -n/2 (log(2 pi s2) + 1) - log|R|/2
//
// (Jones, Schonlau & Welch 1998, equation 7; trend by generalised least
// squares), or minus infinity where R has no Cholesky factor in floating point
// or the trend is not determined.
func (s *solver) value(lengths []float64, nugget float64) float64 {
	s.correlate(lengths, nugget)
	if !s.factorise() || !s.profile() {
		return math.Inf(-1)
	}
	n := float64(s.n)
	return -0.5*n*(math.Log(2*math.Pi*math.Max(s.s2, smallestVariance))+1) - 0.5*s.logDet
}

// gradient stores the derivatives of L by the logarithms of the lengths and,
// when dst has room for it, of the nugget; it follows a successful value and
// replaces the factor by the inverse of R.
//
//	dL/dt = 1/2 sum_ik W_ik dR_ik/dt,  W = alpha alpha'/s2 - R^-1
//
// (Rasmussen & Williams 2006, equation 5.9, with the variance profiled out: the
// derivatives through trend and s2 vanish at their optimum.)
func (s *solver) gradient(dst []float64, nugget float64) {
	clear(dst)
	lapack64.Potri(s.r)
	d := s.d
	lengths := dst[:d]
	scale := 1 / math.Max(s.s2, smallestVariance)
	trace, pair := 0.0, 0
	for i := range s.n {
		row := s.r.Data[i*s.r.Stride : i*s.r.Stride+i+1]
		a := s.alpha[i] * scale
		for k, v := range row[:i] {
			w := (a*s.alpha[k] - v) * s.slopes[pair]
			for j, square := range s.squares[pair*d : pair*d+d] {
				lengths[j] += w * square
			}
			pair++
		}
		trace += a*s.alpha[i] - row[i]
	}
	for j := range lengths {
		lengths[j] *= s.inverse[j] // each pair counts twice: the half is gone
	}
	if len(dst) > d {
		dst[d] = 0.5 * nugget * trace
	}
}
