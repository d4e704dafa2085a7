package chart

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// linesFile is what a reader finds in a line chart.
type linesFile struct {
	x, y   [4]float64 // low, high, from, to
	lines  map[string][][2]float64
	labels map[string][]box
	all    []box
}

func readLineChart(t interface{ Fatal(...any) }, picture LineChart) linesFile {
	var sheet bytes.Buffer
	if err := WriteLineChart(&sheet, picture); err != nil {
		t.Fatal(err)
	}
	f := linesFile{lines: map[string][][2]float64{}, labels: map[string][]box{}}
	decoder := xml.NewDecoder(&sheet)
	for {
		token, err := decoder.Token()
		if err == io.EOF {
			return f
		}
		if err != nil {
			t.Fatal(err)
		}
		element, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		attributes := map[string]string{}
		for _, a := range element.Attr {
			attributes[a.Name.Local] = a.Value
		}
		name := attributes["data-name"]
		switch {
		case element.Name.Local == "svg":
			fmt.Sscan(attributes["data-x"], &f.x[0], &f.x[1], &f.x[2], &f.x[3])
			fmt.Sscan(attributes["data-y"], &f.y[0], &f.y[1], &f.y[2], &f.y[3])
		case element.Name.Local == "polyline":
			for _, pair := range strings.Fields(attributes["points"]) {
				var at [2]float64
				fmt.Sscanf(pair, "%f,%f", &at[0], &at[1])
				f.lines[name] = append(f.lines[name], at)
			}
		case attributes["data-role"] == "label":
			var b box
			fmt.Sscan(attributes["data-box"], &b.x, &b.y, &b.w, &b.h)
			f.labels[name] = append(f.labels[name], b)
			f.all = append(f.all, b)
		}
	}
}

// value reads a place on the sheet back.
func value(axis [4]float64, at float64) float64 {
	return axis[0] + (at-axis[2])/(axis[3]-axis[2])*(axis[1]-axis[0])
}

var ladderPicture = LineChart{
	Title: "recovery against ramps", XLabel: "ramps", YLabel: "recovery", WholeX: true, Low: 1, High: 4,
	Lines: []Line{
		{Name: "this brief", Lead: true, Points: []LinePoint{{2, 0.553, "0.55338", false, false}, {3, 0.656, "0.65591", true, false}, {4, 0.69, "0.69034", false, false}}},
		{Name: "equal-strength limit", Points: []LinePoint{{1, 0.58, "", false, false}, {2, 0.74, "", false, false}, {3, 0.83, "", false, false}, {4, 0.889, "", false, false}}},
	},
	Levels: []Level{{"standard recovery", 0.888}},
}

// Every point is read back from the file, and ramps are counted in whole numbers.
func TestLineChartReadsBack(t *testing.T) {
	f := readLineChart(t, ladderPicture)
	for _, line := range ladderPicture.Lines {
		if len(f.lines[line.Name]) != len(line.Points) {
			t.Fatalf("%s has %d points", line.Name, len(f.lines[line.Name]))
		}
		for i, p := range line.Points {
			// Coordinates are written to a hundredth of a drawing unit.
			at := f.lines[line.Name][i]
			if math.Abs(value(f.x, at[0])-p.X) > 1e-4 || math.Abs(value(f.y, at[1])-p.Y) > 1e-4 {
				t.Errorf("%s: point %d reads %v", line.Name, i, at)
			}
		}
	}
	for _, name := range []string{"1", "2", "3", "4", "this brief", "equal-strength limit", "standard recovery", "0.65591"} {
		if len(f.labels[name]) != 1 {
			t.Errorf("%q is written %d times", name, len(f.labels[name]))
		}
	}
	if f.labels["1.5"] != nil || f.labels["0"] != nil {
		t.Error("a tick between or outside the counts")
	}
}

// No two words of a chart cover each other.
func TestLineChartWordsStandApart(t *testing.T) {
	apart := func(t interface {
		Fatal(...any)
		Errorf(string, ...any)
	}, f linesFile) {
		for i, a := range f.all {
			for _, b := range f.all[:i] {
				if a.overlaps(b) {
					t.Errorf("%v and %v overlap", a, b)
				}
			}
		}
	}
	apart(t, readLineChart(t, ladderPicture))
	rapid.Check(t, func(t *rapid.T) {
		picture := LineChart{Title: "t", XLabel: "x", YLabel: "y", WholeX: rapid.Bool().Draw(t, "whole"), Low: 1, High: 1}
		scale := math.Pow(10, float64(rapid.IntRange(-6, 6).Draw(t, "power")))
		for k := range rapid.IntRange(0, 4).Draw(t, "lines") {
			line := Line{Name: fmt.Sprintf("line %d", k), Lead: k == 0}
			for i := range rapid.IntRange(1, 8).Draw(t, "points") {
				line.Points = append(line.Points, LinePoint{X: float64(i + 1), Y: scale * rapid.Float64Range(-1, 1).Draw(t, "y")})
			}
			picture.Lines = append(picture.Lines, line)
		}
		for k := range rapid.IntRange(0, 3).Draw(t, "levels") {
			picture.Levels = append(picture.Levels, Level{fmt.Sprintf("level %d", k), scale * rapid.Float64Range(-1, 1).Draw(t, "level")})
		}
		apart(t, readLineChart(t, picture))
	})
}

