package chart

import (
	"fmt"
	"math"
	"strings"
)

// LineChart is a picture of values along one axis: lines through marked points or in
// steps, and level lines.
type LineChart struct {
	Title    string
	Subtitle []string
	XLabel   string
	YLabel   string
	WholeX   bool // x counts: ticks at whole numbers only
	LogY     bool // y on a logarithmic axis: every Y is above 0
	// Low and High are the range of x to show at least; the lines widen it.
	Low, High float64
	Lines     []Line
	Levels    []Level
}

// Line is one line through its points.
type Line struct {
	Name string
	// Lead marks the line that matters most: it is drawn thickest.
	Lead bool
	// Steps holds each value as far as the next point; the last point only ends the
	// line. Points carry no dots.
	Steps  bool
	Points []LinePoint // at least one, X rising
}

// LinePoint is one value.
type LinePoint struct {
	X, Y float64
	Note string // written beside the point; may be empty
	// Mark rings the point.
	Mark bool
	// Gap breaks the line ahead of the point: between it and the one before there
	// is no value.
	Gap bool
}

// Level is a value drawn across the whole axes.
type Level struct {
	Name string
	Y    float64
}

const (
	mostLines      = 12
	mostLinePoints = 400
	mostSteps      = 4000
)

// InvalidLines lists everything that is wrong with a LineChart.
type InvalidLines struct{ Defects []string }

func (e *InvalidLines) Error() string {
	return "lines cannot be drawn: " + strings.Join(e.Defects, "; ")
}

// Validate returns *InvalidLines with all defects at once, or nil.
func (l LineChart) Validate() error {
	var found []string
	check := func(bad bool, format string, args ...any) {
		if bad {
			found = append(found, fmt.Sprintf(format, args...))
		}
	}
	check(!finite(l.Low, l.High) || l.Low > l.High, "the range of x is %g to %g", l.Low, l.High)
	check(len(l.Lines)+len(l.Levels) > mostLines, "%d lines, at most %d", len(l.Lines)+len(l.Levels), mostLines)
	for i, line := range l.Lines {
		check(len(line.Name) > longestText, "line %d has a name of %d bytes, at most %d", i, len(line.Name), longestText)
		check(len(line.Points) == 0, "line %d has no point", i)
		most := mostLinePoints
		if line.Steps {
			most = mostSteps
		}
		check(len(line.Points) > most, "line %d has %d points, at most %d", i, len(line.Points), most)
		before := math.Inf(-1)
		for _, p := range line.Points {
			check(!finite(p.X, p.Y) || p.X <= before, "line %d: (%g, %g) is not a rising finite point", i, p.X, p.Y)
			check(l.LogY && !(p.Y > 0), "line %d: %g has no place on a logarithmic axis", i, p.Y)
			before = p.X
		}
	}
	for i, level := range l.Levels {
		check(len(level.Name) > longestText, "level %d has a name of %d bytes, at most %d", i, len(level.Name), longestText)
		check(!finite(level.Y) || l.LogY && !(level.Y > 0), "level %d lies at %g", i, level.Y)
	}
	if found != nil {
		return &InvalidLines{found}
	}
	return nil
}
