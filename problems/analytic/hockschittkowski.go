package analytic

import "math"

const hock = "Hock & Schittkowski, Test Examples for Nonlinear Programming Codes (1981), problem "

// hockSchittkowski are problems of the collection of that name. Where it states
// no upper bound the box is ours, wide enough to hold every feasible point of
// interest.
var hockSchittkowski = []Function{
	{
		Name:       "hs35",
		Definition: "9 - 8 x1 - 6 x2 - 4 x3 + 2 x1^2 + 2 x2^2 + x3^2 + 2 x1 x2 + 2 x1 x3; g1 x1 + x2 + 2 x3 <= 3; box 0..3, its upper faces implied",
		Source:     hock + "35, Beale (from memory)",
		Variables:  axes(3, 0, 3),
		Limits:     []Range{{math.Inf(-1), 3}},
		Best:       []float64{4. / 3, 7. / 9, 4. / 9},
		Lowest:     1. / 9,
		evaluate:   beale,
	},
	{
		Name:       "hs43",
		Definition: "x1^2 + x2^2 + 2 x3^2 + x4^2 - 5 x1 - 5 x2 - 21 x3 + 7 x4; g1 <= 8, g2 <= 10, g3 <= 5, each quadratic; box -4..4 ours",
		Source:     hock + "43, Rosen & Suzuki (from memory)",
		Variables:  axes(4, -4, 4),
		Limits:     []Range{{math.Inf(-1), 8}, {math.Inf(-1), 10}, {math.Inf(-1), 5}},
		Best:       []float64{0, 1, 2, -1},
		Lowest:     -44,
		evaluate:   rosenSuzuki,
	},
	{
		Name:       "hs71",
		Definition: "x1 x4 (x1 + x2 + x3) + x3; g1 product of all >= 25; g2 sum of squares <= 40, published as an equality: its multiplier makes the two alike; box 1..5",
		Source:     hock + "71 (from memory)",
		Variables:  axes(4, 1, 5),
		Limits:     []Range{{25, math.Inf(1)}, {math.Inf(-1), 40}},
		Best:       []float64{1, 4.74299963, 3.82114998, 1.37940829},
		Lowest:     17.0140173,
		evaluate:   product,
	},
	{
		Name: "hs76",
		Definition: "x1^2 + x2^2/2 + x3^2 + x4^2/2 - x1 x3 + x3 x4 - x1 - 3 x2 + x3 - x4; " +
			"g1 x1 + 2 x2 + x3 + x4 <= 5, g2 3 x1 + x2 + 2 x3 - x4 <= 4, g3 x2 + 4 x3 >= 1.5; box 0..5, its upper faces implied",
		Source:    hock + "76 (from memory)",
		Variables: axes(4, 0, 5),
		Limits:    []Range{{math.Inf(-1), 5}, {math.Inf(-1), 4}, {1.5, math.Inf(1)}},
		Best:      []float64{3. / 11, 23. / 11, 0, 6. / 11},
		Lowest:    -103. / 22,
		evaluate:  quadratic,
	},
	{
		Name:       "hs100",
		Definition: sevenDefinition + "; box -5..5 ours",
		Source:     hock + "100 (from memory)",
		Variables:  axes(7, -5, 5),
		Limits:     below(4),
		Best:       sevenBest,
		Lowest:     sevenLowest,
		evaluate:   seven,
	},
}

func beale(x, dst []float64) {
	a, b, c := x[0], x[1], x[2]
	dst[0] = 9 - 8*a - 6*b - 4*c + 2*a*a + 2*b*b + c*c + 2*a*b + 2*a*c
	dst[1] = a + b + 2*c
}

func rosenSuzuki(x, dst []float64) {
	a, b, c, d := x[0], x[1], x[2], x[3]
	dst[0] = a*a + b*b + 2*c*c + d*d - 5*a - 5*b - 21*c + 7*d
	dst[1] = a*a + b*b + c*c + d*d + a - b + c - d
	dst[2] = a*a + 2*b*b + c*c + 2*d*d - a - d
	dst[3] = 2*a*a + b*b + c*c + 2*a - b - d
}

func product(x, dst []float64) {
	a, b, c, d := x[0], x[1], x[2], x[3]
	dst[0] = a*d*(a+b+c) + c
	dst[1] = a * b * c * d
	dst[2] = a*a + b*b + c*c + d*d
}

func quadratic(x, dst []float64) {
	a, b, c, d := x[0], x[1], x[2], x[3]
	dst[0] = a*a + b*b/2 + c*c + d*d/2 - a*c + c*d - a - 3*b + c - d
	dst[1] = a + 2*b + c + d
	dst[2] = 3*a + b + 2*c - d
	dst[3] = b + 4*c
}
