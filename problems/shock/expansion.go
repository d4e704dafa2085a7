package shock

import (
	"fmt"
	"math"

	"rampwright/problems/gas"
)

// PrandtlMeyer returns nu(M), rad, for M >= 1 (NACA Report 1135 eq. 171c):
//
//	nu = sqrt((g+1)/(g-1)) atan(sqrt((g-1)/(g+1) (M^2-1))) - atan(sqrt(M^2-1))
//
// Special cases: 0 at M = 1; pi/2 (sqrt((g+1)/(g-1)) - 1) at M = +Inf.
func PrandtlMeyer(g gas.Perfect, mach float64) float64 {
	root := math.Sqrt(mach*mach - 1)
	ratio := math.Sqrt((g.Gamma + 1) / (g.Gamma - 1))
	return ratio*math.Atan(root/ratio) - math.Atan(root)
}

// Vacuum reports an expansion beyond the turning that leaves a vacuum.
type Vacuum struct {
	Mach    float64
	Turning float64
}

func (e *Vacuum) Error() string {
	return fmt.Sprintf("an expansion by %.6g rad at Mach %.6g would pass vacuum", e.Turning, e.Mach)
}

// Expand returns the Mach number behind a Prandtl-Meyer fan that turns a flow of
// M >= 1 away by theta >= 0, rad, and the static pressure ratio p2/p1:
//
//	nu(M2) = nu(M1) + theta,   p2/p1 = [(1+(g-1)/2 M1^2)/(1+(g-1)/2 M2^2)]^(g/(g-1))
//
// Errors: *Vacuum where nu(M2) would reach its limit.
func Expand(g gas.Perfect, mach, turning float64) (mach2, pressureRatio float64, err error) {
	target := PrandtlMeyer(g, mach) + turning
	if !(target < PrandtlMeyer(g, math.Inf(1))) {
		return math.NaN(), math.NaN(), &Vacuum{Mach: mach, Turning: turning}
	}
	mach2 = math.Max(mach, machOfPrandtlMeyer(g, target, mach)) // 1/(1/M) may round below M
	return mach2, g.TotalPressureRatio(mach) / g.TotalPressureRatio(mach2), nil
}

// machOfPrandtlMeyer inverts nu by a bracketed root in 1/M, where nu falls
// monotonically from its limit at 0.
func machOfPrandtlMeyer(g gas.Perfect, nu, atLeast float64) float64 {
	inverse := bracketedRoot(func(inverse float64) float64 {
		if inverse == 0 {
			return PrandtlMeyer(g, math.Inf(1)) - nu
		}
		return PrandtlMeyer(g, 1/inverse) - nu
	}, 0, 1/atLeast)
	return 1 / inverse
}
