package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// bandInks are the inks of the bands: the first filled, the second an outline with
// dashes, so that they stay apart in grey.
var bandInks = [...]stroke{{"#005f9e", 1.2, ""}, {"#c24e00", 1.4, "3 2"}}

const (
	bandHeight = 8.0
	bandGap    = 3.0
	stripGap   = 13.0 // between rows
	arrowSize  = 5.0
	stripNames = 300.0 // room of the names; longer ones are wrapped
)

// WriteStripChart draws the chart as SVG, the same bytes for the same numbers. It
// returns *InvalidStrips for one that cannot be drawn. data-x states the mapping of
// the axis as in WriteLineChart; every band is a rectangle with data-row and
// data-band, its middle and the marks paths with data-row.
func WriteStripChart(w io.Writer, c StripChart) error {
	if err := c.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := stripSheet{linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}, c, linearAxis{}, nil}
	d.Decimals = sheetDecimals
	d.draw()
	return writeSheet(w, &sheet)
}

type stripSheet struct {
	linesSheet
	chart StripChart
	x     linearAxis
	tops  []float64 // of the rows
}

// rowHeight is the height of the bands of a row, or of its name where that is
// higher.
func (d *stripSheet) rowHeight(row *Strip) float64 {
	bands := float64(len(d.chart.BandNames))*(bandHeight+bandGap) - bandGap
	return max(bands, float64(len(d.nameLines(row)))*d.lineStep())
}

// lineStep is the distance of the lines of a name.
func (d *stripSheet) lineStep() float64 { return d.faces.small.height() + 1 }

func (d *stripSheet) nameLines(row *Strip) []string { return d.faces.small.wrap(row.Name, stripNames) }

func (d *stripSheet) draw() {
	c := &d.chart
	names, notes := 0.0, d.faces.small.width(c.NoteHead)
	for i := range c.Rows {
		for _, line := range d.nameLines(&c.Rows[i]) {
			names = max(names, d.faces.small.width(line))
		}
		notes = max(notes, d.faces.small.width(c.Rows[i].Note))
	}
	top := d.headingHeight(sheetWidth, c.Title, c.Subtitle...) + 2*d.faces.small.height() + 8
	d.x = linearAxis{low: c.Low, high: c.High, from: margin + names + 22, to: sheetWidth - margin - notes - 22}
	d.x.ticks = newRuler(c.Low, c.High, 60*(c.High-c.Low)/(d.x.to-d.x.from))
	bottom := top + stripGap
	for i := range c.Rows {
		d.tops = append(d.tops, bottom)
		bottom += d.rowHeight(&c.Rows[i]) + stripGap
	}
	height := bottom + belowAxes + 2*d.faces.small.height() + margin
	d.start(sheetWidth, height, c.Title, d.describe(), attribute("data-x", d.x.mapping()))
	d.heading(sheetWidth, c.Title, c.Subtitle...)
	d.ground(top, bottom)
	for i := range c.Rows {
		d.row(i)
	}
	d.bandKey(bottom + belowAxes + d.faces.small.height() + 6)
	d.End()
}

// describe says in words what the chart shows.
func (d *stripSheet) describe() string {
	words := []string{d.chart.XLabel + ", 0 is the limit."}
	for _, row := range d.chart.Rows {
		words = append(words, row.Name+": "+row.Note+".")
	}
	return strings.Join(words, " ")
}

// ground draws the side beyond the limit, the axis and the line at zero.
func (d *stripSheet) ground(top, bottom float64) {
	zero, small := d.x.at(0), d.faces.small
	d.Rect(d.x.from, top, zero-d.x.from, bottom-top, attribute("fill", solidInk))
	var faint, strong strings.Builder
	for k := d.x.ticks.from; k <= d.x.ticks.to; k++ {
		x, text := d.x.at(d.x.ticks.value(k)), d.x.ticks.text(k)
		fmt.Fprintf(&faint, "M%.2f %.2fV%.2f", x, bottom, top)
		fmt.Fprintf(&strong, "M%.2f %.2fv5", x, bottom)
		width := small.width(text)
		d.labelled(text, box{x - width/2, bottom + 8, width, small.height()}, small, softInk)
	}
	fmt.Fprintf(&strong, "M%.2f %.2fH%.2f", d.x.from, bottom, d.x.to)
	d.Path(faint.String(), attribute("stroke", faintInk), `stroke-width="0.5"`, `fill="none"`)
	d.Path(strong.String(), attribute("stroke", softInk), `stroke-width="0.9"`, `fill="none"`)
	d.Path(fmt.Sprintf("M%.2f %.2fV%.2f", zero, top, bottom), attribute("stroke", cautionInk), `stroke-width="1.6"`, `fill="none"`)
	writeText(d.SVG, point{(d.x.from + d.x.to) / 2, bottom + 8 + 2*small.height() + 4}, d.chart.XLabel, small, softInk, "middle")
	writeText(d.SVG, point{zero - 6, top - 5}, d.chart.Below, small, cautionInk, "end")
	writeText(d.SVG, point{zero + 6, top - 5}, d.chart.Above, small, softInk, "start")
	writeText(d.SVG, point{sheetWidth - margin, top - 5}, d.chart.NoteHead, small, softInk, "end")
}

