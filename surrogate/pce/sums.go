package pce

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// sums holds the uncentred sums of products of a set of samples, so that those
// of a part follow by subtraction of the rest: one full set serves all folds.
type sums struct {
	n       int
	p       int       // columns without the constant
	squares []float64 // X'X, p x p by rows
	ofY     []float64 // X'y
	total   []float64 // X'1
	y, yy   float64   // sum y, sum y^2
}

// newSums adds up the given rows of the design; column 0, the constant, is left out.
func newSums(design blas64.General, y []float64, rows []int) *sums {
	p := design.Cols - 1
	s := &sums{n: len(rows), p: p, squares: make([]float64, p*p), ofY: make([]float64, p), total: make([]float64, p)}
	x := blas64.General{Rows: len(rows), Cols: p, Stride: max(p, 1), Data: make([]float64, len(rows)*p)}
	for i, r := range rows {
		row := x.Data[i*p : (i+1)*p]
		copy(row, design.Data[r*design.Stride+1:r*design.Stride+design.Cols])
		for j, v := range row {
			s.ofY[j] += v * y[r]
			s.total[j] += v
		}
		s.y += y[r]
		s.yy += y[r] * y[r]
	}
	if p > 0 && len(rows) > 0 {
		square := blas64.Symmetric{Uplo: blas.Upper, N: p, Stride: p, Data: s.squares}
		blas64.Syrk(blas.Trans, 1, x, 0, square)
	}
	for i := range p {
		for j := range i {
			s.squares[i*p+j] = s.squares[j*p+i]
		}
	}
	return s
}

// without returns the sums of the samples in s that are not in part.
func (s *sums) without(part *sums) *sums {
	difference := func(a, b []float64) []float64 {
		out := make([]float64, len(a))
		for i, v := range a {
			out[i] = v - b[i]
		}
		return out
	}
	return &sums{
		n: s.n - part.n, p: s.p, squares: difference(s.squares, part.squares),
		ofY: difference(s.ofY, part.ofY), total: difference(s.total, part.total),
		y: s.y - part.y, yy: s.yy - part.yy,
	}
}

// covariance centres the sums and divides them by the number of samples.
func (s *sums) covariance() *covariance {
	n := float64(s.n)
	v := &covariance{p: s.p, gram: make([]float64, s.p*s.p), moment: make([]float64, s.p)}
	for i := range s.p {
		mean := s.total[i] / n
		v.moment[i] = s.ofY[i]/n - mean*s.y/n
		for j := range s.p {
			v.gram[i*s.p+j] = s.squares[i*s.p+j]/n - mean*s.total[j]/n
		}
	}
	return v
}

// covariance holds the products of a design matrix with its columns and the
// outputs, both centred: G = Xc'Xc/n, c = Xc'y/n, without the constant.
type covariance struct {
	p      int
	gram   []float64 // p x p, by rows
	moment []float64 // p
}

// newCovariance forms the products; column 0 of the design is the constant.
func newCovariance(design blas64.General, y []float64) *covariance {
	rows := make([]int, design.Rows)
	for i := range rows {
		rows[i] = i
	}
	return newSums(design, y, rows).covariance()
}

func largestSize(v []float64) float64 {
	largest := 0.0
	for _, c := range v {
		largest = math.Max(largest, math.Abs(c))
	}
	return largest
}
