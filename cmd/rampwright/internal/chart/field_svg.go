package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

const (
	fieldHeight = 300.0 // of a frame
	keyHeight   = 12.0  // of the colours of the key
)

// WriteFieldPair draws both fields as SVG, the same bytes for the same numbers.
// Each field is a group with data-name, data-x and data-y (the mapping, as in
// WriteLineChart); each colour is a path with data-band "low high"; the forbidden
// side is a path with data-name "forbidden", the ring a circle with data-name
// "best".
func WriteFieldPair(w io.Writer, f FieldPair) error {
	if err := f.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	top := d.headingHeight(sheetWidth, f.Title, f.Note) + d.faces.label.height() + 6
	width := (sheetWidth-2*margin)/2 - axisRoom - 6
	key := top + fieldHeight + belowAxes + 26
	height := key + keyHeight + 3*d.faces.small.height() + margin
	d.start(sheetWidth, height, f.Title, f.describe())
	d.heading(sheetWidth, f.Title, f.Note)
	d.hatching(f.ID)
	colours, _ := f.bands()
	for i, field := range f.Fields {
		left := margin + axisRoom + float64(i)*(width+axisRoom+6)
		p := d.newPanel(box{left, top, width, fieldHeight}, f.X, f.Y)
		d.Group(`data-role="field"`, attribute("data-name", field.Name), attribute("data-x", p.x.mapping()), attribute("data-y", p.y.mapping()))
		writeText(d.SVG, point{left, top - 6}, field.Name, d.faces.label, darkInk, "start")
		d.cells(p, f.Cells, field, colours, f.ID)
		d.outline(p)
		d.ring(p, f.Best)
		d.Gend()
	}
	d.colourKey(f.Label, colours, box{margin + axisRoom, key, sheetWidth - 2*margin - axisRoom, keyHeight})
	d.End()
	return writeSheet(w, &sheet)
}

// hatching defines the pattern of what is forbidden, light and dark lines so that
// it shows on every colour.
func (d linesSheet) hatching(id string) {
	d.Def()
	d.Pattern(id, 0, 0, 7, 7, "user", `patternTransform="rotate(45)"`)
	d.Path("M1.2 0V7", `stroke="#ffffff"`, `stroke-width="1.6"`, `stroke-opacity="0.75"`)
	d.Path("M0 0V7", `stroke="#101418"`, `stroke-width="1.2"`, `stroke-opacity="0.8"`)
	d.PatternEnd()
	d.DefEnd()
}

// cells paints the field: one path a colour, one for the forbidden side.
func (d linesSheet) cells(p panel, n int, field Field, colours bands, id string) {
	paths := make([]strings.Builder, colours.count)
	var forbidden strings.Builder
	for row := range n {
		runs(n, func(i int) int {
			if v := field.Values[row*n+i]; finite(v) {
				return colours.of(v)
			}
			return -1
		}, func(from, to, band int) { p.run(&paths[band], n, row, from, to) })
		runs(n, func(i int) int {
			if field.Forbidden[row*n+i] {
				return 0
			}
			return -1
		}, func(from, to, _ int) { p.run(&forbidden, n, row, from, to) })
	}
	for k := range paths {
		if paths[k].Len() > 0 {
			low := colours.from + float64(k)*colours.step
			d.Path(paths[k].String(), attribute("fill", colours.shade(k)), `shape-rendering="crispEdges"`,
				attribute("data-band", fmt.Sprintf("%.6g %.6g", low, low+colours.step)))
		}
	}
	if forbidden.Len() > 0 {
		d.Path(forbidden.String(), attribute("fill", "url(#"+id+")"), `data-name="forbidden"`)
	}
}

// runs calls paint for each run from <= i < to of one class in a row; class -1 is
// left out.
func runs(n int, class func(i int) int, paint func(from, to, class int)) {
	for from := 0; from < n; {
		to := from + 1
		for to < n && class(to) == class(from) {
			to++
		}
		if c := class(from); c >= 0 {
			paint(from, to, c)
		}
		from = to
	}
}

// run appends the rectangle of cells from <= i < to of a row.
func (p panel) run(path *strings.Builder, n, row, from, to int) {
	w, h := p.frame.w/float64(n), p.frame.h/float64(n)
	fmt.Fprintf(path, "M%s %sh%sv%sh-%sz",
		short(p.frame.x+float64(from)*w), short(p.frame.bottom()-float64(row)*h),
		short(float64(to-from)*w), short(-h), short(float64(to-from)*w))
}

// short writes a coordinate to a hundredth of a drawing unit.
func short(v float64) string {
	return strconv.FormatFloat(math.Round(v*100)/100+0, 'f', -1, 64)
}

// ring marks a place: dark on a light halo.
func (d linesSheet) ring(p panel, at [2]float64) {
	if !finite(at[0], at[1]) {
		return
	}
	c := p.at(at[0], at[1])
	d.Circle(c.x, c.y, 8, `fill="none"`, `stroke="#ffffff"`, `stroke-width="4"`)
	d.Circle(c.x, c.y, 8, `fill="none"`, `stroke="#d81b00"`, `stroke-width="2"`, `data-name="best"`)
}

// colourKey writes the colours with their edges, as many numbers as find room.
func (d linesSheet) colourKey(label string, colours bands, at box) {
	w := at.w / float64(colours.count)
	edges := ruler{step: colours.step}
	first := int(math.Round(colours.from / colours.step))
	end := math.Inf(-1)
	for k := 0; k <= colours.count; k++ {
		x := at.x + float64(k)*w
		if k < colours.count {
			d.Rect(x, at.y, w, at.h, attribute("fill", colours.shade(k)), `shape-rendering="crispEdges"`)
		}
		text := edges.text(first + k)
		width := d.faces.small.width(text)
		left := clamp(x-width/2, at.x-axisRoom/2, at.right()-width)
		if left > end+6 {
			d.labelled(text, box{left, at.bottom() + 4, width, d.faces.small.height()}, d.faces.small, softInk)
			end = left + width
		}
	}
	writeText(d.SVG, point{at.x + at.w/2, at.bottom() + 8 + 2*d.faces.small.height()}, label, d.faces.small, softInk, "middle")
}

func (f FieldPair) describe() string {
	text := fmt.Sprintf("%s over %s (%.4g to %.4g) and %s (%.4g to %.4g), %s on the left, %s on the right.",
		f.Label, f.X.Label, f.X.Low, f.X.High, f.Y.Label, f.Y.Low, f.Y.High, f.Fields[0].Name, f.Fields[1].Name)
	for _, field := range f.Fields {
		low, high, forbidden := math.Inf(1), math.Inf(-1), 0
		for i, v := range field.Values {
			if finite(v) {
				low, high = min(low, v), max(high, v)
			}
			if field.Forbidden[i] {
				forbidden++
			}
		}
		if low <= high {
			text += fmt.Sprintf(" %s: %.4g to %.4g, limits forbid %d of %d cells.", field.Name, low, high, forbidden, len(field.Values))
		}
	}
	if finite(f.Best[0], f.Best[1]) {
		text += fmt.Sprintf(" Ringed: %s at (%.4g, %.4g).", f.BestName, f.Best[0], f.Best[1])
	}
	return text
}
