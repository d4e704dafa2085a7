package chart

import (
	"math"
	"slices"
	"sort"
)

// linesLayout is a line chart with every place decided.
type linesLayout struct {
	chart LineChart
	axes  box
	x, y  linearAxis
	names []lineName
	notes []placedNote
}

// lineName is a name with the end of its line; a level has the number of the line
// len(Lines) + level. Names stand at the right of the axes, led to their lines by a
// stroke, but for those of lines that end far from there, which stand beside them.
type lineName struct {
	line int
	text string
	end  point
	box  box
	led  bool
}

// placedNote is the note of a point in its place.
type placedNote struct {
	line int
	text string
	box  box
}

const (
	linesHeight = 420.0 // of the axes
	headroom    = 0.06  // of the range of y, free above and below
	ringWidth   = 6.0   // of the ring around a marked point
	beside      = 8.0   // between a point and a text beside it
	longLeader  = 40.0  // inside the axes: longer, it would look like a value
)

// arrangeLines decides the places of a chart whose axes begin at the top given.
func arrangeLines(c LineChart, top float64, faces typefaces) linesLayout {
	widest := 0.0
	for _, name := range c.allNames() {
		widest = max(widest, faces.label.width(name))
	}
	axes := box{margin + axisRoom, top, sheetWidth - 2*margin - axisRoom - leaderRoom - widest, linesHeight}
	l := linesLayout{chart: c, axes: axes}
	l.x, l.y = c.axesIn(axes)
	l.placeNotes(faces.small)
	l.nameLines(faces.label)
	return l
}

func (c LineChart) allNames() []string {
	var names []string
	for _, line := range c.Lines {
		names = append(names, line.Name)
	}
	for _, level := range c.Levels {
		names = append(names, level.Name)
	}
	return names
}

// nameLines puts the names beside the ends of their lines: inside the axes where the
// line ends far from their right and there is room, else at the right.
func (l *linesLayout) nameLines(face typeface) {
	c := &l.chart
	for i, line := range c.Lines {
		tracks := l.tracks(line)
		track := tracks[len(tracks)-1]
		n := lineName{line: i, text: line.Name, end: track[len(track)-1], led: true}
		if l.axes.right()-n.end.x > longLeader {
			if spot, free := l.freeSpot(line, face); free {
				n.box, n.led = spot, false
			}
		}
		l.names = append(l.names, n)
	}
	for i, level := range c.Levels {
		l.names = append(l.names, lineName{line: len(c.Lines) + i, text: level.Name, end: point{l.axes.right(), l.y.at(level.Y)}, led: true})
	}
	l.stackNames(face)
}

// freeSpot is a place beside a corner of a line, the last first, where its name
// covers nothing.
func (l *linesLayout) freeSpot(line Line, face typeface) (box, bool) {
	off := beside
	if slices.ContainsFunc(line.Points, func(p LinePoint) bool { return p.Mark }) {
		off += ringWidth
	}
	strokes, w, h := l.segments(), face.width(line.Name), face.height()
	for _, track := range slices.Backward(l.tracks(line)) {
		for _, at := range slices.Backward(track) {
			for _, spot := range spotsAround(at, off, w, h) {
				if l.cost(spot.grow(2), strokes) == 0 {
					return spot, true
				}
			}
		}
	}
	return box{}, false
}

// stackNames puts names at the right of the axes, one below the other without
// overlap: pushed down in the order of the ends, then up from the foot of the axes.
func (l *linesLayout) stackNames(face typeface) {
	sort.SliceStable(l.names, func(a, b int) bool { return l.names[a].end.y < l.names[b].end.y })
	const gap = 2
	height := face.height()
	next := l.axes.y
	for i := range l.names {
		n := &l.names[i]
		if !n.led {
			continue
		}
		n.box = box{l.axes.right() + leaderRoom, max(next, n.end.y-height/2), face.width(n.text), height}
		next = n.box.bottom() + gap
	}
	next = l.axes.bottom()
	for i := len(l.names) - 1; i >= 0; i-- {
		n := &l.names[i]
		if !n.led {
			continue
		}
		n.box.y = min(n.box.y, next-height)
		next = n.box.y - gap
	}
}

// placeNotes puts each note above, below or beside its point: at the first place
// that covers no line and no other note, else no other note.
func (l *linesLayout) placeNotes(face typeface) {
	strokes := l.segments()
	for i, line := range l.chart.Lines {
		for _, p := range line.Points {
			if p.Note != "" {
				l.placeNote(i, p, face, strokes)
			}
		}
	}
}

func (l *linesLayout) placeNote(line int, p LinePoint, face typeface, strokes []segment) {
	off := beside
	if p.Mark {
		off += ringWidth
	}
	spots := spotsAround(point{l.x.at(p.X), l.y.at(p.Y)}, off, face.width(p.Note)+4, face.height())
	best, least := spots[0], math.Inf(1)
	for _, spot := range spots {
		if cost := l.cost(spot, strokes); cost < least {
			best, least = spot, cost
		}
	}
	l.notes = append(l.notes, placedNote{line, p.Note, best})
}

// spotsAround are the places of a text above, below and beside a point.
func spotsAround(at point, off, w, h float64) []box {
	return []box{
		{at.x - w/2, at.y - off - h, w, h}, {at.x - w/2, at.y + off, w, h},
		{at.x - off - w, at.y - off - h/2, w, h}, {at.x + off, at.y - off - h/2, w, h},
		{at.x - off - w, at.y + off - h/2, w, h}, {at.x + off, at.y + off - h/2, w, h},
	}
}

// cost is what a place covers: words, strokes, the frame of the axes.
func (l *linesLayout) cost(spot box, strokes []segment) float64 {
	cost := 0.0
	for _, n := range l.notes {
		if n.box.overlaps(spot) {
			cost += 100
		}
	}
	for _, n := range l.names {
		if !n.led && n.box.overlaps(spot) {
			cost += 100
		}
	}
	for _, s := range strokes {
		if spot.meets(s) {
			cost++
		}
	}
	if spot.x < l.axes.x || spot.right() > l.axes.right() || spot.y < l.axes.y || spot.bottom() > l.axes.bottom() {
		cost += 10
	}
	return cost
}

// tracks are the strokes of a line, one for each stretch between gaps.
func (l *linesLayout) tracks(line Line) [][]point {
	var list [][]point
	for i, p := range line.Points {
		at := point{l.x.at(p.X), l.y.at(p.Y)}
		if i == 0 || p.Gap {
			list = append(list, []point{at})
			continue
		}
		track := &list[len(list)-1]
		if line.Steps {
			*track = append(*track, point{at.x, l.y.at(line.Points[i-1].Y)})
		}
		if !line.Steps || i < len(line.Points)-1 {
			*track = append(*track, at)
		}
	}
	return list
}

// segments lists every stroke of the lines and levels.
func (l *linesLayout) segments() []segment {
	var list []segment
	for _, line := range l.chart.Lines {
		for _, track := range l.tracks(line) {
			for i, p := range track[1:] {
				list = append(list, segment{track[i], p})
			}
		}
	}
	for _, level := range l.chart.Levels {
		y := l.y.at(level.Y)
		list = append(list, segment{point{l.axes.x, y}, point{l.axes.right(), y}})
	}
	return list
}
