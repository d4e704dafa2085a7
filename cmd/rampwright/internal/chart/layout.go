package chart

import "math"

// The sheet, in drawing units (pixels at natural size).
const (
	sheetWidth  = 900.0
	margin      = 20.0
	rulerRoom   = 44.0  // left of the picture: the y ruler
	arrowRoom   = 112.0 // left of the geometry: the free-stream arrow
	tallest     = 430.0 // the geometry never stands higher
	roomAbove   = 90.0  // labels may rise this far above the geometry
	arrowLength = 72.0
)

// frame maps metres to the sheet with one scale for x and y:
// sheet x = origin.x + scale x, sheet y = origin.y - scale y.
type frame struct {
	scale  float64 // drawing units per metre
	origin point
}

func (f frame) at(x, y float64) point {
	return point{f.origin.x + f.scale*x, f.origin.y - f.scale*y}
}

func (f frame) line(vertices []Vertex) []point {
	points := make([]point, len(vertices))
	for i, v := range vertices {
		points[i] = f.at(v.X, v.Y)
	}
	return points
}

// layout is a side view with every place on the sheet decided.
type layout struct {
	view    SideView
	faces   typefaces
	frame   frame
	picture box // the geometry's own box
	body    []point
	cowl    []point // outline of the cowl; empty without one
	labels  []label
	arrow   arrow
	heading []textLine
	top     float64 // where the picture's own room begins
	bottom  float64 // below the lowest label
}

type textLine struct {
	text string
	face typeface
	ink  string
	mark bool // a bar in the margin
	base point
}

// arrow is the free-stream arrow: from tail to tip, with lines of text under it.
type arrow struct {
	tail, tip point
	text      []string
	block     box
}

// typefaces are the text sizes of the sheet.
type typefaces struct{ title, text, label, small typeface }

func newTypefaces() typefaces {
	return typefaces{newTypeface(19), newTypeface(12.5), newTypeface(12), newTypeface(11)}
}

// arrange decides every place: heading, then geometry at the largest equal
// scale, then labels, then what stands below them.
func arrange(view SideView) layout {
	l := layout{view: view, faces: newTypefaces()}
	l.writeHeading()
	l.fitGeometry()
	l.drawSolids()
	l.aimArrow()
	l.placeLabels()
	l.closeUp()
	return l
}

// writeHeading sets title, subtitle and caution, wrapped to the sheet.
func (l *layout) writeHeading() {
	y := margin
	write := func(text string, face typeface, ink string, mark bool, gap float64) {
		for _, line := range face.wrap(text, sheetWidth-2*margin-10) {
			y += face.height() + gap
			x := margin
			if mark {
				x += 10
			}
			l.heading = append(l.heading, textLine{line, face, ink, mark, point{x, y - (face.height() - face.ascent())}})
		}
	}
	write(l.view.Title, l.faces.title, darkInk, false, 0)
	for _, line := range l.view.Subtitle {
		write(line, l.faces.text, softInk, false, 3)
	}
	write(l.view.Caution, l.faces.text, cautionInk, true, 5)
	l.top = y + 12
}

// fitGeometry chooses the scale and puts the geometry's top at height 0 of the
// sheet; closeUp moves it down when the labels above it are known.
func (l *layout) fitGeometry() {
	low, high := l.view.bounds()
	size := high.minus(low)
	room := sheetWidth - 2*margin - rulerRoom - arrowRoom
	scale := min(room/size.x, tallest/size.y)
	left := margin + rulerRoom + arrowRoom + (room-scale*size.x)/2
	l.frame = frame{scale, point{left - scale*low.x, scale * high.y}}
	l.picture = box{left, 0, scale * size.x, scale * size.y}
}

// drawSolids lays the hatched outlines under the ramp and inside the cowl.
func (l *layout) drawSolids() {
	l.body = underside(l.frame.line(l.view.Body))
	if len(l.view.CowlInner) > 1 && len(l.view.CowlOuter) > 1 {
		l.cowl = append(l.frame.line(l.view.CowlInner), reversed(l.frame.line(l.view.CowlOuter))...)
	}
}

const wallDepth = 11.0 // of the hatched band, drawing units

// underside returns the closed band below a wall: the wall itself, then the
// same line set back into the solid, which lies to the right hand of a walker
// going downstream. The band starts sharp at the leading edge.
func underside(wall []point) []point {
	band := append([]point(nil), wall...)
	for i := len(wall) - 1; i > 0; i-- {
		into := rightOf(wall[i-1], wall[min(i+1, len(wall)-1)])
		band = append(band, wall[i].plus(into.times(wallDepth)))
	}
	foot := wall[1]
	if length := wall[0].distance(wall[1]); length > 3*wallDepth {
		foot = between(wall[0], wall[1], 3*wallDepth/length)
	}
	return append(band, foot.plus(rightOf(wall[0], wall[1]).times(wallDepth)))
}

// rightOf is the unit direction to the right hand of a walker from a to b on the
// sheet, or zero when both are one place.
func rightOf(a, b point) point {
	if a == b {
		return point{}
	}
	return point{a.y - b.y, b.x - a.x}.times(1 / a.distance(b))
}

func reversed(points []point) []point {
	back := make([]point, len(points))
	for i, p := range points {
		back[len(points)-1-i] = p
	}
	return back
}

// aimArrow puts the free-stream arrow left of the geometry, at its true angle.
func (l *layout) aimArrow() {
	sin, cos := math.Sincos(l.view.Incidence)
	left := l.picture.x - arrowRoom
	centre := point{left + arrowRoom/2, l.picture.h / 2}
	half := point{cos, sin}.times(arrowLength / 2)
	l.arrow = arrow{tail: centre.minus(half), tip: centre.plus(half), text: []string{"flow", incidenceText(l.view.Incidence)}}
	reach := math.Abs(half.y) + 8
	height := 2*reach + float64(len(l.arrow.text))*l.faces.small.height()
	l.arrow.block = box{left, centre.y - reach, arrowRoom - 6, height}
}

// closeUp moves the picture below the heading and finds the lower edge.
func (l *layout) closeUp() {
	above, below := min(0, l.arrow.block.y), max(l.picture.bottom()+wallDepth, l.arrow.block.bottom())
	for _, each := range l.labels {
		above, below = min(above, each.box.y), max(below, each.box.bottom())
	}
	down := point{0, l.top - above}
	l.frame.origin = l.frame.origin.plus(down)
	l.picture.y += down.y
	l.bottom = below + down.y
	for _, outline := range [][]point{l.body, l.cowl} {
		for i := range outline {
			outline[i] = outline[i].plus(down)
		}
	}
	for i := range l.labels {
		lowered := l.labels[i].box
		lowered.y += down.y
		l.labels[i].stand(lowered, l.labels[i].anchor.plus(down))
	}
	l.arrow.tail, l.arrow.tip = l.arrow.tail.plus(down), l.arrow.tip.plus(down)
	l.arrow.block.y += down.y
}
