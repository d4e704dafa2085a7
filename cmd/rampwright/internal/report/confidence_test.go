package report

import (
	"bytes"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

// backedOff is a study whose confidence is met.
func backedOff(t *testing.T) Study {
	t.Helper()
	s := study(t)
	variables := func(first float64) Object[Number] {
		return Object[Number]{{"ramp_1_angle_deg", Number(first)}, {"ramp_2_angle_deg", 5}, {"ramp_3_angle_deg", 6}, {"lip_setback", 0.0153}}
	}
	limit := ConfidentLimit{Quantity: "internal_contraction_over_self_start", At: "cruise", Affected: true, Nominal: SpreadShare{0.5, 0.005}, BackedOff: SpreadShare{0.957, 0.002}, LowMargin: 35.1, HighMargin: 58, Price: 0.005, Cost: 0.1755}
	limit.Bounds(780, 1000)
	fixed := ConfidentLimit{Quantity: "cowl_outer_angle_deg", At: "geometry", Nominal: SpreadShare{Share: 1}, BackedOff: SpreadShare{Share: 1}}
	fixed.Bounds(math.Inf(-1), 12)
	s.Confidence = &Confidence{
		Confidence: 0.95, Met: true, Why: "the margins are at rest", Aimed: 0.9597, Rounds: 4, Round: 3, DrawsARound: 2000, Draws: 10000,
		Nominal:   &ConfidentDesign{variables(8), 0.65591, SpreadShare{0.293, 0.005}},
		BackedOff: &ConfidentDesign{variables(13.6), 0.52344, SpreadShare{0.916, 0.003}},
		Limits:    []ConfidentLimit{limit, fixed},
	}
	return s
}

// A design with a confidence says what it costs, and first of all where it is not
// reached.
func TestConfidenceOfADesign(t *testing.T) {
	s := backedOff(t)
	d := NewDesign(head, s)
	text := strings.Join(strings.Fields(d.Text(100)), " ")
	for _, want := range []string{
		"Met: recovery at cruise of 0.52344 instead of 0.65591", "hold in 91.6 % instead of 29.3 %", "The lip setback chosen is 0.01530 capture heights",
		"internal_contraction_over_self_start 780 .. 1000 50.0 95.7 35.1; 58 0.17550", "cowl_outer_angle_deg <= 12 not affected",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the text lacks %q", want)
		}
	}
	within80(t, d.Text(80))
	if got := d.roundedText(&Rounded{}); got != "In tenths of a degree: no design near this one keeps every limit with its margin above." {
		t.Errorf("of the rounded design: %q", got)
	}
	if !bytes.Contains(d.JSON(), []byte(`"backed_off": {`)) {
		t.Error("the document has no backed-off design")
	}
	s.Confidence.Limits[0].Unanswered = 412
	f := folderOf(t, s)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	for _, want := range []string{
		`<section id="confidence">`, `class="percent" data-from="result:/confidence/backed_off/pass_probability/share">91.6</data>`, ">412</data>",
		`data-from="result:/confidence/nominal/variables/ramp_1_angle_deg">8.0000</data>`, `data-from="result:/confidence/limits/0/high_margin">58.000</data>`,
		"and does in the backed-off design", "not affected",
	} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page lacks %q", want)
		}
	}
	s.Confidence = nil
	if bytes.Contains(NewDesign(head, s).JSON(), []byte(`"confidence"`)) {
		t.Error("a design without a confidence speaks of one")
	}
}

