package chart

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// tag is one element of a drawing with its attributes.
type tag struct {
	name string
	at   map[string]string
}

// tags draws and reads every element back, in order.
func tags(t interface{ Fatal(...any) }, write func(w io.Writer) error) []tag {
	var sheet bytes.Buffer
	if err := write(&sheet); err != nil {
		t.Fatal(err)
	}
	var list []tag
	decoder := xml.NewDecoder(&sheet)
	for {
		token, err := decoder.Token()
		if err == io.EOF {
			return list
		}
		if err != nil {
			t.Fatal(err)
		}
		if element, ok := token.(xml.StartElement); ok {
			one := tag{element.Name.Local, map[string]string{}}
			for _, a := range element.Attr {
				one.at[a.Name.Local] = a.Value
			}
			list = append(list, one)
		}
	}
}

func (e tag) number(name string) float64 {
	v := math.NaN()
	fmt.Sscan(e.at[name], &v)
	return v
}

func (e tag) axis(name string) (axis [4]float64) {
	fmt.Sscan(e.at[name], &axis[0], &axis[1], &axis[2], &axis[3])
	return axis
}

// wordsApart checks that no two labels of a drawing cover each other.
func wordsApart(t interface{ Errorf(string, ...any) }, list []tag) {
	var boxes []box
	for _, e := range list {
		if e.at["data-role"] != "label" {
			continue
		}
		var b box
		fmt.Sscan(e.at["data-box"], &b.x, &b.y, &b.w, &b.h)
		for _, other := range boxes {
			if b.overlaps(other) {
				t.Errorf("label %q at %v covers %v", e.at["data-name"], b, other)
			}
		}
		boxes = append(boxes, b)
	}
	if len(boxes) == 0 {
		t.Errorf("the drawing has no label")
	}
}

// inkError is what writing coordinates to a hundredth of a drawing unit costs.
const inkError = 0.006

// Every prediction is read back, inside the axes, and marked by its interval.
func TestParityReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := ParityChart{Title: "recovery at cruise", Label: "recovery", Note: "intervals"}
		scale := math.Pow(10, float64(rapid.IntRange(-4, 4).Draw(t, "power")))
		for range rapid.IntRange(1, 30).Draw(t, "points") {
			exact := scale * rapid.Float64Range(-1, 1).Draw(t, "exact")
			c.Points = append(c.Points, ParityPoint{
				Exact: exact, Predicted: exact + scale*rapid.Float64Range(-0.2, 0.2).Draw(t, "error"), Reach: scale * rapid.Float64Range(0, 0.2).Draw(t, "reach"),
			})
		}
		list := tags(t, func(w io.Writer) error { return WriteParityChart(w, c) })
		wordsApart(t, list)
		x, y := list[0].axis("data-x"), list[0].axis("data-y")
		i := 0
		for _, e := range list {
			if e.name != "circle" {
				continue
			}
			p := c.Points[i]
			i++
			unit := inkError * (x[1] - x[0]) / math.Abs(x[3]-x[2])
			if got := value(x, e.number("cx")); math.Abs(got-p.Exact) > unit || got < x[0] || got > x[1] {
				t.Errorf("exact %g reads %g on %v", p.Exact, got, x)
			}
			if got := value(y, e.number("cy")); math.Abs(got-p.Predicted) > unit || got < y[0] || got > y[1] {
				t.Errorf("predicted %g reads %g on %v", p.Predicted, got, y)
			}
			if inside := math.Abs(p.Exact-p.Predicted) <= p.Reach; inside != (e.at["data-name"] == "inside") {
				t.Errorf("%v is marked %s", p, e.at["data-name"])
			}
		}
		if i != len(c.Points) {
			t.Errorf("%d of %d points are drawn", i, len(c.Points))
		}
	})
}

var cellRun = regexp.MustCompile(`M(\S+) (\S+)h(\S+)v(-\S+)h-\S+z`)

