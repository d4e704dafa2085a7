package pce

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack"
	"gonum.org/v1/gonum/lapack/lapack64"
	"rampwright/surrogate"
)

// grams holds the Gram matrices X X' of the terms of each total degree, so that
// the kernel of any level and growth is a short sum.
type grams struct {
	n      int
	levels [][]blas64.Symmetric // level by level, by total degree of its own terms (nil where it has none)
}

// newGrams forms the Gram matrices; the constant is left out.
func newGrams(b *basis, ends []int, x [][]float64) *grams {
	g := &grams{n: len(x)}
	design := b.design(x)
	from := 1
	for _, end := range ends {
		var byDegree []blas64.Symmetric
		for degree := 0; degree <= degreeCap; degree++ {
			var columns []int
			for t := from; t < end; t++ {
				if b.terms[t].total() == degree {
					columns = append(columns, t)
				}
			}
			byDegree = append(byDegree, gram(design, columns))
		}
		g.levels = append(g.levels, byDegree)
		from = max(end, 1)
	}
	return g
}

// gram returns the lower triangle of sum over the columns of column column'.
func gram(design blas64.General, columns []int) blas64.Symmetric {
	if len(columns) == 0 {
		return blas64.Symmetric{}
	}
	n, m := design.Rows, len(columns)
	picked := blas64.General{Rows: n, Cols: m, Stride: m, Data: make([]float64, n*m)}
	for i := range n {
		for k, t := range columns {
			picked.Data[i*m+k] = design.Data[i*design.Stride+t]
		}
	}
	g := blas64.Symmetric{Uplo: blas.Lower, N: n, Stride: n, Data: make([]float64, n*n)}
	blas64.Syrk(blas.NoTrans, 1, picked, 0, g)
	return g
}

// kernel returns the lower triangle of sum_a growth^(-2|a|) psi_a psi_a' over
// the terms up to a level.
func (g *grams) kernel(level int, growth float64) blas64.Symmetric {
	k := blas64.Symmetric{Uplo: blas.Lower, N: g.n, Stride: g.n, Data: make([]float64, g.n*g.n)}
	for _, byDegree := range g.levels[:level+1] {
		for degree, part := range byDegree {
			if part.N > 0 {
				weight := math.Pow(growth, -2*float64(degree))
				for i, v := range part.Data {
					k.Data[i] += weight * v
				}
			}
		}
	}
	return k
}

// kernelFit is a penalised fit in its dual form, A = K + lambda I = U (D +
// lambda) U', with a free constant. Outputs are standardised.
type kernelFit struct {
	level        int
	growth       float64
	lambda       float64
	error        float64 // root mean square leave-one-out error
	vectors      blas64.General
	values       []float64
	coefficients []float64
	looResidual  []float64
	looDeviation []float64

	y, ones  []float64 // U'y, U'1
	variance float64   // of the equivalent process
	design   blas64.General
	weights  []float64 // growth^(-2|a|), 0 for the constant
	basisSum float64   // 1'A^-1 1
	constant float64   // b0
	inverse  []float64 // 1/(D + lambda)
	ofY      []float64 // inverse * U'(y - b0)
	ofOnes   []float64 // inverse * U'1
	tail     float64   // mean prior variance of the degrees beyond the level; 0 with fewer terms than samples
}

