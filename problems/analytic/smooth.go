package analytic

import "math"

// smooth are functions over a box alone: what surrogates are measured on.
var smooth = []Function{
	{
		Name:       "styblinski_tang",
		Definition: "sum over 5 inputs of (x^4 - 16 x^2 + 5 x)/2, box -5..5",
		Source:     "Styblinski & Tang, Neural Networks 3 (1990), in five dimensions (from memory)",
		Variables:  axes(5, -5, 5),
		Best:       repeat(5, -2.9035340277711771),
		Lowest:     5 * -39.166165703771416,
		// Each input adds (E x^4 - 16 E x^2)/2 = (125 - 16*25/3)/2 and the
		// variance of its quartic, from E x^2k = 25^k/(2k+1).
		Moments:  &Moments{-125. / 6, 5. / 4 * (250000./9 + 256*500./9 + 25*25./3 - 32*25000./21)},
		evaluate: styblinskiTang,
	},
	{
		Name:       "sum_of_squares",
		Definition: "sum over 5 inputs of i x_i^2, box -10..10",
		Source:     "weighted sphere, e.g. Molga & Smutnicki, Test functions for optimization needs (2005) (from memory)",
		Variables:  axes(5, -10, 10),
		Best:       repeat(5, 0),
		Moments:    &Moments{500, 55 * 4e4 / 45},
		evaluate:   sumOfSquares,
	},
	{
		Name:       "gaussian_bumps",
		Definition: "minus Franke's sum of four exponential bumps of (9 x1, 9 x2), box 0..1",
		Source:     "Franke, A critical comparison of some methods for interpolation of scattered data, NPS-53-79-003 (1979) (from memory)",
		Variables:  axes(2, 0, 1),
		Best:       []float64{0.205991567574, 0.208050135312}, // computed here
		Lowest:     -1.22003257123,
		evaluate:   gaussianBumps,
	},
	{
		Name:       "gaussian_peak",
		Definition: "minus exp(-sum over 5 inputs of 4 (x - 0.5)^2), box 0..1",
		Source:     "Gaussian family of Genz, Proc. NATO Workshop on Numerical Integration (1987) (from memory)",
		Variables:  axes(5, 0, 1),
		Best:       repeat(5, 0.5),
		Lowest:     -1,
		Moments:    gaussianPeakMoments(),
		evaluate:   gaussianPeak,
	},
	{
		Name:       "trigonometric_product",
		Definition: "product over 5 inputs of i cos(i x_i), box 0..1",
		Source:     "Bratley, Fox & Niederreiter, ACM TOMACS 2 (1992) (from memory)",
		Variables:  axes(5, 0, 1),
		Best:       []float64{0, 0, 0, math.Pi / 4, 0},
		Lowest:     -120,
		Moments:    trigonometricProductMoments(),
		evaluate:   trigonometricProduct,
	},
	{
		Name:       "trigonometric_sum",
		Definition: "sum over 5 inputs of 3/10 + sin(t) + sin(t)^2, t = 16/15 x - 0.7, box -1..1",
		Source:     "Giunta & Watson, AIAA Paper 98-4758 (1998), the quasi-sinusoidal case (from memory)",
		Variables:  axes(5, -1, 1),
		Best:       repeat(5, 15./16*(0.7-math.Pi/6)),
		Lowest:     5 * (0.3 - 0.25),
		Moments:    trigonometricSumMoments(),
		evaluate:   trigonometricSum,
	},
	{
		Name:       "hyperbolic_tangent",
		Definition: "tanh of the sum of 5 inputs, box -1..1",
		Source:     "a smooth front across the box, the usual form of such tests; scaling ours",
		Variables:  axes(5, -1, 1),
		Best:       repeat(5, -1),
		Lowest:     math.Tanh(-5),
		evaluate:   hyperbolicTangent,
	},
	{
		Name:       "ishigami",
		Definition: "sin(x1) + 7 sin(x2)^2 + 0.1 x3^4 sin(x1), box -pi..pi",
		Source:     "Ishigami & Homma, Proc. ISUMA '90 (1990) (from memory)",
		Variables:  axes(3, -math.Pi, math.Pi),
		Best:       []float64{-math.Pi / 2, 0, math.Pi},
		Lowest:     -1 - 0.1*math.Pi*math.Pi*math.Pi*math.Pi,
		Moments:    &Moments{3.5, 49./8 + 0.1*fourth(math.Pi)/5 + 0.01*square(fourth(math.Pi))/18 + 0.5},
		evaluate:   ishigami,
	},
	{
		Name:       "sobol_g",
		Definition: "product over 8 inputs of (|4 x - 2| + a)/(1 + a), a = 0, 1, 4.5, 9, 99, 99, 99, 99, box 0..1",
		Source:     "Saltelli & Sobol', Matematicheskoe Modelirovanie 7 (1995) (from memory); it has kinks",
		Variables:  axes(8, 0, 1),
		Best:       repeat(8, 0.5),
		Lowest:     0,
		Moments:    sobolMoments(),
		evaluate:   sobol,
	},
}

