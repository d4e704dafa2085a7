package crossval_test

import (
	"math"

	"rampwright/surrogate/doe"
)

// fourRamps returns the total-pressure recovery of four oblique shocks of 2..10
// deg each at Mach 7, g = 1.4, at a point of the unit cube. The wave angle is
// the weak root of tan(theta) = 2 cot(beta) (M^2 sin^2(beta) - 1)/(M^2 (g +
// cos(2 beta)) + 2) by bisection between the Mach angle and the wave angle of
// largest deflection; jumps by NACA Report 1135, equations 128, 132, 142.
func fourRamps(u []float64) float64 {
	const g = 1.4
	mach, recovery := 7.0, 1.0
	for _, v := range u[:4] {
		theta := (2 + 8*v) * math.Pi / 180
		m2 := mach * mach
		deflection := func(beta float64) float64 {
			s := math.Sin(beta)
			return math.Atan(2 / math.Tan(beta) * (m2*s*s - 1) / (m2*(g+math.Cos(2*beta)) + 2))
		}
		crest := ((g+1)/4*m2 - 1 + math.Sqrt((g+1)*((g+1)*m2*m2/16+(g-1)/2*m2+1))) / (g * m2)
		low, high := math.Asin(1/mach), math.Asin(math.Sqrt(crest))
		for range 60 {
			if middle := (low + high) / 2; deflection(middle) < theta {
				low = middle
			} else {
				high = middle
			}
		}
		beta := (low + high) / 2
		normal := mach * math.Sin(beta)
		n2 := normal * normal
		recovery *= math.Pow((g+1)*n2/((g-1)*n2+2), g/(g-1)) * math.Pow((g+1)/(2*g*n2-(g-1)), 1/(g-1))
		behind := math.Sqrt(((g-1)*n2 + 2) / (2*g*n2 - (g - 1)))
		mach = behind / math.Sin(beta-theta)
	}
	return recovery
}

func sampled(n, d int, seed int64, f func([]float64) float64) ([][]float64, []float64) {
	x := doe.LatinHypercube(n, d, doe.Stream(seed, "test samples"))
	y := make([]float64, n)
	for i := range x {
		y[i] = f(x[i])
	}
	return x, y
}
