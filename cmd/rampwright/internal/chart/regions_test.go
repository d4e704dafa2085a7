package chart

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
)

// regionPicture has lines close together, a dense corner and places on its edge.
func regionPicture() RegionMap {
	m := RegionMap{
		Title: "An inlet: operating map", Subtitle: []string{"Frozen geometry."},
		X: Span{"Mach number", 3, 7}, Y: Span{"incidence, deg", -4, 4}, NX: 9, NY: 5,
		Classes: []string{"attached", "over the self-start limit", "Mach reflection"}, DotName: "every limit holds",
		Places: []Vertex{{"cruise", 6, 0}, {"dash", 7, -4}},
	}
	for j := range m.NY {
		for i := range m.NX {
			m.Cells, m.Dots = append(m.Cells, (i+j)/5), append(m.Dots, i == j)
		}
	}
	for k := range 10 {
		at := 3.5 + 0.12*float64(k)
		m.Lines = append(m.Lines, RegionLine{Name: fmt.Sprintf("limit number %d >= %g", k, at), Strong: k%2 == 0, Points: [][2]float64{{at, -4}, {at + 0.3, 0}, {at + 1, 4}}})
	}
	m.Lines = append(m.Lines, RegionLine{Name: m.Lines[0].Name, Points: [][2]float64{{6.5, 2}, {6.6, 3}}})
	return m
}

func TestRegionLabelsKeepApart(t *testing.T) {
	sheet := linesSheet{faces: newTypefaces()}
	m := regionPicture()
	p := sheet.newPanel(box{94, 60, 760, regionHeight}, m.X, m.Y)
	labels := sheet.regionLabels(m, p)
	if len(labels) != len(m.Places)+10 {
		t.Fatalf("%d labels of 2 places and 10 names", len(labels))
	}
	for i, l := range labels {
		if !l.placed || l.box.x < p.frame.x || l.box.right() > p.frame.right() || l.box.y < p.frame.y || l.box.bottom() > p.frame.bottom() {
			t.Errorf("%s stands at %+v, outside the frame", l.name, l.box)
		}
		for _, other := range labels[:i] {
			if l.box.overlaps(other.box) {
				t.Errorf("%s and %s overlap", l.name, other.name)
			}
		}
	}
}

func TestRegionMapIsDrawn(t *testing.T) {
	m := regionPicture()
	var first, second strings.Builder
	if err := WriteRegionMap(&first, m); err != nil {
		t.Fatal(err)
	}
	if err := WriteRegionMap(&second, m); err != nil || first.String() != second.String() {
		t.Errorf("the same map drawn twice differs (%v)", err)
	}
	for _, part := range []string{`data-class="Mach reflection"`, "incidence, deg", "Mach number", "every limit holds", `data-name="cruise"`, "attached: "} {
		if !strings.Contains(first.String(), part) {
			t.Errorf("the drawing has no %s", part)
		}
	}
	if n := strings.Count(first.String(), "<polyline"); n != len(m.Lines) {
		t.Errorf("%d polylines of %d lines", n, len(m.Lines))
	}
	// Lightness tells classes apart without colour: each tint is darker than the first.
	grey := func(tint string) float64 {
		var r, g, b int
		if _, err := fmt.Sscanf(tint, "#%02x%02x%02x", &r, &g, &b); err != nil {
			t.Fatal(err)
		}
		return 0.2126*float64(r) + 0.7152*float64(g) + 0.0722*float64(b)
	}
	for i, tint := range regionTints {
		for _, other := range regionTints[:i] {
			if math.Abs(grey(tint)-grey(other)) < 3 {
				t.Errorf("%s and %s are one grey", tint, other)
			}
		}
	}
}

// A name without room in the frame stands right below the axis, and the sheet is no
// taller for it than its row.
func TestNamesBelowARegionMap(t *testing.T) {
	m := RegionMap{
		Title: "t", X: Span{"Mach number", 1, 10}, Y: Span{"incidence, deg", -10, 10},
		NX: 2, NY: 2, Cells: make([]int, 4), Dots: make([]bool, 4), Classes: []string{"attached"},
	}
	for k := range 60 { // strokes everywhere, the last of them named in the lower left corner
		y := -10 + float64(k)/3
		m.Lines = append(m.Lines, RegionLine{Name: "many", Points: [][2]float64{{1, y}, {10, y}}})
	}
	for k := range 25 {
		m.Lines = append(m.Lines, RegionLine{Name: fmt.Sprintf("a name that takes much room in the frame, number %d", k), Points: [][2]float64{{1.2, -9.9}, {1.3, -9.8}}})
	}
	d := linesSheet{faces: newTypefaces()}
	p := d.newPanel(box{margin + axisRoom, 0, sheetWidth - 2*margin - axisRoom, regionHeight}, m.X, m.Y)
	below := 0
	for _, l := range d.regionLabels(m, p) {
		if l.box.y < p.frame.bottom() {
			continue
		}
		below++
		if l.box.y < p.frame.bottom()+belowAxes || l.box.bottom() > p.frame.bottom()+belowAxes+float64(len(m.Lines))*20 {
			t.Errorf("%s stands %g below the frame", l.name, l.box.y-p.frame.bottom())
		}
		if end := l.leader.a; l.led && !l.box.grow(1).contains(end) {
			t.Errorf("the leader of %s ends at %v, its box is %v", l.name, end, l.box)
		}
	}
	if below == 0 {
		t.Error("every name has room in the frame: the test shows nothing")
	}
}

func TestInvalidRegions(t *testing.T) {
	m := RegionMap{
		X: Span{"x", 1, 1}, NX: 1, NY: 2, Cells: []int{4}, Classes: make([]string, 20),
		Lines:  []RegionLine{{Name: strings.Repeat("x", 300)}, {Points: [][2]float64{{math.NaN(), 0}}}},
		Places: []Vertex{{"p", math.Inf(1), 0}},
	}
	var invalid *InvalidChart
	if err := m.Validate(); !errors.As(err, &invalid) || len(invalid.Defects) != 8 {
		t.Errorf("defects: %v", err)
	}
}

// A gap cuts a line in two, which the drawing shows as two strokes.
func TestGapsBreakLines(t *testing.T) {
	chart := LineChart{Title: "t", XLabel: "x", YLabel: "y", Low: 0, High: 4, Lines: []Line{{Name: "a", Points: []LinePoint{
		{X: 0, Y: 1}, {X: 1, Y: 2}, {X: 3, Y: 2, Gap: true}, {X: 4, Y: 1},
	}}}}
	var out strings.Builder
	if err := WriteLineChart(&out, chart); err != nil {
		t.Fatal(err)
	}
	if n := strings.Count(out.String(), "<polyline"); n != 2 {
		t.Errorf("%d strokes, want 2", n)
	}
}
