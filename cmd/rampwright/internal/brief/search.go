package brief

import (
	"fmt"
	"math"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// leastLipTurning is the linear constraint a search keeps so that the cowl
// stays below the last ramp surface: phi_c <= phi_n - 0.1 deg.
const leastLipTurning = 0.1

// CheckSearch returns why a search over the brief would be refused; none when
// it may run. A flow of one fixed geometry does not mind any of it.
func CheckSearch(b *Brief) Problems {
	if b.Analytic != nil {
		return nil // it always has variables and an aim, and any limit may be met
	}
	if b.Definition.Outline != nil {
		return Problems{b.at("inlet.outline", Problem{Message: "nothing to search: the outline fixes every wall", Hint: "use `rampwright flow`"})}
	}
	var refused Problems
	if b.Searched() == 0 {
		refused = append(refused, b.at(inletPart, Problem{Message: "nothing to search: every value of the inlet is fixed", Hint: "use `rampwright flow`, or write a value as {from: .., to: ..}"}))
	}
	if len(b.Aim.Parts) == 0 {
		refused = append(refused, b.at(top, Problem{Message: "the brief has no aim", Hint: "add `aim: {highest: ..}` or `aim: {lowest: ..}`"}))
	} else if name := b.unbounded(); name != "" {
		refused = append(refused, b.at(aimPart, Problem{
			Message: fmt.Sprintf("%s alone is best with no compression at all: the aim needs a floor", name),
			Value:   b.direction() + ": " + b.Aim.Text,
			Allowed: "at_least on " + join(floorsBelow) + "; or at_most on " + join(floorsAbove) + "; beyond the free stream",
			Hint:    "add one of these limits, or terminal_shock: true",
		}))
	}
	refused = append(refused, b.checkLipTurning()...)
	refused = append(refused, b.checkReach()...)
	refused = append(refused, b.checkSamples()...)
	return refused.sorted()
}

// at places a problem at the value of a path.
func (b *Brief) at(path string, p Problem) Problem {
	n := b.place[path]
	if n == nil {
		n = &node{line: 1, column: 1}
	}
	if n.flag != "" {
		p.File, p.Flag = b.File, n.flag
		return p
	}
	return place(p, b.File, b.lines, n.line, n.column)
}

// losses are the quantities that only measure loss: without compression there
// is none.
var losses = []string{"recovery", "shock_recovery", "kinetic_energy_efficiency", "compression_efficiency", "throat_total_pressure_kPa", "entropy_rise"}

// floorsBelow and floorsAbove are the quantities whose lower and upper limits
// ask for compression.
var (
	floorsBelow = []string{"throat_temperature_K", "throat_pressure_kPa", "pressure_ratio", "temperature_ratio", "total_contraction", "total_turning_deg"}
	floorsAbove = []string{"throat_mach", "lip_mach"}
)

// unbounded names the loss an aim drives with nothing that asks for
// compression, "" when there is no such trouble.
func (b *Brief) unbounded() string {
	if b.Definition.TerminalShock || b.hasFloor() {
		return ""
	}
	for _, part := range b.Aim.Parts {
		for _, read := range part.Reads {
			// A loss driven the wrong way asks for compression by itself.
			wrongWay := part.Formula == nil && b.Aim.Highest == (read.Quantity == "entropy_rise")
			if contains(losses, read.Quantity) && !wrongWay {
				return read.Quantity
			}
		}
	}
	return ""
}

// hasFloor reports whether some limit asks for compression: one the free
// stream itself does not keep.
func (b *Brief) hasFloor() bool {
	for _, l := range b.Limits {
		c := b.condition(l.Point)
		stream := map[string]float64{
			"throat_temperature_K": c.TemperatureK, "throat_pressure_kPa": c.PressureKPa,
			"pressure_ratio": 1, "temperature_ratio": 1, "total_contraction": 1, "total_turning_deg": 0,
		}
		if contains(floorsBelow, l.Quantity) && l.Low > stream[l.Quantity] ||
			contains(floorsAbove, l.Quantity) && l.High < c.Mach {
			return true
		}
	}
	return false
}

// condition returns the flight condition of a point, zero for the geometry.
func (b *Brief) condition(point string) Condition {
	for _, c := range b.Flight {
		if c.Name == point {
			return c
		}
	}
	return Condition{}
}

// checkLipTurning refuses a search that cannot keep the cowl below the last
// ramp surface, and one across lip turning 0, where the length of the inlet
// jumps.
func (b *Brief) checkLipTurning() Problems {
	d := b.Definition
	least, most := lipTurning(d)
	if d.LipTurning != nil {
		if d.LipTurning.Searched && least <= 0 {
			return Problems{b.at("inlet.lip_turning_deg", Problem{
				Message: "lip turning 0 lies in the searched range: the length of the inlet jumps there",
				Value:   settingText(*d.LipTurning),
				Hint:    "start the range at 0.1 or more, or fix it at 0 for an aligned cowl",
			})}
		}
		return nil
	}
	if closureSearched(d) && most < leastLipTurning {
		return Problems{b.at("inlet.cowl_angle_deg", Problem{
			Message: "no inlet of the search box has its inner cowl below the last ramp surface",
			Value:   settingText(*d.CowlAngle),
			Allowed: fmt.Sprintf("up to %s deg: the largest sum of ramp angles less %s", shortNumber(most+lowCowl(d)-leastLipTurning), shortNumber(leastLipTurning)),
		})}
	}
	return nil
}

func lowCowl(d inlet.Definition) float64 {
	low, _ := bounds(*d.CowlAngle)
	return low
}

// checkReach refuses limits no inlet of the search box can keep, seen from the
// box and the free stream alone.
func (b *Brief) checkReach() Problems {
	var refused Problems
	for _, l := range b.Limits {
		low, high, known := b.reach(l.Quantity, l.Point)
		const slack = 1e-9
		if !known || l.Low <= high+slack*math.Abs(high) && l.High >= low-slack*math.Abs(low) {
			continue
		}
		refused = append(refused, b.at(limitPath(l), Problem{
			Message: fmt.Sprintf("no inlet of the search box keeps this limit on %s%s", l.Quantity, atPoint(l.Point)),
			Value:   sidesText(l),
			Allowed: "it lies between " + shortNumber(low) + " and " + shortNumber(high),
			Hint:    b.reachHint(l),
		}))
	}
	return refused
}

func limitPath(l problems.Limit) string { return "limits." + l.Quantity + "." + l.Point }

func atPoint(point string) string {
	if point == problems.Geometry {
		return ""
	}
	return " at " + point
}

func sidesText(l problems.Limit) string {
	switch {
	case math.IsInf(l.High, 1):
		return "at_least " + shortNumber(l.Low)
	case math.IsInf(l.Low, -1):
		return "at_most " + shortNumber(l.High)
	default:
		return "at_least " + shortNumber(l.Low) + ", at_most " + shortNumber(l.High)
	}
}

// reachHint names the other limit that narrows a reach.
func (b *Brief) reachHint(l problems.Limit) string {
	if l.Quantity == "throat_temperature_K" || l.Quantity == "temperature_ratio" {
		if m, ok := b.limit("throat_mach", l.Point); ok {
			return "throat_mach " + sidesText(m) + " (" + m.Source + ") sets the temperature: Tt/T = 1 + (g-1)/2 M^2"
		}
	}
	return ""
}

// limit returns the limit the brief asks for on a quantity at a point.
func (b *Brief) limit(quantity, point string) (problems.Limit, bool) {
	for _, l := range b.Limits {
		if l.Quantity == quantity && l.Point == point {
			return l, true
		}
	}
	return problems.Limit{}, false
}

// sampleSurplus is how many samples more than variables a first fit needs.
const sampleSurplus = 2

// checkSamples refuses a first design too small to fit.
func (b *Brief) checkSamples() Problems {
	n := b.Searched()
	if n == 0 || b.Effort.Samples >= n+sampleSurplus {
		return nil
	}
	return Problems{b.at("effort.samples", Problem{
		Message: fmt.Sprintf("%d samples are too few to fit %d searched values", b.Effort.Samples, n),
		Value:   fmt.Sprint(b.Effort.Samples),
		Allowed: fmt.Sprintf("%d or more", n+sampleSurplus),
	})}
}
