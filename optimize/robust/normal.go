package robust

import (
	"math"
	"math/rand/v2"

	"rampwright/problems"
)

// Phi is the standard normal distribution function, erfc(-x/sqrt(2))/2.
func Phi(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 }

// Quantile is the inverse of Phi: -sqrt(2) erfcinv(2p); infinite at 0 and 1, NaN
// outside.
func Quantile(p float64) float64 { return -math.Sqrt2 * math.Erfcinv(2*p) }

// truncated is the quantile of the standard normal distribution truncated at
// problems.TruncatedAt = t: z(p) = Phi^-1(Phi(-t) + p (Phi(t) - Phi(-t))). Its
// variance is 1 - 2 t phi(t)/(Phi(t) - Phi(-t)) = 0.99893 of the whole
// distribution's (Johnson, Kotz & Balakrishnan 1994, section 13.10.1, from
// memory).
func truncated(p float64) float64 {
	const t = problems.TruncatedAt
	tail := Phi(-t)
	return min(t, max(-t, Quantile(tail+p*(1-2*tail))))
}

// drawn fills n rows of d independent truncated standard normal deviates.
func drawn(n, d int, source *rand.Rand) [][]float64 {
	block := make([]float64, n*d)
	rows := make([][]float64, n)
	for i := range rows {
		rows[i] = block[i*d : (i+1)*d : (i+1)*d]
		for j := range rows[i] {
			rows[i][j] = truncated(source.Float64())
		}
	}
	return rows
}
