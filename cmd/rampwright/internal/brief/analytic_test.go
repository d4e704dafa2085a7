package brief

import (
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"rampwright/problems"
)

const analyticBrief = "brief: 1\ntitle: yardstick\nproblem: {analytic: g04}\n"

func readAnalytic(t *testing.T, text string) *Brief {
	t.Helper()
	b, err := Read("a.yaml", []byte(text), nil)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func TestAnalyticProblemBringsAimAndLimits(t *testing.T) {
	b := readAnalytic(t, analyticBrief)
	if b.Analytic == nil || b.Analytic.Name != "g04" || b.Searched() != 5 || b.Effort.Samples != 75 {
		t.Fatalf("read as %+v", b)
	}
	if b.Aim.Highest || b.Aim.Text != "value" || b.Aim.Where != "model" || len(b.Aim.Parts) != 1 {
		t.Errorf("aim %+v", b.Aim)
	}
	if b.Source("aim.lowest") != byDefault || b.Source("problem.analytic") != "line 3" {
		t.Errorf("sources %q and %q", b.Source("aim.lowest"), b.Source("problem.analytic"))
	}
	if refused := CheckSearch(b); refused != nil {
		t.Errorf("refused: %v", refused)
	}
	if got := b.Resolve(nil, b.Analytic.OwnLimits()); !reflect.DeepEqual(got, b.Analytic.OwnLimits()) {
		t.Errorf("limits %+v", got)
	}
}

func TestAnalyticRowsReplaceItsLimits(t *testing.T) {
	b := readAnalytic(t, analyticBrief+"aim: {highest: value - 2*g1}\nlimits:\n  - {quantity: g2, at_most: 100}\n  - {quantity: value, at_least: -30000, at: every}\n")
	if !b.Aim.Highest || b.Aim.Parts[0].Formula([]float64{5, 2}) != 1 || b.Aim.Where != "model" {
		t.Errorf("aim %+v", b.Aim)
	}
	var got []string
	for _, l := range b.Resolve(nil, b.Analytic.OwnLimits()) {
		got = append(got, l.Quantity+" "+sidesText(l)+" "+l.Kind.String())
	}
	want := "g1 at_least 0, at_most 92 default|g3 at_least 20, at_most 25 default|g2 at_most 100 asked|value at_least -30000 asked"
	if strings.Join(got, "|") != want {
		t.Errorf("limits %v", got)
	}
	off := readAnalytic(t, analyticBrief+"defaults: false\n")
	if left := off.Resolve(nil, off.Analytic.OwnLimits()); len(left) != 0 {
		t.Errorf("limits left: %v", left)
	}
}

func TestAnalyticBriefReadsBack(t *testing.T) {
	for _, more := range []string{"", "aim: {highest: value - 2*g1, at: model}\nlimits:\n  - {quantity: g2, at_most: none}\neffort: {seed: 7, samples: 20}\n"} {
		b := readAnalytic(t, analyticBrief+more)
		back := readAnalytic(t, string(b.ResolvedYAML()))
		sameValues(t, b, back)
		if back.Analytic.Name != "g04" || string(back.ResolvedYAML()) != string(b.ResolvedYAML()) {
			t.Errorf("%s\nbecame\n%s", b.ResolvedYAML(), back.ResolvedYAML())
		}
	}
	other := readAnalytic(t, strings.Replace(analyticBrief, "g04", "g06", 1))
	if other.Hash() == readAnalytic(t, analyticBrief).Hash() {
		t.Error("two problems hash alike")
	}
}

func TestAnalyticRefusals(t *testing.T) {
	cases := map[string]struct {
		text      string
		overrides Overrides
		want      []string
	}{
		"inlet parts": {analyticBrief + "flight:\n  - {name: a, mach: 6, altitude_km: 20}\ngas: {model: perfect}\ninlet: {ramps: 1}\ntolerance: {mach: 0.1}\n", nil,
			[]string{"a.yaml:4:1: flight does not go with problem", "a.yaml:6:1: gas does not go with problem", "a.yaml:7:1: inlet does not go with problem", "a.yaml:8:1: tolerance does not go with problem"}},
		"flag of the inlet": {analyticBrief, Overrides{"width_m": "1"}, []string{"--width-m: inlet does not go with problem"}},
		"no name":           {"brief: 1\ntitle: t\nproblem: {}\n", nil, []string{"problem has no value"}},
		"wrong key":         {"brief: 1\ntitle: t\nproblem: {analytical: g04}\n", nil, []string{"analytic is missing in problem", "unknown key analytical"}},
		"unknown name":      {"brief: 1\ntitle: t\nproblem: {analytic: ishigamy}\naim: {lowest: recovery}\n", nil, []string{"there is no analytic problem ishigamy"}},
		"unknown quantity":  {analyticBrief + "aim: {lowest: recovery}\n", nil, []string{"unknown quantity recovery"}},
		"no such limit":     {analyticBrief + "limits:\n  - {quantity: g9, at_most: 1}\n", nil, []string{"unknown quantity g9"}},
		"no such point":     {analyticBrief + "aim: {lowest: value, at: cruise}\n", nil, []string{"no flight point is named cruise"}},
		"quantity of a test in an inlet": {"brief: 1\ntitle: t\nflight: [{name: a, mach: 6, altitude_km: 20}]\ninlet: {capture_height_m: 1, width_m: 1, ramps: 1, ramp_angle_deg: 8, lip_turning_deg: 0}\naim: {lowest: value}\n", nil,
			[]string{"unknown quantity value"}},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			_, err := Read("a.yaml", []byte(c.text), c.overrides)
			var found Problems
			if !errors.As(err, &found) || len(found) != len(c.want) {
				t.Fatalf("got %v, want %q", err, c.want)
			}
			for i, want := range c.want {
				if !strings.Contains(found[i].Error(), want) {
					t.Errorf("problem %d: %q lacks %q", i, found[i].Error(), want)
				}
			}
		})
	}
	_, err := Read("a.yaml", []byte("brief: 1\ntitle: t\nproblem: {analytic: ishigamy}\n"), nil)
	if !strings.Contains(err.(Problems).Format(), "did you mean ishigami?") {
		t.Errorf("no spelling hint: %v", err.(Problems).Format())
	}
}

func TestAnalyticNotes(t *testing.T) {
	b := readAnalytic(t, analyticBrief+"limits:\n  - {quantity: g2, at_most: 100}\n")
	notes := b.Notes(b.Analytic.OwnLimits())
	if len(notes) != 1 || !strings.Contains(notes[0].Message, "replaces the default g2 at_least 90") {
		t.Errorf("notes %v", notes)
	}
	var l problems.Limit
	for _, have := range b.Limits {
		l = have
	}
	if l.High != 100 || !math.IsInf(l.Low, -1) {
		t.Errorf("limit %+v", l)
	}
}
