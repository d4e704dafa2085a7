package chart

import (
	"bytes"
	"fmt"
	"io"
	"strconv"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// WriteLineChart draws the chart as SVG, the same bytes for the same numbers. It
// returns *InvalidLines for one that cannot be drawn.
//
// The root states the mapping of the axes, data-x and data-y, each as "low high
// from to": a value, or its decimal logarithm where data-y-log is true, lies at from +
// (value - low)/(high - low) (to - from). Each line is a polyline with data-name, one
// for each stretch between gaps, each level a path with data-name; every name, note
// and tick is a group with data-name and data-box (left, top, width, height).
func WriteLineChart(w io.Writer, chart LineChart) error {
	if err := chart.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	d.Decimals = sheetDecimals
	d.draw(chart)
	return writeSheet(w, &sheet)
}

type linesSheet struct {
	*svg.SVG
	faces typefaces
}

func (d linesSheet) draw(c LineChart) {
	title := d.faces.title.wrap(c.Title, sheetWidth-2*margin)
	var subtitle []string
	for _, text := range c.Subtitle {
		subtitle = append(subtitle, d.faces.text.wrap(text, sheetWidth-2*margin)...)
	}
	head := margin + float64(len(title))*d.faces.title.height() + float64(len(subtitle))*(d.faces.text.height()+3)
	l := arrangeLines(c, head+aboveAxes/2, d.faces)
	height := l.axes.bottom() + belowAxes + margin
	attributes := []string{
		fmt.Sprintf(`viewBox="0 0 %g %.*f"`, sheetWidth, sheetDecimals, height),
		`role="img"`, attribute("aria-label", c.Title), lettering,
		attribute("data-x", l.x.mapping()), attribute("data-y", l.y.mapping()),
	}
	if c.LogY {
		attributes = append(attributes, `data-y-log="true"`)
	}
	d.Start(sheetWidth, height, attributes...)
	d.Title(c.Title)
	d.Desc(describeLines(c))
	d.Rect(0, 0, sheetWidth, height, attribute("fill", paper))
	y := margin
	for _, line := range title {
		y += d.faces.title.height()
		writeText(d.SVG, point{margin, y - 4}, line, d.faces.title, darkInk, "start")
	}
	for _, line := range subtitle {
		y += d.faces.text.height() + 3
		writeText(d.SVG, point{margin, y - 3}, line, d.faces.text, softInk, "start")
	}
	d.grid(l)
	d.levels(l)
	for i := len(c.Lines) - 1; i >= 0; i-- { // the first above the others
		d.line(l, i)
	}
	d.words(l)
	d.End()
}

func (a linearAxis) mapping() string {
	text := make([]string, 4)
	for i, v := range []float64{a.low, a.high, a.from, a.to} {
		text[i] = strconv.FormatFloat(v, 'g', -1, 64)
	}
	return strings.Join(text, " ")
}

// describeLines says in words what the chart shows.
func describeLines(c LineChart) string {
	words := []string{fmt.Sprintf("%s against %s.", c.YLabel, c.XLabel)}
	for _, line := range c.Lines {
		if line.Steps {
			words = append(words, describeSteps(line))
			continue
		}
		first, last := line.Points[0], line.Points[len(line.Points)-1]
		words = append(words, fmt.Sprintf("%s from (%.4g, %.4g) to (%.4g, %.4g).", line.Name, first.X, first.Y, last.X, last.Y))
	}
	for _, level := range c.Levels {
		words = append(words, fmt.Sprintf("%s at %.4g.", level.Name, level.Y))
	}
	return strings.Join(words, " ")
}

// describeSteps says in words how far a stepped line reaches, and its extremes.
func describeSteps(line Line) string {
	held := line.Points[:max(1, len(line.Points)-1)]
	low, high := held[0], held[0]
	for _, p := range held {
		if p.Y < low.Y {
			low = p
		}
		if p.Y > high.Y {
			high = p
		}
	}
	return fmt.Sprintf("%s from %.4g to %.4g: least %.4g at %.4g, greatest %.4g at %.4g.",
		line.Name, line.Points[0].X, line.Points[len(line.Points)-1].X, low.Y, low.X, high.Y, high.X)
}

// grid draws the axes, their ticks and names.
func (d linesSheet) grid(l linesLayout) {
	var faint, strong strings.Builder
	for _, mark := range l.y.marks() {
		y := l.y.at(mark.value)
		fmt.Fprintf(&faint, "M%.2f %.2fH%.2f", l.axes.x, y, l.axes.right())
		width := d.faces.small.width(mark.text)
		d.labelled(mark.text, box{l.axes.x - 8 - width, y - d.faces.small.ascent()/2, width, d.faces.small.height()}, d.faces.small, softInk)
	}
	for _, mark := range l.x.marks() {
		x := l.x.at(mark.value)
		fmt.Fprintf(&faint, "M%.2f %.2fV%.2f", x, l.axes.bottom(), l.axes.y)
		fmt.Fprintf(&strong, "M%.2f %.2fv5", x, l.axes.bottom())
		width := d.faces.small.width(mark.text)
		d.labelled(mark.text, box{x - width/2, l.axes.bottom() + 8, width, d.faces.small.height()}, d.faces.small, softInk)
	}
	fmt.Fprintf(&strong, "M%.2f %.2fV%.2fH%.2f", l.axes.x, l.axes.y, l.axes.bottom(), l.axes.right())
	d.Path(faint.String(), attribute("stroke", faintInk), `stroke-width="0.5"`, `fill="none"`)
	d.Path(strong.String(), attribute("stroke", softInk), `stroke-width="0.9"`, `fill="none"`)
	below := l.axes.bottom() + 8 + 2*d.faces.small.height() + 4
	writeText(d.SVG, point{l.axes.x + l.axes.w/2, below}, l.chart.XLabel, d.faces.small, softInk, "middle")
	x, y := margin+d.faces.small.ascent(), l.axes.y+l.axes.h/2
	d.Gtransform(fmt.Sprintf("rotate(-90 %.2f %.2f)", x, y))
	writeText(d.SVG, point{x, y}, l.chart.YLabel, d.faces.small, softInk, "middle")
	d.Gend()
}

// levels draws the lines across the axes.
func (d linesSheet) levels(l linesLayout) {
	for i, level := range l.chart.Levels {
		d.Path(fmt.Sprintf("M%.2f %.2fH%.2f", l.axes.x, l.y.at(level.Y), l.axes.right()),
			append(l.stroke(len(l.chart.Lines)+i).attributes(), attribute("data-name", level.Name), `fill="none"`)...)
	}
}

func (d linesSheet) line(l linesLayout, i int) {
	line, s := l.chart.Lines[i], l.stroke(i)
	for _, track := range l.tracks(line) {
		x, y := columns(track)
		d.Polyline(x, y, append(s.attributes(), attribute("data-name", line.Name), `fill="none"`, `stroke-linejoin="round"`)...)
	}
	if line.Steps {
		return
	}
	for _, p := range line.Points {
		at := point{l.x.at(p.X), l.y.at(p.Y)}
		d.Circle(at.x, at.y, s.width+1, attribute("fill", s.ink))
		if p.Mark {
			d.Circle(at.x, at.y, s.width+ringWidth, attribute("stroke", cautionInk), `stroke-width="1.6"`, `fill="none"`)
		}
	}
}

// words writes the names with their leaders, and the notes.
func (d linesSheet) words(l linesLayout) {
	for _, n := range l.names {
		ink := l.stroke(n.line).ink
		if n.led {
			d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", n.end.x+5, n.end.y, n.box.x-3, n.box.centre().y),
				attribute("stroke", ink), `stroke-width="0.7"`, `fill="none"`)
		} else { // above the grid
			d.Rect(n.box.x, n.box.y, n.box.w, n.box.h, attribute("fill", paper), `fill-opacity="0.82"`)
		}
		d.labelled(n.text, n.box, d.faces.label, ink)
	}
	for _, n := range l.notes {
		d.labelled(n.text, n.box, d.faces.small, l.stroke(n.line).ink)
	}
}

// labelled writes a text into its box, inside a group that states it.
func (d linesSheet) labelled(text string, b box, face typeface, ink string) {
	d.Group(`data-role="label"`, attribute("data-name", text), fmt.Sprintf(`data-box="%.3f %.3f %.3f %.3f"`, b.x, b.y, b.w, b.h))
	writeText(d.SVG, point{b.centre().x, b.y + face.ascent()}, text, face, ink, "middle")
	d.Gend()
}

// firstLine is the stroke of the line that leads.
var firstLine = stroke{darkInk, 2.4, ""}

// stroke is that of a line or level: by its place among those that do not lead,
// levels dashed.
func (l linesLayout) stroke(line int) stroke {
	lines := len(l.chart.Lines)
	if line < lines && l.chart.Lines[line].Lead {
		return firstLine
	}
	place := 0
	for _, before := range l.chart.Lines[:min(line, lines)] {
		if !before.Lead {
			place++
		}
	}
	if line >= lines { // the first stroke is the only one without dashes
		return curveStrokes[1+(place+line-lines)%(len(curveStrokes)-1)]
	}
	return curveStrokes[place%len(curveStrokes)]
}
