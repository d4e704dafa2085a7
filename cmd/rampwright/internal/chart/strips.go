package chart

import (
	"fmt"
	"math"
	"strings"
)

// StripChart is a picture of distributions side by side on one axis: a row for
// each, with a band for each way it was found, against a line at zero.
type StripChart struct {
	Title    string
	Subtitle []string
	XLabel   string
	// Below and Above say what lies left and right of the line at zero.
	Below, Above string
	NoteHead     string // over the notes
	MarkName     string // what Mark is
	BandNames    []string
	// Low and High are the range of x shown; what lies beyond is cut off, with an
	// arrow at the edge.
	Low, High float64
	Rows      []Strip
}

// Strip is one row.
type Strip struct {
	Name  string
	Note  string  // at the right end
	Mark  float64 // NaN for none
	Bands []Band  // at most one a name of the chart; NaN where it has none
}

// Band is a range with its middle.
type Band struct {
	Low, Middle, High float64
}

const mostStrips = 60

// InvalidStrips lists everything that is wrong with a StripChart.
type InvalidStrips struct{ Defects []string }

func (e *InvalidStrips) Error() string {
	return "strips cannot be drawn: " + strings.Join(e.Defects, "; ")
}

// Validate returns *InvalidStrips with all defects at once, or nil.
func (c StripChart) Validate() error {
	var found []string
	check := func(bad bool, format string, args ...any) {
		if bad {
			found = append(found, fmt.Sprintf(format, args...))
		}
	}
	check(!finite(c.Low, c.High) || !(c.Low < 0 && c.High > 0), "the range of x, %g to %g, does not reach both ways from 0", c.Low, c.High)
	check(len(c.BandNames) < 1 || len(c.BandNames) > len(bandInks), "%d names of bands, allowed 1 to %d", len(c.BandNames), len(bandInks))
	check(len(c.Rows) < 1 || len(c.Rows) > mostStrips, "%d rows, allowed 1 to %d", len(c.Rows), mostStrips)
	for i, row := range c.Rows {
		check(len(row.Name) > longestText || len(row.Note) > longestText, "row %d has texts of %d and %d bytes, at most %d", i, len(row.Name), len(row.Note), longestText)
		check(len(row.Bands) > len(c.BandNames), "row %d has %d bands for %d names", i, len(row.Bands), len(c.BandNames))
		check(math.IsInf(row.Mark, 0), "row %d has its mark at %g", i, row.Mark)
		for _, b := range row.Bands {
			missing := math.IsNaN(b.Low + b.Middle + b.High)
			check(!missing && (!finite(b.Low, b.Middle, b.High) || b.Low > b.Middle || b.Middle > b.High), "row %d: the band %g, %g, %g is not in order", i, b.Low, b.Middle, b.High)
		}
	}
	if found != nil {
		return &InvalidStrips{found}
	}
	return nil
}
