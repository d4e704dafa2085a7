package pce

import (
	"sync"

	"gonum.org/v1/gonum/blas/blas64"
)

// basis evaluates a set of products of orthonormal polynomials. Each product
// is that of its parent (the same degrees without the last input that has one)
// with one more polynomial, so it costs one multiplication.
type basis struct {
	inputs []Input
	terms  []index
	parent []int32 // term whose product with table[slot] it is; the constant is its own
	slot   []int32 // place in the table of polynomials, input*stride + degree
	stride int     // largest degree in one input, plus 1
	pool   *sync.Pool
}

// scratch is the working space of one evaluation.
type scratch struct {
	table     []float64 // polynomials, input by input
	slopes    []float64
	adjoint   []float64 // derivative of the mean by each polynomial
	values    []float64 // products
	weights   []float64 // derivative of the mean by each product
	projected []float64 // for the deviation; sized on demand
}

// newBasis builds the basis of the given terms. The set must be closed: with a
// term it holds its parent, earlier in the list; the first is the constant.
func newBasis(inputs []Input, terms []index) *basis {
	b := &basis{inputs: inputs, terms: terms, parent: make([]int32, len(terms)), slot: make([]int32, len(terms))}
	place := make(map[string]int32, len(terms))
	for t, a := range terms {
		place[string(a)] = int32(t)
		for _, k := range a {
			b.stride = max(b.stride, int(k)+1)
		}
	}
	for t, a := range terms {
		if last := lastInput(a); last >= 0 {
			above := append(index(nil), a...)
			above[last] = 0
			b.parent[t] = place[string(above)]
			b.slot[t] = int32(last*b.stride + int(a[last]))
		}
	}
	d, n := len(inputs), len(terms)
	b.pool = &sync.Pool{New: func() any {
		return &scratch{
			table: make([]float64, d*b.stride), slopes: make([]float64, d*b.stride),
			adjoint: make([]float64, d*b.stride),
			values:  make([]float64, n), weights: make([]float64, n),
		}
	}}
	return b
}

// lastInput returns the last input with a degree above 0, or -1.
func lastInput(a index) int {
	for j := len(a) - 1; j >= 0; j-- {
		if a[j] > 0 {
			return j
		}
	}
	return -1
}

// evaluate fills the polynomials and products at x.
func (b *basis) evaluate(s *scratch, x []float64) {
	if len(x) != len(b.inputs) {
		panic("pce: point of the wrong dimension")
	}
	for j, in := range b.inputs {
		in.polynomials(s.table[j*b.stride:(j+1)*b.stride], x[j])
	}
	s.values[0] = 1
	for t := 1; t < len(b.parent); t++ {
		s.values[t] = s.values[b.parent[t]] * s.table[b.slot[t]]
	}
}

// mean returns sum c_t psi_t(x).
func (b *basis) mean(coefficients, x []float64) float64 {
	s := b.pool.Get().(*scratch)
	b.evaluate(s, x)
	sum := 0.0
	for t, c := range coefficients {
		sum += c * s.values[t]
	}
	b.pool.Put(s)
	return sum
}

// gradient stores the derivatives of sum c_t psi_t(x) in dst and returns the
// sum. The products are swept backwards (reverse mode): twice the multiplications
// of the value for any number of inputs.
func (b *basis) gradient(dst, coefficients, x []float64) float64 {
	s := b.pool.Get().(*scratch)
	defer b.pool.Put(s)
	b.evaluate(s, x)
	copy(s.weights, coefficients)
	clear(s.adjoint)
	sum := coefficients[0]
	for t := len(coefficients) - 1; t > 0; t-- {
		sum += coefficients[t] * s.values[t]
		above, slot, weight := b.parent[t], b.slot[t], s.weights[t]
		s.weights[above] += weight * s.table[slot]
		s.adjoint[slot] += weight * s.values[above]
	}
	for j, in := range b.inputs {
		row := s.table[j*b.stride : (j+1)*b.stride]
		slopes := s.slopes[j*b.stride : (j+1)*b.stride]
		in.slopes(slopes, row)
		dst[j] = 0
		for k, slope := range slopes {
			dst[j] += s.adjoint[j*b.stride+k] * slope
		}
	}
	return sum
}

// design returns the n x P matrix of the products at the samples.
func (b *basis) design(x [][]float64) blas64.General {
	p := len(b.terms)
	m := blas64.General{Rows: len(x), Cols: p, Stride: p, Data: make([]float64, len(x)*p)}
	s := b.pool.Get().(*scratch)
	defer b.pool.Put(s)
	for i, row := range x {
		b.evaluate(s, row)
		copy(m.Data[i*p:(i+1)*p], s.values)
	}
	return m
}

// closed returns the terms marked by keep together with their parents, in the
// order of the list, and the old place of each.
func closed(terms []index, b *basis, keep []bool) (kept []index, from []int) {
	needed := make([]bool, len(terms))
	needed[0] = true
	for t := len(terms) - 1; t > 0; t-- {
		if needed[t] = needed[t] || keep[t]; needed[t] {
			needed[b.parent[t]] = true
		}
	}
	for t, a := range terms {
		if needed[t] {
			kept = append(kept, a)
			from = append(from, t)
		}
	}
	return kept, from
}
