package chart

import "math"

// label is a name looking for its place on the sheet.
type label struct {
	name    string
	role    string // "station", "wave", "corner"
	ink     string
	anchors []point // places it may point at, the best first
	spots   []spot  // places tried around an anchor, the nearest first
	toward  point   // unit direction it is better placed in, or zero
	pull    float64 // cost of standing on the opposite side, drawing units

	placed bool
	detour float64 // cost of an anchor that is not the first choice
	box    box     // where it stands
	anchor point   // what it points at
	leader segment // from the box to just short of the anchor
	length float64 // of the leader
	led    bool    // the leader is drawn: the name does not stand on its anchor
}

// stand puts the label at a place.
func (l *label) stand(at box, anchor point) {
	from := at.nearest(anchor)
	l.box, l.anchor, l.placed = at, anchor, true
	l.length = from.distance(anchor)
	l.leader = segment{from, between(from, anchor, 1-1/max(1, l.length))}
	l.led = !at.contains(anchor)
}

// scene is what labels must keep clear of.
type scene struct {
	waves  []segment // shocks and streamlines
	walls  []segment
	solids [][]point // closed outlines of the hatched walls
	taken  []box     // never covered
	zone   box       // labels stay inside; open toward the bottom
	low    float64   // y of the lowest stroke: the shelves are below it
}

// Costs of a place, in drawing units of leader length: how much longer a leader
// one accepts to avoid the fault.
const (
	boxOnWave      = 220.0
	boxOnWall      = 260.0
	boxOnSolid     = 160.0
	leaderOnWave   = 10.0
	leaderOnWall   = 20.0
	leaderOnLeader = 170.0
	leaderOnBox    = 260.0
	drawnLeader    = 26.0
	secondChoice   = 7.0 // the next anchor in order
	clearance      = 3.0 // between two boxes
)

// place finds a box for each label so that no two overlap: each in turn takes
// the cheapest free place, then each is moved again with all others standing,
// then a label chooses again with one of those around its anchor lifted.
func (s scene) place(labels []label) {
	const rounds = 4
	standing := make([]bool, len(labels))
	for range rounds {
		for i := range labels {
			s.replace(labels, standing, i)
		}
	}
	cost := s.total(labels, standing)
	for i := range labels {
		for j := range labels {
			if i != j && labels[j].box.nearest(labels[i].anchor).distance(labels[i].anchor) < neighbourhood {
				cost = s.exchange(labels, standing, i, j, cost)
			}
		}
	}
}

// neighbourhood is how near an anchor a label can be in the way of its name.
const neighbourhood = 60.0

// replace lifts the labels given and lets them settle again in that order.
func (s scene) replace(labels []label, standing []bool, these ...int) {
	for _, i := range these {
		standing[i] = false
	}
	for _, i := range these {
		s.settle(labels, standing, i)
		standing[i] = true
	}
}

// exchange lifts two labels together, lets the first choose before the second,
// and keeps the outcome if the whole drawing is cheaper for it than the cost so
// far. It returns the cost it leaves.
func (s scene) exchange(labels []label, standing []bool, i, j int, cost float64) float64 {
	first, second := labels[i], labels[j]
	labels[i].placed, labels[j].placed = false, false
	s.replace(labels, standing, i, j)
	if now := s.total(labels, standing); now < cost {
		return now
	}
	labels[i], labels[j] = first, second
	return cost
}

// total is the cost of the whole drawing; a tangle of two counts for both.
func (s scene) total(labels []label, standing []bool) float64 {
	sum := 0.0
	for i, l := range labels {
		standing[i] = false
		sum += ownCost(&l) + s.strokeCost(&l) + othersCost(labels, standing, &l)
		standing[i] = true
	}
	return sum
}

// settle gives label i the cheapest place that is free of all standing labels,
// or, where none of its candidates is, the first free shelf below the drawing.
func (s scene) settle(labels []label, standing []bool, i int) {
	l := labels[i]
	best := math.Inf(1) // cost of the best place so far
	try := func(at box, anchor point) {
		l.stand(at, anchor)
		cost := ownCost(&l)
		if cost >= best || !s.free(labels, standing, at) {
			return
		}
		if cost += othersCost(labels, standing, &l); cost >= best {
			return
		}
		if cost += s.strokeCost(&l); cost < best {
			best = cost
			labels[i] = l
		}
	}
	if l.placed { // where it stood before: most candidates then fail on distance alone
		try(l.box, l.anchor)
	}
	for rank, anchor := range l.anchors {
		l.detour = secondChoice * float64(rank)
		for _, spot := range l.spots {
			if spot.least+l.detour >= best {
				break // they are in ascending order
			}
			try(box{anchor.x + spot.corner.x, anchor.y + spot.corner.y, l.box.w, l.box.h}, anchor)
		}
		for row := range 3 {
			for k := -4; k <= 4; k++ {
				at := s.shelf(anchor, l.box, row)
				at.x += float64(k) * 16
				try(at, anchor)
			}
		}
	}
	for row := 0; math.IsInf(best, 1); row++ {
		anchor := l.anchors[0]
		at := s.shelf(anchor, l.box, row)
		for at.x = s.zone.x; math.IsInf(best, 1) && at.right() <= s.zone.right(); at.x += 4 {
			try(at, anchor)
		}
	}
}

