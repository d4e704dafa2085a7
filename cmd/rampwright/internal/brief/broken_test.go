package brief

import (
	"errors"
	"fmt"
	"strings"
	"testing"
	"unicode/utf8"
)

// sound is a brief without a problem, which the cases below break one rule at
// a time.
const sound = `brief: 1
title: A test inlet
flight:
  - {name: cruise, mach: 6, dynamic_pressure_kPa: 50, weight: 1}
  - {name: takeover, mach: 4.5, altitude_km: 22.8}
gas: {model: perfect, ratio_of_specific_heats: 1.4}
inlet:
  capture_height_m: 0.16
  width_m: 0.20
  ramps: 3
  ramp_angle_deg: {from: 3, to: 16}
  cowl_angle_deg: {from: 2, to: 12}
  cowl_wedge_deg: 4
  terminal_shock: false
aim: {highest: recovery, at: cruise}
limits:
  - {quantity: throat_temperature_K, at_least: 780, at_most: 1000}
  - {quantity: ramp_attachment_margin_deg, at_least: 2, at: every}
defaults: true
tolerance: {ramp_angle_deg: 0.1, mach: 0.03, incidence_deg: 0.5, confidence: 0.95}
effort: {samples: 60, infill: 40, seed: 1, agreement: 1e-3}
`

// broken is sound with old replaced by new. The one problem must stand at the
// character behind ^ in mark, which is found in the edited text, and say what
// is wanted in message and hint.
type broken struct {
	name     string
	old, new string
	mark     string
	message  string
	allowed  string
	hint     string
}

