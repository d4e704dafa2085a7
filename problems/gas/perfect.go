// Package gas holds the working fluid: a calorically perfect gas and its
// isentropic relations. Everything is in SI units.
package gas

import (
	"errors"
	"fmt"
	"math"
)

// SpecificConstantAir is R of air, J/(kg K): ISO 2533, 8314.32 / 28.964420.
const SpecificConstantAir = 287.05287

// Perfect is a calorically perfect gas. Gamma is the ratio of specific heats,
// in (1, 5/3]; R the specific gas constant, J/(kg K).
type Perfect struct {
	Gamma float64
	R     float64
}

// Air is air with constant specific heats, gamma 1.4.
var Air = Perfect{Gamma: 1.4, R: SpecificConstantAir}

// Validate reports, all at once, a ratio of specific heats outside (1, 5/3]
// (kinetic theory: a monatomic gas has 5/3) and a gas constant that is not
// positive.
func (g Perfect) Validate() error {
	var ratio, constant error
	if !(g.Gamma > 1 && g.Gamma <= 5.0/3) {
		ratio = fmt.Errorf("ratio of specific heats %v outside (1, 5/3]", g.Gamma)
	}
	if !(g.R > 0) || math.IsInf(g.R, 1) {
		constant = fmt.Errorf("specific gas constant %v J/(kg K) is not positive", g.R)
	}
	return errors.Join(ratio, constant)
}

// SoundSpeed returns a = sqrt(g R T), m/s, for T in K.
func (g Perfect) SoundSpeed(temperature float64) float64 {
	return math.Sqrt(g.Gamma * g.R * temperature)
}

// Density returns rho = p/(R T), kg/m3.
func (g Perfect) Density(pressure, temperature float64) float64 {
	return pressure / (g.R * temperature)
}

// DynamicPressure returns q = g/2 p M^2, in the unit of p.
func (g Perfect) DynamicPressure(pressure, mach float64) float64 {
	return g.Gamma / 2 * pressure * mach * mach
}

// TotalTemperatureRatio returns Tt/T = 1 + (g-1)/2 M^2 (NACA Report 1135
// eq. 43).
func (g Perfect) TotalTemperatureRatio(mach float64) float64 {
	return 1 + (g.Gamma-1)/2*mach*mach
}

// TotalPressureRatio returns pt/p = (Tt/T)^(g/(g-1)) (NACA Report 1135 eq. 44).
func (g Perfect) TotalPressureRatio(mach float64) float64 {
	return math.Pow(g.TotalTemperatureRatio(mach), g.Gamma/(g.Gamma-1))
}

// AreaRatio returns A/A*, the stream area over that of the isentropic throat
// (NACA Report 1135 eq. 80):
//
//	A/A* = (1/M) [2/(g+1) (1 + (g-1)/2 M^2)]^((g+1)/(2(g-1)))
//
// Special cases: 1 at M = 1; +Inf at M = 0.
func (g Perfect) AreaRatio(mach float64) float64 {
	exponent := (g.Gamma + 1) / (2 * (g.Gamma - 1))
	return math.Pow(2/(g.Gamma+1)*g.TotalTemperatureRatio(mach), exponent) / mach
}
