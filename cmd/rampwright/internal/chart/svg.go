package chart

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"strconv"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// Decimals of a coordinate on the sheet: geometry is read back by programs,
// everything else only by eyes.
const (
	geometryDecimals = 9
	sheetDecimals    = 2
)

// WriteSideView draws the inlet to scale as SVG, the same bytes for the same
// numbers. It returns *InvalidView for a view that cannot be drawn.
//
// The root element states the mapping: data-scale (drawing units per metre, the
// same in x and y), data-origin-x and data-origin-y, so that
//
//	x_m = (x - origin_x) / scale,  y_m = (origin_y - y) / scale
//
// Every wave is a line element with data-name and data-kind, the only lines in
// the drawing; walls and streamline are polylines with data-name; every label is
// a group with data-name, data-role and data-box (left, top, width, height).
func WriteSideView(w io.Writer, view SideView) error {
	if err := view.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := drawing{svg.New(&sheet), arrange(view)}
	d.open()
	d.solids()
	d.rulers()
	d.flow()
	d.walls()
	d.names()
	d.head()
	d.key()
	d.End()
	return writeSheet(w, &sheet)
}

type drawing struct {
	*svg.SVG
	layout
}

// keyRoom is the height below the labels for the x ruler and the key of strokes.
const keyRoom = 88.0

func (d drawing) height() float64 { return d.bottom + keyRoom }

func (d drawing) open() {
	d.Decimals = sheetDecimals
	number := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
	d.Start(sheetWidth, d.height(),
		fmt.Sprintf(`viewBox="0 0 %g %.*f"`, sheetWidth, sheetDecimals, d.height()),
		`role="img"`, attribute("aria-label", d.view.Title),
		lettering,
		`data-unit="m"`, attribute("data-scale", number(d.frame.scale)),
		attribute("data-origin-x", number(d.frame.origin.x)),
		attribute("data-origin-y", number(d.frame.origin.y)))
	d.Title(d.view.Title)
	d.Desc(d.describe())
	d.Rect(0, 0, sheetWidth, d.height(), attribute("fill", paper))
}

// describe says in words what the drawing shows.
func (d drawing) describe() string {
	var words []string
	words = append(words, "Side view to scale, lengths in metres, flow from left to right.")
	for _, w := range d.view.Waves {
		if w.Name == "" {
			continue // one of many crossed and reflected waves
		}
		words = append(words, fmt.Sprintf("%s (%s) from (%.4g, %.4g) to (%.4g, %.4g).", w.Name, w.Kind, w.X1, w.Y1, w.X2, w.Y2))
	}
	return strings.Join(words, " ")
}

func (d drawing) solids() {
	d.Def()
	d.Pattern("solid-hatch", 0, 0, 5, 5, "user", `patternTransform="rotate(45)"`)
	d.Rect(0, 0, 5, 5, attribute("fill", solidInk))
	d.Path("M0 0V5", attribute("stroke", hatchInk), `stroke-width="1.2"`)
	d.PatternEnd()
	d.DefEnd()
	d.Group(`fill="url(#solid-hatch)"`, `stroke="none"`)
	for _, outline := range [][]point{d.body, d.cowl} {
		if len(outline) > 0 {
			x, y := columns(outline)
			d.Polygon(x, y)
		}
	}
	d.Gend()
}

// flow draws the waves and the streamline that meets the lip.
func (d drawing) flow() {
	d.Decimals = geometryDecimals
	d.Group(`data-role="waves"`, `fill="none"`, `stroke-linecap="butt"`)
	for _, w := range d.view.Waves {
		a, b := d.frame.at(w.X1, w.Y1), d.frame.at(w.X2, w.Y2)
		d.Line(a.x, a.y, b.x, b.y, append(strokes[w.Kind].attributes(),
			attribute("data-name", w.Name), attribute("data-kind", w.Kind.String()))...)
	}
	d.wallLine("lip streamline", d.view.LipStreamline, streamlineStroke)
	d.Gend()
	d.Decimals = sheetDecimals
	d.freeStream()
}

