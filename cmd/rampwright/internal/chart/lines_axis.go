package chart

import (
	"math"
	"strconv"
)

// linearAxis maps a number, or its decimal logarithm, to the sheet.
type linearAxis struct {
	low, high float64 // at the ends: logarithms on a logarithmic axis
	from, to  float64 // places on the sheet
	ticks     ruler
	log       bool
}

func (a linearAxis) at(v float64) float64 {
	return a.from + (a.scaled(v)-a.low)/(a.high-a.low)*(a.to-a.from)
}

// scaled is what the axis measures of a value.
func (a linearAxis) scaled(v float64) float64 {
	if a.log {
		return math.Log10(v)
	}
	return v
}

// tickMark is a value marked on an axis.
type tickMark struct {
	value float64
	text  string
}

// marks are the ticks of the axis.
func (a linearAxis) marks() []tickMark {
	if a.log {
		return a.decadeMarks()
	}
	var list []tickMark
	for k := a.ticks.from; k <= a.ticks.to; k++ {
		list = append(list, tickMark{a.ticks.value(k), a.ticks.text(k)})
	}
	return list
}

// decadeDigits are the digits worth a mark in each decade, the most first, with the
// least distance between two of them in decades.
var decadeDigits = []struct {
	digits []float64
	apart  float64
}{
	{[]float64{1, 1.5, 2, 2.5, 3, 4, 5, 6, 7, 8, 9}, 0.0457},
	{[]float64{1, 2, 3, 5, 7}, 0.146},
	{[]float64{1, 2, 5}, 0.301},
	{[]float64{1}, 1},
}

// markRoom is the least distance of two marks on a logarithmic axis.
const markRoom = 20.0

// decadeMarks are the ticks of a logarithmic axis: as many as stand apart.
func (a linearAxis) decadeMarks() []tickMark {
	decade := math.Abs(a.to-a.from) / (a.high - a.low)
	chosen := decadeDigits[len(decadeDigits)-1].digits
	for _, d := range decadeDigits {
		if d.apart*decade >= markRoom {
			chosen = d.digits
			break
		}
	}
	var list []tickMark
	for k := math.Floor(a.low); k <= a.high; k++ {
		for _, digit := range chosen {
			v := digit * math.Pow(10, k)
			if l := math.Log10(v); l >= a.low && l <= a.high {
				list = append(list, tickMark{v, strconv.FormatFloat(v, 'g', 3, 64)})
			}
		}
	}
	return list
}

// axesIn spans the axes over the data.
func (c LineChart) axesIn(axes box) (x, y linearAxis) {
	left, right := c.Low, c.High
	low, high := math.Inf(1), math.Inf(-1)
	for _, line := range c.Lines {
		for _, p := range line.Points {
			left, right = min(left, p.X), max(right, p.X)
			low, high = min(low, p.Y), max(high, p.Y)
		}
	}
	for _, level := range c.Levels {
		low, high = min(low, level.Y), max(high, level.Y)
	}
	if low > high { // nothing drawn
		low, high = 0, 1
	}
	left, right = separated(left, right)
	x = linearAxis{low: left, high: right, from: axes.x + edgeRoom, to: axes.right() - edgeRoom}
	y = linearAxis{log: c.LogY, from: axes.bottom(), to: axes.y}
	low, high = separated(y.scaled(low), y.scaled(high))
	y.low, y.high = low-headroom*(high-low), high+headroom*(high-low)
	step := 70 * (right - left) / (x.to - x.from)
	if c.WholeX {
		step = max(1, step)
	}
	x.ticks = newRuler(left, right, step)
	y.ticks = newRuler(y.low, y.high, 34*(y.high-y.low)/axes.h)
	return x, y
}

// separated widens a range without length.
func separated(low, high float64) (float64, float64) {
	if least := 1e-9 * max(1, math.Abs(low), math.Abs(high)); high-low < least {
		half := max(0.5*math.Abs(low), 0.5)
		return low - half, high + half
	}
	return low, high
}
