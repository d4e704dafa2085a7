package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"
	"unicode/utf8"
)

// scattered is a made-up spread of the Mach 6 article.
func scattered(t testing.TB) SpreadStudy {
	x := []float64{8.08, 7.22, 8.44, 8}
	problem, flow := flowOf(t, supersonic(), x...)
	none := Number(math.NaN())
	temperature := SpreadLimit{
		Quantity: "throat_temperature_K", At: "cruise", Kind: "asked", Active: true, Affected: true,
		Probability: 0.502, Error: 0.011, Surrogate: 0.609, Unanswered: 221, Reliability: 0.01,
		Margin: SpreadBand{-27, 1, 30, 16}, Fitted: SpreadBand{-25, 2, 31, 17},
	}
	temperature.Bounds(780, 1000)
	separation := SpreadLimit{
		Quantity: "separation_margin", At: "cruise", Kind: "default", Nominal: 0.2297, Affected: true,
		Probability: 0.9999, Error: 0.0001, Surrogate: none, Reliability: none,
		Margin: SpreadBand{0.14, 0.2, 0.6, 0.2}, Fitted: SpreadBand{none, none, none, none},
	}
	separation.Bounds(0.05, math.Inf(1))
	cowl := SpreadLimit{Quantity: "cowl_outer_angle_deg", At: "geometry", Kind: "asked", Active: true, Probability: 1, Surrogate: 1, Reliability: none}
	cowl.Bounds(math.Inf(-1), 12)
	return SpreadStudy{
		Problem: problem, Flow: flow, X: x, Draws: 2000,
		Inputs: []SpreadInput{{"ramp_1_angle_deg", "deg", 0.1}, {"mach", "", 0.03}},
		Quantities: []SpreadQuantity{
			{Quantity: "throat_temperature_K", At: "cruise", Unit: "K", Route: SpreadExact, Nominal: 780, Mean: 783.5, Deviation: 16.3, P05: 758, P50: 782, P95: 812, Affected: true, Unanswered: 221},
			{Quantity: "throat_temperature_K", At: "cruise", Unit: "K", Route: SpreadSurrogate, Nominal: 780, Mean: 786, Deviation: 17.2, P05: 760, P50: 784, P95: 818, Affected: true},
			{Quantity: "internal_contraction_over_self_start", At: "cruise", Route: SpreadExact, Nominal: none, Mean: 1.37, Deviation: 0.04, P05: 1.3, P50: 1.36, P95: 1.45, Affected: true},
		},
		Judged: []string{"throat_temperature_K@cruise", "internal_contraction_over_self_start@cruise"},
		Limits: []SpreadLimit{cowl, separation, temperature}, Quiet: 6,
		Joint: SpreadShare{0.289, 0.01}, JointFitted: SpreadShare{0.287, 0.01},
		Inside:  []SpreadPoint{{"cruise", SpreadShare{0.659, 0.01}, 0.487}},
		Reasons: []SpreadReason{{"cruise", "Mach reflection at cowl inside", 121}, {"cruise", "irregular crossing at crossing", 100}},
		Sensitivity: []SpreadIndex{
			{"throat_temperature_K", "cruise", "mach", 0.03, 0.02, 0.01, 0.01},
			{"throat_temperature_K", "cruise", "ramp_1_angle_deg", 0.9, 0.98, 0.05, 0.04},
		},
		Fits:        []SpreadFit{{"throat_temperature_K", "", "cruise", "Gaussian process", 140, 0.93, 3, ""}},
		Evaluations: SpreadCosts{2000, 400, 60},
	}
}

