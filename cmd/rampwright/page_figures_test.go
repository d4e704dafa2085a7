package main

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"math"
	"strings"
	"testing"
)

// Every figure of a page is read back: its axes cover what is drawn, no words lie
// on others or off the sheet, and what it shows are the values of the result.
func TestFiguresOfThePages(t *testing.T) {
	for _, name := range []string{"veyric-6", "ondrel-3"} {
		t.Run(name, func(t *testing.T) {
			d := designStarter(t, name)
			var shown shownValues
			decode(t, d.files["result.json"], &shown)
			decode(t, d.files["review.json"], &shown)
			seen := map[string]int{}
			for _, f := range readFigures(t, d.files[pageName]) {
				f.checkLabels(t)
				f.checkAxes(t)
				seen[f.check(t, &shown)]++
			}
			want := map[string]int{"parity": 6, "map": len(shown.Maps), "progress": 2, "off design": 1, "side view": 1, "walls": 0}
			for _, p := range shown.Points {
				if p.Trace != nil {
					want["walls"]++
				}
			}
			if want["walls"] == 0 {
				delete(want, "walls")
			}
			if shown.OffDesign == nil {
				delete(want, "off design")
			}
			delete(seen, "bar")
			if fmt.Sprint(seen) != fmt.Sprint(want) {
				t.Errorf("the page has %v, want %v", seen, want)
			}
		})
	}
}

// shownValues is what result.json and review.json say of the figures.
type shownValues struct {
	Best struct {
		Aim       struct{ Exact float64 }
		Variables map[string]float64
	}
	History []struct {
		Evaluations, Error float64
		Aim                *float64
	}
	Points []struct {
		Name  string
		Trace *struct{ Walls []shownWall }
	}
	Variables []struct {
		Name      string
		Low, High float64
	}
	Parity []struct {
		Quantity, Member, At string
		Exact, Predicted     []float64
	}
	Maps []struct {
		X, Y  string
		Exact struct{ Aim []*float64 }
	}
	OffDesign *struct {
		Mach              []float64
		Recovery, Capture []*float64
	} `json:"off_design"`
}

// shownWall is a stretch of wall in result.json.
type shownWall struct {
	Surface  string
	From     [2]float64 `json:"from_m"`
	To       [2]float64 `json:"to_m"`
	Pressure float64    `json:"pressure_ratio"`
}

// figure is one drawing of a page, its points in the units of its axes.
type figure struct {
	sideViewFile
	title   string
	frames  []frame
	dots    []xy
	rings   []xy
	lines   map[string][]xy
	outside []string // points beyond the axes
}

// frame is a pair of axes: value from and to, place from and to.
type frame struct{ x, y [4]float64 }

func readFigures(t *testing.T, page []byte) []*figure {
	t.Helper()
	var list []*figure
	var f *figure
	decoder := xml.NewDecoder(bytes.NewReader(page))
	for {
		token, _ := decoder.Token()
		if token == nil {
			return list
		}
		element, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		at := map[string]string{}
		for _, a := range element.Attr {
			at[a.Name.Local] = a.Value
		}
		if element.Name.Local == "svg" {
			f = &figure{title: at["aria-label"], lines: map[string][]xy{}, sideViewFile: sideViewFile{root: at}}
			list = append(list, f)
		}
		if f != nil {
			f.take(t, element.Name.Local, at)
		}
	}
}

func (f *figure) take(t *testing.T, element string, at map[string]string) {
	t.Helper()
	if at["data-x"] != "" {
		var axes frame
		for i := range axes.x {
			axes.x[i], axes.y[i] = parse(t, strings.Fields(at["data-x"])[i]), parse(t, strings.Fields(at["data-y"])[i])
		}
		f.frames = append(f.frames, axes)
	}
	if at["data-role"] == "label" {
		f.sideViewFile.take(t, element, at)
	}
	if len(f.frames) == 0 {
		return
	}
	switch {
	case element == "circle" && at["fill"] == "none":
		f.rings = append(f.rings, f.value(xy{parse(t, at["cx"]), parse(t, at["cy"])}))
	case element == "circle":
		f.dots = append(f.dots, f.value(xy{parse(t, at["cx"]), parse(t, at["cy"])}))
	case element == "polyline":
		for _, pair := range strings.Fields(at["points"]) {
			x, y, _ := strings.Cut(pair, ",")
			f.lines[at["data-name"]] = append(f.lines[at["data-name"]], f.value(xy{parse(t, x), parse(t, y)}))
		}
	}
}

// value is the point at a place, by the axes read last.
func (f *figure) value(p xy) xy {
	axes := f.frames[len(f.frames)-1]
	along := func(a [4]float64, at float64) float64 { return a[0] + (at-a[2])/(a[3]-a[2])*(a[1]-a[0]) }
	v := xy{along(axes.x, p.x), along(axes.y, p.y)}
	if x, y := f.ink(); v.x < axes.x[0]-x || v.x > axes.x[1]+x || v.y < axes.y[0]-y || v.y > axes.y[1]+y {
		f.outside = append(f.outside, fmt.Sprint(v))
	}
	return v
}

// ink is what coordinates written to a hundredth of a drawing unit cost.
func (f *figure) ink() (x, y float64) {
	axes := f.frames[len(f.frames)-1]
	cost := func(a [4]float64) float64 { return 0.006 * (a[1] - a[0]) / math.Abs(a[3]-a[2]) }
	return cost(axes.x), cost(axes.y)
}

