package chart

import "math"

// namedAlong are the fractions of a wave's length where its name may point, the
// best first.
var namedAlong = [...]float64{0.5, 0.4, 0.6, 0.3, 0.7, 0.2, 0.8}

// placeLabels gathers every name and finds its place: corners first, which have
// the least choice, then regions, then waves.
func (l *layout) placeLabels() {
	l.nameCorners(l.view.Body, point{0.2, 0.98})
	l.nameCorners(l.view.CowlInner, point{-0.6, -0.8})
	outer := l.view.CowlOuter
	if len(outer) > 0 && len(l.view.CowlInner) > 0 && outer[0] == l.view.CowlInner[0] {
		outer = outer[1:] // the lip is named already
	}
	l.nameCorners(outer, point{0, -1})
	for _, s := range l.view.Stations {
		l.name(label{name: s.Name, role: "station", ink: darkInk, anchors: []point{l.frame.at(s.X, s.Y)}}, true)
	}
	for _, w := range l.view.Waves {
		a, b := l.frame.at(w.X1, w.Y1), l.frame.at(w.X2, w.Y2)
		named := label{name: w.Name, role: "wave", ink: strokes[w.Kind].ink, toward: point{-0.6, -0.8}, pull: 24}
		for _, t := range namedAlong {
			named.anchors = append(named.anchors, between(a, b, t))
		}
		l.name(named, false)
	}
	l.scene().place(l.labels)
}

func (l *layout) nameCorners(wall []Vertex, toward point) {
	for _, v := range wall {
		l.name(label{name: v.Name, role: "corner", ink: softInk, toward: toward, pull: 120,
			anchors: []point{l.frame.at(v.X, v.Y)}}, false)
	}
}

// name adds a label, sized for its text; over lets it stand on its anchor.
func (l *layout) name(named label, over bool) {
	if named.name == "" {
		return
	}
	const sideRoom = 3.0
	named.box = box{w: l.faces.label.width(named.name) + 2*sideRoom, h: l.faces.label.height()}
	named.spots = spots(named.box, over)
	l.labels = append(l.labels, named)
}

// scene gathers what labels keep clear of.
func (l *layout) scene() scene {
	s := scene{
		solids: [][]point{l.body, l.cowl},
		taken:  []box{l.arrow.block},
		low:    l.picture.bottom() + wallDepth,
		zone:   box{margin + rulerRoom, -roomAbove, sheetWidth - 2*margin - rulerRoom, math.Inf(1)},
	}
	for _, w := range l.view.Waves {
		s.waves = append(s.waves, segment{l.frame.at(w.X1, w.Y1), l.frame.at(w.X2, w.Y2)})
	}
	s.waves = append(s.waves, strokesOf(l.frame.line(l.view.LipStreamline))...)
	for _, outline := range [][]point{l.body, l.cowl, l.frame.line(l.view.CowlInner), l.frame.line(l.view.CowlOuter)} {
		s.walls = append(s.walls, strokesOf(outline)...)
	}
	return s
}

func strokesOf(line []point) []segment {
	var strokes []segment
	for i := 1; i < len(line); i++ {
		strokes = append(strokes, segment{line[i-1], line[i]})
	}
	return strokes
}
