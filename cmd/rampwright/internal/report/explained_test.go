package report

import (
	"math"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

// A study with an explanation, a rounded design and play shows all three, in text
// and in JSON.
func TestExplainedRoundedAndPlay(t *testing.T) {
	s := study(t)
	inf := math.Inf(1)
	floor := problems.Limit{Quantity: "throat_pressure_kPa", Point: "cruise", Low: 60, High: inf}
	length := problems.Limit{Quantity: "length_m", Point: problems.Geometry, Low: -inf, High: 0.62}
	s.Explained = &optimize.Explanation{
		Conflicts: []optimize.Conflict{{Members: []optimize.Side{{Limit: floor}, {Limit: length, Upper: true}}}},
		Relaxations: []optimize.Relaxation{
			{Side: optimize.Side{Limit: floor}, Bound: math.NaN()},
			{Side: optimize.Side{Limit: length, Upper: true}, Bound: 0.7, X: s.Result.Best.X},
		},
		Starts: 25,
	}
	s.Rounded = &optimize.Rounded{X: []float64{8.1, 7.2, 8.5, 8}, Aim: 0.654}
	for _, v := range s.Problem.Variables() {
		s.Plays = append(s.Plays, optimize.Play{Low: v.Low, High: v.High})
	}
	d := NewDesign(head, s)
	text := d.Text(100)
	for _, want := range []string{
		"throat_pressure_kPa at cruise at least 60", "length_m at most 0.62", "loosening it alone is not enough", "25 starts",
		"8.1, 7.2, 8.5, 8", "The optimum is not unique",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("text lacks %q", want)
		}
	}
	const legend = "-: loosening it alone is not enough"
	if !strings.Contains(text, legend) {
		t.Errorf("text lacks %q", legend)
	}
	s.Explained.Relaxations = s.Explained.Relaxations[1:] // each is enough alone
	if enough := NewDesign(head, s).Text(100); strings.Contains(enough, legend) || !strings.Contains(enough, "0.70000") {
		t.Error("the legend explains a sign that the table does not hold")
	}
	json := string(d.JSON())
	for _, want := range []string{`"side": "at_most"`, `"enough": null`, `"enough": 0.7`, `"aim": 0.654`, `"variable": "ramp_1_angle_deg"`} {
		if !strings.Contains(json, want) {
			t.Errorf("JSON lacks %s", want)
		}
	}
}
