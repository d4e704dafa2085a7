package chart

import (
	"math"
	"strconv"
)

// ruler is an axis in metres: its ticks are multiples of a round step.
type ruler struct {
	step     float64
	from, to int // first and last tick, in steps
}

// newRuler covers [low, high] with the finest round step of at least the length
// given; a range shorter than one step has the ticks that fall inside it.
func newRuler(low, high, least float64) ruler {
	step := roundStep(least)
	return ruler{step, int(math.Ceil(low/step - 1e-9)), int(math.Floor(high/step + 1e-9))}
}

// roundStep returns the smallest of 1, 2, 5 times a power of ten that is not
// less than the length given.
func roundStep(least float64) float64 {
	power := math.Pow(10, math.Floor(math.Log10(least)))
	for _, digit := range [...]float64{1, 2, 5} {
		if digit*power >= least*(1-1e-12) {
			return digit * power
		}
	}
	return 10 * power
}

func (r ruler) value(tick int) float64 { return float64(tick) * r.step }

// text writes a tick with the decimals the step needs.
func (r ruler) text(tick int) string {
	decimals := int(math.Max(0, math.Ceil(-math.Log10(r.step)-1e-9)))
	return strconv.FormatFloat(r.value(tick), 'f', decimals, 64)
}

// incidenceText writes an angle given in radians in degrees.
func incidenceText(radians float64) string {
	degrees := radians * 180 / math.Pi
	return "incidence " + strconv.FormatFloat(math.Round(degrees*1000)/1000+0, 'g', 5, 64) + " deg"
}
