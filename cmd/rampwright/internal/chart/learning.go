package chart

import (
	"fmt"
	"math"
	"strings"
)

// LearningCurves is a picture of errors that fall as samples are added: one
// panel a quantity, both axes logarithmic.
type LearningCurves struct {
	Title    string
	Subtitle []string
	Panels   []LearningPanel
}

// LearningPanel is one pair of axes.
type LearningPanel struct {
	Title  string
	XLabel string
	YLabel string
	Curves []LearningCurve // at least one
	// Target is an error drawn as a level line; 0 draws none.
	Target     float64
	TargetName string
}

// LearningCurve is one line with its band.
type LearningCurve struct {
	Name string
	// Lead marks the curve that matters most: it lies broad under the others, and
	// its band is shaded.
	Lead   bool
	Points []LearningPoint // at least one, X rising
}

// LearningPoint is the middle and the band of an error after X samples. Errors
// below 1e-16 are drawn at 1e-16.
type LearningPoint struct{ X, Low, Middle, High float64 }

const (
	mostCurves  = 24
	leastError  = 1e-16
	mostPanels  = 40
	longestText = 200 // characters
)

// InvalidCurves lists everything that is wrong with LearningCurves.
type InvalidCurves struct{ Defects []string }

func (e *InvalidCurves) Error() string {
	return "learning curves cannot be drawn: " + strings.Join(e.Defects, "; ")
}

// Validate returns *InvalidCurves with all defects at once, or nil.
func (l LearningCurves) Validate() error {
	var found []string
	check := func(bad bool, format string, args ...any) {
		if bad {
			found = append(found, fmt.Sprintf(format, args...))
		}
	}
	check(len(l.Panels) == 0, "no panel")
	check(len(l.Panels) > mostPanels, "%d panels, at most %d", len(l.Panels), mostPanels)
	for i, p := range l.Panels {
		check(len(p.Curves) == 0, "panel %d has no curve", i)
		check(len(p.Curves) > mostCurves, "panel %d has %d curves, at most %d", i, len(p.Curves), mostCurves)
		check(!(p.Target >= 0) || math.IsInf(p.Target, 0), "panel %d has the target %g", i, p.Target)
		for k, c := range p.Curves {
			check(len(c.Name) > longestText, "curve %d of panel %d has a name of %d bytes, at most %d", k, i, len(c.Name), longestText)
			check(len(c.Points) == 0, "curve %d of panel %d has no point", k, i)
			before := 0.0
			for _, at := range c.Points {
				check(!finite(at.X, at.Low, at.Middle, at.High) || at.X <= before, "curve %d of panel %d: %v is not a rising finite point", k, i, at)
				check(!(0 <= at.Low && at.Low <= at.Middle && at.Middle <= at.High), "curve %d of panel %d: %v is not in order", k, i, at)
				before = at.X
			}
		}
	}
	if found != nil {
		return &InvalidCurves{found}
	}
	return nil
}
