package gpr

import (
	"math"

	"gonum.org/v1/gonum/blas/blas64"
)

// Rows of a panel and points of a tile.
const (
	panelRows = 8
	tileSize  = 8
)

// sums holds one number for each row of a panel and point of a tile.
type sums [panelRows][tileSize]float64

// subtractOneByOne takes the products of a panel and a tile from s:
//
//	s[r][c] -= sum_k panel[k][r] tile[k][c]
//
// k after k by fused multiply-adds. subtract gives the same bits, by vectors
// where the processor has them.
func (s *sums) subtractOneByOne(panel, tile []float64) {
	for k := range len(panel) / panelRows {
		column := panel[k*panelRows:][:panelRows]
		row := tile[k*tileSize:][:tileSize]
		for r, a := range column {
			for c, b := range row {
				s[r][c] = math.FMA(-a, b, s[r][c])
			}
		}
	}
}

// panels is a matrix cut into groups of rows, each packed column by column so
// that a product reads it in one run. Zeros fill the last group.
type panels [][]float64

// newPanels packs rows; a panel is as wide as its longest row.
func newPanels(rows [][]float64) panels {
	p := make(panels, 0, (len(rows)+panelRows-1)/panelRows)
	for low := 0; low < len(rows); low += panelRows {
		group := rows[low:min(low+panelRows, len(rows))]
		width := 0
		for _, row := range group {
			width = max(width, len(row))
		}
		panel := make([]float64, panelRows*width)
		for r, row := range group {
			for k, v := range row {
				panel[k*panelRows+r] = v
			}
		}
		p = append(p, panel)
	}
	return p
}

// triangle is a lower triangular matrix L packed to solve for tiles of points.
type triangle struct {
	// left has the rows of each group as far as the middle of its diagonal block, of
	// which the upper half is zero: the lower one follows once that is solved.
	left     panels
	diagonal [][half][half]float64 // on the diagonal of L, with 1/L_ii on its own
}

const half = panelRows / 2

func newTriangle(l blas64.Triangular) triangle {
	groups := (l.N + panelRows - 1) / panelRows
	t := triangle{diagonal: make([][half][half]float64, 2*groups)}
	rows := make([][]float64, l.N)
	for i := range rows {
		row := l.Data[i*l.Stride : i*l.Stride+i+1]
		block, r := i/half, i%half
		rows[i] = row[:block*half]
		copy(t.diagonal[block][r][:r], row[block*half:])
		t.diagonal[block][r][r] = 1 / row[i]
	}
	t.left = newPanels(rows)
	return t
}

// solve overwrites a tile V, which has a row of zeros for each row missing in the
// last group, by L^-1 V.
func (t *triangle) solve(tile []float64) {
	var s sums
	for b, panel := range t.left {
		first := b * panelRows
		own := tile[first*tileSize:][:panelRows*tileSize]
		for r := range s {
			copy(s[r][:], own[r*tileSize:])
		}
		s.subtract(panel[:first*panelRows], tile)
		s.solveHalf(&t.diagonal[2*b], 0, own)
		s.subtract(panel[first*panelRows:], own)
		s.solveHalf(&t.diagonal[2*b+1], half, own[half*tileSize:])
	}
}

// solveHalf solves the rows of s from low on for a block of the diagonal and
// stores them.
func (s *sums) solveHalf(block *[half][half]float64, low int, own []float64) {
	rows := s[low:][:half]
	for r := range rows {
		for k, l := range block[r][:r] {
			for c := range rows[r] {
				rows[r][c] -= l * rows[k][c]
			}
		}
		for c := range rows[r] {
			rows[r][c] *= block[r][r]
		}
		copy(own[r*tileSize:], rows[r][:])
	}
}
