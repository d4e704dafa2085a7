//go:build !noasm

package gpr

import "golang.org/x/sys/cpu"

// subtractEights is subtractOneByOne for count > 0 columns of a panel, by vectors
// of eight numbers (AVX-512).
//
//go:noescape
func subtractEights(s *sums, panel, tile *float64, count int)

// subtractFours does so by vectors of four (AVX2).
//
//go:noescape
func subtractFours(s *sums, panel, tile *float64, count int)

var (
	eights = cpu.X86.HasAVX512F
	fours  = cpu.X86.HasAVX2 && cpu.X86.HasFMA
)

// subtract takes the products of a panel and a tile from s.
func (s *sums) subtract(panel, tile []float64) {
	count := len(panel) / panelRows
	if count == 0 {
		return
	}
	_ = tile[count*tileSize-1]
	switch {
	case eights:
		subtractEights(s, &panel[0], &tile[0], count)
	case fours:
		subtractFours(s, &panel[0], &tile[0], count)
	default:
		s.subtractOneByOne(panel, tile)
	}
}
