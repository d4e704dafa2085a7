package chart

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// reread is what a program finds in a drawing.
type reread struct {
	scale  float64
	origin point
	height float64
	waves  []Wave
	walls  map[string][]point // metres
	labels map[string]int
	boxes  []box
	texts  []string
	title  string
	desc   string
}

func (r reread) metres(x, y string) point {
	return point{(number(x) - r.origin.x) / r.scale, (r.origin.y - number(y)) / r.scale}
}

func number(text string) float64 {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic(err)
	}
	return v
}

func read(t rapid.TB, drawing []byte) reread {
	t.Helper()
	r := reread{walls: map[string][]point{}, labels: map[string]int{}}
	decoder := xml.NewDecoder(bytes.NewReader(drawing))
	element := ""
	for {
		token, err := decoder.Token()
		if errors.Is(err, io.EOF) {
			return r
		}
		if err != nil {
			t.Fatalf("not well formed: %v", err)
		}
		switch token := token.(type) {
		case xml.StartElement:
			element = token.Name.Local
			r.element(token)
		case xml.CharData:
			switch element {
			case "title":
				r.title += string(token)
			case "desc":
				r.desc += string(token)
			case "text":
				r.texts = append(r.texts, string(token))
			}
		case xml.EndElement:
			element = ""
		}
	}
}

func (r *reread) element(e xml.StartElement) {
	a := map[string]string{}
	for _, attribute := range e.Attr {
		a[attribute.Name.Local] = attribute.Value
	}
	switch e.Name.Local {
	case "svg":
		r.scale = number(a["data-scale"])
		r.origin = point{number(a["data-origin-x"]), number(a["data-origin-y"])}
		r.height = number(a["height"])
	case "line":
		from, to := r.metres(a["x1"], a["y1"]), r.metres(a["x2"], a["y2"])
		w := Wave{Name: a["data-name"], X1: from.x, Y1: from.y, X2: to.x, Y2: to.y, Kind: -1}
		for kind, word := range waveWords {
			if word == a["data-kind"] {
				w.Kind = WaveKind(kind)
			}
		}
		r.waves = append(r.waves, w)
	case "polyline":
		for _, pair := range strings.Fields(a["points"]) {
			x, y, _ := strings.Cut(pair, ",")
			r.walls[a["data-name"]] = append(r.walls[a["data-name"]], r.metres(x, y))
		}
	case "g":
		if a["data-role"] == "label" {
			r.labels[a["data-name"]]++
			side := strings.Fields(a["data-box"])
			r.boxes = append(r.boxes, box{number(side[0]), number(side[1]), number(side[2]), number(side[3])})
		}
	}
}

func draw(t rapid.TB, view SideView) []byte {
	t.Helper()
	var sheet bytes.Buffer
	if err := WriteSideView(&sheet, view); err != nil {
		t.Fatal(err)
	}
	return sheet.Bytes()
}

// anyInlet draws inlets of 1 to 8 ramps, from stubby to very slender ones; a
// choice that detaches is softened until it does not.
func anyInlet(t *rapid.T) (invented, SideView) {
	n := invented{
		mach:       rapid.Float64Range(2, 25).Draw(t, "mach"),
		incidence:  rapid.SampledFrom([]float64{0, 0, -1, 2, 3.5}).Draw(t, "incidence deg") * radian,
		height:     rapid.SampledFrom([]float64{1e-3, 0.16, 0.9, 40}).Draw(t, "height"),
		lipTurning: rapid.Float64Range(1, 12).Draw(t, "lip turning deg") * radian,
		wedge:      rapid.Float64Range(0.5, 6).Draw(t, "wedge deg") * radian,
	}
	count := rapid.IntRange(1, 8).Draw(t, "ramps")
	for range count {
		n.ramps = append(n.ramps, rapid.Float64Range(1.2, 30/float64(count)).Draw(t, "turning deg")*radian)
	}
	view, ok := n.view()
	for !ok {
		n.incidence *= 0.8
		n.lipTurning *= 0.8
		for i := range n.ramps {
			n.ramps[i] *= 0.8
		}
		view, ok = n.view()
	}
	view.Title, view.Incidence = "any inlet", n.incidence
	return n, view
}

func near(a point, x, y, tolerance float64) bool {
	return math.Abs(a.x-x) <= tolerance && math.Abs(a.y-y) <= tolerance
}

