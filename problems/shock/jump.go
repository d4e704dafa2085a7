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
// eqs. 93-95, 99 with M sin(beta) for M):
//
//	p2/p1     = 1 + 2g/(g+1) (Mn^2 - 1)
//	rho2/rho1 = (g+1) Mn^2 / ((g-1) Mn^2 + 2)
//	pt2/pt1   = (rho2/rho1)^(g/(g-1)) (p2/p1)^(-1/(g-1))
//
// Special case: all ratios are 1 at Mn = 1. Relative error below 1e-14.
func Across(g gas.Perfect, normalMach float64) Jump {
	square := normalMach * normalMach
	pressure := pressureRatio(g.Gamma, square)
	density := densityRatio(g.Gamma, square)
	return Jump{
		Pressure:      pressure,
		Density:       density,
		Temperature:   pressure / density,
		TotalPressure: totalPressureRatio(g.Gamma, pressure, density),
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

func densityRatio(gamma, normalSquare float64) float64 {
	return (gamma + 1) * normalSquare / ((gamma-1)*normalSquare + 2)
}

func totalPressureRatio(gamma, pressure, density float64) float64 {
	return math.Pow(math.Pow(density, gamma)/pressure, 1/(gamma-1))
}