func (d drawing) freeStream() {
	along := d.arrow.tip.minus(d.arrow.tail).times(1 / arrowLength)
	across := point{-along.y, along.x}
	neck := d.arrow.tip.minus(along.times(11))
	barb1, barb2 := neck.plus(across.times(4.5)), neck.minus(across.times(4.5))
	d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", d.arrow.tail.x, d.arrow.tail.y, neck.x, neck.y),
		attribute("stroke", darkInk), `stroke-width="2"`, `fill="none"`)
	d.Polygon([]float64{d.arrow.tip.x, barb1.x, barb2.x}, []float64{d.arrow.tip.y, barb1.y, barb2.y}, attribute("fill", darkInk))
	for i, line := range d.arrow.text {
		base := d.arrow.block.bottom() - float64(len(d.arrow.text)-1-i)*d.faces.small.height() - 3
		d.write(point{(d.arrow.tail.x + d.arrow.tip.x) / 2, base}, line, d.faces.small, softInk, "middle")
	}
}

func (d drawing) walls() {
	wall := stroke{darkInk, 2, ""}
	d.Decimals = geometryDecimals
	d.Group(`data-role="walls"`, `fill="none"`, `stroke-linejoin="round"`, `stroke-linecap="round"`)
	d.wallLine("body", d.view.Body, wall)
	d.wallLine("cowl inner", d.view.CowlInner, wall)
	d.wallLine("cowl outer", d.view.CowlOuter, wall)
	d.Gend()
	d.Decimals = sheetDecimals
}

func (d drawing) wallLine(name string, vertices []Vertex, s stroke) {
	if len(vertices) > 0 {
		x, y := columns(d.frame.line(vertices))
		d.Polyline(x, y, append(s.attributes(), attribute("data-name", name))...)
	}
}

// names draws all leaders, then all labels over them.
func (d drawing) names() {
	d.Group(`data-role="leaders"`, `fill="none"`, `stroke-width="0.7"`)
	for _, l := range d.labels {
		if l.led {
			d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", l.leader.a.x, l.leader.a.y, l.anchor.x, l.anchor.y), attribute("stroke", l.ink))
			d.Circle(l.anchor.x, l.anchor.y, 1.9, attribute("fill", l.ink))
		}
	}
	d.Gend()
	for _, l := range d.labels {
		d.Group(`data-role="label"`, attribute("data-of", l.role), attribute("data-name", l.name),
			fmt.Sprintf(`data-box="%.3f %.3f %.3f %.3f"`, l.box.x, l.box.y, l.box.w, l.box.h))
		d.Rect(l.box.x, l.box.y, l.box.w, l.box.h, attribute("fill", paper), `fill-opacity="0.82"`)
		d.write(point{l.box.centre().x, l.box.y + d.faces.label.ascent()}, l.name, d.faces.label, l.ink, "middle")
		d.Gend()
	}
}

func (d drawing) head() {
	for _, line := range d.heading {
		if line.mark {
			d.Rect(margin, line.base.y-line.face.ascent(), 3, line.face.height()+2, attribute("fill", cautionInk))
		}
		d.write(line.base, line.text, line.face, line.ink, "start")
	}
}

// write sets one line of text.
func (d drawing) write(at point, text string, face typeface, ink, anchor string) {
	writeText(d.SVG, at, text, face, ink, anchor)
}

// writeText sets one line of text; its measured width is binding, so that a
// reader without the face draws it no wider.
func writeText(s *svg.SVG, at point, text string, face typeface, ink, anchor string) {
	s.Text(at.x, at.y, text, attribute("fill", ink), fmt.Sprintf(`font-size="%g"`, face.size),
		attribute("text-anchor", anchor), fmt.Sprintf(`textLength="%.2f"`, face.width(text)), `lengthAdjust="spacingAndGlyphs"`)
}

func (s stroke) attributes() []string {
	list := []string{attribute("stroke", s.ink), fmt.Sprintf(`stroke-width="%g"`, s.width)}
	if s.dash != "" {
		list = append(list, attribute("stroke-dasharray", s.dash))
	}
	return list
}

func columns(points []point) (x, y []float64) {
	for _, p := range points {
		x, y = append(x, p.x), append(y, p.y)
	}
	return x, y
}

// attribute writes name="value" with the value escaped.
func attribute(name, value string) string {
	var escaped strings.Builder
	if err := xml.EscapeText(&escaped, []byte(value)); err != nil { // a Builder never fails
		panic(err)
	}
	return name + `="` + escaped.String() + `"`
}

// writeSheet writes a finished drawing without its XML prolog, so that the file
// stands inside a page as well.
func writeSheet(w io.Writer, sheet *bytes.Buffer) error {
	_, err := w.Write(sheet.Bytes()[bytes.Index(sheet.Bytes(), []byte("<svg")):])
	return err
}
