package chart

import (
	"bytes"
	"fmt"
	"io"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// curveStrokes tell curves apart by ink and by dashes; the lead curve has a
// stroke of its own, broad and pale.
var curveStrokes = [...]stroke{
	{"#005f9e", 1.6, ""},
	{"#c24e00", 1.6, "8 3"},
	{"#00735a", 1.6, "3 2.5"},
	{"#8a2f7c", 1.6, "12 3 2 3"},
	{"#7a6200", 1.6, "6 2 1.5 2 1.5 2"},
	{"#45535f", 1.6, "1.5 3"},
}

var (
	leadStroke   = stroke{darkInk, 6, ""}
	targetStroke = stroke{cautionInk, 0.9, "2 3"}
)

// WriteLearningCurves draws the picture as SVG, the same bytes for the same
// numbers. It returns *InvalidCurves for one that cannot be drawn.
//
// Each curve is a polyline with data-name; its names and every other label are
// groups with data-name and data-box (left, top, width, height), none of which
// overlap.
func WriteLearningCurves(w io.Writer, picture LearningCurves) error {
	if err := picture.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := learningSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	d.Decimals = sheetDecimals
	d.draw(picture)
	return writeSheet(w, &sheet)
}

type learningSheet struct {
	*svg.SVG
	faces typefaces
}

func (d learningSheet) draw(picture LearningCurves) {
	var lines []string
	for _, text := range picture.Subtitle {
		lines = append(lines, d.faces.text.wrap(text, sheetWidth-2*margin)...)
	}
	title := d.faces.title.wrap(picture.Title, sheetWidth-2*margin)
	head := margin + float64(len(title))*d.faces.title.height() + float64(len(lines))*(d.faces.text.height()+3)
	height := head + float64(len(picture.Panels))*(aboveAxes+panelHeight+belowAxes) + margin
	d.Start(sheetWidth, height, fmt.Sprintf(`viewBox="0 0 %g %.*f"`, sheetWidth, sheetDecimals, height),
		`role="img"`, attribute("aria-label", picture.Title), lettering)
	d.Title(picture.Title)
	d.Desc("Learning curves: error against number of samples, both axes logarithmic. " + strings.Join(picture.Subtitle, " "))
	d.Rect(0, 0, sheetWidth, height, attribute("fill", paper))
	y := margin
	for _, line := range title {
		y += d.faces.title.height()
		writeText(d.SVG, point{margin, y - 4}, line, d.faces.title, darkInk, "start")
	}
	for _, line := range lines {
		y += d.faces.text.height() + 3
		writeText(d.SVG, point{margin, y - 3}, line, d.faces.text, softInk, "start")
	}
	for _, p := range picture.Panels {
		d.panel(arrangePanel(p, y+aboveAxes, d.faces.label))
		y += aboveAxes + panelHeight + belowAxes
	}
	d.End()
}

func (d learningSheet) panel(l panelLayout) {
	writeText(d.SVG, point{l.axes.x, l.axes.y - 10}, l.panel.Title, d.faces.label, darkInk, "start")
	d.grid(l)
	d.target(l)
	for i, c := range l.panel.Curves {
		if c.Lead {
			d.band(l, i)
		}
	}
	for i, c := range l.panel.Curves {
		if !c.Lead {
			d.whiskers(l, i)
		}
	}
	for _, lead := range []bool{true, false} { // the lead lies broad under the others
		for i, c := range l.panel.Curves {
			if c.Lead == lead {
				d.curve(l, i)
			}
		}
	}
	for _, n := range l.names {
		d.name(l, n)
	}
}

// grid draws the decades, the counts and the two axis names.
func (d learningSheet) grid(l panelLayout) {
	var faint, strong strings.Builder
	every := 1 + len(l.decades)/12 // of the decades that are named
	for i, k := range l.decades {
		y := l.y.at(powerOfTen(k))
		fmt.Fprintf(&faint, "M%.2f %.2fH%.2f", l.axes.x, y, l.axes.right())
		if i%every == 0 {
			d.tick(point{l.axes.x - 8, y + d.faces.small.ascent()*0.38}, shortDecade(k), "end")
		}
	}
	for i, n := range l.counts {
		x := l.x.at(n)
		fmt.Fprintf(&strong, "M%.2f %.2fv5", x, l.axes.bottom())
		fmt.Fprintf(&faint, "M%.2f %.2fV%.2f", x, l.axes.bottom(), l.axes.y)
		if i == 0 || x-l.x.at(l.counts[i-1]) > d.faces.small.width(shortCount(n))+6 {
			d.tick(point{x, l.axes.bottom() + 8 + d.faces.small.ascent()}, shortCount(n), "middle")
		}
	}
	fmt.Fprintf(&strong, "M%.2f %.2fV%.2fH%.2f", l.axes.x, l.axes.y, l.axes.bottom(), l.axes.right())
	d.Path(faint.String(), attribute("stroke", faintInk), `stroke-width="0.5"`, `fill="none"`)
	d.Path(strong.String(), attribute("stroke", softInk), `stroke-width="0.9"`, `fill="none"`)
	below := l.axes.bottom() + 8 + 2*d.faces.small.height() + 4
	writeText(d.SVG, point{l.axes.x + l.axes.w/2, below}, l.panel.XLabel, d.faces.small, softInk, "middle")
	x, y := margin+d.faces.small.ascent(), l.axes.y+l.axes.h/2
	d.Gtransform(fmt.Sprintf("rotate(-90 %.2f %.2f)", x, y))
	writeText(d.SVG, point{x, y}, l.panel.YLabel, d.faces.small, softInk, "middle")
	d.Gend()
}

// tick writes the number of a tick in a box of its own.
func (d learningSheet) tick(at point, text, anchor string) {
	width := d.faces.small.width(text)
	left := at.x - width
	if anchor == "middle" {
		left = at.x - width/2
	}
	d.labelled(text, box{left, at.y - d.faces.small.ascent(), width, d.faces.small.height()}, func() {
		writeText(d.SVG, at, text, d.faces.small, softInk, anchor)
	})
}

// labelled draws a label inside a group that states its box.
func (d learningSheet) labelled(name string, b box, draw func()) {
	d.Group(`data-role="label"`, attribute("data-name", name), fmt.Sprintf(`data-box="%.3f %.3f %.3f %.3f"`, b.x, b.y, b.w, b.h))
	draw()
	d.Gend()
}

// target draws the level line of the error asked for, named at its left end.
func (d learningSheet) target(l panelLayout) {
	if l.panel.Target == 0 {
		return
	}
	y := l.y.at(drawn(l.panel.Target))
	d.Path(fmt.Sprintf("M%.2f %.2fH%.2f", l.axes.x, y, l.axes.right()), append(targetStroke.attributes(), `fill="none"`)...)
	writeText(d.SVG, point{l.axes.x + 4, y - 4}, l.panel.TargetName, d.faces.small, cautionInk, "start")
}

// band shades the region between low and high of a curve.
func (d learningSheet) band(l panelLayout, curve int) {
	points := l.panel.Curves[curve].Points
	var outline []point
	for _, at := range points {
		outline = append(outline, point{l.x.at(at.X), l.y.at(drawn(at.High))})
	}
	for i := len(points) - 1; i >= 0; i-- {
		outline = append(outline, point{l.x.at(points[i].X), l.y.at(drawn(points[i].Low))})
	}
	x, y := columns(outline)
	d.Polygon(x, y, attribute("fill", l.stroke(curve).ink), `fill-opacity="0.13"`, `stroke="none"`)
}

// whiskers draws low to high at each point, moved aside so that those of
// different curves do not hide each other.
func (d learningSheet) whiskers(l panelLayout, curve int) {
	aside := (float64(curve) - float64(len(l.panel.Curves)-1)/2) * 2.4
	var path strings.Builder
	for _, at := range l.panel.Curves[curve].Points {
		fmt.Fprintf(&path, "M%.2f %.2fV%.2f", l.x.at(at.X)+aside, l.y.at(drawn(at.Low)), l.y.at(drawn(at.High)))
	}
	d.Path(path.String(), attribute("stroke", l.stroke(curve).ink), `stroke-width="1"`, `stroke-opacity="0.55"`, `fill="none"`)
}

func (d learningSheet) curve(l panelLayout, curve int) {
	c := l.panel.Curves[curve]
	var line []point
	for _, at := range c.Points {
		line = append(line, point{l.x.at(at.X), l.y.at(drawn(at.Middle))})
	}
	s := l.stroke(curve)
	x, y := columns(line)
	opacity := 1.0
	if c.Lead {
		opacity = 0.35
	}
	d.Polyline(x, y, append(s.attributes(), attribute("data-name", c.Name), fmt.Sprintf(`stroke-opacity="%g"`, opacity), `fill="none"`, `stroke-linejoin="round"`)...)
	for _, at := range line {
		d.Circle(at.x, at.y, 1.2+s.width/2, attribute("fill", s.ink), fmt.Sprintf(`fill-opacity="%g"`, opacity))
	}
}

// name writes the name of a curve and the leader to its end.
func (d learningSheet) name(l panelLayout, n curveName) {
	ink := l.stroke(n.curve).ink
	d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", n.end.x+5, n.end.y, n.box.x-3, n.box.centre().y),
		attribute("stroke", ink), `stroke-width="0.7"`, `fill="none"`)
	text := l.panel.Curves[n.curve].Name
	d.labelled(text, n.box, func() {
		writeText(d.SVG, point{n.box.x, n.box.y + d.faces.label.ascent()}, text, d.faces.label, ink, "start")
	})
}

// stroke is that of a curve: by its place among those that do not lead.
func (l panelLayout) stroke(curve int) stroke {
	if l.panel.Curves[curve].Lead {
		return leadStroke
	}
	place := 0
	for i := range curve {
		if !l.panel.Curves[i].Lead {
			place++
		}
	}
	s := curveStrokes[place%len(curveStrokes)]
	if round := place / len(curveStrokes); round > 0 { // the same inks again, in longer dashes
		s.dash = fmt.Sprintf("%d 4", 4+12*round)
	}
	return s
}
