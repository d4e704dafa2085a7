// Package atmosphere is the U.S. Standard Atmosphere 1976 (whose layers ISO 2533
// shares to 80 km), from 5 km below sea level to 86 km geometric: the state at a
// geopotential altitude, the altitude of a pressure, and the viscosity of air.
// SI units throughout.
package atmosphere

import (
	"fmt"
	"math"
)

// Constants of U.S. Standard Atmosphere 1976, table 2 (digits from memory).
// Its R, 8314.32/28.9644 = 287.05307, is kept here rather than the 287.05287 of
// ISO 2533 (28.964420 kg/kmol): the printed pressures tell the two apart.
const (
	gravity          = 9.80665                    // m/s2, sea level
	specificConstant = 8314.32 / 28.9644          // J/(kg K)
	hydrostatic      = gravity / specificConstant // K/m, g0/R
	earthRadius      = 6356766.                   // m, of the geopotential
	seaLevel         = 101325.                    // Pa
	gamma            = 1.4                        // ratio of specific heats
	sutherlandB      = 1.458e-6                   // kg/(m s K^1/2), beta of equation 51
	sutherlandS      = 110.4                      // K, S of equation 51
)

// Lowest and Highest bound the model in geopotential altitude, m. Highest is
// 86 km geometric.
const (
	Lowest  = -5000.
	Highest = 84852.
)

// State is the air at one altitude. Temperature is the molecular-scale
// temperature of the standard; it differs from the kinetic one by less than
// 0.05 %, and only above 80 km.
type State struct {
	Altitude    float64 // m, geopotential
	Temperature float64 // K
	Pressure    float64 // Pa
	Density     float64 // kg/m3
	SoundSpeed  float64 // m/s
	Viscosity   float64 // Pa s
}

// OutOfRange reports a value the standard does not cover.
type OutOfRange struct {
	What      string // "geopotential altitude" or "pressure"
	Unit      string
	Value     float64
	Low, High float64
}

func (e *OutOfRange) Error() string {
	return fmt.Sprintf("standard atmosphere: %s %.6g %s is outside %.6g to %.6g %s",
		e.What, e.Value, e.Unit, e.Low, e.High, e.Unit)
}

// layer is one stretch of constant temperature gradient, known at its base.
type layer struct {
	base        float64 // m, geopotential
	temperature float64 // K
	gradient    float64 // K/m
	pressure    float64 // Pa
}

// layers holds the bases and gradients of U.S. Standard Atmosphere 1976,
// table 4, with the temperatures they give at the bases, completed with the
// pressure each layer hands to the next. The first layer extends down to Lowest.
var layers = stack([]layer{
	{base: 0, temperature: 288.15, gradient: -6.5e-3, pressure: seaLevel},
	{base: 11000, temperature: 216.65, gradient: 0},
	{base: 20000, temperature: 216.65, gradient: 1e-3},
	{base: 32000, temperature: 228.65, gradient: 2.8e-3},
	{base: 47000, temperature: 270.65, gradient: 0},
	{base: 51000, temperature: 270.65, gradient: -2.8e-3},
	{base: 71000, temperature: 214.65, gradient: -2e-3},
})

func stack(table []layer) []layer {
	for i := 1; i < len(table); i++ {
		_, table[i].pressure = table[i-1].at(table[i].base)
	}
	return table
}

// at returns temperature and pressure at geopotential altitude h in or beyond
// the layer.
//
//	T = Tb + L (h - hb)
//	p = pb (Tb/T)^(g0/(R L))            L not 0
//	p = pb exp(-g0 (h - hb)/(R Tb))     L = 0
//
// Source: U.S. Standard Atmosphere 1976, equations 23, 33a, 33b.
func (l layer) at(h float64) (temperature, pressure float64) {
	temperature = l.temperature + l.gradient*(h-l.base)
	if l.gradient == 0 {
		return temperature, l.pressure * math.Exp(-hydrostatic*(h-l.base)/l.temperature)
	}
	return temperature, l.pressure * math.Pow(l.temperature/temperature, hydrostatic/l.gradient)
}

// altitudeOf inverts at: the geopotential altitude of pressure p, m.
//
//	h = hb + Tb ((p/pb)^(-R L/g0) - 1)/L   L not 0
//	h = hb - (R Tb/g0) ln(p/pb)            L = 0
func (l layer) altitudeOf(p float64) float64 {
	logarithm := math.Log(p / l.pressure)
	if l.gradient == 0 {
		return l.base - l.temperature/hydrostatic*logarithm
	}
	return l.base + l.temperature/l.gradient*math.Expm1(-l.gradient/hydrostatic*logarithm)
}

// At returns the air at geopotential altitude h, m, Lowest <= h <= Highest.
//
// Accuracy: the printed digits of the published table. Error: *OutOfRange,
// also for NaN.
func At(h float64) (State, error) {
	if !(h >= Lowest && h <= Highest) {
		return State{}, &OutOfRange{"geopotential altitude", "m", h, Lowest, Highest}
	}
	i := 0
	for i+1 < len(layers) && h >= layers[i+1].base {
		i++
	}
	t, p := layers[i].at(h)
	return State{
		Altitude:    h,
		Temperature: t,
		Pressure:    p,
		Density:     p / (specificConstant * t),
		SoundSpeed:  math.Sqrt(gamma * specificConstant * t),
		Viscosity:   Viscosity(t),
	}, nil
}

// AltitudeOf returns the geopotential altitude, m, at which the standard
// pressure is p, Pa. It inverts At to 1e-6 m. Error: *OutOfRange, also for NaN.
func AltitudeOf(p float64) (float64, error) {
	_, most := layers[0].at(Lowest)
	_, least := layers[len(layers)-1].at(Highest)
	if !(p >= least && p <= most) {
		return 0, &OutOfRange{"pressure", "Pa", p, least, most}
	}
	i := 0
	for i+1 < len(layers) && p <= layers[i+1].pressure {
		i++
	}
	return layers[i].altitudeOf(p), nil
}

// Geopotential returns the geopotential altitude of geometric altitude z, both
// in m: h = r0 z/(r0 + z), z > -r0.
//
// Source: U.S. Standard Atmosphere 1976, equation 18.
func Geopotential(z float64) float64 { return earthRadius * z / (earthRadius + z) }

// Geometric returns the geometric altitude of geopotential altitude h, both in
// m: z = r0 h/(r0 - h), h < r0.
//
// Source: U.S. Standard Atmosphere 1976, equation 19.
func Geometric(h float64) float64 { return earthRadius * h / (earthRadius - h) }

// Viscosity returns the dynamic viscosity of air, Pa s, at temperature t, K.
//
//	mu = 1.458e-6 T^1.5/(T + 110.4)
//
// Source: U.S. Standard Atmosphere 1976, equation 51 (Sutherland). Valid from
// about 100 K to 1900 K. Special case: 0 at t = 0, NaN below.
func Viscosity(t float64) float64 { return sutherlandB * t * math.Sqrt(t) / (t + sutherlandS) }