// A confidence that is not met says so in the result, tells the draws without an
// answer from those a margin mends, and whose the margins are.
func TestConfidenceThatIsNotMet(t *testing.T) {
	s := backedOff(t)
	result := *s.Result
	result.Status = optimize.NotVerified
	s.Result = &result
	c := s.Confidence
	c.Met, c.Why = false, "no design was found that holds the limits with the margins they need"
	c.Limits[0].Unanswered = 412
	d := NewDesign(head, s)
	if first := d.Cautions[0]; first.Rule != "confidence" || !strings.Contains(first.Text, "internal_contraction_over_self_start at cruise holds in 95.7 %, and has no value in 4.1 %") {
		t.Errorf("the first caution is %+v", first)
	}
	text := strings.Join(strings.Fields(d.Text(100)), " ")
	for _, want := range []string{
		"holds every limit as it stands, but the confidence of 95 % is not reached", "50.0 95.7 4.1 35.1; 58 0.17550", "No answer: per cent",
		"that of round 3, kept inside", "these margins are not enough",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the text lacks %q", want)
		}
	}
	within80(t, d.Text(80))
	if got := d.roundedText(&Rounded{}); !strings.HasSuffix(got, "with its margin above. Those margins do not reach the confidence.") {
		t.Errorf("of the rounded design: %q", got)
	}
	f := folderOf(t, s)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	for _, want := range []string{"holds every limit as it stands, but the confidence of ", "That is not reached: ", "It is that of round ", "these margins are not enough", "draws without an answer"} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page lacks %q", want)
		}
	}

	c.Round, c.BackedOff = 0, c.Nominal // nothing better was found
	text = strings.Join(strings.Fields(NewDesign(head, s).Text(100)), " ")
	if !strings.Contains(text, "The design shown is the one that knows no tolerances, with recovery at cruise of 0.65591.") || strings.Contains(text, "instead of 0.65591") {
		t.Errorf("of the nominal design: %s", text)
	}
}

// A confidence that bears on no design is not dropped without a word.
func TestConfidenceOfNoDesign(t *testing.T) {
	s := study(t)
	result := *s.Result
	result.Status = optimize.Infeasible
	s.Result = &result
	s.Confidence = &Confidence{Confidence: 0.95, Why: "the search found none to back off", Limits: []ConfidentLimit{}}
	d := NewDesign(head, s)
	var rules []string
	for _, c := range d.Cautions {
		rules = append(rules, c.Rule)
	}
	if at := strings.Join(rules, " "); !strings.HasPrefix(at, "infeasible") || strings.Count(at, "confidence") != 1 {
		t.Errorf("cautions %v", rules)
	}
	if text := d.Text(80); !strings.Contains(text, "The search found none to back off.") {
		t.Error("the text does not say so")
	}
	f := folderOf(t, s)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	if !bytes.Contains(page, []byte("No design was backed off for that: ")) {
		t.Error("the page does not say so")
	}
}

// A comparison says which results were asked for a confidence, and reads a margin
// within the tolerance of the search as none.
func TestCompareTellsConfidences(t *testing.T) {
	s := study(t)
	result := *s.Result
	result.Best.Assessment.Checks = slices.Clone(result.Best.Assessment.Checks)
	for i := range result.Best.Assessment.Checks {
		if check := &result.Best.Assessment.Checks[i]; check.Kind != problems.Hard {
			check.Active, check.Margin = true, 1.05e-9
		}
	}
	s.Result = &result
	without := folderOf(t, s)
	s.Confidence = backedOff(t).Confidence
	with := folderOf(t, s)
	s.Confidence.Met = false
	missed := folderOf(t, s)
	d, err := NewCompare("rampwright 0", []Named{{"first", without}, {"second", with}, {"third", missed}})
	if err != nil {
		t.Fatal(err)
	}
	if len(d.Notes) != 2 || !strings.HasPrefix(d.Notes[0], "The confidences asked for differ") || !strings.HasPrefix(d.Notes[1], "Some result does not reach") {
		t.Errorf("notes %q", d.Notes)
	}
	text := strings.Join(strings.Fields(d.Text(100)), " ")
	for _, want := range []string{" none ", " 95 % ", " 95 %, not met "} {
		if !strings.Contains(text, want) {
			t.Errorf("the text lacks %q: %s", want, text)
		}
	}
	if strings.Contains(text, "e-9") {
		t.Errorf("residue stands as a margin: %s", text)
	}
	within80(t, d.Text(80))
	page, err := d.Page()
	if err != nil {
		t.Fatal(err)
	}
	checkPage(t, page, map[string][]byte{"compare": d.JSON()})
	if !bytes.Contains(page, []byte("confidence asked, %")) || bytes.Contains(page, []byte("1.050e-9")) {
		t.Error("the page does not tell confidences, or shows residue")
	}
	same, err := NewCompare("rampwright 0", []Named{{"first", without}, {"second", without}})
	if err != nil || len(same.Notes) != 0 || strings.Contains(same.Text(100), "confidence") {
		t.Errorf("without any: %v, %+v", err, same)
	}
}