// Every number comes back from the drawing, and every name stands free.
func TestDrawingReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, view := anyInlet(t)
		r := read(t, draw(t, view))
		checkGeometry(t, view, r, 1e-7*n.height)
		checkLabels(t, view, r)
	})
}

// checkGeometry asserts that waves and walls are read back where they were.
func checkGeometry(t rapid.TB, view SideView, r reread, tolerance float64) {
	t.Helper()
	if len(r.waves) != len(view.Waves) {
		t.Fatalf("%d waves read, %d drawn", len(r.waves), len(view.Waves))
	}
	for i, want := range view.Waves {
		got := r.waves[i]
		if got.Name != want.Name || got.Kind != want.Kind ||
			!near(point{got.X1, got.Y1}, want.X1, want.Y1, tolerance) || !near(point{got.X2, got.Y2}, want.X2, want.Y2, tolerance) {
			t.Errorf("read %+v, drew %+v", got, want)
		}
	}
	for name, want := range map[string][]Vertex{"body": view.Body, "cowl inner": view.CowlInner, "cowl outer": view.CowlOuter, "lip streamline": view.LipStreamline} {
		got := r.walls[name]
		if len(got) != len(want) {
			t.Fatalf("%s: %d vertices read, %d drawn", name, len(got), len(want))
		}
		for i := range want {
			if !near(got[i], want[i].X, want[i].Y, tolerance) {
				t.Errorf("%s %d: read %v, drew %v", name, i, got[i], want[i])
			}
		}
	}
}

// checkLabels asserts that every name is on the sheet, and none over another.
func checkLabels(t rapid.TB, view SideView, r reread) {
	t.Helper()
	want := map[string]int{}
	for _, w := range view.Waves {
		want[w.Name]++
	}
	for _, s := range view.Stations {
		want[s.Name]++
	}
	for _, v := range view.Body {
		want[v.Name]++
	}
	if len(view.CowlInner) > 0 {
		want[view.CowlInner[0].Name]++
	}
	delete(want, "")
	for name, times := range want {
		if r.labels[name] != times {
			t.Errorf("%q stands %d times, want %d", name, r.labels[name], times)
		}
	}
	sheet := box{0, 0, sheetWidth, r.height}
	for i, b := range r.boxes {
		if b.x < sheet.x || b.y < sheet.y || b.right() > sheet.right() || b.bottom() > sheet.bottom() {
			t.Errorf("label box %d %+v leaves the sheet %+v", i, b, sheet)
		}
		for j, other := range r.boxes[:i] {
			if b.overlaps(other) {
				t.Errorf("label boxes %d %+v and %d %+v overlap", i, b, j, other)
			}
		}
	}
}

// Sixty names at one place leave no candidate free: the shelves take the rest.
func TestCrowdedNamesStandFree(t *testing.T) {
	view := simple()
	for i := range 60 {
		view.Stations = append(view.Stations, Vertex{fmt.Sprintf("a rather long station name %d", i), 0.5, 0.1})
	}
	r := read(t, draw(t, view))
	checkLabels(t, view, r)
	if len(r.boxes) < 60 {
		t.Errorf("%d labels, want all 60", len(r.boxes))
	}
}

func simple() SideView {
	return SideView{
		Title:     "one ramp",
		Body:      []Vertex{{"leading edge", 0, 0}, {"shoulder", 0.8, 0.15}, {"", 1, 0.16}},
		CowlInner: []Vertex{{"lip", 0.6, 0.25}, {"", 1, 0.26}},
		CowlOuter: []Vertex{{"lip", 0.6, 0.25}, {"", 1, 0.3}},
		Waves:     []Wave{{"ramp 1 shock", RampShock, 0, 0, 0.6, 0.25}, {"lip shock", LipShock, 0.6, 0.25, 0.8, 0.15}},
	}
}

func TestSameNumbersSameBytes(t *testing.T) {
	view, ok := invented{7, 0.02, 0.3, degrees(4, 4, 4, 4, 4, 4), 10 * radian, 4 * radian}.view()
	if !ok {
		t.Fatal("no such inlet")
	}
	want := draw(t, view)
	results := make(chan []byte)
	for range 4 {
		go func() {
			var sheet bytes.Buffer
			_ = WriteSideView(&sheet, view) // compared below, an error leaves it empty
			results <- sheet.Bytes()
		}()
	}
	for range 4 {
		if got := <-results; !bytes.Equal(got, want) {
			t.Error("two drawings of the same numbers differ")
		}
	}
}

