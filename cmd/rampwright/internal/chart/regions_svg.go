package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"

	svg "github.com/ajstarks/svgo/float"
)

// WriteRegionMap draws the map as SVG, the same bytes for the same numbers. The
// group of the panel carries data-x and data-y (the mapping, as in WriteLineChart);
// each class is a path with data-class, each line a polyline with data-name, each
// label a group with data-name and data-box.
func WriteRegionMap(w io.Writer, m RegionMap) error {
	if err := m.Validate(); err != nil {
		return err
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: newTypefaces()}
	top := d.headingHeight(sheetWidth, m.Title, m.Subtitle...) + 4
	p := d.newPanel(box{margin + axisRoom, top, sheetWidth - 2*margin - axisRoom, regionHeight}, m.X, m.Y)
	labels := d.regionLabels(m, p)
	key := p.frame.bottom() + belowAxes + 8
	for _, l := range labels {
		key = max(key, l.box.bottom()+8)
	}
	rows := d.keyRows(m)
	height := key + float64(len(rows))*keyStep + margin
	d.start(sheetWidth, height, m.Title, m.describe())
	d.heading(sheetWidth, m.Title, m.Subtitle...)
	d.Group(`data-role="map"`, attribute("data-x", p.x.mapping()), attribute("data-y", p.y.mapping()))
	d.regionCells(m, p)
	d.regionLines(m, p)
	d.outline(p)
	d.Gend()
	d.placedLabels(labels)
	d.regionKey(m, rows, key)
	d.End()
	return writeSheet(w, &sheet)
}

const (
	regionHeight = 430.0 // of the frame
	keyStep      = 20.0  // between rows of the key
	ringRoom     = 6.0   // around a place
	farBelow     = 400.0 // the frame: where names without room in it go
)

// regionCells paints the classes, one path each, and dots.
func (d linesSheet) regionCells(m RegionMap, p panel) {
	paths := make([]strings.Builder, len(m.Classes))
	edgeX, edgeY := cellEdges(p.x, m.X, m.NX), cellEdges(p.y, m.Y, m.NY)
	for row := range m.NY {
		runs(m.NX, func(i int) int { return m.Cells[row*m.NX+i] }, func(from, to, class int) {
			fmt.Fprintf(&paths[class], "M%s %sH%sV%sH%sz", short(edgeX[from]), short(edgeY[row]), short(edgeX[to]), short(edgeY[row+1]), short(edgeX[from]))
		})
	}
	for k := range paths {
		if paths[k].Len() > 0 {
			d.Path(paths[k].String(), attribute("fill", regionTints[k]), `shape-rendering="crispEdges"`, attribute("data-class", m.Classes[k]))
		}
	}
	for i, dotted := range m.Dots {
		if dotted {
			at := p.at(gridValue(m.X, m.NX, i%m.NX), gridValue(m.Y, m.NY, i/m.NX))
			d.Circle(at.x, at.y, 2, attribute("fill", darkInk))
		}
	}
}

// cellEdges are the edges of the cells around n points on an axis, cut at its ends.
func cellEdges(a linearAxis, s Span, n int) []float64 {
	edges := make([]float64, n+1)
	for i := range edges {
		edges[i] = a.at(clamp(s.Low+(float64(i)-0.5)*(s.High-s.Low)/float64(n-1), s.Low, s.High))
	}
	return edges
}

func gridValue(s Span, n, i int) float64 { return s.Low + float64(i)*(s.High-s.Low)/float64(n-1) }

// regionStroke is that of the k-th name.
func regionStroke(k int, strong bool) stroke {
	s := curveStrokes[k%len(curveStrokes)]
	s.width = 1.1
	if strong {
		s.width = 2.2
	}
	if round := k / len(curveStrokes); round > 0 { // the same inks again, in other dashes
		s.dash = fmt.Sprintf("%d %d", 3+5*round, 2+round)
	}
	return s
}

func (d linesSheet) regionLines(m RegionMap, p panel) {
	names, _ := m.names()
	for k, name := range names {
		for _, line := range m.Lines {
			if line.Name != name {
				continue
			}
			s := regionStroke(k, line.Strong)
			x, y := columns(p.line(line.Points))
			d.Polyline(x, y, append(s.attributes(), attribute("data-name", name), `fill="none"`, `stroke-linejoin="round"`)...)
		}
	}
	for _, at := range m.Places {
		c := p.at(at.X, at.Y)
		d.Circle(c.x, c.y, 5, `fill="none"`, attribute("stroke", paper), `stroke-width="3.6"`)
		d.Circle(c.x, c.y, 5, `fill="none"`, attribute("stroke", darkInk), `stroke-width="1.6"`, attribute("data-name", at.Name))
	}
}

func (p panel) line(points [][2]float64) []point {
	list := make([]point, len(points))
	for i, v := range points {
		list[i] = p.at(v[0], v[1])
	}
	return list
}

