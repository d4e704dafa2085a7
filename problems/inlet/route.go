package inlet

import (
	"math"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// route is one exact way to compute an inlet. The two routes share constants,
// definitions and the placing of straight lines; waves, starting functions,
// recovery, throat height and the captured stream come from different formulas.
type route interface {
	weak(g gas.Perfect, mach, turning float64) (shock.Oblique, error)
	normal(g gas.Perfect, mach float64) (mach2 float64, jump shock.Jump)
	largestTurning(g gas.Perfect, mach float64) float64
	regularReflection(g gas.Perfect, mach float64) float64
	areaRatio(g gas.Perfect, mach float64) float64
	recovery(a *analysis) float64
	throatHeight(c *closure) float64
	captured(a *analysis) (capture, spillage float64)
	// balances reports whether capture and spillage of a trace are read from its
	// mass and momentum balance rather than from its lip streamline.
	balances() bool
	// traces are the settings of a trace where the chain does not tell the flow.
	traces() wave.Settings
}

// first is the route of every search: cubic shock kernel, products of shock
// ratios, traced lip streamline.
type first struct{}

func (first) weak(g gas.Perfect, mach, turning float64) (shock.Oblique, error) {
	return shock.Weak(g, mach, turning)
}

func (first) normal(g gas.Perfect, mach float64) (float64, shock.Jump) {
	return shock.Normal(g, mach)
}

func (first) largestTurning(g gas.Perfect, mach float64) float64 {
	turning, _ := shock.LargestTurning(g, mach)
	return turning
}

func (first) regularReflection(g gas.Perfect, mach float64) float64 {
	return shock.RegularReflection(g, mach)
}

func (first) areaRatio(g gas.Perfect, mach float64) float64 { return g.AreaRatio(mach) }

// recovery is the product of the total-pressure ratios of all shocks.
func (first) recovery(a *analysis) float64 {
	product := a.lip.Jump.TotalPressure * a.terminal.TotalPressure
	for _, wave := range a.waves[:a.design.Ramps] {
		product *= wave.Jump.TotalPressure
	}
	return product
}

// throatHeight is the distance of the shoulder from the inner cowl surface.
func (first) throatHeight(c *closure) float64 { return c.cowlLine().Height(c.Shoulder) * -1 }

// captured follows the lip streamline upstream through the regions of ramps n..1.
func (first) captured(a *analysis) (capture, spillage float64) { return a.traced() }

func (first) balances() bool { return false }

func (first) traces() wave.Settings { return SearchTrace() }

// second is the route of verification: bracketed roots, conservation laws,
// entropy, and balances over the captured stream tube.
type second struct{}

func (second) weak(g gas.Perfect, mach, turning float64) (shock.Oblique, error) {
	return shock.WeakBracketed(g, mach, turning)
}

func (second) normal(g gas.Perfect, mach float64) (float64, shock.Jump) {
	return shock.NormalByPrandtl(g, mach)
}

func (second) largestTurning(g gas.Perfect, mach float64) float64 {
	turning, _ := shock.LargestTurningSearched(g, mach)
	return turning
}

func (second) regularReflection(g gas.Perfect, mach float64) float64 {
	return shock.RegularReflectionBracketed(g, mach)
}

// areaRatio is the ratio of mass fluxes at the sonic and the given state of the
// same total state, rho u each from its own isentropic ratios.
func (second) areaRatio(g gas.Perfect, mach float64) float64 {
	flux := func(mach float64) float64 {
		total := g.TotalTemperatureRatio(mach)
		return mach * math.Sqrt(1/total) * math.Exp(-math.Log(total)/(g.Gamma-1))
	}
	return flux(1) / flux(mach)
}

// recovery is the ratio of the total pressures rebuilt from the static states at
// both ends.
func (second) recovery(a *analysis) float64 {
	g := a.def.Gas
	return a.pressureRatio * g.TotalPressureRatio(a.throatMach) / g.TotalPressureRatio(a.point.Mach)
}

// throatHeight follows from the height of the stream ahead of the lip shock,
// normal to it, by the sine rule: h sin(beta - kappa)/sin(beta).
func (second) throatHeight(c *closure) float64 {
	height := c.lastRamp().Height(c.Lip)
	if c.LipTurning == 0 {
		return height
	}
	return height * math.Sin(c.lipWave-c.LipTurning) / math.Sin(c.lipWave)
}

// captured balances mass and momentum over the captured stream tube.
func (second) captured(a *analysis) (capture, spillage float64) { return a.balanced() }

func (second) balances() bool { return true }

func (second) traces() wave.Settings { return VerifyTrace() }
