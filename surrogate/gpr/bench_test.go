package gpr

import (
	"fmt"
	"testing"

	"rampwright/surrogate/doe"
)

func BenchmarkLikelihood(b *testing.B) {
	for _, n := range []int{60, 100, 200, 500} {
		b.Run(name(n), func(b *testing.B) {
			x, y := samples(n, 4, 7, smooth)
			s := newSolver(newSample(x, y, RBF, Constant))
			gradient := make([]float64, 4)
			for b.Loop() {
				s.value([]float64{0.7, 0.9, 1.1, 1.3}, 1e-8)
				s.gradient(gradient, 1e-8)
			}
		})
	}
}

func BenchmarkFit(b *testing.B) {
	for _, n := range []int{60, 100, 200, 500} {
		b.Run(name(n), func(b *testing.B) {
			x, y := samples(n, 4, 8, smooth)
			for b.Loop() {
				p := fit(b, Config{Jobs: 2}, x, y)
				b.ReportMetric(p.Evidence().Gradient, "gradient")
			}
		})
	}
}

func BenchmarkWarmFit(b *testing.B) {
	x, y := samples(61, 4, 9, smooth)
	warm := fit(b, Config{}, x[:60], y[:60]).Warm()
	for b.Loop() {
		if _, err := warm.Fit(background, x, y); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPredict(b *testing.B) {
	for _, n := range []int{100, 500} {
		x, y := samples(n, 4, 10, smooth)
		p := fit(b, Config{Restarts: 1}, x, y)
		u, slope := []float64{0.21, 0.32, 0.43, 0.54}, make([]float64, 4)
		b.Run("mean/"+name(n), func(b *testing.B) {
			for b.Loop() {
				p.Mean(u)
			}
		})
		b.Run("gradient/"+name(n), func(b *testing.B) {
			for b.Loop() {
				p.Gradient(slope, u)
			}
		})
		b.Run("deviation/"+name(n), func(b *testing.B) {
			for b.Loop() {
				p.Predict(u)
			}
		})
	}
}

// Ten thousand means and deviations on two goroutines.
func BenchmarkPredictMany(b *testing.B) {
	points := doe.RandomLatinHypercube(10_000, 4, doe.Stream(12, "test points"))
	mean, deviation := make([]float64, len(points)), make([]float64, len(points))
	for _, n := range []int{100, 500} {
		x, y := samples(n, 4, 10, smooth)
		p := fit(b, Config{Restarts: 1}, x, y)
		b.Run(name(n), func(b *testing.B) {
			for b.Loop() {
				p.PredictMany(points, mean, deviation, 2)
			}
		})
	}
}

func name(n int) string {
	return fmt.Sprintf("n=%d", n)
}