// cellsOf reads which cells of a field a path paints.
func cellsOf(t interface{ Fatal(...any) }, path string, x, y [4]float64, n int) []bool {
	painted := make([]bool, n*n)
	for _, run := range cellRun.FindAllStringSubmatch(path, -1) {
		var at [3]float64
		for k := range at {
			fmt.Sscan(run[k+1], &at[k])
		}
		w := (x[3] - x[2]) / float64(n)
		from, count := int(math.Round((at[0]-x[2])/w)), int(math.Round(at[2]/w))
		row := int(math.Round((y[2] - at[1]) / ((y[2] - y[3]) / float64(n))))
		if from < 0 || from+count > n || row < 0 || row >= n {
			t.Fatal("a run leaves the frame: " + run[0])
		}
		for i := from; i < from+count; i++ {
			painted[row*n+i] = true
		}
	}
	return painted
}

// Every cell has the colour of its value, and is hatched where limits forbid it.
func TestFieldReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 12).Draw(t, "cells")
		f := FieldPair{
			ID: "forbidden-0", Title: "t", Label: "recovery", Cells: n,
			X: Span{"a, deg", 3, 16}, Y: Span{"b, deg", -2, 5}, Best: [2]float64{8, 1}, BestName: "the design",
		}
		power := math.Pow(10, float64(rapid.IntRange(-4, 4).Draw(t, "power")))
		for k := range f.Fields {
			field := Field{Name: fmt.Sprintf("field %d", k)}
			for range n * n {
				v := power * rapid.Float64Range(-1, 1).Draw(t, "value")
				if rapid.IntRange(0, 5).Draw(t, "hole") == 0 {
					v = math.NaN()
				}
				field.Values = append(field.Values, v)
				field.Forbidden = append(field.Forbidden, rapid.Bool().Draw(t, "forbidden"))
			}
			field.Values[0] = power / 2 // a field of holes alone is not drawn
			f.Fields[k] = field
		}
		list := tags(t, func(w io.Writer) error { return WriteFieldPair(w, f) })
		wordsApart(t, list)
		low, high := f.Fields[1].Values[0], f.Fields[1].Values[0]
		for _, v := range f.Fields[1].Values {
			if !math.IsNaN(v) {
				low, high = min(low, v), max(high, v)
			}
		}
		low, high = separated(low, high) // the colours of a field of one value reach beyond it
		k := -1
		var x, y [4]float64
		colour := map[int][2]float64{}
		hatched := make([]bool, n*n)
		check := func() {
			if k < 0 {
				return
			}
			for i, v := range f.Fields[k].Values {
				band, painted := colour[i]
				if painted == math.IsNaN(v) {
					t.Errorf("cell %d of %g: painted %v", i, v, painted)
				}
				// A value beyond those of the exact field takes the last colour.
				shown, slack := max(min(v, high), low), 1e-5*power
				if painted && (shown < band[0]-slack || shown > band[1]+slack) {
					t.Errorf("cell %d of %g has the colour of %v", i, v, band)
				}
				if hatched[i] != f.Fields[k].Forbidden[i] {
					t.Errorf("cell %d is hatched: %v", i, hatched[i])
				}
			}
		}
		for _, e := range list {
			switch {
			case e.at["data-role"] == "field":
				check()
				k++
				x, y = e.axis("data-x"), e.axis("data-y")
				clear(colour)
				hatched = make([]bool, n*n)
			case e.at["data-band"] != "":
				var band [2]float64
				fmt.Sscan(e.at["data-band"], &band[0], &band[1])
				for i, on := range cellsOf(t, e.at["d"], x, y, n) {
					if on {
						colour[i] = band
					}
				}
			case e.at["data-name"] == "forbidden":
				hatched = cellsOf(t, e.at["d"], x, y, n)
			case e.at["data-name"] == "best":
				if math.Abs(value(x, e.number("cx"))-8) > 0.01 || math.Abs(value(y, e.number("cy"))-1) > 0.01 {
					t.Errorf("the ring is at %s, %s", e.at["cx"], e.at["cy"])
				}
			}
		}
		check()
		if k != 1 {
			t.Errorf("%d fields", k+1)
		}
	})
}

