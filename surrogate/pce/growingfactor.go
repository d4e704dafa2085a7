package pce

import "math"

// dependenceFloor is the least squared pivot relative to the column.
const dependenceFloor = 1e-10

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
