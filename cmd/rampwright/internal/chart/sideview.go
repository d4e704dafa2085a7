package chart

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"
)

// Vertex is a point of a wall or of a streamline, in metres. A named one is
// labelled.
type Vertex struct {
	Name string
	X, Y float64
}

// WaveKind is what a straight wave front is; it chooses the stroke.
type WaveKind int

const (
	// RampShock starts at a corner of the ramp.
	RampShock WaveKind = iota
	// LipShock starts at the cowl lip and runs into the duct.
	LipShock
	// TerminalShock is the normal shock in the throat.
	TerminalShock
	// CowlShock starts at the lip and runs outward.
	CowlShock
	// Expansion is one ray of a fan.
	Expansion
	// DuctShock is a shock that a crossing or a reflection made.
	DuctShock
	// SlipLine parts two streams of equal pressure and direction.
	SlipLine
)

// String returns the word used in the key of the drawing.
func (k WaveKind) String() string {
	if k < 0 || int(k) >= len(waveWords) {
		return fmt.Sprintf("wave kind %d", int(k))
	}
	return waveWords[k]
}

var waveWords = [...]string{"ramp shock", "lip shock", "terminal shock", "outer cowl shock", "expansion", "crossed or reflected shock", "slip line"}

// Wave is a straight front from (X1, Y1) to (X2, Y2), in metres. An empty name
// draws no label.
type Wave struct {
	Name           string
	Kind           WaveKind
	X1, Y1, X2, Y2 float64
}

// SideView is one planar inlet seen from the side. The frame is that of the
// inlet: x downstream, y from the first ramp's leading edge toward the cowl,
// metres, radians.
type SideView struct {
	Title    string
	Subtitle []string // lines under the title: Mach number, recovery, ..
	Caution  string   // what to know before using the numbers; may be empty

	// Incidence turns the free stream toward the ramp: its arrow is drawn at
	// the angle -Incidence to the x axis.
	Incidence float64

	Body          []Vertex // ramp surface from the leading edge on; solid below
	CowlInner     []Vertex // duct side of the cowl, from the lip on
	CowlOuter     []Vertex // outer side of the cowl, from the lip on
	Waves         []Wave
	LipStreamline []Vertex // streamline that meets the lip; may be empty
	Stations      []Vertex // a named place in each uniform region
}

// longestName bounds the names that become labels, in characters: the longest
// still leaves room beside it on the sheet.
const longestName = 40

// Defect is one reason why a SideView cannot be drawn.
type Defect struct {
	Part  string // "body", "wave", "station", ..
	Index int    // entry of that part, from 0
	Why   string
}

// InvalidView lists everything that is wrong with a SideView.
type InvalidView struct {
	Defects []Defect
}

func (e *InvalidView) Error() string {
	lines := make([]string, len(e.Defects))
	for i, d := range e.Defects {
		lines[i] = fmt.Sprintf("%s %d: %s", d.Part, d.Index, d.Why)
	}
	return "side view cannot be drawn: " + strings.Join(lines, "; ")
}

// Validate returns *InvalidView with all defects at once, or nil.
func (v SideView) Validate() error {
	var found []Defect
	check := func(part string, index int, bad bool, why string) {
		if bad {
			found = append(found, Defect{part, index, why})
		}
	}
	for _, p := range v.polylines() {
		check(p.part, 0, p.part == "body" && len(p.vertices) < 2, "needs two vertices or more")
		check(p.part, 0, p.part != "body" && p.part != "station" && len(p.vertices) == 1, "a single vertex is no line")
		for i, at := range p.vertices {
			check(p.part, i, !finite(at.X, at.Y), "coordinate is not finite")
			check(p.part, i, tooLong(at.Name), "name is too long")
		}
	}
	for i, w := range v.Waves {
		check("wave", i, !finite(w.X1, w.Y1, w.X2, w.Y2), "coordinate is not finite")
		check("wave", i, tooLong(w.Name), "name is too long")
		check("wave", i, w.Kind < 0 || int(w.Kind) >= len(waveWords), "unknown kind")
	}
	check("incidence", 0, !finite(v.Incidence) || math.Abs(v.Incidence) >= math.Pi/2, "must be less than a right angle")
	if len(found) == 0 {
		low, high := v.bounds()
		check("extent", 0, !(high.x > low.x && high.y > low.y) || !finite(high.x-low.x, high.y-low.y), "geometry must span x and y")
	}
	if len(found) > 0 {
		return &InvalidView{found}
	}
	return nil
}

func tooLong(name string) bool { return utf8.RuneCountInString(name) > longestName }

func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

type polyline struct {
	part     string
	vertices []Vertex
}

func (v SideView) polylines() []polyline {
	return []polyline{
		{"body", v.Body},
		{"cowl inner", v.CowlInner},
		{"cowl outer", v.CowlOuter},
		{"lip streamline", v.LipStreamline},
		{"station", v.Stations},
	}
}

// bounds returns the corners of the box around everything drawn, in metres.
func (v SideView) bounds() (low, high point) {
	low, high = point{math.Inf(1), math.Inf(1)}, point{math.Inf(-1), math.Inf(-1)}
	include := func(x, y float64) {
		low = point{math.Min(low.x, x), math.Min(low.y, y)}
		high = point{math.Max(high.x, x), math.Max(high.y, y)}
	}
	for _, p := range v.polylines() {
		for _, at := range p.vertices {
			include(at.X, at.Y)
		}
	}
	for _, w := range v.Waves {
		include(w.X1, w.Y1)
		include(w.X2, w.Y2)
	}
	return low, high
}
