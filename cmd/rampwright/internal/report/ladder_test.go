package report

import (
	"bytes"
	"encoding/csv"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

// ladderFixture has a row of each sort: refused, infeasible with its reason,
// designed, designed with a ramp at its smallest angle, and not run.
func ladderFixture(t *testing.T) LadderStudy {
	s := study(t)
	inf := math.Inf(1)
	floor := optimize.Side{Limit: problems.Limit{Quantity: "throat_pressure_kPa", Point: "cruise", Low: 60, High: inf}}
	length := optimize.Side{Limit: problems.Limit{Quantity: "length_m", Point: problems.Geometry, Low: -inf, High: 0.62}, Upper: true}
	tight := retold(s, 0.6, func(r *optimize.Result) { r.Status, r.Best.Assessment.Feasible = optimize.Infeasible, false })
	tight.Explained = &optimize.Explanation{
		Conflicts:   []optimize.Conflict{{Members: []optimize.Side{floor, length}}, {Members: []optimize.Side{floor}}},
		Relaxations: []optimize.Relaxation{{Side: floor, Bound: 55}, {Side: length, Bound: math.NaN()}},
	}
	slim := retold(s, 0.656, func(r *optimize.Result) { r.Best.X = []float64{8, 3, 9, 8} })
	return LadderStudy{
		Definition: supersonic(), Aim: recovery,
		Rungs: []Rung{
			{Ramps: 1, Refused: []string{"no inlet of the search box keeps this limit"}},
			{Ramps: 2, Study: tight},
			{Ramps: 3, Study: retold(s, 0.65, func(*optimize.Result) {})},
			{Ramps: 4, Study: slim, Equal: &EqualStrength{Shocks: 5, Recovery: 0.7}},
			{Ramps: 5},
		},
	}
}

// retold is a study whose result is changed without touching the original.
func retold(s Study, aim float64, change func(*optimize.Result)) *Study {
	result := *s.Result
	result.Best.AimExact = aim
	change(&result)
	s.Result = &result
	return &s
}

func TestLadderKeys(t *testing.T) {
	want := slices.Concat(
		strings.Fields("format program title seed brief_hash aim aim.text aim.where aim.highest rows"),
		under("rows", "ramps status reason aim aim.exact aim.predicted variables exact gain ramp_at_minimum feasible violation "+
			"conflicts"), under("rows.conflicts", "members"),
		under("rows", "relaxation"), under("rows.relaxation", "quantity at side bound enough"),
		under("rows", "equal_strength evidence evidence.route_gap evidence.surrogate_error evidence.missing evaluations evaluations.samples "+
			"evaluations.infill evaluations.rounds evaluations.verify evaluations.surrogate missing"),
		strings.Fields("advice standard_recovery equal_strength_rule cautions"), under("cautions", "rows text rule"), []string{"assumptions"})
	got := keyPaths(t, NewLadder(head, ladderFixture(t)).JSON())
	slices.Sort(got)
	slices.Sort(want)
	if !slices.Equal(got, want) {
		t.Errorf("keys\n%s\nwant\n%s", strings.Join(got, " "), strings.Join(want, " "))
	}
}

// Gains are differences of neighbours that both hold every limit; the other rows
// say why they have none.
func TestLadderRows(t *testing.T) {
	d := NewLadder(head, ladderFixture(t))
	var statuses []string
	for _, row := range d.Rows {
		statuses = append(statuses, row.Status)
	}
	if want := strings.Fields("refused infeasible verified verified not_run"); !slices.Equal(statuses, want) {
		t.Errorf("statuses %v, want %v", statuses, want)
	}
	for i, want := range []float64{math.NaN(), math.NaN(), math.NaN(), 0.656 - 0.65, math.NaN()} {
		gain := float64(d.Rows[i].Gain)
		if _, why := d.Rows[i].Missing.Get("gain"); math.IsNaN(gain) != math.IsNaN(want) || math.Abs(gain-want) > 1e-15 || why != math.IsNaN(gain) {
			t.Errorf("row %d: gain %g, %v", i, gain, d.Rows[i].Missing)
		}
	}
	if reason := d.Rows[1].Reason; reason != "cannot be met in the search box: throat_pressure_kPa at cruise at least 60 with length_m at most 0.62; nor throat_pressure_kPa at cruise at least 60 alone" {
		t.Errorf("reason %q", reason)
	}
	if at := d.Rows[3].RampAtMinimum; !slices.Equal(at, []int{2}) {
		t.Errorf("ramps at their smallest angle: %v", at)
	}
	// An aim that is to be lowered gains when it falls.
	falling := ladderFixture(t)
	falling.Aim.Highest = false
	if gain := NewLadder(head, falling).Rows[3].Gain; gain >= 0 {
		t.Errorf("a rise of the aim to be lowered gains %g", float64(gain))
	}
}

func TestLadderText(t *testing.T) {
	d := NewLadder(head, ladderFixture(t))
	for _, width := range []int{80, 100, 140} {
		text := d.Text(width)
		for _, want := range []string{
			"highest recovery at cruise is 0.65600, with 4 ramps", "With 4 ramps, ramp 2 stands at the smallest angle: delete it",
			"enough: throat_pressure_kPa at cruise at least 60 loosened to 55", "no inlet of the search box keeps this limit",
			"Standard recovery at Mach 6: 0.35858", "not run", "Export-control",
		} {
			if !strings.Contains(strings.Join(strings.Fields(text), " "), want) {
				t.Errorf("width %d: text lacks %q", width, want)
			}
		}
		for _, line := range strings.Split(text, "\n") {
			if len(line) > width {
				t.Errorf("width %d: %q", width, line)
			}
		}
	}
	ended := LadderStudy{Definition: supersonic(), Aim: recovery, Rungs: []Rung{{Ramps: 1}}}
	if text := NewLadder(head, ended).Text(100); !strings.Contains(text, "ended early") {
		t.Errorf("a ladder that was cut short does not say so:\n%s", text)
	}
}

// One row a number of ramps, every cell where its heading says.
func TestLadderCSV(t *testing.T) {
	d := NewLadder(head, ladderFixture(t))
	rows, err := csv.NewReader(bytes.NewReader(d.CSV())).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	cell := func(row int, name string) string { return rows[row][slices.Index(rows[0], name)] }
	for _, c := range []struct {
		row        int
		name, want string
	}{
		{1, "status", "refused"}, {1, "recovery@cruise", ""}, {4, "ramp_at_minimum", "2"}, {4, "ramp_2_angle_deg", "3"},
		{4, "equal_strength", "0.7"}, {3, "aim_exact", "0.65"}, {5, "cowl_angle_deg", ""},
	} {
		if got := cell(c.row, c.name); got != c.want {
			t.Errorf("row %d, %s: %q, want %q", c.row, c.name, got, c.want)
		}
	}
	if len(rows) != 6 || cell(3, "length_m@geometry") == "" {
		t.Errorf("%d rows, length %q", len(rows), cell(3, "length_m@geometry"))
	}
}

func TestLadderPicture(t *testing.T) {
	picture, err := NewLadder(head, ladderFixture(t)).Picture()
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"this brief", "standard recovery", "equal-strength limit", "1 ramp refused", "2 ramps infeasible"} {
		if !bytes.Contains(picture, []byte(want)) {
			t.Errorf("the picture lacks %q", want)
		}
	}
	// Nothing to draw but the standard is still a picture.
	if _, err := NewLadder(head, LadderStudy{Definition: supersonic(), Aim: recovery, Rungs: []Rung{{Ramps: 1}}}).Picture(); err != nil {
		t.Error(err)
	}
}
