package pce

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// regression is a least-squares solution on P columns, standardised outputs.
type regression struct {
	coefficients []float64
	residual     []float64
	leverage     []float64         // h_i, diagonal of Q Q'
	looResidual  []float64         // e_i/(1 - h_i)
	looDeviation []float64         // s/sqrt(1 - h_i)
	s            float64           // sqrt(RSS/(n - P))
	columns      []int             // place of the regressed terms in the basis; nil: all of them
	lower        blas64.Triangular // R'
}

// leading solves the least-squares problem on the first p columns.
//
// Leave-one-out residual e_i/(1 - h_i), its standard deviation s/sqrt(1 - h_i),
// s^2 = RSS/(n - p) (Allen 1974; Cook 1977). With n = p, s is 0.
func (f *qr) leading(p int, y []float64) *regression {
	n := len(y)
	g := &regression{
		residual: append([]float64(nil), y...), leverage: make([]float64, n),
		looResidual: make([]float64, n), looDeviation: make([]float64, n),
		coefficients: make([]float64, p),
		lower:        blas64.Triangular{Uplo: blas.Lower, Diag: blas.NonUnit, N: p, Stride: p, Data: make([]float64, p*p)},
	}
	for k := range p {
		for i := range k + 1 {
			g.lower.Data[k*p+i] = f.r.Data[i*f.r.Stride+k]
		}
		for i := range y {
			g.coefficients[k] += f.q.Data[i*f.q.Stride+k] * y[i]
		}
		f.project(k, g.residual, g.leverage)
	}
	blas64.Trsv(blas.Trans, g.lower, vector(g.coefficients))
	rss := 0.0
	for _, e := range g.residual {
		rss += e * e
	}
	if n > p {
		g.s = math.Sqrt(rss / float64(n-p))
	}
	for i, e := range g.residual {
		room := math.Max(1-g.leverage[i], leverageFloor)
		g.looResidual[i] = e / room
		g.looDeviation[i] = g.s / math.Sqrt(room)
	}
	return g
}

// inflate multiplies the leave-one-out residuals and all deviations.
func (g *regression) inflate(residuals, deviations float64) {
	g.s *= deviations
	for i := range g.looResidual {
		g.looResidual[i] *= residuals
		g.looDeviation[i] *= deviations
	}
}

// deviation returns the prediction standard deviation of a new observation,
//
//	s sqrt(1 + psi' (Psi'Psi)^-1 psi) = s sqrt(1 + |R^-T psi|^2)
//
// (regression theory, e.g. Draper & Smith; the misfit is treated as noise).
func (g *regression) deviation(s *scratch) float64 {
	p := len(g.coefficients)
	v := s.room(p)
	if g.columns == nil {
		copy(v, s.values)
	} else {
		for k, t := range g.columns {
			v[k] = s.values[t]
		}
	}
	row := blas64.General{Rows: 1, Cols: p, Stride: p, Data: v} // solved by dot products
	blas64.Trsm(blas.Right, blas.Trans, 1, g.lower, row)
	sum := 1.0
	for _, c := range v {
		sum += c * c
	}
	return g.s * math.Sqrt(sum)
}

// room returns n numbers of working space.
func (s *scratch) room(n int) []float64 {
	if cap(s.projected) < n {
		s.projected = make([]float64, n)
	}
	return s.projected[:n]
}
