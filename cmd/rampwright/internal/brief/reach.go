package brief

import "math"

// reach bounds a quantity over the search box without any search, when that is
// possible: from the box itself, or from the free stream at the point.
func (b *Brief) reach(quantity, point string) (low, high float64, known bool) {
	d := b.Definition
	if d.Outline != nil {
		return b.streamReach(quantity, b.condition(point), point)
	}
	turnLow, turnHigh := turning(d)
	cowlLow, cowlHigh := b.cowlReach()
	wedgeLow, wedgeHigh := bounds(d.CowlWedge)
	lipLow, lipHigh := lipTurning(d)
	switch quantity {
	case "total_turning_deg":
		return turnLow, turnHigh, true
	case "lip_turning_deg":
		return lipLow, lipHigh, true
	case "cowl_angle_deg":
		return cowlLow, cowlHigh, true
	case "cowl_outer_angle_deg":
		return cowlLow + wedgeLow, cowlHigh + wedgeHigh, true
	}
	return b.streamReach(quantity, b.condition(point), point)
}

// cowlReach bounds the angle of the inner cowl surface, degrees.
func (b *Brief) cowlReach() (low, high float64) {
	d := b.Definition
	if d.CowlAngle != nil {
		return bounds(*d.CowlAngle)
	}
	turnLow, turnHigh := turning(d)
	lipLow, lipHigh := bounds(*d.LipTurning)
	return turnLow - lipHigh, turnHigh - lipLow
}

// streamReach bounds a quantity of the flow by the free stream: compression
// through shocks raises temperature toward the total temperature, lowers the
// Mach number and never raises the total pressure.
func (b *Brief) streamReach(quantity string, c Condition, point string) (low, high float64, known bool) {
	g := b.Definition.Gas.Gamma
	total := totalTemperatureRatio(c.Mach, g)
	totalPressure := c.PressureKPa * math.Pow(total, g/(g-1))
	dynamic := g / 2 * c.PressureKPa * c.Mach * c.Mach
	coldest, hottest := b.throatReach(point, total, g)
	switch quantity {
	case "recovery":
		return 0, b.Definition.DuctFactor, true
	case "shock_recovery", "kinetic_energy_efficiency":
		return 0, 1, true
	case "throat_mach", "lip_mach", "terminal_mach":
		return 0, c.Mach, true
	case "throat_temperature_K":
		return coldest * c.TemperatureK, hottest * c.TemperatureK, true
	case "temperature_ratio":
		return coldest, hottest, true
	case "throat_total_pressure_kPa":
		return 0, totalPressure, true
	case "dynamic_pressure_kPa":
		return dynamic, dynamic, true
	case "total_temperature_K":
		return total * c.TemperatureK, total * c.TemperatureK, true
	case "total_pressure_kPa":
		return totalPressure, totalPressure, true
	}
	return 0, 0, false
}

// totalTemperatureRatio is total over static temperature at Mach number m:
//
//	Tt/T = 1 + (g-1)/2 M^2
//
// Source: NACA Report 1135, equation 43. Perfect gas.
func totalTemperatureRatio(m, g float64) float64 { return 1 + (g-1)/2*m*m }

// throatReach bounds the throat temperature over that of the free stream. The
// flow is adiabatic, so limits on the throat Mach number bound it too.
func (b *Brief) throatReach(point string, total, g float64) (coldest, hottest float64) {
	coldest, hottest = 1, total
	if m, ok := b.limit("throat_mach", point); ok {
		if m.Low > 0 {
			hottest = total / totalTemperatureRatio(m.Low, g)
		}
		if finite(m.High) && m.High > 0 {
			coldest = math.Max(1, total/totalTemperatureRatio(m.High, g))
		}
	}
	return coldest, hottest
}
