package robust

import "testing"

func BenchmarkFORM(b *testing.B) {
	for b.Loop() {
		if _, err := FORM(2, func(u, gradient []float64) float64 {
			bend := 0.2 * (u[0] - u[1])
			gradient[0], gradient[1] = bend-0.7071067811865476, -bend-0.7071067811865476
			return bend*(u[0]-u[1])/2 - (u[0]+u[1])*0.7071067811865476 + 2.5
		}); err != nil {
			b.Fatal(err)
		}
	}
}
