package chart

import (
	"math"
	"sort"
	"strconv"
)

// Sizes of the sheet of learning curves, drawing units.
const (
	panelHeight = 330.0 // of the axes
	axisRoom    = 74.0  // left of them
	belowAxes   = 52.0
	aboveAxes   = 34.0
	leaderRoom  = 26.0 // between the axes and the names of the curves
	edgeRoom    = 14.0 // between the axes and the first and last point
)

// logAxis maps a positive number to the sheet.
type logAxis struct {
	low, high float64 // logarithms at the ends
	from, to  float64 // places on the sheet
}

func newLogAxis(low, high, from, to float64) logAxis {
	return logAxis{math.Log10(low), math.Log10(high), from, to}
}

func (a logAxis) at(v float64) float64 {
	return a.from + (math.Log10(v)-a.low)/(a.high-a.low)*(a.to-a.from)
}

// panelLayout is one panel with every place decided.
type panelLayout struct {
	panel   LearningPanel
	axes    box
	x, y    logAxis
	counts  []float64 // x of the ticks
	decades []int     // exponents of the y ticks
	names   []curveName
}

// curveName is a name at the right of the axes with the end it belongs to.
type curveName struct {
	curve int
	end   point
	box   box
}

// arrangePanel decides the places of a panel whose axes begin at the top given.
func arrangePanel(p LearningPanel, top float64, face typeface) panelLayout {
	widest := 0.0
	for _, c := range p.Curves {
		widest = max(widest, face.width(c.Name))
	}
	axes := box{margin + axisRoom, top, sheetWidth - 2*margin - axisRoom - leaderRoom - widest, panelHeight}
	l := panelLayout{panel: p, axes: axes}
	low, high := math.Inf(1), 0.0
	seen := map[float64]bool{}
	for _, c := range p.Curves {
		for _, at := range c.Points {
			low, high = min(low, drawn(at.Low)), max(high, drawn(at.High))
			if !seen[at.X] {
				seen[at.X] = true
				l.counts = append(l.counts, at.X)
			}
		}
	}
	if p.Target > 0 {
		low, high = min(low, drawn(p.Target)), max(high, drawn(p.Target))
	}
	sort.Float64s(l.counts)
	first, last := int(math.Floor(math.Log10(low)+1e-9)), int(math.Ceil(math.Log10(high)-1e-9))
	if first == last {
		last++
	}
	for k := first; k <= last; k++ {
		l.decades = append(l.decades, k)
	}
	l.y = logAxis{float64(first), float64(last), axes.bottom(), axes.y}
	left, right := l.counts[0], l.counts[len(l.counts)-1]
	if left == right {
		left, right = left/2, right*2
	}
	l.x = newLogAxis(left, right, axes.x+edgeRoom, axes.right()-edgeRoom)
	l.nameCurves(face)
	return l
}

// drawn lifts an error that is zero or nearly so onto the sheet.
func drawn(v float64) float64 { return math.Max(v, leastError) }

// nameCurves puts the names beside the ends of their curves, apart by at least
// the height of a line: names in each other's way form a block around the mean
// of their ends (pool adjacent violators), which stays beside the axes.
func (l *panelLayout) nameCurves(face typeface) {
	height := face.height() + 3
	for i, c := range l.panel.Curves {
		last := c.Points[len(c.Points)-1]
		l.names = append(l.names, curveName{curve: i, end: point{l.x.at(last.X), l.y.at(drawn(last.Middle))}})
	}
	sort.SliceStable(l.names, func(a, b int) bool { return l.names[a].end.y < l.names[b].end.y })
	type block struct {
		size   int
		wanted float64 // sum over its names of the place wanted for its first
	}
	top := func(b block) float64 {
		place := b.wanted / float64(b.size)
		return clamp(place, l.axes.y, max(l.axes.y, l.axes.bottom()-float64(b.size)*height))
	}
	var blocks []block
	for _, n := range l.names {
		blocks = append(blocks, block{1, n.end.y - height/2})
		for k := len(blocks) - 1; k > 0; k-- {
			upper, lower := blocks[k-1], blocks[k]
			if top(upper)+float64(upper.size)*height <= top(lower) {
				break
			}
			merged := block{upper.size + lower.size, upper.wanted + lower.wanted - float64(lower.size*upper.size)*height}
			blocks = append(blocks[:k-1], merged)
		}
	}
	next := 0
	for _, b := range blocks {
		for i := range b.size {
			n := &l.names[next]
			n.box = box{l.axes.right() + leaderRoom, top(b) + float64(i)*height, face.width(l.panel.Curves[n.curve].Name), face.height() + 2}
			next++
		}
	}
}

// shortCount writes a number of samples, shortDecade a power of ten.
func shortCount(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }
func shortDecade(k int) string    { return "1e" + strconv.Itoa(k) }
func powerOfTen(k int) float64    { return math.Pow(10, float64(k)) }