func (f *figure) checkAxes(t *testing.T) {
	t.Helper()
	for _, axes := range f.frames {
		if !(axes.x[0] < axes.x[1]) || !(axes.y[0] < axes.y[1]) {
			t.Errorf("%s: axes %v", f.title, axes)
		}
	}
	if f.outside != nil {
		t.Errorf("%s: beyond the axes: %v", f.title, f.outside)
	}
}

// check compares a figure with the values it shows and says what it is.
func (f *figure) check(t *testing.T, shown *shownValues) string {
	t.Helper()
	switch {
	case f.root["data-scale"] != "":
		return "side view"
	case f.title == "The frozen inlet over Mach number":
		f.same(t, "recovery", curve(shown.OffDesign.Mach, shown.OffDesign.Recovery))
		f.same(t, "capture", curve(shown.OffDesign.Mach, shown.OffDesign.Capture))
		return "off design"
	case f.title == "Best design so far that holds every limit":
		line := f.lines["aim"]
		for _, step := range shown.History {
			if step.Aim != nil { // null before the first design that holds every limit
				f.same(t, "aim", append([]xy{{step.Evaluations, *step.Aim}}, line[1:]...))
				break
			}
		}
		f.same(t, "aim", append(line[:len(line)-1:len(line)-1], xy{shown.History[len(shown.History)-1].Evaluations, shown.Best.Aim.Exact}))
		return "progress"
	case f.title == "Error of the surrogates at the latest proposal":
		var want []xy
		for _, step := range shown.History {
			if step.Error > 0 {
				want = append(want, xy{step.Evaluations, math.Log10(step.Error)})
			}
		}
		f.same(t, "error", want)
		return "progress"
	}
	for _, m := range shown.Maps {
		if f.title == "Aim over "+m.X+" and "+m.Y {
			f.checkMap(t, m.X, m.Y, shown)
			return "map"
		}
	}
	for _, p := range shown.Parity {
		title := p.Quantity
		if p.Member != "" {
			title += " (" + p.Member + ")"
		}
		if f.title == title || f.title == title+" at "+p.At {
			var want []xy
			for i := range p.Exact {
				want = append(want, xy{p.Exact[i], p.Predicted[i]})
			}
			f.lines["dots"] = f.dots
			f.same(t, "dots", want)
			return "parity"
		}
	}
	for _, p := range shown.Points {
		if f.title == "Pressure along the walls: "+p.Name {
			f.checkSteps(t, p.Trace.Walls)
			return "walls"
		}
	}
	if len(f.frames) == 0 {
		return "bar"
	}
	t.Errorf("a figure %q of nothing known", f.title)
	return f.title
}

// curve is a line through the values there are.
func curve(x []float64, y []*float64) []xy {
	var list []xy
	for i := range x {
		if y[i] != nil {
			list = append(list, xy{x[i], *y[i]})
		}
	}
	return list
}

// checkSteps: each surface has its steps, by their logarithm where the axis says so.
func (f *figure) checkSteps(t *testing.T, walls []shownWall) {
	t.Helper()
	want := map[string][]xy{}
	for i, w := range walls {
		y := w.Pressure
		if f.root["data-y-log"] == "true" {
			y = math.Log10(y)
		}
		to := w.To[0]
		if i+1 < len(walls) && walls[i+1].Surface == w.Surface {
			to = walls[i+1].From[0]
		}
		want[w.Surface] = append(want[w.Surface], xy{w.From[0], y}, xy{to, y})
	}
	if len(f.lines) != len(want) {
		t.Errorf("%s: %d lines, want %d", f.title, len(f.lines), len(want))
	}
	for surface, steps := range want {
		f.same(t, surface, steps)
	}
}

// same fails unless a line passes through the points wanted.
func (f *figure) same(t *testing.T, line string, want []xy) {
	t.Helper()
	got := f.lines[line]
	if len(got) != len(want) || len(got) == 0 {
		t.Errorf("%s: %s has %d points, want %d", f.title, line, len(got), len(want))
		return
	}
	x, y := f.ink()
	for i, p := range want {
		if math.Abs(got[i].x-p.x) > x || math.Abs(got[i].y-p.y) > y {
			t.Errorf("%s: point %d of %s is drawn at %v, want %v", f.title, i, line, got[i], p)
		}
	}
}

// checkMap: both fields span the ranges of the variables and ring the design.
func (f *figure) checkMap(t *testing.T, across, up string, shown *shownValues) {
	t.Helper()
	if len(f.frames) != 2 {
		t.Fatalf("%s: %d fields", f.title, len(f.frames))
	}
	for _, v := range shown.Variables {
		for _, axes := range f.frames {
			for name, axis := range map[string][4]float64{across: axes.x, up: axes.y} {
				if name == v.Name && (axis[0] != v.Low || axis[1] != v.High) {
					t.Errorf("%s: axis %v of %s", f.title, axis, name)
				}
			}
		}
	}
	x, y := f.ink()
	rings := 0
	for _, r := range f.rings {
		if math.Abs(r.x-shown.Best.Variables[across]) <= x && math.Abs(r.y-shown.Best.Variables[up]) <= y {
			rings++
		}
	}
	if rings < 2 || rings != len(f.rings) {
		t.Errorf("%s: rings at %v", f.title, f.rings)
	}
}