func styblinskiTang(x, dst []float64) {
	sum := 0.0
	for _, v := range x {
		sum += fourth(v) - 16*v*v + 5*v
	}
	dst[0] = sum / 2
}

func sumOfSquares(x, dst []float64) {
	dst[0] = 0
	for i, v := range x {
		dst[0] += float64(i+1) * v * v
	}
}

// gaussianBumps is minus
//
//	0.75 exp(-((9x-2)^2 + (9y-2)^2)/4) + 0.75 exp(-(9x+1)^2/49 - (9y+1)/10)
//	+ 0.5 exp(-((9x-7)^2 + (9y-3)^2)/4) - 0.2 exp(-(9x-4)^2 - (9y-7)^2)
func gaussianBumps(x, dst []float64) {
	u, v := 9*x[0], 9*x[1]
	dst[0] = -0.75*math.Exp(-(square(u-2)+square(v-2))/4) -
		0.75*math.Exp(-square(u+1)/49-(v+1)/10) -
		0.5*math.Exp(-(square(u-7)+square(v-3))/4) +
		0.2*math.Exp(-square(u-4)-square(v-7))
}

func gaussianPeak(x, dst []float64) {
	sum := 0.0
	for _, v := range x {
		sum += 4 * square(v-0.5)
	}
	dst[0] = -math.Exp(-sum)
}

// gaussianPeakMoments follow from the integral over 0..1 of exp(-k (x-1/2)^2),
// sqrt(pi/k) erf(sqrt(k)/2), with k = 4 for the mean and 8 for the mean square.
func gaussianPeakMoments() *Moments {
	power := func(k float64) float64 { return math.Pow(math.Sqrt(math.Pi/k)*math.Erf(math.Sqrt(k)/2), 5) }
	return &Moments{-power(4), power(8) - square(power(4))}
}

func trigonometricProduct(x, dst []float64) {
	dst[0] = 1
	for i, v := range x {
		k := float64(i + 1)
		dst[0] *= k * math.Cos(k*v)
	}
}

// trigonometricProductMoments: the integral of i cos(i x) over 0..1 is sin(i),
// that of its square i^2/2 + i sin(2 i)/4.
func trigonometricProductMoments() *Moments {
	mean, meanSquare := 1.0, 1.0
	for i := 1.0; i <= 5; i++ {
		mean *= math.Sin(i)
		meanSquare *= i*i/2 + i*math.Sin(2*i)/4
	}
	return &Moments{mean, meanSquare - mean*mean}
}

func trigonometricSum(x, dst []float64) {
	dst[0] = 0
	for _, v := range x {
		s := math.Sin(16./15*v - 0.7)
		dst[0] += 0.3 + s + s*s
	}
}

// trigonometricSumMoments integrate sin^k(t), k = 1..4, over the range of t for
// one input.
func trigonometricSumMoments() *Moments {
	low, high := -16./15-0.7, 16./15-0.7
	integral := func(primitive func(t float64) float64) float64 {
		return (primitive(high) - primitive(low)) / (high - low)
	}
	s1 := integral(func(t float64) float64 { return -math.Cos(t) })
	s2 := integral(func(t float64) float64 { return t/2 - math.Sin(2*t)/4 })
	s3 := integral(func(t float64) float64 { return cube(math.Cos(t))/3 - math.Cos(t) })
	s4 := integral(func(t float64) float64 { return 3*t/8 - math.Sin(2*t)/4 + math.Sin(4*t)/32 })
	mean := s1 + s2
	return &Moments{5 * (0.3 + mean), 5 * (s2 + 2*s3 + s4 - mean*mean)}
}

func hyperbolicTangent(x, dst []float64) {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	dst[0] = math.Tanh(sum)
}

func ishigami(x, dst []float64) {
	dst[0] = math.Sin(x[0])*(1+0.1*fourth(x[2])) + 7*square(math.Sin(x[1]))
}

var sobolWeights = []float64{0, 1, 4.5, 9, 99, 99, 99, 99}

func sobol(x, dst []float64) {
	dst[0] = 1
	for i, v := range x {
		dst[0] *= (math.Abs(4*v-2) + sobolWeights[i]) / (1 + sobolWeights[i])
	}
}

// sobolMoments: each factor has mean 1 and variance 1/(3 (1+a)^2).
func sobolMoments() *Moments {
	product := 1.0
	for _, a := range sobolWeights {
		product *= 1 + 1/(3*square(1+a))
	}
	return &Moments{1, product - 1}
}
