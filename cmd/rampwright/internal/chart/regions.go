package chart

import "fmt"

// RegionMap is a plane of conditions: what each point of a grid is, told by colour,
// and lines between, named where they run.
type RegionMap struct {
	Title    string
	Subtitle []string
	X, Y     Span
	NX, NY   int      // points of the grid along x and y, each the middle of its cell
	Classes  []string // what a point may be, 1 to 9 of them
	Cells    []int    // the class of each point, row by row from the low end of y
	// Dots marks the points for which DotName holds.
	Dots    []bool
	DotName string
	Lines   []RegionLine
	Places  []Vertex // ringed and named
}

// RegionLine is a line of the map. Lines of one name share a stroke and a label.
type RegionLine struct {
	Name string
	// Strong lines are drawn full and broad, the others thin with dashes.
	Strong bool
	Points [][2]float64
}

// What a map has at most: points of its grid along an axis, and lines.
const (
	mostRegionPoints = 400
	MostRegionLines  = 200
)

// Validate returns *InvalidChart with all defects at once, or nil.
func (m RegionMap) Validate() error {
	var found []string
	check := func(bad bool, format string, args ...any) {
		if bad {
			found = append(found, fmt.Sprintf(format, args...))
		}
	}
	check(!m.X.valid() || !m.Y.valid(), "a range has no length")
	check(m.NX < 2 || m.NY < 2 || m.NX > mostRegionPoints || m.NY > mostRegionPoints, "%d x %d points, 2 to %d each are drawn", m.NX, m.NY, mostRegionPoints)
	check(len(m.Cells) != m.NX*m.NY || len(m.Dots) != len(m.Cells), "%d classes and %d dots for %d x %d points", len(m.Cells), len(m.Dots), m.NX, m.NY)
	check(len(m.Classes) == 0 || len(m.Classes) > len(regionTints), "%d classes, 1 to %d are drawn", len(m.Classes), len(regionTints))
	for _, c := range m.Cells {
		if c < 0 || c >= len(m.Classes) {
			check(true, "a point has class %d of %d", c, len(m.Classes))
			break
		}
	}
	check(len(m.Lines) > MostRegionLines, "%d lines, at most %d", len(m.Lines), MostRegionLines)
	for i, line := range m.Lines {
		check(len(line.Name) > longestText, "line %d has a name of %d bytes, at most %d", i, len(line.Name), longestText)
		check(len(line.Points) == 0, "line %d has no point", i)
		for _, p := range line.Points {
			if !finite(p[0], p[1]) {
				check(true, "line %d has no place (%g, %g)", i, p[0], p[1])
				break
			}
		}
	}
	for i, p := range m.Places {
		check(!finite(p.X, p.Y) || tooLong(p.Name), "place %d is none, or its name is too long", i)
	}
	if found != nil {
		return &InvalidChart{"map", found}
	}
	return nil
}

// regionTints tell classes apart by lightness first, in the order of concern, so
// that they survive a grey print and every colour deficiency.
var regionTints = [...]string{"#fbf7e6", "#f3dfae", "#bcd6dc", "#e3e3e0", "#dcb7a0", "#a795b4", "#8f7f6a", "#6f7c86", "#4b5660"}

// names lists the distinct names of the lines in their order, with the longest line
// of each, which carries the label.
func (m RegionMap) names() (names []string, longest []int) {
	place := map[string]int{}
	for i, line := range m.Lines {
		k, known := place[line.Name]
		switch {
		case !known:
			place[line.Name] = len(names)
			names, longest = append(names, line.Name), append(longest, i)
		case len(line.Points) > len(m.Lines[longest[k]].Points):
			longest[k] = i
		}
	}
	return names, longest
}