// fit finds the penalty of least leave-one-out error for a level and growth
// (or takes the one given).
//
// Leave-one-out residual (Q y)_i/Q_ii with
// Q = A^-1 - A^-1 1 1'A^-1/(1'A^-1 1): the constant is re-estimated without
// sample i too (Dubrule 1983).
func (g *grams) fit(level int, growth, penalty float64, y []float64) (*kernelFit, error) {
	k := g.kernel(level, growth)
	f := &kernelFit{level: level, growth: growth, values: make([]float64, g.n)}
	work := make([]float64, 64*g.n)
	if ok := lapack64.Syev(lapack.EVCompute, k, f.values, work, len(work)); !ok {
		return nil, &surrogate.DataError{What: "the kernel of the expansion has no eigenvalues", Row: -1, Column: -1}
	}
	f.vectors = blas64.General{Rows: g.n, Cols: g.n, Stride: g.n, Data: k.Data}
	for i, v := range f.values {
		f.values[i] = math.Max(v, 0)
	}
	f.y, f.ones = make([]float64, g.n), make([]float64, g.n)
	ones := make([]float64, g.n)
	for i := range ones {
		ones[i] = 1
	}
	blas64.Gemv(blas.Trans, 1, f.vectors, vector(y), 0, vector(f.y))
	blas64.Gemv(blas.Trans, 1, f.vectors, vector(ones), 0, vector(f.ones))
	f.looResidual, f.looDeviation = make([]float64, g.n), make([]float64, g.n)
	f.inverse, f.ofY, f.ofOnes = make([]float64, g.n), make([]float64, g.n), make([]float64, g.n)
	f.lambda = penalty
	if penalty == 0 {
		f.lambda = f.bestPenalty()
	}
	f.error = f.leaveOneOut(f.lambda)
	return f, nil
}

const (
	leastPenalty = 1e-14 // relative to the largest eigenvalue
	mostPenalty  = 1e2
	penaltySteps = 17
	goldenSteps  = 8
)

// bestPenalty searches the logarithm of the penalty on a grid, then by golden
// section around its best point.
func (f *kernelFit) bestPenalty() float64 {
	largest := f.values[len(f.values)-1]
	if largest == 0 {
		return 1
	}
	step := math.Log(mostPenalty/leastPenalty) / (penaltySteps - 1)
	at := func(k float64) float64 { return largest * leastPenalty * math.Exp(k*step) }
	best, least := 0, math.Inf(1)
	for k := range penaltySteps {
		if e := f.leaveOneOut(at(float64(k))); e < least {
			best, least = k, e
		}
	}
	low, high := math.Max(float64(best)-1, 0), math.Min(float64(best)+1, penaltySteps-1)
	ratio := (math.Sqrt(5) - 1) / 2
	a, b := high-ratio*(high-low), low+ratio*(high-low)
	ea, eb := f.leaveOneOut(at(a)), f.leaveOneOut(at(b))
	for range goldenSteps {
		if ea <= eb {
			high, b, eb = b, a, ea
			a = high - ratio*(high-low)
			ea = f.leaveOneOut(at(a))
		} else {
			low, a, ea = a, b, eb
			b = low + ratio*(high-low)
			eb = f.leaveOneOut(at(b))
		}
	}
	middle := at((low + high) / 2)
	if f.leaveOneOut(middle) < least {
		return middle
	}
	return at(float64(best))
}

// leaveOneOut fills looResidual and looDeviation (not yet scaled by the process
// deviation) for a penalty and returns the root mean square residual.
func (f *kernelFit) leaveOneOut(lambda float64) float64 {
	n := len(f.values)
	f.basisSum = 0
	onesY := 0.0
	for k, v := range f.values {
		f.inverse[k] = 1 / (v + lambda)
		f.basisSum += f.ones[k] * f.ones[k] * f.inverse[k]
		onesY += f.ones[k] * f.y[k] * f.inverse[k]
	}
	f.constant = onesY / f.basisSum
	for k, w := range f.inverse {
		f.ofY[k], f.ofOnes[k] = w*(f.y[k]-f.constant*f.ones[k]), w*f.ones[k]
	}
	sum := 0.0
	for i := range n {
		row := f.vectors.Data[i*n : (i+1)*n]
		inverse, ofY, ofOnes := f.inverse[:len(row)], f.ofY[:len(row)], f.ofOnes[:len(row)]
		q, diagonal, unit := 0.0, 0.0, 0.0
		for k, u := range row {
			q += u * ofY[k]
			diagonal += u * u * inverse[k]
			unit += u * ofOnes[k]
		}
		diagonal = math.Max(diagonal-unit*unit/f.basisSum, leverageFloor*diagonal)
		f.looResidual[i] = q / diagonal
		f.looDeviation[i] = 1 / math.Sqrt(diagonal)
		sum += f.looResidual[i] * f.looResidual[i]
	}
	return math.Sqrt(sum / float64(n))
}

