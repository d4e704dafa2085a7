package surrogate

import (
	"fmt"
	"math"
	"strings"
)

// DataError reports samples no fit can use. Row is the sample at fault and
// Column its input, counted from 0; either is -1 where it does not apply
// (Column -1 with a Row is the output).
type DataError struct {
	What   string
	Row    int
	Column int
}

func (e *DataError) Error() string {
	switch {
	case e.Row < 0:
		return e.What
	case e.Column < 0:
		return fmt.Sprintf("sample %d: %s", e.Row, e.What)
	default:
		return fmt.Sprintf("sample %d, input %d: %s", e.Row, e.Column, e.What)
	}
}

// SettingsError lists everything wrong with a configuration.
type SettingsError struct {
	Of       string // kind
	Problems []string
}

func (e *SettingsError) Error() string {
	return e.Of + " settings: " + strings.Join(e.Problems, "; ")
}

// farthestInput bounds the inputs a fit accepts. They belong in the unit cube;
// a normal input or a corner outside it may leave it, a forgotten scaling not.
const farthestInput = 1e3

// Check returns nil for data a fit can use: at least least samples, equal
// numbers of inputs (one or more) and outputs, all of them finite and the inputs
// within 1000 of the unit cube. Otherwise it returns a *DataError for the first fault in row order.
func Check(x [][]float64, y []float64, least int) error {
	if len(x) != len(y) {
		return &DataError{fmt.Sprintf("%d points but %d outputs", len(x), len(y)), -1, -1}
	}
	if len(x) < least {
		return &DataError{fmt.Sprintf("%d samples, at least %d are needed", len(x), least), -1, -1}
	}
	if len(x) == 0 || len(x[0]) == 0 {
		return &DataError{"no inputs", -1, -1}
	}
	for i, row := range x {
		if len(row) != len(x[0]) {
			return &DataError{fmt.Sprintf("%d inputs, the first sample has %d", len(row), len(x[0])), i, -1}
		}
		for j, v := range row {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return &DataError{fmt.Sprintf("%g is not a finite number", v), i, j}
			}
			if math.Abs(v) > farthestInput {
				return &DataError{fmt.Sprintf("%g is far outside the unit cube: scale the inputs first", v), i, j}
			}
		}
		if math.IsNaN(y[i]) || math.IsInf(y[i], 0) {
			return &DataError{fmt.Sprintf("output %g is not a finite number", y[i]), i, -1}
		}
	}
	return nil
}

// Scaling is the affine map v = Center + Scale*s between an output v and its
// standardised value s. Scale is positive.
type Scaling struct {
	Center float64
	Scale  float64
}

// Standardise returns the scaling that gives y mean 0 and variance 1 (the
// population variance, divisor n), and y so scaled. Sums are formed on
// y/max|y|, so that neither 1e300 overflows nor 1e-300 underflows. A constant y
// (to 1e-14 of its size, rounding of a mean) has Scale 1, all values 0, and
// constant true.
func Standardise(y []float64) (s Scaling, scaled []float64, constant bool) {
	scaled = make([]float64, len(y))
	largest := 0.0
	for _, v := range y {
		largest = math.Max(largest, math.Abs(v))
	}
	if largest == 0 {
		return Scaling{0, 1}, scaled, true
	}
	mean := 0.0
	for _, v := range y {
		mean += v / largest
	}
	mean /= float64(len(y))
	variance := 0.0
	for i, v := range y {
		scaled[i] = v/largest - mean
		variance += scaled[i] * scaled[i]
	}
	deviation := math.Sqrt(variance / float64(len(y)))
	if deviation <= 1e-14 {
		clear(scaled)
		return Scaling{mean * largest, 1}, scaled, true
	}
	for i := range scaled {
		scaled[i] /= deviation
	}
	return Scaling{mean * largest, deviation * largest}, scaled, false
}

// Apply returns the standardised value of an output.
func (s Scaling) Apply(v float64) float64 { return (v - s.Center) / s.Scale }

// Undo returns the output of a standardised value.
func (s Scaling) Undo(v float64) float64 { return s.Center + s.Scale*v }

// Box maps between the caller's closed box and the unit cube.
type Box struct {
	Low, High []float64
}

// ToUnit stores in dst the unit-cube coordinates of x.
func (b Box) ToUnit(dst, x []float64) {
	for j := range dst {
		dst[j] = (x[j] - b.Low[j]) / (b.High[j] - b.Low[j])
	}
}

// FromUnit stores in dst the point of unit-cube coordinates u; u = 0 and u = 1
// give the faces exactly.
func (b Box) FromUnit(dst, u []float64) {
	for j := range dst {
		dst[j] = b.Low[j]*(1-u[j]) + b.High[j]*u[j]
	}
}
