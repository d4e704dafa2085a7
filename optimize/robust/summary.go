package robust

import (
	"math"
	"slices"

	"rampwright/surrogate"
)

// Summary describes one response over draws. Moments and percentiles are of the
// draws with a value, NaN where there are less than two.
type Summary struct {
	surrogate.Moments
	P05, P50, P95 float64
	Unanswered    int // draws without a value
	NotApplicable int
	Affected      bool // some draw differs from the value as drawn, or has none
}

// summarise describes values over draws; nominal is the value without offsets.
func summarise(values []float64, nominal float64) Summary {
	s := Summary{}
	var present []float64
	for _, v := range values {
		switch {
		case math.IsNaN(v):
			s.Unanswered++
		case math.IsInf(v, 1):
			s.NotApplicable++
		default:
			present = append(present, v)
		}
		s.Affected = s.Affected || differs(v, nominal)
	}
	slices.Sort(present)
	s.Moments = surrogate.Moments{Mean: math.NaN(), Deviation: math.NaN(), MeanError: math.NaN(), DeviationError: math.NaN(), Draws: len(present)}
	if len(present) > 1 {
		rows := make([][]float64, len(present))
		for i := range present {
			rows[i] = present[i : i+1]
		}
		s.Moments = surrogate.Sampled(func(v []float64) float64 { return v[0] }, rows)
	}
	s.P05, s.P50, s.P95 = percentile(present, 0.05), percentile(present, 0.5), percentile(present, 0.95)
	return s
}

// differs reports whether a value moved from the nominal one, beyond rounding.
func differs(v, nominal float64) bool {
	if math.IsNaN(v) || math.IsNaN(nominal) || math.IsInf(v, 0) || math.IsInf(nominal, 0) {
		return !(math.IsNaN(v) && math.IsNaN(nominal) || v == nominal)
	}
	return math.Abs(v-nominal) > still*math.Max(1, math.Abs(nominal))
}

// still is the relative change that is rounding: contours are rebuilt from lengths
// and angles.
const still = 1e-12

// percentile interpolates between order statistics of sorted values: place
// p (n - 1) from the least (Hyndman & Fan 1996, definition 7). NaN without values.
func percentile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 {
		return math.NaN()
	}
	place := p * float64(len(sorted)-1)
	i := min(int(place), len(sorted)-1)
	if i == len(sorted)-1 {
		return sorted[i]
	}
	return sorted[i] + (place-float64(i))*(sorted[i+1]-sorted[i])
}