var brokenBriefs = []broken{
	{"empty file", sound, "", "^", "the brief is empty", "", "rampwright new"},
	{"comment only", sound, "# nothing\n", "^# nothing", "the brief is empty", "", ""},
	{"document mark only", sound, "---", "^", "the brief is empty", "", ""},
	{"not a mapping", sound, "- 1\n", "^- 1", "the brief must be a section, not a list", "", ""},
	{"too large", "A test inlet", strings.Repeat("# \n", largest/3), "^", "the file is too large", "1048576 bytes", ""},
	{"line too long", "A test inlet", strings.Repeat("x", 2001), "^title", "the line is too long", "up to 2000", ""},
	{"too many points", "  - {name: takeover, mach: 4.5, altitude_km: 22.8}\n", points(50), "^- {name: cruise", "flight is too long", "up to 50", ""},
	{"not UTF-8", "A test inlet", "A t\xffst", "A t^\xffst", "not UTF-8", "", ""},
	{"control character", "A test inlet", "A\u0007test", "A^\u0007test", "cannot be seen", "", "plain space"},
	{"line separator", "A test inlet", "A\u2028test", "A^\u2028test", "cannot be seen", "", ""},
	{"no-break space", "width_m: 0.20", "width_m:\u00a00.20", "width_m:^\u00a0", "cannot be seen", "", ""},
	{"tab indentation", "  width_m", "\twidth_m", "\t^width_m", "not YAML", "", "spaces, not tabs"},
	{"unclosed brace", "confidence: 0.95}", "confidence: 0.95", "^tolerance: {", "not YAML", "", ""},
	{"unclosed quote", "A test inlet", "'A test inlet", "^title: 'A", "not YAML", "", ""},
	{"bad nesting", "  ramps: 3\n", "   ramps: 3\n", "   ^ramps: 3", "not YAML", "", ""},
	{"undefined alias", "ramps: 3", "ramps: *x", "^ramps: *x", "not YAML: unknown anchor", "", ""},
	{"first line not YAML", "brief: 1", "@brief: 1", "^@brief", "not YAML", "", ""},
	{"alias", "width_m: 0.20\n", "width_m: &w 0.20\n  cowl_length: *w\n", "", "", "", ""},
	{"anchor", "width_m: 0.20", "width_m: &w 0.20", "width_m: ^&w", "anchors are not allowed", "", ""},
	{"tag", "width_m: 0.20", "width_m: !!float 0.20", "width_m: ^!!float", "tags are not allowed", "", ""},
	{"bare tag", "width_m: 0.20", "width_m: ! 0.20", "width_m: ^! 0.20", "tags are not allowed", "", ""},
	{"tag on a section", "gas: {", "gas: !!map {", "gas: ^!!map", "tags are not allowed", "", ""},
	{"merge key", "gas: {model", "gas: {<<: perfect, model", "gas: {^<<", "merge keys are not allowed", "", ""},
	{"complex key", "gas: {model", "gas: {[a]: b, model", "gas: {^[a]", "a key is a plain word", "", ""},
	{"second document", "defaults: true", "defaults: true\n---\nbrief: 1", "^---\nbrief: 1", "a second document", "", ""},
	{"second document not YAML", "defaults: true", "defaults: true\n---\nbrief: [", "", "", "", ""},
	{"null", "width_m: 0.20", "width_m: ~", "^width_m: ~", "width_m has no value", "", ""},
	{"nothing", "  - {quantity: ramp_attachment_margin_deg, at_least: 2, at: every}", "  -", "1000}\n  -^", "list entry has no value", "", ""},
	{"empty text", "A test inlet", `""`, "^title: ", "title has no value", "", ""},
	{"empty section", "gas: {model: perfect, ratio_of_specific_heats: 1.4}", "gas: {}", "^gas: {}", "gas has no value", "", ""},
	{"duplicate key", "width_m: 0.20", "width_m: 0.20\n  width_m: 0.21", "  ^width_m: 0.21", "width_m is given twice", "", "line 9"},
	{"unknown key", "defaults: true", "default: true", "^default: true", "unknown key default", "", "did you mean defaults?"},
	{"unknown key, nothing near", "defaults: true", "xyzzy: true", "^xyzzy", "unknown key xyzzy", "brief, title, flight", ""},
	{"key of another section", "defaults: true", "duct_factor: 1", "^duct_factor", "unknown key duct_factor", "", "belongs in inlet"},
	{"top key in a section", "model: perfect,", "title: x,", "^title: x", "unknown key title in gas", "", "belongs in the top of the brief"},
	{"unit left out", "  cowl_wedge_deg: 4", "  cowl_wedge: 4", "^cowl_wedge: 4", "unknown key cowl_wedge in inlet", "", "write cowl_wedge_deg, in deg (1 rad"},
	{"other unit", "capture_height_m: 0.16", "capture_height_m: 0.16\n  width_mm: 160", "^width_mm", "unknown key width_mm", "", "1 mm = 0.001 m"},
	{"missing key", "  width_m: 0.20\n", "", "  ^capture_height_m", "width_m is missing in inlet", "0.001 to 50 m", "span"},
	{"missing section", "title: A test inlet\n", "", "^brief: 1", "title is missing", "", ""},
	{"format version", "brief: 1", "brief: 2", "brief: ^2", "brief is out of range", "1", ""},
	{"title of two lines", "A test inlet", `"A\ntest"`, `^"A\n`, "one line of visible characters", "", ""},
	{"title too long", "A test inlet", strings.Repeat("x", 201), "^xxx", "title is too long", "up to 200", ""},
	{"section in place of a value", "width_m: 0.20", "width_m: {from: 1, to: 2}", "width_m: ^{", "width_m must be one value, not a section", "", ""},
	{"list in place of a section", "gas: {model: perfect, ratio_of_specific_heats: 1.4}", "gas: [perfect]", "gas: ^[", "gas must be a section, not a list", "", ""},

	{"quoted number", "0.16", `"0.16"`, `^"0.16"`, "not a plain decimal", "0.001 to 20 m", "quotes"},
	{"leading zero", "ratio_of_specific_heats: 1.4", "ratio_of_specific_heats: 01.4", "^01.4", "not a plain decimal", "", "leading zero"},
	{"no zero before the point", "0.16", ".16", "^.16", "not a plain decimal", "", "zero before the point"},
	{"point at the end", "cowl_wedge_deg: 4", "cowl_wedge_deg: 4.", "deg: ^4.", "not a plain decimal", "", "point at the end"},
	{"plus sign", "cowl_wedge_deg: 4", "cowl_wedge_deg: +4", "^+4", "not a plain decimal", "", "plus sign"},
	{"hexadecimal", "cowl_wedge_deg: 4", "cowl_wedge_deg: 0x4", "^0x4", "not a plain decimal", "", "in decimal"},
	{"underscore", "at_most: 1000", "at_most: 1_000", "^1_000", "not a plain decimal", "", "underscores"},
	{"infinity", "at_most: 1000", "at_most: .inf", "^.inf", "not a plain decimal", "", "finite"},
	{"decimal comma", "0.16", `0,16`, "^0,16", "not a plain decimal", "", "decimal mark is a point"},
	{"unit behind the number", "0.16", "0.16 m", "^0.16 m", "not a plain decimal", "", "number alone"},
	{"word for a number", "0.16", "small", "^small", "not a plain decimal", "", ""},
	{"too large to represent", "at_most: 1000", "at_most: 1e999", "^1e999", "not a plain decimal", "", "too large"},
	{"whole number with a fraction", "ramps: 3", "ramps: 3.0", "^3.0", "ramps is not a whole number", "1 to 8", "digits alone"},
	{"whole number quoted", "ramps: 3", "ramps: '3'", "^'3'", "ramps is not a whole number", "", "quotes"},
	{"whole number that is none", "ramps: 3", "ramps: three", "^three", "ramps is not a whole number", "", ""},
	{"whole number too large", "seed: 1", "seed: 99999999999999999999", "^9999", "seed is out of range", "9007199254740991", ""},
	{"whole number below zero", "ramps: 3", "ramps: -3", "^-3", "ramps is out of range", "whole number, 1 to 8", ""},
	{"batch of nothing", "infill: 40", "infill: 40, batch: 0", "batch: ^0", "batch is out of range", "whole number, 1 to 32", ""},
	{"batch too large", "infill: 40", "infill: 40, batch: 33", "batch: ^33", "batch is out of range", "1 to 32", ""},
	{"batch with a fraction", "infill: 40", "infill: 40, batch: 2.5", "batch: ^2.5", "batch is not a whole number", "1 to 32", "digits alone"},
	{"truth in another language", "terminal_shock: false", "terminal_shock: no", "^no", "neither true nor false", "true, false", "write false"},
	{"truth quoted", "defaults: true", "defaults: 'true'", "^'true'", "neither true nor false", "", "write true"},
	{"truth that is none", "defaults: true", "defaults: maybe", "^maybe", "neither true nor false", "", ""},

	{"flight is no list", sound[strings.Index(sound, "flight:"):strings.Index(sound, "gas:")], "flight: cruise\n", "", "", "", ""},
	{"flight entry is no section", "  - {name: takeover, mach: 4.5, altitude_km: 22.8}", "  - takeover", "  - ^takeover", "an entry of flight must be a section", "", ""},
	{"point name", "name: takeover", "name: Take-over", "^Take-over", "not a name for a point", "a-z", ""},
	{"reserved point name", "name: takeover", "name: worst", "^worst", "reserved word", "", ""},
	{"point name twice", "name: takeover", "name: cruise", "name: ^cruise, mach: 4.5", "two points are named cruise", "", ""},
	{"Mach number", "mach: 6,", "mach: 66,", "^66", "mach is out of range", "1.5 to 10", ""},
	{"air not stated", ", altitude_km: 22.8", "", "- ^{name: takeover", "the ambient air is not stated", "exactly one of", ""},
	{"air stated twice", "altitude_km: 22.8", "altitude_km: 22.8, pressure_kPa: 3", "^pressure_kPa: 3", "more than one way: altitude_km, pressure_kPa", "exactly one of", ""},
	{"pressure without temperature", "altitude_km: 22.8", "pressure_kPa: 3", "^pressure_kPa: 3", "pressure_kPa needs temperature_K", "40 to 1000 K", ""},
	{"temperature with altitude", "altitude_km: 22.8", "altitude_km: 22.8, temperature_K: 220", "^temperature_K: 220", "goes with pressure_kPa", "", "standard atmosphere"},
	{"temperature left empty", "altitude_km: 22.8", "pressure_kPa: 3, temperature_K: ", "^temperature_K: ", "temperature_K has no value", "", ""},
	{"pressure out of range", "altitude_km: 22.8", "pressure_kPa: 3e6, temperature_K: 220", "^3e6", "pressure_kPa is out of range", "0.0001 to 1000 kPa", ""},
	{"dynamic pressure below ground", "dynamic_pressure_kPa: 50, weight: 1}", "dynamic_pressure_kPa: 50, weight: 1}\n  - {name: low, mach: 1.5, dynamic_pressure_kPa: 200}", "^200", "no altitude of the standard atmosphere", "159.6 kPa at this Mach", "127 kPa static"},
	{"dynamic pressure above the air", "dynamic_pressure_kPa: 50", "dynamic_pressure_kPa: 0.01", "^0.01", "no altitude of the standard atmosphere", "kPa at this Mach", ""},
	{"throat of no kind", "altitude_km: 22.8", "altitude_km: 22.8, throat: tracd", "throat: ^tracd", "neither chain nor traced", "chain, traced", "did you mean traced?"},
	{"throat in truth", "altitude_km: 22.8", "altitude_km: 22.8, throat: true", "throat: ^true", "neither chain nor traced", "chain, traced", ""},
	{"throat in a list", "altitude_km: 22.8", "altitude_km: 22.8, throat: [traced]", "throat: ^[traced]", "throat must be one value, not a list", "", ""},
	{"throat left empty", "altitude_km: 22.8", "altitude_km: 22.8, throat: ", "^throat: ", "throat has no value", "", ""},
	{"negative weight", "weight: 1}", "weight: -1}", "^-1", "weight is out of range", "", ""},

	{"gas to come", "model: perfect", "model: air", "^air", "not available yet", "perfect", ""},
	{"gas unknown", "model: perfect", "model: perfekt", "^perfekt", "unknown gas model", "perfect", "did you mean perfect?"},
	{"monatomic and beyond", "heats: 1.4", "heats: 1.7", "^1.7", "ratio_of_specific_heats is out of range", "above 1, to 1.66667", ""},
	{"ratio one", "heats: 1.4", "heats: 1", "heats: ^1", "ratio_of_specific_heats is out of range", "", ""},
	{"ramps", "ramps: 3", "ramps: 9", "^9", "ramps is out of range", "1 to 8", ""},
	{"list length", "ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: [8, {from: 3, to: 16}]", "^[8", "lists 2 angles for 3 ramps", "one entry per ramp", ""},
	{"list entry", "ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: [8, {from: 3, to: 99}, 7]", "^99", "ramp_angle_deg of ramp 2 to is out of range", "0.1 to 40 deg", ""},
	{"empty list entry", "ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: [8, ~, 7]", "^~", "list entry has no value", "", ""},
	{"two list entries", "ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: [80, 7, 90]", "", "", "", ""},
	{"list within a list", "ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: [8, [7], 7]", "^[7]", "must be a number or {from, to}, not a list", "", ""},
	{"range reversed", "{from: 2, to: 12}", "{from: 12, to: 2}", "^{from: 12", "from must be below to", "", "one number"},
	{"range without an end", "{from: 2, to: 12}", "{from: 2}", "^{from: 2}", "to is missing in a range", "", ""},
	{"range with a strange key", "{from: 2, to: 12}", "{from: 2, to: 12, step: 1}", "^step", "unknown key step in a range", "from, to", ""},
	{"range of words", "{from: 2, to: 12}", "{from: low, to: 12}", "^low", "cowl_angle_deg from is not a plain decimal", "", ""},
	{"cowl stated twice", "cowl_wedge_deg: 4", "lip_turning_deg: 4", "^lip_turning_deg", "both cowl_angle_deg and lip_turning_deg", "", "keep one"},
	{"cowl not stated", "  cowl_angle_deg: {from: 2, to: 12}\n", "", "  ^capture_height_m", "cowl_angle_deg or lip_turning_deg is missing", "", ""},
	{"cowl above the ramp", "ramp_angle_deg: {from: 3, to: 16}\n  cowl_angle_deg: {from: 2, to: 12}", "ramp_angle_deg: 3\n  cowl_angle_deg: 12", "cowl_angle_deg: ^12", "turn the flow away", "up to 9 deg", ""},

	{"aim both ways", "highest: recovery,", "highest: recovery, lowest: length_m,", "^lowest", "both highest and lowest", "", ""},
	{"aim neither way", "highest: recovery, ", "", "^{at: cruise}", "neither highest nor lowest", "exactly one", ""},
	{"aim is no section", "aim: {highest: recovery, at: cruise}", "aim: recovery", "aim: ^recovery", "aim must be a section", "", ""},
	{"aim misspelt", "highest: recovery", "highest: recvoery", "^recvoery", "unknown quantity recvoery", "", "did you mean recovery?"},
	{"aim without a quantity", "highest: recovery", "highest: 1 + 2", "^1 + 2", "names no quantity", "", ""},
	{"aim at no point", "at: cruise}", "at: cruize}", "at: ^cruize", "no flight point is named cruize", "mean, worst, cruise, takeover", "did you mean cruise?"},
	{"aim at the geometry", "highest: recovery, at: cruise", "lowest: length_m, at: cruise", "at: ^cruise}", "at has no effect", "", "remove at"},
	{"formula operator", "highest: recovery", `highest: recovery % 2`, "recovery ^%", "not allowed in a formula", "", ""},
	{"formula character quoted", "highest: recovery", `highest: "recovery; 2"`, `^"recovery`, "not allowed in a formula", "", ""},
	{"formula function", "highest: recovery", "highest: sin(recovery)", "^sin", "sin is not a function here", "", "min, max"},
	{"formula point", "highest: recovery, at: cruise", "highest: 1 - recovery@climb", "highest: 1 - ^recovery@climb", "no flight point is named climb", "cruise, takeover", ""},
	{"formula of geometry at a point", "highest: recovery, at: cruise", "highest: length_m@cruise", "^length_m@", "belongs to the geometry", "", "write length_m"},
	{"aim without a value", "highest: recovery, at: cruise", "highest: terminal_mach", "^terminal_mach", "no value without a terminal shock", "", "terminal_shock: true"},

	{"limits are no list", sound[strings.Index(sound, "limits:"):strings.Index(sound, "defaults:")], "limits: none\n", "limits: ^none", "limits must be a list", "", ""},
	{"limit is no section", "  - {quantity: ramp_attachment_margin_deg, at_least: 2, at: every}", "  - length_m", "  - ^length_m", "an entry of limits must be a section", "", ""},
	{"limit misspelt", "throat_temperature_K", "throat_temperature_C", "^throat_temperature_C", "unknown quantity throat_temperature_C", "", "write throat_temperature_K, in K (K = deg C"},
	{"limit on nothing known", "throat_temperature_K", "happiness", "^happiness", "unknown quantity happiness", "", "rampwright quantities"},
	{"limit without quantity", "quantity: throat_temperature_K, ", "", "^{at_least: 780", "quantity is missing in limits", "", ""},
	{"limit without a side", ", at_least: 780, at_most: 1000", "", "^{quantity: throat_temperature_K", "neither at_least nor at_most", "", "none"},
	{"limit crossed", "at_least: 780", "at_least: 1780", "^1780", "no value can keep both sides", "", ""},
	{"limit at no point", "at: every", "at: takovr", "^takovr", "no flight point is named takovr", "every, cruise, takeover", "did you mean takeover?"},
	{"limit at the mean", "at: every", "at: mean", "^mean", "no flight point is named mean", "", "for aims"},
	{"limit at every in a list", "at: every", "at: [every]", "[^every]", "no flight point is named every", "", "without a list"},
	{"limit at a point twice", "at: every", "at: [cruise, cruise]", ", ^cruise]", "listed twice", "", ""},
	{"limit at a section", "at: every", "at: {a: b}", "at: ^{a", "at must be a list", "", ""},
	{"limit at a list of lists", "at: every", "at: [[cruise]]", "[^[cruise", "an entry of at must be one value", "", ""},
	{"limit of geometry at a point", "ramp_attachment_margin_deg, at_least: 2, at: every", "length_m, at_most: 2, at: every", "at: ^every", "belongs to the geometry", "", "remove at"},
	{"limit without a value", "ramp_attachment_margin_deg, at_least: 2", "terminal_mach, at_least: 2", "^terminal_mach", "no value without a terminal shock", "", ""},
	{"limit quoted none", "at_least: 780", "at_least: 'none'", "^'none'", "at_least is not a plain decimal", "", ""},

	{"tolerance", "mach: 0.03", "mach: 3", "mach: ^3,", "mach is out of range", "0 to 1", ""},
	{"confidence", "confidence: 0.95", "confidence: 1", "confidence: ^1", "confidence is out of range", "0.5 to 0.999", ""},
	{"confidence of nothing", "ramp_angle_deg: 0.1, mach: 0.03, incidence_deg: 0.5, ", "", "confidence: ^0.95", "a confidence needs a tolerance", "", "standard deviation"},
	{"scatter out of supersonic flow", "mach: 0.03", "mach: 0.9", "mach: ^0.9,", "the flow must stay supersonic", "below 0.875", ""},
	{"scatter of the lip", "mach: 0.03", "lip_setback: 0.2", "lip_setback: ^0.2", "lip_setback is out of range", "0 to 0.1", ""},
	{"samples", "samples: 60", "samples: 1", "samples: ^1", "samples is out of range", "2 to 100000", ""},
	{"agreement", "agreement: 1e-3", "agreement: 0", "agreement: ^0", "agreement is out of range", "", ""},
}

