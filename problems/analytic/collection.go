package analytic

import "math"

const collected = "Liang et al., Problem definitions for the CEC 2006 special session on constrained optimization (from memory)"

// collection are members of a much used collection of constrained problems.
var collection = []Function{
	{
		Name: "g04",
		Definition: "5.3578547 x3^2 + 0.8356891 x1 x5 + 37.293239 x1 - 40792.141; " +
			"0 <= g1 <= 92, 90 <= g2 <= 110, 20 <= g3 <= 25, each quadratic",
		Source:    "Himmelblau (1972); " + collected,
		Variables: box([2]float64{78, 102}, [2]float64{33, 45}, [2]float64{27, 45}, [2]float64{27, 45}, [2]float64{27, 45}),
		Limits:    []Range{{0, 92}, {90, 110}, {20, 25}},
		Best:      []float64{78, 33, 29.9952560256815985, 45, 36.7758129057882073},
		Lowest:    -30665.53867178332,
		evaluate:  himmelblau,
	},
	{
		Name:       "g06",
		Definition: "(x1 - 10)^3 + (x2 - 20)^3; g1 100 - (x1 - 5)^2 - (x2 - 5)^2, g2 (x1 - 6)^2 + (x2 - 5)^2 - 82.81",
		Source:     collected,
		Variables:  box([2]float64{13, 100}, [2]float64{0, 100}),
		Limits:     below(2),
		Best:       []float64{14.095, 0.8429607892154795668},
		Lowest:     -6961.81387558015,
		evaluate:   crescent,
	},
	{
		Name:       "g08",
		Definition: "-sin(2 pi x1)^3 sin(2 pi x2)/(x1^3 (x1 + x2)); g1 x1^2 - x2 + 1, g2 1 - x1 + (x2 - 4)^2; no value at x1 = 0",
		Source:     collected,
		Variables:  axes(2, 0, 10),
		Limits:     below(2),
		Best:       []float64{1.22797135260752599, 4.24537336612274885},
		Lowest:     -0.0958250414180359,
		evaluate:   ripples,
	},
	{
		Name:       "g09",
		Definition: sevenDefinition + ", box -10..10",
		Source:     collected,
		Variables:  axes(7, -10, 10),
		Limits:     below(4),
		Best:       sevenBest,
		Lowest:     sevenLowest,
		evaluate:   seven,
	},
	{
		Name:       "g24",
		Definition: "-x1 - x2; g1 -2 x1^4 + 8 x1^3 - 8 x1^2 + x2 - 2, g2 -4 x1^4 + 32 x1^3 - 88 x1^2 + 96 x1 + x2 - 36; two parts",
		Source:     "Floudas & Pardalos (1987); " + collected,
		Variables:  box([2]float64{0, 3}, [2]float64{0, 4}),
		Limits:     below(2),
		Best:       []float64{2.32952019747762, 3.17849307411774},
		Lowest:     -5.50801327159536,
		evaluate:   twoParts,
	},
}

func himmelblau(x, dst []float64) {
	x1, x2, x3, x4, x5 := x[0], x[1], x[2], x[3], x[4]
	dst[0] = 5.3578547*x3*x3 + 0.8356891*x1*x5 + 37.293239*x1 - 40792.141
	dst[1] = 85.334407 + 0.0056858*x2*x5 + 0.0006262*x1*x4 - 0.0022053*x3*x5
	dst[2] = 80.51249 + 0.0071317*x2*x5 + 0.0029955*x1*x2 + 0.0021813*x3*x3
	dst[3] = 9.300961 + 0.0047026*x3*x5 + 0.0012547*x1*x3 + 0.0019085*x3*x4
}

func crescent(x, dst []float64) {
	dst[0] = cube(x[0]-10) + cube(x[1]-20)
	dst[1] = 100 - square(x[0]-5) - square(x[1]-5)
	dst[2] = square(x[0]-6) + square(x[1]-5) - 82.81
}

func ripples(x, dst []float64) {
	dst[0] = -cube(math.Sin(2*math.Pi*x[0])) * math.Sin(2*math.Pi*x[1]) / (cube(x[0]) * (x[0] + x[1]))
	dst[1] = square(x[0]) - x[1] + 1
	dst[2] = 1 - x[0] + square(x[1]-4)
}

const (
	sevenDefinition = "(x1-10)^2 + 5 (x2-12)^2 + x3^4 + 3 (x4-11)^2 + 10 x5^6 + 7 x6^2 + x7^4 - 4 x6 x7 - 10 x6 - 8 x7; " +
		"g1..g4 polynomials"
	sevenLowest = 680.630057374402
)

var sevenBest = []float64{
	2.33049935147405174, 1.95137236847114592, -0.477541399510615805, 4.36572624923625874,
	-0.624486959100388983, 1.03813099410962173, 1.5942266780671519,
}

// seven is problem 100 of Hock & Schittkowski, without a box of its own.
func seven(x, dst []float64) {
	x1, x2, x3, x4, x5, x6, x7 := x[0], x[1], x[2], x[3], x[4], x[5], x[6]
	dst[0] = square(x1-10) + 5*square(x2-12) + fourth(x3) + 3*square(x4-11) + 10*square(cube(x5)) +
		7*x6*x6 + fourth(x7) - 4*x6*x7 - 10*x6 - 8*x7
	dst[1] = 2*x1*x1 + 3*fourth(x2) + x3 + 4*x4*x4 + 5*x5 - 127
	dst[2] = 7*x1 + 3*x2 + 10*x3*x3 + x4 - x5 - 282
	dst[3] = 23*x1 + x2*x2 + 6*x6*x6 - 8*x7 - 196
	dst[4] = 4*x1*x1 + x2*x2 - 3*x1*x2 + 2*x3*x3 + 5*x6 - 11*x7
}

func twoParts(x, dst []float64) {
	a, b := x[0], x[1]
	dst[0] = -a - b
	dst[1] = -2*fourth(a) + 8*cube(a) - 8*a*a + b - 2
	dst[2] = -4*fourth(a) + 32*cube(a) - 88*a*a + 96*a + b - 36
}