// The drawing stands alone in a page: no prolog, style sheet, script or link,
// and no character of a name gets out of its place.
func TestDrawingStandsAlone(t *testing.T) {
	view := simple()
	hostile := "a<b>&\"quote\"='\x01</svg>"
	view.Title, view.Caution, view.Subtitle = hostile, hostile, []string{hostile}
	view.Waves[0].Name, view.Body[1].Name = hostile, hostile
	sheet := draw(t, view)
	if !bytes.HasPrefix(sheet, []byte("<svg")) {
		t.Errorf("starts with %q", sheet[:20])
	}
	for _, foreign := range []string{"<style", "<script", "href=", "<image", "NaN", "Inf"} {
		if bytes.Contains(sheet, []byte(foreign)) {
			t.Errorf("contains %q", foreign)
		}
	}
	r := read(t, sheet)
	clean := strings.ReplaceAll(hostile, "\x01", "�")
	if r.title != clean || r.waves[0].Name != clean {
		t.Errorf("title %q, wave %q, want %q", r.title, r.waves[0].Name, clean)
	}
	if !strings.Contains(r.desc, "lip shock (lip shock) from (0.6, 0.25) to (0.8, 0.15)") {
		t.Errorf("description %q does not state the waves", r.desc)
	}
}

func TestTextIsWritten(t *testing.T) {
	view := simple()
	view.Subtitle = []string{"Mach 3, recovery 0.81"}
	view.Caution = strings.Repeat("this inlet does not start by itself ", 8)
	view.Incidence = -2 * radian
	all := strings.Join(read(t, draw(t, view)).texts, "\n")
	for _, want := range []string{"one ramp", "Mach 3, recovery 0.81", "incidence -2 deg", "ramp shock", "in m, equal scales", "0.5"} {
		if !strings.Contains(all, want) {
			t.Errorf("%q is not on the sheet", want)
		}
	}
	if got := strings.Count(all, "does not start"); got != 8 {
		t.Errorf("the caution is cut: %d of 8 phrases", got)
	}
}

func TestValidateReportsEverythingAtOnce(t *testing.T) {
	view := simple()
	view.Body = view.Body[:1]
	view.LipStreamline = []Vertex{{"", math.NaN(), 0}}
	view.Waves[1].X2 = math.Inf(1)
	view.Waves[0].Kind = 99
	view.Stations = []Vertex{{strings.Repeat("x", longestName+1), 0, 0}}
	view.Incidence = 2
	var sheet bytes.Buffer
	var invalid *InvalidView
	if err := WriteSideView(&sheet, view); !errors.As(err, &invalid) {
		t.Fatalf("got %v", err)
	}
	want := []Defect{
		{"body", 0, "needs two vertices or more"},
		{"lip streamline", 0, "a single vertex is no line"},
		{"lip streamline", 0, "coordinate is not finite"},
		{"station", 0, "name is too long"},
		{"wave", 0, "unknown kind"},
		{"wave", 1, "coordinate is not finite"},
		{"incidence", 0, "must be less than a right angle"},
	}
	if len(invalid.Defects) != len(want) {
		t.Fatalf("got %v, want %v", invalid.Defects, want)
	}
	for i := range want {
		if invalid.Defects[i] != want[i] {
			t.Errorf("defect %d: got %v, want %v", i, invalid.Defects[i], want[i])
		}
	}
	if sheet.Len() > 0 {
		t.Error("an invalid view left bytes behind")
	}
}

func TestFlatViewIsRefused(t *testing.T) {
	flat := SideView{Body: []Vertex{{"", 0, 0}, {"", 1, 0}}}
	var invalid *InvalidView
	if err := flat.Validate(); !errors.As(err, &invalid) || invalid.Defects[0].Part != "extent" {
		t.Errorf("got %v", err)
	}
}

func BenchmarkWriteSideView(b *testing.B) {
	for _, ramps := range []int{1, 3, 8} {
		b.Run(fmt.Sprintf("ramps=%d", ramps), func(b *testing.B) {
			n := invented{mach: 6, height: 0.16, lipTurning: 10 * radian, wedge: 4 * radian}
			for range ramps {
				n.ramps = append(n.ramps, 20*radian/float64(ramps))
			}
			view, ok := n.view()
			if !ok {
				b.Fatal("no such inlet")
			}
			for b.Loop() {
				if err := WriteSideView(io.Discard, view); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
