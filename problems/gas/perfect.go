// Package gas holds the working fluid: a calorically perfect gas and its
// isentropic relations. Everything is in SI units.
package gas

// SpecificConstantAir is R of air, J/(kg K): U.S. Standard Atmosphere 1976,
// 8314.32 / 28.9644.
const SpecificConstantAir = 287.05287

// Perfect is a calorically perfect gas. Gamma is the ratio of specific heats,
// in (1, 5/3]; R the specific gas constant, J/(kg K).
type Perfect struct {
	Gamma float64
	R     float64
}

// Air is air with constant specific heats, gamma 1.4.
var Air = Perfect{Gamma: 1.4, R: SpecificConstantAir}
