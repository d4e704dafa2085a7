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

func falling(name string, lead bool, first float64) LearningCurve {
	c := LearningCurve{Name: name, Lead: lead}
	for i, n := range []float64{20, 40, 80} {
		middle := first * math.Pow(0.2, float64(i))
		c.Points = append(c.Points, LearningPoint{n, middle / 2, middle, middle * 2})
	}
	return c
}

func exampleCurves() LearningCurves {
	return LearningCurves{
		Title: "Learning <curves> & more", Subtitle: []string{"Two kinds on two quantities."},
		Panels: []LearningPanel{
			{Title: "first", XLabel: "samples", YLabel: "error", Target: 1e-3, TargetName: "target",
				Curves: []LearningCurve{falling("a", false, 1e-2), falling("b", false, 1.01e-2), falling("lead", true, 1e-2)}},
			{Title: "second, exact", XLabel: "samples", YLabel: "error, kPa",
				Curves: []LearningCurve{{Name: "exact", Points: []LearningPoint{{30, 0, 0, 0}}}}},
		},
	}
}

func drawCurves(t interface {
	Fatal(...any)
	Helper()
}, l LearningCurves) string {
	t.Helper()
	var b bytes.Buffer
	if err := WriteLearningCurves(&b, l); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// labelBoxes reads the boxes of the labels and the height of the sheet.
func labelBoxes(t interface {
	Fatal(...any)
	Helper()
}, drawing string) (boxes []box, lines map[string][]point, height float64) {
	t.Helper()
	lines = map[string][]point{}
	decoder := xml.NewDecoder(strings.NewReader(drawing))
	for {
		token, err := decoder.Token()
		if errors.Is(err, io.EOF) {
			return boxes, lines, height
		}
		if err != nil {
			t.Fatal(err)
		}
		element, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		get := map[string]string{}
		for _, a := range element.Attr {
			get[a.Name.Local] = a.Value
		}
		switch {
		case element.Name.Local == "svg":
			var w float64
			if _, err := fmt.Sscanf(get["viewBox"], "0 0 %g %g", &w, &height); err != nil {
				t.Fatal(err)
			}
		case get["data-box"] != "":
			var b box
			if _, err := fmt.Sscanf(get["data-box"], "%g %g %g %g", &b.x, &b.y, &b.w, &b.h); err != nil {
				t.Fatal(err)
			}
			boxes = append(boxes, b)
		case element.Name.Local == "polyline":
			for _, pair := range strings.Fields(get["points"]) {
				x, y, _ := strings.Cut(pair, ",")
				px, errX := strconv.ParseFloat(x, 64)
				py, errY := strconv.ParseFloat(y, 64)
				if errX != nil || errY != nil {
					t.Fatal(pair)
				}
				lines[get["data-name"]] = append(lines[get["data-name"]], point{px, py})
			}
		}
	}
}

func TestLearningCurvesAreDrawnToScale(t *testing.T) {
	drawing := drawCurves(t, exampleCurves())
	_, lines, _ := labelBoxes(t, drawing)
	a := lines["a"]
	if len(a) != 3 {
		t.Fatalf("curve a has %d points", len(a))
	}
	// Counts double and errors fall by the same factor: equal steps on the sheet.
	const rounding = 0.02
	if math.Abs((a[1].x-a[0].x)-(a[2].x-a[1].x)) > rounding || math.Abs((a[1].y-a[0].y)-(a[2].y-a[1].y)) > rounding || a[1].y <= a[0].y {
		t.Errorf("curve a at %v", a)
	}
	decade := (a[1].y - a[0].y) / math.Log10(5) // drawing units
	if b := lines["b"]; math.Abs((a[0].y-b[0].y)-decade*math.Log10(1.01)) > rounding {
		t.Errorf("curve b lies %g above a", a[0].y-b[0].y)
	}
	for _, want := range []string{"Learning &lt;curves&gt; &amp; more", "1e-3", ">20<", "target", "error, kPa", "exact"} {
		if !strings.Contains(drawing, want) {
			t.Errorf("%q is not in the drawing", want)
		}
	}
	if drawing != drawCurves(t, exampleCurves()) {
		t.Error("the same numbers gave another drawing")
	}
}

func TestLearningLabelsDoNotOverlap(t *testing.T) {
	boxes, lines, height := labelBoxes(t, drawCurves(t, exampleCurves()))
	if len(lines) != 4 || len(boxes) < 12 {
		t.Fatalf("%d lines and %d labels", len(lines), len(boxes))
	}
	apart(t, boxes, box{0, 0, sheetWidth, height})
}

func apart(t interface {
	Errorf(string, ...any)
	Helper()
}, boxes []box, sheet box) {
	t.Helper()
	for i, a := range boxes {
		if a.x < sheet.x || a.right() > sheet.right() || a.y < sheet.y || a.bottom() > sheet.bottom() {
			t.Errorf("label %v leaves the sheet %v", a, sheet)
		}
		for _, b := range boxes[:i] {
			if a.overlaps(b) {
				t.Errorf("labels %v and %v overlap", a, b)
			}
		}
	}
}

// However the curves end, their names stand apart, beside the axes, in the order
// of the ends.
func TestCurveNamesStandApart(t *testing.T) {
	face := newTypeface(12)
	rapid.Check(t, func(t *rapid.T) {
		curves := rapid.IntRange(1, 16).Draw(t, "curves")
		panel := LearningPanel{Title: "p"}
		for i := range curves {
			end := rapid.OneOf(rapid.SampledFrom([]float64{-20, 0, 3}), rapid.Float64Range(-17, 3)).Draw(t, "end")
			v := math.Pow(10, end)
			panel.Curves = append(panel.Curves, LearningCurve{Name: strings.Repeat("kind ", 1+i%4) + fmt.Sprint(i), Points: []LearningPoint{{20, v, v, v}}})
		}
		l := arrangePanel(panel, 100, face)
		var boxes []box
		for i, n := range l.names {
			boxes = append(boxes, n.box)
			if i > 0 && n.end.y < l.names[i-1].end.y {
				t.Errorf("name %d stands above its neighbour, its curve ends below", i)
			}
		}
		apart(t, boxes, box{l.axes.right(), 0, sheetWidth - l.axes.right(), l.axes.bottom() + 20})
	})
}

func TestInvalidCurves(t *testing.T) {
	nan := math.NaN()
	cases := map[string]LearningCurves{
		"no panel":           {},
		"no curve":           {Panels: []LearningPanel{{}}},
		"no point":           {Panels: []LearningPanel{{Curves: []LearningCurve{{}}}}},
		"not a rising":       {Panels: []LearningPanel{{Curves: []LearningCurve{{Points: []LearningPoint{{2, 1, 1, 1}, {2, 1, 1, 1}}}}}}},
		"not in order":       {Panels: []LearningPanel{{Curves: []LearningCurve{{Points: []LearningPoint{{2, 2, 1, 1}}}}}}},
		"is not a rising fi": {Panels: []LearningPanel{{Curves: []LearningCurve{{Points: []LearningPoint{{2, nan, 1, 1}}}}}}},
		"the target":         {Panels: []LearningPanel{{Target: -1, Curves: []LearningCurve{falling("a", false, 1)}}}},
		"25 curves":          {Panels: []LearningPanel{{Curves: make([]LearningCurve, 25)}}},
	}
	for want, picture := range cases {
		var invalid *InvalidCurves
		err := WriteLearningCurves(io.Discard, picture)
		if !errors.As(err, &invalid) || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: got %v", want, err)
		}
	}
}

// Strokes tell curves apart by dashes alone, for a grey print.
func TestCurveDashesDiffer(t *testing.T) {
	panel := LearningPanel{Curves: make([]LearningCurve, 13)}
	panel.Curves[4].Lead = true
	l := panelLayout{panel: panel}
	seen := map[string]bool{}
	for i := range panel.Curves {
		s := l.stroke(i)
		key := s.dash + "/" + s.ink
		if i < 7 {
			key = s.dash
		}
		if seen[key] && i != 4 {
			t.Errorf("curve %d looks like another: %v", i, s)
		}
		if i != 4 {
			seen[key] = true
		}
	}
}