// spot is a place for a label relative to its anchor.
type spot struct {
	corner point   // upper left corner of the box, from the anchor
	least  float64 // what it costs at least
}

// radii are the lengths of leader at which a label is tried, and directions the
// number of bearings.
var radii = [...]float64{6, 10, 15, 21, 28, 36, 45, 55, 66, 80, 96, 115, 140}

const directions = 32

// spots returns the places tried for a label of a size, the nearest first: on
// its anchor, when it may stand over it, and around it.
func spots(size box, over bool) []spot {
	var list []spot
	add := func(centre point, least float64) {
		list = append(list, spot{point{centre.x - size.w/2, centre.y - size.h/2}, least})
	}
	if over {
		for _, dy := range [...]float64{0, -0.3, 0.3} {
			for _, dx := range [...]float64{0, -0.2, 0.2, -0.4, 0.4} {
				add(point{dx * size.w, dy * size.h}, 0)
			}
		}
	}
	// The corner or side that faces the anchor lies on the circle of radius r;
	// a side that faces it squarely may be as near as r cos 30 deg.
	softSign := func(v float64) float64 { return clamp(2*v, -1, 1) }
	for _, r := range radii {
		for k := range directions {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / directions)
			add(point{cos*r + softSign(cos)*size.w/2, sin*r + softSign(sin)*size.h/2}, drawnLeader+r*0.866)
		}
	}
	return list
}

// shelf is the place below the drawing in a row, centred under an anchor.
func (s scene) shelf(anchor point, size box, row int) box {
	return box{anchor.x - size.w/2, s.low + 12 + float64(row)*(size.h+clearance+2), size.w, size.h}
}

// free tells whether a box is inside the zone and clear of what stands.
func (s scene) free(labels []label, standing []bool, at box) bool {
	if at.x < s.zone.x || at.right() > s.zone.right() || at.y < s.zone.y {
		return false
	}
	roomy := at.grow(clearance)
	for _, b := range s.taken {
		if roomy.overlaps(b) {
			return false
		}
	}
	for i := range labels {
		if standing[i] && roomy.overlaps(labels[i].box) {
			return false
		}
	}
	return true
}

// ownCost is what a place costs by its distance and side alone.
func ownCost(l *label) float64 {
	if !l.led {
		return 0 // only a name with a single anchor may stand on it
	}
	cost := drawnLeader + l.length + l.detour
	if l.pull > 0 {
		away := l.box.centre().minus(l.anchor)
		cost += l.pull / 2 * (1 - away.dot(l.toward)/math.Sqrt(away.dot(away)))
	}
	return cost
}

// strokeCost is what a place costs by the strokes it covers.
func (s scene) strokeCost(l *label) float64 {
	cost, around, leader := 0.0, l.box.grow(1.5), l.leader
	for _, wave := range s.waves {
		if around.meets(wave) {
			cost += boxOnWave
		}
		if l.led && leader.crosses(wave) {
			cost += leaderOnWave
		}
	}
	for _, wall := range s.walls {
		if around.meets(wall) {
			cost += boxOnWall
		}
		if l.led && leader.crosses(wall) {
			cost += leaderOnWall
		}
	}
	for _, solid := range s.solids {
		if inside(solid, l.box.centre()) {
			cost += boxOnSolid
		}
	}
	return cost
}

// othersCost is what a place costs by the leaders it tangles with.
func othersCost(labels []label, standing []bool, l *label) float64 {
	cost, leader, around := 0.0, l.leader, l.box.grow(1)
	for i := range labels {
		if !standing[i] {
			continue
		}
		other := &labels[i]
		if l.led && other.box.grow(1).meets(leader) {
			cost += leaderOnBox
		}
		if other.led && around.meets(other.leader) {
			cost += leaderOnBox
		}
		if l.led && other.led && leader.crosses(other.leader) {
			cost += leaderOnLeader
		}
	}
	return cost
}