// Colours darken from band to band, so that a grey print keeps their order
// (luminance by ITU-R BT.709).
func TestMapColoursDarken(t *testing.T) {
	for _, count := range []int{2, 5, 12, 24} {
		before := math.Inf(1)
		for k := range count {
			now := luminance(t, bands{count: count}.shade(k))
			if now >= before {
				t.Errorf("band %d of %d is no darker than the one before", k, count)
			}
			before = now
		}
	}
}

// luminance is the relative luminance of WCAG 2.2.
func luminance(t *testing.T, colour string) float64 {
	t.Helper()
	var c [3]int
	if _, err := fmt.Sscanf(colour, "#%02x%02x%02x", &c[0], &c[1], &c[2]); err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for i, weight := range []float64{0.2126, 0.7152, 0.0722} {
		v := float64(c[i]) / 255
		if v <= 0.04045 {
			v /= 12.92
		} else {
			v = math.Pow((v+0.055)/1.055, 2.4)
		}
		sum += weight * v
	}
	return sum
}

// Inks of text have a contrast of 4.5 on their paper, light and dark (WCAG 2.2,
// success criterion 1.4.3).
func TestContrastOfInks(t *testing.T) {
	contrast := func(a, b string) float64 {
		x, y := luminance(t, a), luminance(t, b)
		return (max(x, y) + 0.05) / (min(x, y) + 0.05)
	}
	dark := map[string]string{}
	for _, s := range Shades() {
		if dark[s.Light] != "" {
			t.Errorf("%s has two counterparts", s.Light)
		}
		dark[s.Light] = s.Dark
	}
	inks := []string{darkInk, softInk, cautionInk, streamlineStroke.ink}
	for _, s := range strokes {
		inks = append(inks, s.ink)
	}
	for _, s := range curveStrokes {
		inks = append(inks, s.ink)
	}
	for _, ink := range inks {
		if c := contrast(ink, paper); c < 4.5 {
			t.Errorf("%s on light paper: %.2f", ink, c)
		}
		if dark[ink] == "" {
			t.Errorf("%s has no dark counterpart", ink)
		} else if c := contrast(dark[ink], dark[paper]); c < 4.5 {
			t.Errorf("%s on dark paper: %.2f", dark[ink], c)
		}
	}
}

// A bar ends where its margin lies on the axis, and says so in a word.
func TestMarginBar(t *testing.T) {
	for _, c := range []struct {
		share   float64
		verdict string
		end     float64 // share of the half axis: log(1 + 1000 s)/log(1001)
	}{
		{-2, "violated", -1}, {-0.01, "violated", -math.Log(11) / math.Log(1001)}, {0, "on the limit", 0},
		{0.01, "met", math.Log(11) / math.Log(1001)}, {0.1, "comfortable", math.Log(101) / math.Log(1001)}, {1, "comfortable", 1},
	} {
		list := tags(t, func(w io.Writer) error { return WriteMarginBar(w, MarginBar{Name: "length_m", Share: c.share}) })
		if got := list[0].at["aria-label"]; got != "length_m: "+c.verdict {
			t.Errorf("%g is told as %q", c.share, got)
		}
		for _, e := range list {
			if e.at["data-share"] != "" && math.Abs(e.number("data-end")-(barWidth/2+c.end*(barWidth/2-barEdge))) > inkError {
				t.Errorf("%g ends at %s", c.share, e.at["data-end"])
			}
		}
	}
	list := tags(t, func(w io.Writer) error { return WriteMarginBar(w, MarginBar{Name: "x", Share: math.NaN()}) })
	for _, e := range list {
		if e.at["data-share"] != "" || e.name == "circle" {
			t.Error("a missing margin has a bar")
		}
	}
	wordsApart(t, tags(t, WriteMarginScale))
}