// points writes n flight points.
func points(n int) string {
	var b strings.Builder
	for i := range n {
		fmt.Fprintf(&b, "  - {name: p%d, mach: 4, altitude_km: 20}\n", i)
	}
	return b.String()
}

// severalProblems are the cases of the table that end in more than one problem
// by their nature: the messages wanted, in order.
var severalProblems = map[string][]string{
	"alias":                    {"anchors are not allowed", "aliases are not allowed"},
	"second document not YAML": {"not YAML"},
	"flight is no list":        {"flight must be a list, not one value"},
	"two list entries":         {"ramp_angle_deg of ramp 1 is out of range", "ramp_angle_deg of ramp 3 is out of range"},
}

func TestBrokenBriefs(t *testing.T) {
	if _, err := Read("b.yaml", []byte(sound), nil); err != nil {
		t.Fatalf("the sound brief has problems:\n%v", err)
	}
	names := map[string]bool{}
	for _, c := range brokenBriefs {
		if names[c.name] {
			t.Errorf("two cases are named %q", c.name)
		}
		names[c.name] = true
		t.Run(c.name, func(t *testing.T) {
			if !strings.Contains(sound, c.old) {
				t.Fatalf("the sound brief has no %q", c.old)
			}
			text := strings.Replace(sound, c.old, c.new, 1)
			if wanted, several := severalProblems[c.name]; several {
				checkMessages(t, text, wanted)
				return
			}
			_, err := Read("b.yaml", []byte(text), nil)
			var found Problems
			if !errors.As(err, &found) || len(found) != 1 {
				t.Fatalf("want one problem, got:\n%v", err)
			}
			p := found[0]
			line, column := position(t, text, c.mark)
			if p.Line != line || p.Column != column || p.File != "b.yaml" {
				t.Errorf("place %s, want b.yaml:%d:%d", p.Place(), line, column)
			}
			for _, check := range [][2]string{{p.Message, c.message}, {p.Allowed, c.allowed}, {p.Hint, c.hint}} {
				if !strings.Contains(check[0], check[1]) {
					t.Errorf("%q lacks %q in %+v", check[0], check[1], p)
				}
			}
			if c.hint == "" && strings.Contains(p.Hint, "did you mean") {
				t.Errorf("unwanted suggestion %q", p.Hint)
			}
		})
	}
	t.Logf("%d broken briefs", len(brokenBriefs))
}

func checkMessages(t *testing.T, text string, wanted []string) {
	t.Helper()
	_, err := Read("b.yaml", []byte(text), nil)
	var found Problems
	if err != nil && !errors.As(err, &found) || len(found) != len(wanted) {
		t.Fatalf("want %d problems, got:\n%v", len(wanted), err)
	}
	for i, want := range wanted {
		if !strings.Contains(found[i].Message, want) {
			t.Errorf("problem %d: %q lacks %q", i, found[i].Message, want)
		}
	}
}

// position finds the character behind ^ of mark in text, from 1.
func position(t *testing.T, text, mark string) (line, column int) {
	t.Helper()
	before, after, ok := strings.Cut(mark, "^")
	if !ok {
		t.Fatalf("mark %q has no ^", mark)
	}
	at := strings.Index(text, before+after)
	if at < 0 {
		t.Fatalf("the text has no %q", before+after)
	}
	head := text[:at+len(before)]
	start := strings.LastIndexByte(head, '\n') + 1
	return strings.Count(head, "\n") + 1, utf8.RuneCountInString(head[start:]) + 1
}