// row draws one distribution with its name and note.
func (d *stripSheet) row(i int) {
	row, small := &d.chart.Rows[i], d.faces.small
	height := d.rowHeight(row)
	middle := d.tops[i] + height/2
	lines := d.nameLines(row)
	y := middle - float64(len(lines))*d.lineStep()/2
	for _, line := range lines {
		width := small.width(line)
		d.labelled(line, box{d.x.from - 14 - width, y, width, small.height()}, small, darkInk)
		y += d.lineStep()
	}
	width := small.width(row.Note)
	d.labelled(row.Note, box{sheetWidth - margin - width, middle - small.height()/2, width, small.height()}, small, darkInk)
	bands := float64(len(d.chart.BandNames))*(bandHeight+bandGap) - bandGap
	for k, b := range row.Bands {
		d.band(i, k, b, middle-bands/2+float64(k)*(bandHeight+bandGap))
	}
	if finite(row.Mark) && row.Mark >= d.x.low && row.Mark <= d.x.high {
		d.mark(d.x.at(row.Mark), middle, fmt.Sprintf(`data-row="%d"`, i))
	}
}

// band draws a range from low to high with its middle, cut at the edges.
func (d *stripSheet) band(row, k int, b Band, top float64) {
	if math.IsNaN(b.Low + b.Middle + b.High) {
		return
	}
	low, high := d.x.at(min(max(b.Low, d.x.low), d.x.high)), d.x.at(min(max(b.High, d.x.low), d.x.high))
	s := bandInks[k]
	style := []string{attribute("fill", s.ink), `fill-opacity="0.55"`, attribute("stroke", s.ink), fmt.Sprintf(`stroke-width="%g"`, s.width)}
	if s.dash != "" {
		style = append(s.attributes(), attribute("fill", paper))
	}
	d.Rect(low, top, max(high-low, 0.5), bandHeight, append(style, fmt.Sprintf(`data-row="%d" data-band="%d"`, row, k))...)
	if b.Middle >= d.x.low && b.Middle <= d.x.high {
		d.Path(fmt.Sprintf("M%.2f %.2fv%g", d.x.at(b.Middle), top-1, bandHeight+2), attribute("stroke", darkInk), `stroke-width="1.8"`, `fill="none"`)
	}
	at := top + bandHeight/2
	if b.High > d.x.high {
		d.arrow(d.x.to, at, 1, s.ink)
	}
	if b.Low < d.x.low {
		d.arrow(d.x.from, at, -1, s.ink)
	}
}

// arrow points out of the axis: the band goes on.
func (d *stripSheet) arrow(x, y, way float64, ink string) {
	d.Polygon([]float64{x + way*arrowSize, x, x}, []float64{y, y - arrowSize, y + arrowSize}, attribute("fill", ink))
}

// mark is a ring.
func (d *stripSheet) mark(x, y float64, more string) {
	d.Circle(x, y, 4, attribute("fill", paper), attribute("stroke", darkInk), `stroke-width="1.6"`, more)
}

// bandKey explains bands and marks.
func (d *stripSheet) bandKey(y float64) {
	x, small := margin, d.faces.small
	write := func(text string) {
		writeText(d.SVG, point{x + 34, y + small.ascent()/2 - 2}, text, small, softInk, "start")
		x += 34 + small.width(text) + 24
	}
	saved := d.x
	for k, name := range d.chart.BandNames {
		d.x = linearAxis{low: 0, high: 1, from: x, to: x + 28}
		d.band(-1, k, Band{0, 0.5, 1}, y-bandHeight/2)
		write(name)
	}
	d.x = saved
	if d.chart.MarkName != "" {
		d.mark(x+14, y, `data-row="-1"`)
		write(d.chart.MarkName)
	}
}