// Every wall is read back to one scale, and fifty names stand apart.
func TestOutlinesReadBack(t *testing.T) {
	for _, count := range []int{1, 3, mostShapes} {
		c := OutlineChart{Title: "contours"}
		for i := range count {
			s := 1 + 0.1*float64(i)
			c.Shapes = append(c.Shapes, Outline{
				Name: fmt.Sprintf("results/design-%d", i),
				Body: []Vertex{{X: 0, Y: 0}, {X: 0.5 * s, Y: 0.1}, {X: s, Y: 0.25}}, Cowl: []Vertex{{X: 0.8 * s, Y: 0.3}, {X: s, Y: 0.33}},
			})
		}
		list := tags(t, func(w io.Writer) error { return WriteOutlineChart(w, c) })
		wordsApart(t, list)
		x, y := list[0].axis("data-x"), list[0].axis("data-y")
		if across, up := (x[3]-x[2])/(x[1]-x[0]), (y[2]-y[3])/(y[1]-y[0]); math.Abs(across-up) > 1e-9*across {
			t.Errorf("scales %g and %g", across, up)
		}
		walls := map[string][][2]float64{}
		for _, e := range list {
			for _, pair := range strings.Fields(e.at["points"]) {
				var at [2]float64
				fmt.Sscanf(pair, "%f,%f", &at[0], &at[1])
				walls[e.at["data-name"]] = append(walls[e.at["data-name"]], [2]float64{value(x, at[0]), value(y, at[1])})
			}
		}
		unit := inkError * (x[1] - x[0]) / (x[3] - x[2])
		for _, s := range c.Shapes {
			want := append(append([]Vertex(nil), s.Body...), s.Cowl...)
			if len(walls[s.Name]) != len(want) {
				t.Fatalf("%s has %d points", s.Name, len(walls[s.Name]))
			}
			for i, v := range want {
				if got := walls[s.Name][i]; math.Abs(got[0]-v.X) > unit || math.Abs(got[1]-v.Y) > unit {
					t.Errorf("%s: (%g, %g) reads %v", s.Name, v.X, v.Y, got)
				}
			}
		}
	}
}

func TestInvalidPictures(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		write func(w io.Writer) error
		want  []string
	}{
		{func(w io.Writer) error { return WriteParityChart(w, ParityChart{}) }, []string{"0 points"}},
		{func(w io.Writer) error {
			return WriteParityChart(w, ParityChart{Points: []ParityPoint{{nan, 0, 0}, {0, 0, -1}}})
		}, []string{"point 0", "point 1"}},
		{func(w io.Writer) error { return WriteFieldPair(w, FieldPair{ID: "A b", Cells: 1}) }, []string{"range", "1 cells", "'A'", "' '"}},
		{func(w io.Writer) error {
			hole := Field{Values: []float64{nan, nan, nan, nan}, Forbidden: make([]bool, 4)}
			return WriteFieldPair(w, FieldPair{ID: "a", Cells: 2, X: Span{"", 0, 1}, Y: Span{"", 0, 1}, Fields: [2]Field{hole, hole}})
		}, []string{"no cell has a value"}},
		{func(w io.Writer) error { return WriteMarginBar(w, MarginBar{Share: math.Inf(1)}) }, []string{"margin +Inf"}},
		{func(w io.Writer) error { return WriteOutlineChart(w, OutlineChart{}) }, []string{"0 shapes"}},
		{func(w io.Writer) error {
			flat := []Vertex{{X: 0}, {X: 0}}
			return WriteOutlineChart(w, OutlineChart{Shapes: []Outline{{"a", flat, flat}}})
		}, []string{"no extent"}},
	} {
		var invalid *InvalidChart
		err := c.write(io.Discard)
		if !errors.As(err, &invalid) {
			t.Errorf("%v is not told as invalid", err)
			continue
		}
		for _, want := range c.want {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("%q is not reported in: %v", want, err)
			}
		}
	}
}

func BenchmarkFieldPair(b *testing.B) {
	const n = 32
	f := FieldPair{ID: "a", Cells: n, X: Span{"x", 0, 1}, Y: Span{"y", 0, 1}}
	for k := range f.Fields {
		for i := range n * n {
			f.Fields[k].Values = append(f.Fields[k].Values, math.Hypot(float64(i%n), float64(i/n)))
			f.Fields[k].Forbidden = append(f.Fields[k].Forbidden, i%n > i/n)
		}
	}
	for b.Loop() {
		if err := WriteFieldPair(io.Discard, f); err != nil {
			b.Fatal(err)
		}
	}
}