// regionLabels finds a place for the name of every line and place: beside it, with a
// leader, clear of all strokes where that is possible.
func (d linesSheet) regionLabels(m RegionMap, p panel) []label {
	const sideRoom = 3.0
	var labels []label
	add := func(l label) {
		l.box = box{w: d.faces.small.width(l.name) + 2*sideRoom, h: d.faces.small.height()}
		l.spots = append(spots(l.box, false), farSpots(l.box)...)
		labels = append(labels, l)
	}
	// A name goes below the frame only where there is no room inside at all.
	s := scene{zone: box{p.frame.x + 2, p.frame.y + 2, p.frame.w - 4, p.frame.h - 4}, low: p.frame.bottom() + farBelow}
	for _, at := range m.Places {
		c := p.at(at.X, at.Y)
		add(label{name: at.Name, role: "place", ink: darkInk, anchors: []point{c}})
		s.taken = append(s.taken, box{c.x - ringRoom, c.y - ringRoom, 2 * ringRoom, 2 * ringRoom})
	}
	names, longest := m.names()
	for k, name := range names {
		line := p.line(m.Lines[longest[k]].Points)
		l := label{name: name, role: "line", ink: regionStroke(k, false).ink}
		for _, share := range namedAlong {
			l.anchors = append(l.anchors, alongLine(line, share))
		}
		add(l)
	}
	for _, line := range m.Lines {
		s.waves = append(s.waves, strokesOf(p.line(line.Points))...)
	}
	s.taken = append(s.taken, box{0, p.frame.bottom() - 2, sheetWidth, farBelow})
	s.place(labels)
	for i := range labels {
		if l := &labels[i]; l.box.y >= s.low { // from beyond every spot to right below the axis
			l.box.y -= farBelow - belowAxes
			l.leader.a.y -= farBelow - belowAxes
		}
	}
	return labels
}

// farSpots go on from the spots around an anchor: lines run close to each other, and
// the next room may be some way off.
func farSpots(size box) []spot {
	var list []spot
	for r := radii[len(radii)-1] + 30; r < 420; r += 30 {
		for k := range directions {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / directions)
			list = append(list, spot{point{cos*(r+size.w/2) - size.w/2, sin*(r+size.h/2) - size.h/2}, drawnLeader + r*0.866})
		}
	}
	return list
}

// alongLine is the point at a share of a line's length.
func alongLine(line []point, share float64) point {
	whole := 0.0
	for i := 1; i < len(line); i++ {
		whole += line[i].distance(line[i-1])
	}
	left := share * whole
	for i := 1; i < len(line); i++ {
		step := line[i].distance(line[i-1])
		if step > 0 && left <= step {
			return between(line[i-1], line[i], left/step)
		}
		left -= step
	}
	return line[len(line)-1]
}

// placedLabels draws leaders, then labels over them.
func (d linesSheet) placedLabels(labels []label) {
	for _, l := range labels {
		if l.led {
			d.Path(fmt.Sprintf("M%.2f %.2fL%.2f %.2f", l.leader.a.x, l.leader.a.y, l.anchor.x, l.anchor.y), attribute("stroke", l.ink), `stroke-width="0.7"`, `fill="none"`)
			d.Circle(l.anchor.x, l.anchor.y, 1.9, attribute("fill", l.ink))
		}
	}
	for _, l := range labels {
		d.Rect(l.box.x, l.box.y, l.box.w, l.box.h, attribute("fill", paper), `fill-opacity="0.85"`)
		d.labelled(l.name, l.box, d.faces.small, l.ink)
	}
}

// keyRows breaks the key of colours into rows of the sheet.
func (d linesSheet) keyRows(m RegionMap) [][]int {
	present := make([]bool, len(m.Classes)+1)
	for _, c := range m.Cells {
		present[c] = true
	}
	for _, dotted := range m.Dots {
		present[len(m.Classes)] = present[len(m.Classes)] || dotted
	}
	var rows [][]int
	x := sheetWidth
	for k, here := range present {
		if !here {
			continue
		}
		width := d.faces.small.width(m.keyText(k)) + 44
		if x+width > sheetWidth-margin {
			rows, x = append(rows, nil), margin+axisRoom
		}
		rows[len(rows)-1] = append(rows[len(rows)-1], k)
		x += width
	}
	return rows
}

func (m RegionMap) keyText(k int) string {
	if k == len(m.Classes) {
		return m.DotName
	}
	return m.Classes[k]
}

// regionKey draws a sample of every colour in use with its meaning.
func (d linesSheet) regionKey(m RegionMap, rows [][]int, top float64) {
	for r, row := range rows {
		x, y := margin+axisRoom, top+float64(r)*keyStep
		for _, k := range row {
			if k == len(m.Classes) {
				d.Circle(x+10, y+6, 2, attribute("fill", darkInk))
			} else {
				d.Rect(x, y, 20, 12, attribute("fill", regionTints[k]), attribute("stroke", faintInk), `stroke-width="0.6"`)
			}
			text := m.keyText(k)
			writeText(d.SVG, point{x + 26, y + 10}, text, d.faces.small, softInk, "start")
			x += d.faces.small.width(text) + 44
		}
	}
}

// describe says in words what the map shows.
func (m RegionMap) describe() string {
	counts := make([]int, len(m.Classes))
	dots := 0
	for i, c := range m.Cells {
		counts[c]++
		if m.Dots[i] {
			dots++
		}
	}
	text := fmt.Sprintf("%s (%.4g to %.4g) over %s (%.4g to %.4g).", m.Y.Label, m.Y.Low, m.Y.High, m.X.Label, m.X.Low, m.X.High)
	for k, n := range counts {
		if n > 0 {
			text += fmt.Sprintf(" %s: %d of %d.", m.Classes[k], n, len(m.Cells))
		}
	}
	if m.DotName != "" {
		text += fmt.Sprintf(" %s: %d of %d.", m.DotName, dots, len(m.Cells))
	}
	names, longest := m.names()
	for k, name := range names {
		points := m.Lines[longest[k]].Points
		first, last := points[0], points[len(points)-1]
		text += fmt.Sprintf(" Line %s from (%.4g, %.4g) to (%.4g, %.4g).", name, first[0], first[1], last[0], last[1])
	}
	return text
}