// tuned is the number of parameters chosen by leave-one-out: level, growth,
// penalty.
const tuned = 3

// finish computes coefficients c_a = growth^(-2|a|) psi_a' Q y, the constant,
// and the variance of the equivalent process: the larger of that which gives
// the standardised leave-one-out residuals mean square 1 (flattered by the
// choice of the parameters) and the maximum-likelihood one y'Qy/(n-1), times
// n/(n-3).
func (f *kernelFit) finish(b *basis, x [][]float64, y []float64) *kernelFit {
	n, p := len(y), len(b.terms)
	f.leaveOneOut(f.lambda)
	f.design = b.design(x)
	alpha := make([]float64, n)
	blas64.Gemv(blas.NoTrans, 1, f.vectors, vector(f.ofY), 0, vector(alpha))
	f.coefficients, f.weights = make([]float64, p), make([]float64, p)
	blas64.Gemv(blas.Trans, 1, f.design, vector(alpha), 0, vector(f.coefficients))
	for t, a := range b.terms {
		f.weights[t] = math.Pow(f.growth, -2*float64(a.total()))
		f.coefficients[t] *= f.weights[t]
	}
	f.coefficients[0], f.weights[0] = f.constant, 0
	if p >= n { // else the misfit shows what the degrees left out do, in lambda
		f.tail = tail(len(b.inputs), f.level, f.growth)
	}
	likely := 0.0
	for k, w := range f.ofY {
		likely += w * (f.y[k] - f.constant*f.ones[k]) / float64(n-1)
	}
	for i, r := range f.looResidual {
		f.variance += (r / f.looDeviation[i]) * (r / f.looDeviation[i]) / float64(n)
	}
	f.variance = math.Max(f.variance, likely) * float64(n) / float64(max(n-tuned, 1))
	for i := range f.looDeviation {
		f.looDeviation[i] *= math.Sqrt(f.variance)
	}
	return f
}

// tail returns the prior variance of all total degrees beyond level, averaged
// over the inputs (the mean of psi_a^2 is 1):
//
//	sum over k > level of C(d-1+k, k) growth^(-2k)
//
// to 1e-12 of itself. It is 0 for growth 1, where the sum has no limit.
func tail(d, level int, growth float64) float64 {
	if growth <= 1 {
		return 0
	}
	sum, term := 0.0, 1.0
	for k := 1; k <= tailDegrees; k++ {
		term *= float64(d-1+k) / float64(k) / (growth * growth)
		if k > level {
			sum += term
			if term < 1e-12*sum {
				break
			}
		}
	}
	return sum
}

const tailDegrees = 1000

// deviation returns the standard deviation of a new observation of the
// equivalent Gaussian process with an unknown constant,
//
//	s2 (lambda + tail + k(x,x) - k'A^-1 k + (1 - 1'A^-1 k)^2/(1'A^-1 1))
//
// (universal kriging), k = X W^-2 psi(x), tail the prior variance of the degrees
// left out. With fewer terms than samples tail is 0: s2 lambda is then the misfit,
// which those degrees have made.
func (f *kernelFit) deviation(s *scratch) float64 {
	n, p := len(f.values), len(f.weights)
	space := s.room(p + 2*n)
	weighted, k, t := space[:p], space[p:p+n], space[p+n:]
	prior := f.lambda + f.tail
	for i, w := range f.weights {
		weighted[i] = w * s.values[i]
		prior += weighted[i] * s.values[i]
	}
	blas64.Gemv(blas.NoTrans, 1, f.design, vector(weighted), 0, vector(k))
	blas64.Gemv(blas.Trans, 1, f.vectors, vector(k), 0, vector(t))
	unit := 1.0
	for i, v := range t {
		prior -= v * v * f.inverse[i]
		unit -= v * f.ones[i] * f.inverse[i]
	}
	return math.Sqrt(f.variance * math.Max(prior+unit*unit/f.basisSum, 0))
}

func vector(v []float64) blas64.Vector { return blas64.Vector{N: len(v), Inc: 1, Data: v} }
