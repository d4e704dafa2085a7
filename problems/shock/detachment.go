package shock

import (
	"math"

	"rampwright/problems/gas"
)

// LargestTurning returns the largest turning an attached shock gives at
// M >= 1 and its wave angle, rad (NACA Report 1135 eq. 168):
//
//	sin^2(beta) = {(g+1)/4 M^2 - 1 + sqrt((g+1)[(g+1)M^4/16 + (g-1)/2 M^2 + 1])} / (g M^2)
//
// Special cases: 0 and pi/2 at M = 1; the limit for M = +Inf.
func LargestTurning(g gas.Perfect, mach float64) (turning, waveAngle float64) {
	gamma := g.Gamma
	if math.IsInf(mach, 1) {
		waveAngle = math.Asin(math.Sqrt((gamma + 1) / (2 * gamma)))
		sin, cos := math.Sincos(waveAngle)
		return math.Atan2(2*cos*sin, gamma+1-2*sin*sin), waveAngle
	}
	square := mach * mach
	root := math.Sqrt((gamma + 1) * ((gamma+1)*square*square/16 + (gamma-1)/2*square + 1))
	waveAngle = angleOfSineSquare(((gamma+1)/4*square - 1 + root) / (gamma * square))
	return math.Max(0, Turning(g, mach, waveAngle)), waveAngle
}

// SonicTurning returns the turning behind which the flow is just sonic at
// M >= 1 and its wave angle, rad (NACA Report 1135 eq. 167):
//
//	sin^2(beta) = {(g+1)/4 M^2 - (3-g)/4 + sqrt((g+1)[(g+1)M^4/16 - (3-g)/8 M^2 + (9+g)/16])} / (g M^2)
func SonicTurning(g gas.Perfect, mach float64) (turning, waveAngle float64) {
	gamma, square := g.Gamma, mach*mach
	root := math.Sqrt((gamma + 1) * ((gamma+1)*square*square/16 - (3-gamma)/8*square + (9+gamma)/16))
	waveAngle = angleOfSineSquare(((gamma+1)/4*square - (3-gamma)/4 + root) / (gamma * square))
	return math.Max(0, Turning(g, mach, waveAngle)), waveAngle
}

// angleOfSineSquare guards rounding past 1 at M = 1.
func angleOfSineSquare(square float64) float64 {
	return math.Asin(math.Sqrt(math.Min(1, square)))
}
