// Package shock holds the relations across single waves of a perfect gas:
// normal and oblique shocks by two routes that share only constants, the
// largest attached turning, Prandtl-Meyer expansions, regular reflection, and
// the residuals of the conservation laws. Angles are in radians.
package shock

import (
	"math"

	"rampwright/problems/gas"
)

// Jump is the change of state across a shock, downstream over upstream.
type Jump struct {
	Pressure      float64
	Density       float64
	Temperature   float64
	TotalPressure float64
}

// Across returns the jump at normal Mach number Mn >= 1 (NACA Report 1135
// eqs. 93-95, 99 with M sin(beta) for M), in the excess z = Mn^2 - 1:
//
//	p2/p1     = 1 + 2g/(g+1) z
//	rho2/rho1 = (g+1) Mn^2 / ((g-1) Mn^2 + 2) = 1 + 2z / ((g-1) z + g+1)
//	pt2/pt1   = (rho2/rho1)^(g/(g-1)) (p2/p1)^(-1/(g-1))
//
// Special case: all ratios are 1 at Mn = 1. Relative error below 2e-15/(g-1).
// The powers are taken as one exponential of log1p(z), so that the loss of a
// weak shock, of order z^3, never drowns in the rounding of its ratios.
func Across(g gas.Perfect, normalMach float64) Jump {
	return acrossExcess(g.Gamma, (normalMach-1)*(normalMach+1))
}

// acrossExcess is Across in z = Mn^2 - 1.
func acrossExcess(gamma, excess float64) Jump {
	squeeze := 2 * gamma / (gamma + 1) * excess
	crowd := 2 * excess / ((gamma-1)*excess + gamma + 1)
	return Jump{
		Pressure:      1 + squeeze,
		Density:       1 + crowd,
		Temperature:   (1 + squeeze) / (1 + crowd),
		TotalPressure: math.Exp((gamma*math.Log1p(crowd) - math.Log1p(squeeze)) / (gamma - 1)),
	}
}

// Normal returns the Mach number behind a normal shock at M1 >= 1 (NACA Report
// 1135 eq. 96) and the jump:
//
//	M2^2 = ((g-1) M1^2 + 2) / (2g M1^2 - (g-1))
func Normal(g gas.Perfect, mach float64) (mach2 float64, jump Jump) {
	square := mach * mach
	mach2 = math.Sqrt(((g.Gamma-1)*square + 2) / (2*g.Gamma*square - (g.Gamma - 1)))
	return mach2, Across(g, mach)
}

func pressureRatio(gamma, normalSquare float64) float64 {
	return 1 + 2*gamma/(gamma+1)*(normalSquare-1)
}

// squareBehind is M2^2 behind an oblique shock, from M1^2 and Mn^2 (NACA Report
// 1135 eq. 132):
//
//	M2^2 = ((g+1)^2 M1^2 Mn^2 - 4 (Mn^2-1)(g Mn^2+1)) / ((2g Mn^2 - (g-1))((g-1) Mn^2 + 2))
func squareBehind(gamma, square, normalSquare float64) float64 {
	above := (gamma+1)*(gamma+1)*square*normalSquare - 4*(normalSquare-1)*(gamma*normalSquare+1)
	return above / ((2*gamma*normalSquare - (gamma - 1)) * ((gamma-1)*normalSquare + 2))
}
