package report

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// ridge is a model whose recovery falls off Mach 5 and whose shock detaches below
// Mach 3.5.
type ridge struct{}

func (ridge) Quantities() []problems.Quantity {
	return []problems.Quantity{{Name: "recovery"}, {Name: "ramp_attachment_margin_deg", Member: "ramp 1"}}
}

func (ridge) At(_ context.Context, at envelope.Condition, dst *problems.Evaluation) (envelope.Outcome, error) {
	dst.Set(1, at.Mach-3.5)
	if at.Mach < 3.5 {
		detached := &problems.Detached{Shock: "ramp 1", Mach: at.Mach, By: 0.1}
		dst.Miss(0, detached)
		return envelope.Outcome{Status: detached}, nil
	}
	dst.Set(0, 1-math.Abs(at.Mach-5)/10)
	return envelope.Outcome{}, nil
}

func ridgeDocument(t *testing.T) *EnvelopeDocument {
	t.Helper()
	survey, err := envelope.Run(context.Background(), ridge{}, envelope.Settings{
		LowMach: 3, HighMach: 6, LowIncidence: -2 * math.Pi / 180, HighIncidence: 2 * math.Pi / 180, MachPoints: 70, IncidencePoints: 3,
		Limits: []problems.Limit{{Quantity: "recovery", Low: 0.95, High: math.Inf(1)}},
	})
	if err != nil {
		t.Fatal(err)
	}
	return NewEnvelope(Head{Program: "p", Title: "An inlet", BriefHash: "h"}, EnvelopeStudy{
		Definition: inlet.Definition{Gas: gas.Air, Points: []inlet.Point{{Name: "cruise", Mach: 5}}},
		LimitsOf:   "cruise", Air: envelope.Air{Pressure: 2000, Temperature: 220}, Quantities: ridge{}.Quantities(), Survey: survey,
	})
}

func TestEnvelopeDocument(t *testing.T) {
	d := ridgeDocument(t)
	var top struct {
		Rows []struct {
			Quantities, Missing map[string]any
			LimitsMissed        []string `json:"limits_missed"`
		}
		Boundary []map[string]any
	}
	if err := json.Unmarshal(d.JSON(), &top); err != nil {
		t.Fatal(err)
	}
	var keys map[string]json.RawMessage
	if err := json.Unmarshal(d.JSON(), &keys); err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{"format", "program", "title", "brief_hash", "variables", "air", "limits_of", "grid", "traces", "states", "within_every_limit", "rows", "boundary", "boundary_tolerance", "cautions", "assumptions"} {
		if _, ok := keys[key]; !ok {
			t.Errorf("no key %s", key)
		}
		delete(keys, key)
	}
	for key := range keys {
		t.Errorf("key %s is not among those held", key)
	}
	first := top.Rows[0]
	if first.Quantities["recovery"] != nil || !strings.Contains(first.Missing["recovery"].(string), "ramp 1 detached") {
		t.Errorf("a missing value: %v, %v", first.Quantities["recovery"], first.Missing["recovery"])
	}
	if !reflect.DeepEqual(first.LimitsMissed, []string{"recovery >= 0.95"}) {
		t.Errorf("limits missed: %v", first.LimitsMissed)
	}
	for _, line := range top.Boundary {
		for _, key := range []string{"kind", "name", "quantity", "margin", "closed", "points"} {
			if _, ok := line[key]; !ok {
				t.Errorf("a boundary has no %s", key)
			}
		}
	}
	if got := d.crossing("limit", "recovery >= 0.95", 0); len(got) != 2 || math.Abs(got[0]-4.5) > 1e-5 || math.Abs(got[1]-5.5) > 1e-5 {
		t.Errorf("recovery 0.95 is crossed at Mach %v, want 4.5 and 5.5", got)
	}
}

// A long table along the map is thinned evenly, never of its ends or a flight point.
func TestEnvelopeAlongTheMap(t *testing.T) {
	d := &EnvelopeDocument{study: EnvelopeStudy{Definition: inlet.Definition{Points: []inlet.Point{{Mach: 3}, {Mach: 3.3}, {Mach: 9}}}}}
	for i := range 16 {
		d.Grid.Mach = append(d.Grid.Mach, Number(2.8+0.1*float64(i)))
	}
	for n, want := range map[int][]int{
		3: {0, 1, 2}, 11: {0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10},
		15: {0, 2, 4, 5, 6, 8, 10, 12, 14}, 16: {0, 2, 4, 5, 6, 8, 10, 12, 14, 15},
	} {
		short := *d
		short.Grid.Mach = d.Grid.Mach[:n]
		if got, _ := short.alongShown(); !slices.Equal(got, want) {
			t.Errorf("of %d Mach numbers %v, want %v", n, got, want)
		}
	}
	if text := ridgeDocument(t).Text(80); !strings.Contains(text, "One Mach number in 7 is shown, with the last and those of flight points; CSV") {
		t.Errorf("the thinning is not told:\n%s", text)
	}
}

func TestEnvelopeText(t *testing.T) {
	d := ridgeDocument(t)
	for _, width := range []int{80, 100, 140} {
		for _, line := range strings.Split(d.Text(width), "\n") {
			if len(line) > width {
				t.Errorf("width %d: %q has %d columns", width, line, len(line))
			}
		}
	}
	text := d.Text(80)
	for _, part := range []string{"dddddd", "AAAA", "aaaa", "4.5000 5.5000", "One Mach number in 2 is shown", "Mach  3"} {
		if !strings.Contains(text, part) {
			t.Errorf("the text has no %q", part)
		}
	}
	if rows := strings.Count(string(d.CSV()), "\n"); rows != 1+70*3 {
		t.Errorf("%d lines of envelope.csv", rows)
	}
	if !strings.HasPrefix(string(d.BoundaryCSV()), "line,kind,name,mach,incidence_deg\n1,ramp_shock_detaches,") {
		t.Errorf("boundary.csv begins with %.80q", d.BoundaryCSV())
	}
	picture, err := d.Map()
	if err != nil || !strings.Contains(string(picture), `data-name="cruise"`) {
		t.Errorf("map.svg: %v", err)
	}
	for range chart.MostRegionLines { // specks beside the lines there are
		at := d.Boundary[0].Points[0]
		d.Boundary = append(d.Boundary, d.Boundary[0])
		d.Boundary[len(d.Boundary)-1].Name, d.Boundary[len(d.Boundary)-1].Points = "speck", [][2]Number{at, at}
	}
	note := fmt.Sprintf("The %d longest of %d lines are drawn", chart.MostRegionLines, len(d.Boundary))
	crowded, err := d.Map()
	if err != nil || !strings.Contains(string(crowded), note) || strings.Count(string(crowded), `data-name="`+d.Boundary[0].Name+`"`) != strings.Count(string(picture), `data-name="`+d.Boundary[0].Name+`"`) {
		t.Errorf("map.svg of %d lines: %v", len(d.Boundary), err)
	}
	curve, err := d.Against("recovery", "recovery")
	if err != nil || !strings.Contains(string(curve), "incidence -2 deg") {
		t.Errorf("a curve: %v", err)
	}
}
