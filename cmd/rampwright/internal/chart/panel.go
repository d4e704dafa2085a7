package chart

import (
	"fmt"
	"strings"
)

// panel is a frame with two linear axes.
type panel struct {
	frame          box
	x, y           linearAxis
	xLabel, yLabel string
}

// newPanel spans the axes over the ranges given, from edge to edge of the frame,
// with as many ticks along x as their numbers leave room for.
func (d linesSheet) newPanel(frame box, x, y Span) panel {
	p := panel{
		frame:  frame,
		x:      linearAxis{low: x.Low, high: x.High, from: frame.x, to: frame.right()},
		y:      linearAxis{low: y.Low, high: y.High, from: frame.bottom(), to: frame.y, ticks: newRuler(y.Low, y.High, 30*(y.High-y.Low)/frame.h)},
		xLabel: x.Label, yLabel: y.Label,
	}
	for room := 62.0; ; room *= 2 {
		p.x.ticks = newRuler(x.Low, x.High, room*(x.High-x.Low)/frame.w)
		if room > frame.w || d.apart(p.x) {
			return p
		}
	}
}

// apart tells whether the numbers of the ticks along x stand apart.
func (d linesSheet) apart(a linearAxis) bool {
	for k := a.ticks.from; k < a.ticks.to; k++ {
		halves := (d.faces.small.width(a.ticks.text(k)) + d.faces.small.width(a.ticks.text(k+1))) / 2
		if a.at(a.ticks.value(k+1))-a.at(a.ticks.value(k)) < halves+6 {
			return false
		}
	}
	return true
}

// Span is the range of one axis with its name and unit.
type Span struct {
	Label     string
	Low, High float64 // Low < High
}

func (s Span) valid() bool { return finite(s.Low, s.High) && s.Low < s.High }

func (p panel) at(x, y float64) point { return point{p.x.at(x), p.y.at(y)} }

// outline draws the frame, the ticks with their numbers, and the names of the axes.
func (d linesSheet) outline(p panel) {
	var ticks strings.Builder
	for k := p.x.ticks.from; k <= p.x.ticks.to; k++ {
		x, text := p.x.at(p.x.ticks.value(k)), p.x.ticks.text(k)
		fmt.Fprintf(&ticks, "M%.2f %.2fv5", x, p.frame.bottom())
		width := d.faces.small.width(text)
		d.labelled(text, box{x - width/2, p.frame.bottom() + 8, width, d.faces.small.height()}, d.faces.small, softInk)
	}
	for k := p.y.ticks.from; k <= p.y.ticks.to; k++ {
		y, text := p.y.at(p.y.ticks.value(k)), p.y.ticks.text(k)
		fmt.Fprintf(&ticks, "M%.2f %.2fh-5", p.frame.x, y)
		width := d.faces.small.width(text)
		d.labelled(text, box{p.frame.x - 8 - width, y - d.faces.small.ascent()/2, width, d.faces.small.height()}, d.faces.small, softInk)
	}
	fmt.Fprintf(&ticks, "M%.2f %.2fV%.2fH%.2fV%.2fZ", p.frame.x, p.frame.y, p.frame.bottom(), p.frame.right(), p.frame.y)
	d.Path(ticks.String(), attribute("stroke", softInk), `stroke-width="0.9"`, `fill="none"`)
	below := p.frame.bottom() + 8 + 2*d.faces.small.height() + 4
	writeText(d.SVG, point{p.frame.x + p.frame.w/2, below}, p.xLabel, d.faces.small, softInk, "middle")
	x, y := p.frame.x-axisRoom+d.faces.small.ascent(), p.frame.y+p.frame.h/2
	d.Gtransform(fmt.Sprintf("rotate(-90 %.2f %.2f)", x, y))
	writeText(d.SVG, point{x, y}, p.yLabel, d.faces.small, softInk, "middle")
	d.Gend()
}

// start opens a sheet of a size with its title and description in words.
func (d linesSheet) start(width, height float64, title, description string, more ...string) {
	d.Decimals = sheetDecimals
	attributes := append([]string{fmt.Sprintf(`viewBox="0 0 %g %.*f"`, width, sheetDecimals, height),
		`role="img"`, attribute("aria-label", title), lettering}, more...)
	d.Start(width, height, attributes...)
	d.Title(title)
	d.Desc(description)
	d.Rect(0, 0, width, height, attribute("fill", paper))
}

// heading writes lines of text from the upper margin down, fitted to the width.
func (d linesSheet) heading(width float64, title string, more ...string) {
	d.headingLines(width, title, more, func(y float64, text string, face typeface, ink string) {
		writeText(d.SVG, point{margin, y}, text, face, ink, "start")
	})
}

// headingHeight is where the room below a heading begins.
func (d linesSheet) headingHeight(width float64, title string, more ...string) float64 {
	return d.headingLines(width, title, more, func(float64, string, typeface, string) {})
}

func (d linesSheet) headingLines(width float64, title string, more []string, each func(y float64, text string, face typeface, ink string)) float64 {
	y := margin
	for _, line := range d.faces.label.wrap(title, width-2*margin) {
		y += d.faces.label.height()
		each(y-4, line, d.faces.label, darkInk)
	}
	for _, text := range more {
		for _, line := range d.faces.small.wrap(text, width-2*margin) {
			y += d.faces.small.height() + 2
			each(y-3, line, d.faces.small, softInk)
		}
	}
	return y + 12
}
