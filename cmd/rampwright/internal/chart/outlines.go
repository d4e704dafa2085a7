package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"

	svg "github.com/ajstarks/svgo/float"
)

// OutlineChart lays the walls of several inlets over each other, leading edges at
// one place, to one scale.
type OutlineChart struct {
	Title  string
	Shapes []Outline // 1 to 50
}

// Outline is one inlet in metres: body from the leading edge, inner cowl from the
// lip.
type Outline struct {
	Name string
	Body []Vertex
	Cowl []Vertex
}

const mostShapes = 50

// Validate returns *InvalidChart with all defects at once, or nil.
func (c OutlineChart) Validate() error {
	var found []string
	if len(c.Shapes) == 0 || len(c.Shapes) > mostShapes {
		found = append(found, fmt.Sprintf("%d shapes, 1 to %d are drawn", len(c.Shapes), mostShapes))
	}
	for _, s := range c.Shapes {
		if len(s.Name) > longestText || len(s.Body) < 2 || len(s.Cowl) < 2 {
			found = append(found, fmt.Sprintf("%.40s: a name too long or a wall without two points", s.Name))
		}
		for _, v := range append(s.Body[:len(s.Body):len(s.Body)], s.Cowl...) {
			if !finite(v.X, v.Y) {
				found = append(found, fmt.Sprintf("%.40s: (%g, %g) is no place", s.Name, v.X, v.Y))
			}
		}
	}
	if found == nil {
		if x, y := c.extent(); !x.valid() || !y.valid() {
			found = append(found, "the shapes have no extent")
		}
	}
	if found != nil {
		return &InvalidChart{"outlines", found}
	}
	return nil
}

func (c OutlineChart) extent() (x, y Span) {
	x, y = Span{"x, m", math.Inf(1), math.Inf(-1)}, Span{"y, m", math.Inf(1), math.Inf(-1)}
	for _, s := range c.Shapes {
		for _, v := range append(s.Body[:len(s.Body):len(s.Body)], s.Cowl...) {
			x.Low, x.High = min(x.Low, v.X), max(x.High, v.X)
			y.Low, y.High = min(y.Low, v.Y), max(y.High, v.Y)
		}
	}
	return x, y
}

// WriteOutlineChart draws the shapes as SVG, the same bytes for the same numbers,
// with data-x and data-y as in WriteLineChart and both walls of each shape as
// polylines with its data-name. The key below names the strokes.
func WriteOutlineChart(w io.Writer, c OutlineChart) error {
	if err := c.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	x, y := c.extent()
	roomX := headroom / 2 * (x.High - x.Low)
	x.Low, x.High = x.Low-roomX, x.High+roomX
	y.Low, y.High = y.Low-roomX, y.High+roomX
	width := sheetWidth - 2*margin - axisRoom
	scale := min(width/(x.High-x.Low), tallest/(y.High-y.Low))
	p := d.newPanel(box{margin + axisRoom, margin + 24, scale * (x.High - x.Low), scale * (y.High - y.Low)}, x, y)
	key := p.frame.bottom() + belowAxes + 10
	columns, rows := d.keyColumns(c)
	height := key + float64(rows)*(d.faces.small.height()+4) + margin
	d.start(sheetWidth, height, c.Title, c.describe(), attribute("data-x", p.x.mapping()), attribute("data-y", p.y.mapping()))
	d.heading(sheetWidth, c.Title)
	d.outline(p)
	for i := len(c.Shapes) - 1; i >= 0; i-- { // the first above the others
		for _, wall := range [][]Vertex{c.Shapes[i].Body, c.Shapes[i].Cowl} {
			d.wall(p, c.Shapes[i].Name, wall, shapeStroke(i))
		}
	}
	each := (sheetWidth - 2*margin) / float64(columns)
	for i, s := range c.Shapes {
		left := margin + float64(i%columns)*each
		line := key + float64(i/columns)*(d.faces.small.height()+4)
		d.Path(fmt.Sprintf("M%.2f %.2fh30", left, line+d.faces.small.height()/2), append(shapeStroke(i).attributes(), `fill="none"`)...)
		d.labelled(s.Name, box{left + 38, line, d.faces.small.width(s.Name), d.faces.small.height()}, d.faces.small, darkInk)
	}
	d.End()
	return writeSheet(w, &sheet)
}

// keyColumns fits the key: as many columns as the longest name leaves room for.
func (d linesSheet) keyColumns(c OutlineChart) (columns, rows int) {
	widest := 0.0
	for _, s := range c.Shapes {
		widest = max(widest, d.faces.small.width(s.Name))
	}
	columns = max(1, min(4, int((sheetWidth-2*margin)/(widest+56))))
	return columns, (len(c.Shapes) + columns - 1) / columns
}

func (d linesSheet) wall(p panel, name string, wall []Vertex, s stroke) {
	var places []point
	for _, v := range wall {
		places = append(places, p.at(v.X, v.Y))
	}
	x, y := columns(places)
	d.Polyline(x, y, append(s.attributes(), attribute("data-name", name), `fill="none"`, `stroke-linejoin="round"`)...)
}

// shapeStroke tells shapes apart by ink, then by longer dashes.
func shapeStroke(i int) stroke {
	s := curveStrokes[i%len(curveStrokes)]
	if round := i / len(curveStrokes); round > 0 {
		s.dash = fmt.Sprintf("%d %d", 3+5*round, 2+round)
	}
	return s
}

func (c OutlineChart) describe() string {
	text := "Walls to one scale in metres, leading edges at one place."
	for _, s := range c.Shapes {
		end, lip := s.Body[len(s.Body)-1], s.Cowl[0]
		text += fmt.Sprintf(" %s: lip at (%.4g, %.4g), body drawn to (%.4g, %.4g).", s.Name, lip.X, lip.Y, end.X, end.Y)
	}
	return text
}