func TestSpreadText(t *testing.T) {
	d := NewSpread(head, scattered(t), 4)
	text := d.Text(80)
	for _, want := range []string{
		"1. In 65.9 % of the draws a ramp shock, run straight, falls inside the lip at cruise", "in 48.7 % one passes inside",
		"throat_temperature_K at cruise (50.2 %)", "all limits together in 28.9 %", "In 11.1 % of the draws the flow at cruise has no regular solution",
		"221 draws without an answer", "not affected", "> 99.9", "6 limits of the model itself hold in every draw", "truncated at 4 standard deviations",
		"Mach reflection at cowl inside",
	} {
		if !strings.Contains(strings.Join(strings.Fields(text), " "), want) {
			t.Errorf("the text lacks %q", want)
		}
	}
	within80(t, text)
	// The rarest held first, what nothing moves last, small sensitivities left out.
	if i, j := strings.Index(text, "throat_temperature_K  780 .. 1000"), strings.Index(text, "separation_margin"); i < 0 || j < i {
		t.Errorf("limits in the wrong order: %d, %d", i, j)
	}
	if _, sensitivity, _ := strings.Cut(text, "Sensitivity"); strings.Contains(sensitivity, "mach") {
		t.Error("an input of no weight is shown")
	}
	if d.Cautions[0].Rule != "shock_inside_lip" {
		t.Errorf("the first caution is %q", d.Cautions[0].Rule)
	}
	if slices.ContainsFunc(d.Cautions, func(c Caution) bool { return c.Rule == "shock_on_lip" }) {
		t.Error("the shock on the lip is said twice")
	}
}

func within80(t *testing.T, text string) {
	t.Helper()
	for line := range strings.Lines(text) {
		if utf8.RuneCountInString(strings.TrimRight(line, "\n")) > 80 {
			t.Errorf("more than 80 columns: %q", line)
		}
	}
}

func TestSpreadDocument(t *testing.T) {
	d := NewSpread(head, scattered(t), 4)
	var got map[string]any
	if err := json.Unmarshal(d.JSON(), &got); err != nil {
		t.Fatal(err)
	}
	want := []string{"assumptions", "brief_hash", "cautions", "evaluations", "fits", "format", "geometry_as_built", "inputs", "pass_probability", "pass_probability_error",
		"per_limit", "program", "quantities", "seed", "sensitivity", "sensitivity_method", "shock_inside_the_lip", "surrogate_pass_probability", "title", "truncated_at", "unanswered", "variables"}
	var keys []string
	for key := range got {
		keys = append(keys, key)
	}
	if slices.Sort(keys); !slices.Equal(keys, want) {
		t.Errorf("keys %q", keys)
	}
	limit := got["per_limit"].([]any)[1].(map[string]any)
	if limit["surrogate_probability"] != nil || limit["missing"].(map[string]any)["surrogate_probability"] != "no surrogate" {
		t.Errorf("a limit without a surrogate: %v", limit)
	}
	if q := got["quantities"].([]any)[2].(map[string]any); q["nominal"] != nil || q["missing"] == nil {
		t.Errorf("a quantity without a value as drawn: %v", q)
	}
	rows, err := csv.NewReader(bytes.NewReader(d.CSV())).ReadAll()
	if err != nil || len(rows) != 1+3+2*3 {
		t.Errorf("%d rows of CSV, %v", len(rows), err)
	}
	picture, err := d.Picture()
	if err != nil || !bytes.Contains(picture, []byte("throat_temperature_K at cruise")) || bytes.Contains(picture, []byte("cowl_outer_angle_deg")) {
		t.Errorf("picture of %d bytes, %v", len(picture), err)
	}
}

// A limit that asks nothing of the design as drawn, only of some draws, has a strip
// without a mark.
func TestSpreadPictureOfALimitBesideTheDesign(t *testing.T) {
	study := scattered(t)
	study.Limits[1].Nominal = Number(math.Inf(1))
	picture, err := NewSpread(head, study, 4).Picture()
	if err != nil || !bytes.Contains(picture, []byte("separation_margin")) {
		t.Fatalf("no strip of the limit: %v", err)
	}
}

func TestSharePercent(t *testing.T) {
	for share, want := range map[Number]string{1: "100.0", 0.9999: "> 99.9", 0.9994: "99.9", 0.5: "50.0", 0.0001: "< 0.1", 0: "0.0"} {
		if got := sharePercent(share); got != want {
			t.Errorf("%v reads %s, want %s", share, got, want)
		}
	}
	if got := sharePercent(Number(math.NaN())); got != none {
		t.Errorf("no share reads %q", got)
	}
}