var steppedPicture = LineChart{
	Title: "pressure along the walls", XLabel: "x, m", YLabel: "p/p0", LogY: true, Low: 0, High: 1.2,
	Lines: []Line{
		{Name: "body", Lead: true, Steps: true, Points: []LinePoint{{X: 0, Y: 2.9}, {X: 0.6, Y: 6.8}, {X: 1.1, Y: 1.9}, {X: 1.2, Y: 1.9}}},
		{Name: "cowl", Steps: true, Points: []LinePoint{{X: 0.9, Y: 0.23}, {X: 1, Y: 13, Gap: true}, {X: 1.1, Y: 20}, {X: 1.2, Y: 20}}},
	},
	Levels: []Level{{"free stream", 1}},
}

// Steps hold their value to the next point, on a logarithmic axis that is read back
// by its logarithms; ticks and names stand apart.
func TestStepsOnALogarithmicAxis(t *testing.T) {
	f := readLineChart(t, steppedPicture)
	for name, want := range map[string][][2]float64{
		"body": {{0, 2.9}, {0.6, 2.9}, {0.6, 6.8}, {1.1, 6.8}, {1.1, 1.9}, {1.2, 1.9}},
		"cowl": {{0.9, 0.23}, {1, 13}, {1.1, 13}, {1.1, 20}, {1.2, 20}},
	} {
		if len(f.lines[name]) != len(want) {
			t.Fatalf("%s: %d corners, want %d", name, len(f.lines[name]), len(want))
		}
		for i, at := range f.lines[name] {
			x, y := value(f.x, at[0]), math.Pow(10, value(f.y, at[1]))
			if math.Abs(x-want[i][0]) > 1e-4 || math.Abs(y/want[i][1]-1) > 1e-3 {
				t.Errorf("%s: corner %d reads (%g, %g), want %v", name, i, x, y, want[i])
			}
		}
	}
	for _, tick := range []string{"0.2", "0.5", "1", "2", "5", "10", "20"} {
		if f.labels[tick] == nil {
			t.Errorf("no tick %s", tick)
		}
	}
	for i, a := range f.all {
		for _, b := range f.all[:i] {
			if a.overlaps(b) {
				t.Errorf("%v and %v overlap", a, b)
			}
		}
	}
	if words := describeLines(steppedPicture); !strings.Contains(words, "cowl from 0.9 to 1.2: least 0.23 at 0.9, greatest 20 at 1.1.") {
		t.Errorf("the alternative reads %q", words)
	}
}

// Ticks of a logarithmic axis lie inside it, rise, and stand apart, whatever its ends.
func TestDecadeMarks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-6, 6).Draw(t, "low")
		span := rapid.Float64Range(0.45, 9).Draw(t, "decades")
		a := linearAxis{log: true, low: low, high: low + span, from: linesHeight, to: 0}
		marks := a.marks()
		if len(marks) < 3 && span < 2 || len(marks) == 0 {
			t.Errorf("%d ticks", len(marks))
		}
		for i, m := range marks {
			if l := math.Log10(m.value); l < a.low || l > a.high {
				t.Errorf("tick %s lies outside", m.text)
			}
			if i > 0 && a.at(marks[i-1].value)-a.at(m.value) < markRoom {
				t.Errorf("ticks %s and %s are too near", marks[i-1].text, m.text)
			}
		}
	})
}

// A line that ends far from the right of the axes has its name beside it, where no
// stroke runs, one that ends there at their right.
func TestNamesOfShortLines(t *testing.T) {
	picture := LineChart{
		Title: "t", XLabel: "x", YLabel: "y", Low: 0, High: 10,
		Lines: []Line{
			{Name: "short", Points: []LinePoint{{X: 0, Y: 1}, {X: 3, Y: 2}}},
			{Name: "long", Points: []LinePoint{{X: 0, Y: 3}, {X: 10, Y: 4}}},
		},
	}
	l := arrangeLines(picture, 50, newTypefaces())
	for _, n := range l.names {
		inside := n.box.right() < l.axes.right()
		if short := n.text == "short"; n.led == short || inside != short {
			t.Errorf("%s stands at %v, led: %v", n.text, n.box, n.led)
		}
		for _, s := range l.segments() {
			if !n.led && n.box.meets(s) {
				t.Errorf("%s lies on a line", n.text)
			}
		}
	}
	for i := range 60 { // levels all over
		picture.Levels = append(picture.Levels, Level{Name: "level", Y: float64(i) / 10})
	}
	for _, n := range arrangeLines(picture, 50, newTypefaces()).names {
		if !n.led {
			t.Errorf("%s stands at %v, where levels run", n.text, n.box)
		}
	}
}

func TestInvalidLines(t *testing.T) {
	bad := LineChart{
		Low: 2, High: 1,
		Lines: []Line{
			{Name: strings.Repeat("x", longestText+1)},
			{Points: []LinePoint{{X: 2}, {X: 1}}},
			{Points: []LinePoint{{Y: math.NaN()}}},
			{Points: make([]LinePoint, mostLinePoints+1)},
		},
		Levels: make([]Level, mostLines),
	}
	bad.Levels[0] = Level{strings.Repeat("x", longestText+1), math.Inf(1)}
	bad.LogY = true
	err := WriteLineChart(io.Discard, bad)
	var invalid *InvalidLines
	if !errors.As(err, &invalid) {
		t.Fatal(err)
	}
	for _, want := range []string{
		"range of x is 2 to 1", "16 lines", "line 0 has a name of 201", "line 0 has no point", "line 1: (1, 0)", "line 2: (0, NaN)",
		"line 3 has 401 points", "line 1: 0 has no place on a logarithmic axis", "level 1 lies at 0", "level 0 has a name", "level 0 lies at +Inf",
	} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("%q is not reported in: %v", want, err)
		}
	}
}

func BenchmarkLineChart(b *testing.B) {
	for b.Loop() {
		if err := WriteLineChart(io.Discard, ladderPicture); err != nil {
			b.Fatal(err)
		}
	}
}
