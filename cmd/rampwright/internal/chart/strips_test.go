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

var stripPicture = StripChart{
	Title: "margins", XLabel: "margin, in standard deviations", Below: "broken", Above: "held", NoteHead: "holds, %",
	MarkName: "as drawn", BandNames: []string{"exact", "surrogates"}, Low: -3, High: 6,
	Rows: []Strip{
		{Name: "length_m <= 0.62", Note: "51.1", Mark: 0, Bands: []Band{{-1.6, 0, 1.6}, {-1.7, 0.1, 1.6}}},
		{Name: "throat_mach at cruise >= 2.3", Note: "91.8", Mark: 6.2, Bands: []Band{{4, 5.5, 9}, {math.NaN(), math.NaN(), math.NaN()}}},
		{Name: "total_turning_deg <= 30", Note: "100.0", Mark: math.NaN(), Bands: []Band{{30, 31, 32}}},
	},
}

// stripFile is what a reader finds: the axis, the bands by row and number, the
// words.
type stripFile struct {
	x      [4]float64
	bands  map[string][2]float64
	labels map[string]bool
	all    []box
}

func readStrips(t interface{ Fatal(...any) }, c StripChart) stripFile {
	var sheet bytes.Buffer
	if err := WriteStripChart(&sheet, c); err != nil {
		t.Fatal(err)
	}
	f := stripFile{bands: map[string][2]float64{}, labels: map[string]bool{}}
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
		a := map[string]string{}
		for _, attribute := range element.Attr {
			a[attribute.Name.Local] = attribute.Value
		}
		var b box
		switch {
		case element.Name.Local == "svg":
			fmt.Sscan(a["data-x"], &f.x[0], &f.x[1], &f.x[2], &f.x[3])
		case a["data-band"] != "":
			fmt.Sscan(a["x"]+" "+a["width"], &b.x, &b.w)
			f.bands[a["data-row"]+"/"+a["data-band"]] = [2]float64{b.x, b.x + b.w}
		case a["data-role"] == "label":
			fmt.Sscan(a["data-box"], &b.x, &b.y, &b.w, &b.h)
			f.labels[a["data-name"]] = true
			f.all = append(f.all, b)
		}
	}
}

// Every band is read back from the file, cut at the edges of the axis; one without
// values is not drawn.
func TestStripChartReadsBack(t *testing.T) {
	f := readStrips(t, stripPicture)
	for key, want := range map[string][2]float64{"0/0": {-1.6, 1.6}, "0/1": {-1.7, 1.6}, "1/0": {4, 6}} {
		got, ok := f.bands[key]
		if !ok || math.Abs(value(f.x, got[0])-want[0]) > 1e-3 || math.Abs(value(f.x, got[1])-want[1]) > 1e-3 {
			t.Errorf("band %s reads %v, want %v", key, got, want)
		}
	}
	if _, drawn := f.bands["1/1"]; drawn {
		t.Error("a band without values is drawn")
	}
	for _, row := range stripPicture.Rows {
		if !f.labels[row.Name] || !f.labels[row.Note] {
			t.Errorf("%q, %q are not both written", row.Name, row.Note)
		}
	}
}

// No two words of a chart cover each other, whatever their length.
func TestStripChartWordsStandApart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := stripPicture
		c.Rows = nil
		for i := range rapid.IntRange(1, 20).Draw(t, "rows") {
			c.Rows = append(c.Rows, Strip{
				Name: strings.Repeat("word ", rapid.IntRange(1, 25).Draw(t, "words")) + fmt.Sprint(i), Note: fmt.Sprint(rapid.IntRange(0, 100).Draw(t, "note")),
				Mark: rapid.Float64Range(-9, 9).Draw(t, "mark"), Bands: []Band{{-1, 0, rapid.Float64Range(0, 20).Draw(t, "high")}},
			})
		}
		f := readStrips(t, c)
		for i, a := range f.all {
			if a.x < 0 || a.right() > sheetWidth {
				t.Errorf("%v leaves the sheet", a)
			}
			for _, b := range f.all[:i] {
				if a.overlaps(b) {
					t.Errorf("%v and %v overlap", a, b)
				}
			}
		}
	})
}

func TestInvalidStrips(t *testing.T) {
	bad := StripChart{Low: 1, High: 2, Rows: []Strip{
		{Name: strings.Repeat("x", longestText+1), Mark: math.Inf(1), Bands: []Band{{2, 1, 3}}},
	}}
	err := WriteStripChart(io.Discard, bad)
	var invalid *InvalidStrips
	if !errors.As(err, &invalid) {
		t.Fatal(err)
	}
	for _, want := range []string{"range of x, 1 to 2", "0 names of bands", "row 0 has texts of 201", "row 0 has 1 bands for 0 names", "mark at +Inf", "band 2, 1, 3 is not in order"} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("%q is not reported in: %v", want, err)
		}
	}
}

func BenchmarkStripChart(b *testing.B) {
	for b.Loop() {
		if err := WriteStripChart(io.Discard, stripPicture); err != nil {
			b.Fatal(err)
		}
	}
}
