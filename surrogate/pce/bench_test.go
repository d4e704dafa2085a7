package pce

import (
	"fmt"
	"testing"

	"rampwright/surrogate"
)

func BenchmarkFit(b *testing.B) {
	for _, m := range everyKind[:4] {
		for _, n := range []int{60, 100, 320} {
			b.Run(fmt.Sprintf("%s/n=%d", m.Kind(), n), func(b *testing.B) {
				x, y := samples(n, 4, 8, smooth)
				for b.Loop() {
					if _, err := m.Fit(background, x, y); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

func BenchmarkMean(b *testing.B) {
	x, y := samples(160, 4, 9, smooth)
	for _, degree := range []int{3, 4, 8} {
		e := fit(b, Ridge{Truncation: Truncation{Degree: degree}, Growth: 4, Exactly: true}, x, y)
		u, slope := []float64{0.2, 0.3, 0.4, 0.5}, make([]float64, 4)
		b.Run(fmt.Sprintf("mean/terms=%d", e.active), func(b *testing.B) {
			for b.Loop() {
				e.Mean(u)
			}
		})
		b.Run(fmt.Sprintf("gradient/terms=%d", e.active), func(b *testing.B) {
			for b.Loop() {
				e.Gradient(slope, u)
			}
		})
		b.Run(fmt.Sprintf("deviation/terms=%d", e.active), func(b *testing.B) {
			for b.Loop() {
				e.Predict(u)
			}
		})
	}
}

// The path with ten folds on 210 terms and 320 samples.
func BenchmarkLassoPath(b *testing.B) {
	x, y := samples(320, 4, 10, smooth)
	terms, _ := Truncation{Degree: 6}.indices(4, 1000)
	design := newBasis(make([]Input, 4), terms).design(x)
	_, scaled, _ := surrogate.Standardise(y)
	for b.Loop() {
		selectByLasso(design, scaled, 10, 1)
	}
}
