//go:build !noasm

package gpr

import (
	"math/rand/v2"
	"testing"
)

// Every way this processor has to subtract products gives the same bits.
func TestProductsHaveOneAnswer(t *testing.T) {
	ways := map[string]func(s *sums, panel, tile *float64, count int){}
	if eights {
		ways["vectors of eight"] = subtractEights
	}
	if fours {
		ways["vectors of four"] = subtractFours
	}
	if len(ways) == 0 {
		t.Log("this processor has neither AVX2 nor AVX-512: nothing to compare")
	}
	random := rand.New(rand.NewPCG(1, 2))
	for _, count := range []int{1, 2, 7, 40} {
		var start sums
		panel, tile := make([]float64, count*panelRows), make([]float64, count*tileSize)
		for _, numbers := range [][]float64{panel, tile, start[0][:], start[panelRows-1][:]} {
			for i := range numbers {
				numbers[i] = random.NormFloat64()
			}
		}
		want := start
		want.subtractOneByOne(panel, tile)
		for name, way := range ways {
			got := start
			if way(&got, &panel[0], &tile[0], count); got != want {
				t.Errorf("%s, %d columns: %v, one by one %v", name, count, got, want)
			}
		}
	}
}
