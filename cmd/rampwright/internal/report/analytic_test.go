package report

import (
	"context"
	"encoding/json"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems/analytic"
)

// A problem that is no inlet has the document of a design without the parts of an
// inlet.
func TestDesignOfAnAnalyticProblem(t *testing.T) {
	p, err := analytic.New("hs76")
	if err != nil {
		t.Fatal(err)
	}
	task := optimize.Task{Problem: p, Limits: p.OwnLimits(), Aim: p.Aim()}
	result, err := optimize.Design(context.Background(), task, optimize.Settings{}, nil)
	if err != nil {
		t.Fatal(err)
	}
	d := NewDesign(Head{Title: "yardstick"}, Study{Model: p, Aim: p.Aim(), Result: result})
	var got map[string]any
	if err := json.Unmarshal(d.JSON(), &got); err != nil {
		t.Fatal(err)
	}
	if got["inlet"] != nil || len(got["points"].([]any)) != 0 {
		t.Errorf("inlet %v, points %v", got["inlet"], got["points"])
	}
	exact := got["best"].(map[string]any)["exact"].(map[string]any)["model"].(map[string]any)
	if v := exact["value"].(float64); v < p.Lowest-1e-9 || v > p.Lowest+1e-2 {
		t.Errorf("value %g, lowest %g", v, p.Lowest)
	}
	text := d.Text(100)
	for _, want := range []string{"value at model", "g1", "no second exact route", "analytic problem", "published"} {
		if !strings.Contains(text, want) {
			t.Errorf("the text lacks %q:\n%s", want, text)
		}
	}
	for _, unwanted := range []string{"Geometry", "Station", "built inlets", "Planar"} {
		if strings.Contains(text, unwanted) {
			t.Errorf("the text has %q:\n%s", unwanted, text)
		}
	}
}
