package gpr

// sample holds what every likelihood of one data set shares.
type sample struct {
	n, d    int
	x       [][]float64
	y       []float64 // standardised outputs
	kernel  Kernel
	trend   Trend
	f       []float64 // q x n trend functions, by rows
	q       int
	squares []float64 // (x_ij - x_kj)^2 of each pair i > k, pair by pair, d numbers each
}

// newSample precomputes the squared differences, packed: the gradient by d
// lengths is then d multiply-adds a pair.
func newSample(x [][]float64, y []float64, kernel Kernel, trend Trend) *sample {
	n, d := len(x), len(x[0])
	q := trend.terms(d)
	s := &sample{n: n, d: d, x: x, y: y, kernel: kernel, trend: trend, q: q,
		f: make([]float64, n*q), squares: make([]float64, 0, n*(n-1)/2*d)}
	functions := make([]float64, q)
	for i, a := range x {
		trend.functions(functions, a)
		for j, v := range functions {
			s.f[j*n+i] = v
		}
		for _, b := range x[:i] {
			for j, v := range a {
				s.squares = append(s.squares, (v-b[j])*(v-b[j]))
			}
		}
	}
	return s
}

// subset returns the sample of the given rows.
func (s *sample) subset(rows []int) *sample {
	x, y := make([][]float64, len(rows)), make([]float64, len(rows))
	for i, r := range rows {
		x[i], y[i] = s.x[r], s.y[r]
	}
	return newSample(x, y, s.kernel, s.trend)
}
