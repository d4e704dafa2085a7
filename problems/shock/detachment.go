package shock

import (
	"math"

	"rampwright/problems/gas"
)

// LargestTurning returns the largest turning an attached shock gives at
// M >= 1 and its wave angle, rad. NACA Report 1135 eq. 168 gives it as
//
//	sin^2(beta) = {(g+1)/4 M^2 - 1 + sqrt((g+1)[(g+1)M^4/16 + (g-1)/2 M^2 + 1])} / (g M^2)
//
// Here the same condition, d tan(theta)/dx = 0 in x = cot(beta), is solved for
// y = x^2, which keeps its digits down to M = 1 (A, B as for Weak):
//
//	B y^2 + ((M^2-1) B + 3A) y - (M^2-1) A = 0
//
// Special cases: 0 and pi/2 at M = 1; the limit for M = +Inf.
func LargestTurning(g gas.Perfect, mach float64) (turning, waveAngle float64) {
	if math.IsInf(mach, 1) {
		y := (g.Gamma - 1) / (g.Gamma + 1)
		x := math.Sqrt(y)
		return math.Atan(2 * x / ((g.Gamma+1)*y + g.Gamma - 1)), math.Atan2(1, x)
	}
	tangent, x := largestTangent(g.Gamma, mach*mach, (mach-1)*(mach+1))
	return math.Atan(tangent), math.Atan2(1, x)
}

// largestTangent is tan(theta) at the largest turning and its x = cot(beta),
// from M^2 and M^2 - 1 >= 0.
func largestTangent(gamma, square, excess float64) (tangent, cotangent float64) {
	a, b := (gamma-1)*square+2, (gamma+1)*square+2
	half := excess*b + 3*a
	y := 2 * excess * a / (half + math.Sqrt(half*half+4*b*excess*a))
	x := math.Sqrt(y)
	return 2 * x * (excess - y) / (b*y + a), x
}

// turningTangent is tan(theta) of a shock of x = cot(beta), from M^2 and
// M^2 - 1 (NACA Report 1135 eq. 138): 2x (M^2 - 1 - x^2)/(B x^2 + A).
func turningTangent(gamma, square, excess, x float64) float64 {
	a, b := (gamma-1)*square+2, (gamma+1)*square+2
	return 2 * x * (excess - x*x) / (b*x*x + a)
}

// SonicTurning returns the turning behind which the flow is just sonic at
// M >= 1 and its wave angle, rad (NACA Report 1135 eq. 167):
//
//	sin^2(beta) = {(g+1)/4 M^2 - (3-g)/4 + sqrt((g+1)[(g+1)M^4/16 - (3-g)/8 M^2 + (9+g)/16])} / (g M^2)
func SonicTurning(g gas.Perfect, mach float64) (turning, waveAngle float64) {
	gamma, square := g.Gamma, mach*mach
	root := math.Sqrt((gamma + 1) * ((gamma+1)*square*square/16 - (3-gamma)/8*square + (9+gamma)/16))
	sine := ((gamma+1)/4*square - (3-gamma)/4 + root) / (gamma * square)
	waveAngle = math.Asin(math.Sqrt(math.Min(1, sine))) // rounding passes 1 at M = 1
	return math.Max(0, Turning(g, mach, waveAngle)), waveAngle
}
