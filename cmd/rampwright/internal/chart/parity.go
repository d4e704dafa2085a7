package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// ParityChart sets predictions against exact values, each with the interval the
// surrogate gave it.
type ParityChart struct {
	Title string
	Label string // the quantity with its unit
	Note  string // below the title; may be empty
	// Points must have a finite exact and predicted value and deviation, 1 to 2000.
	Points []ParityPoint
}

// ParityPoint is one sample; Reach is half the length of its interval.
type ParityPoint struct{ Exact, Predicted, Reach float64 }

// InvalidChart lists everything that is wrong with a chart of this package that
// has no type of its own for it.
type InvalidChart struct {
	Kind    string
	Defects []string
}

func (e *InvalidChart) Error() string {
	return e.Kind + " cannot be drawn: " + strings.Join(e.Defects, "; ")
}

const (
	parityWidth = 420.0
	mostPoints  = 2000
)

// Validate returns *InvalidChart with all defects at once, or nil.
func (c ParityChart) Validate() error {
	var found []string
	if len(c.Points) == 0 || len(c.Points) > mostPoints {
		found = append(found, fmt.Sprintf("%d points, 1 to %d are drawn", len(c.Points), mostPoints))
	}
	for i, p := range c.Points {
		if !finite(p.Exact, p.Predicted, p.Reach) || p.Reach < 0 {
			found = append(found, fmt.Sprintf("point %d is (%g, %g) with an interval of %g", i, p.Exact, p.Predicted, p.Reach))
		}
	}
	if len(c.Title) > longestText || len(c.Label) > longestText {
		found = append(found, "title or label is too long")
	}
	if found != nil {
		return &InvalidChart{"parity chart", found}
	}
	return nil
}

// WriteParityChart draws the chart as SVG, the same bytes for the same numbers.
// Both axes span exact and predicted values; an interval that reaches beyond is
// cut at the frame. data-x and data-y state the mapping as in WriteLineChart;
// every point is a circle with data-name "inside" or "outside" of its interval.
func WriteParityChart(w io.Writer, c ParityChart) error {
	if err := c.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	top := d.headingHeight(parityWidth, c.Title, c.Note)
	side := parityWidth - 2*margin - axisRoom
	low, high := c.span()
	span := func(label string) Span { return Span{label, low, high} }
	p := d.newPanel(box{margin + axisRoom, top, side, side}, span("exact "+c.Label), span("leave-one-out prediction"))
	height := p.frame.bottom() + belowAxes
	d.start(parityWidth, height, c.Title, c.describe(), attribute("data-x", p.x.mapping()), attribute("data-y", p.y.mapping()))
	d.heading(parityWidth, c.Title, c.Note)
	d.outline(p)
	a, b := p.at(low, low), p.at(high, high)
	d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", a.x, a.y, b.x, b.y), attribute("stroke", faintInk), `stroke-width="1"`, `fill="none"`, `data-name="equal"`)
	var bars strings.Builder
	for _, s := range c.Points {
		x := p.x.at(s.Exact)
		fmt.Fprintf(&bars, "M%.2f %.2fV%.2f", x,
			p.y.at(clamp(s.Predicted-s.Reach, low, high)), p.y.at(clamp(s.Predicted+s.Reach, low, high)))
	}
	d.Path(bars.String(), attribute("stroke", softInk), `stroke-width="0.8"`, `fill="none"`, `data-name="intervals"`)
	for _, s := range c.Points {
		at := p.at(s.Exact, s.Predicted)
		if s.inside() {
			d.Circle(at.x, at.y, 2.2, attribute("fill", strokes[RampShock].ink), `data-name="inside"`)
		} else {
			d.Circle(at.x, at.y, 3.4, attribute("fill", paper), attribute("stroke", cautionInk), `stroke-width="1.5"`, `data-name="outside"`)
		}
	}
	d.End()
	return writeSheet(w, &sheet)
}

func (p ParityPoint) inside() bool { return math.Abs(p.Predicted-p.Exact) <= p.Reach }

// span is the range of both axes.
func (c ParityChart) span() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, p := range c.Points {
		low, high = min(low, p.Exact, p.Predicted), max(high, p.Exact, p.Predicted)
	}
	low, high = separated(low, high)
	room := headroom / 2 * (high - low)
	return low - room, high + room
}

func (c ParityChart) describe() string {
	outside, largest := 0, 0.0
	for _, p := range c.Points {
		if !p.inside() {
			outside++
		}
		largest = max(largest, math.Abs(p.Predicted-p.Exact))
	}
	return fmt.Sprintf("Leave-one-out prediction against exact %s at %d samples with intervals; the largest difference is %.3g; %d samples lie outside their interval.",
		c.Label, len(c.Points), largest, outside)
}
