package brief

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestReportOfAProblem(t *testing.T) {
	_, err := Read("b.yaml", []byte(edited(t, "width_m: 0.20", "width_m: 200")), Overrides{"seed": "x"})
	want := `--seed: seed is not a whole number
        value:   x
        allowed: whole number, 1 to 9007199254740991

b.yaml:9:12: width_m is out of range
    9 |   width_m: 200
      |            ^
        value:   200
        allowed: 0.001 to 50 m
`
	if got := err.(Problems).Format(); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

func TestReportOfLongAndTabbedLines(t *testing.T) {
	for _, c := range []struct {
		line   string
		column int
		want   string
	}{
		{"a:\tb", 4, "a:\tb\n      |   \t^"},
		{"äöü: b", 6, "äöü: b\n      |      ^"},
		{strings.Repeat("x", 300), 1, strings.Repeat("x", 72) + " ..\n      | ^"},
		{strings.Repeat("x", 300), 200, ".. " + strings.Repeat("x", 72) + " ..\n      | " + strings.Repeat(" ", 39) + "^"},
		{strings.Repeat("x", 300), 300, ".. " + strings.Repeat("x", 72) + " ..\n      | " + strings.Repeat(" ", 74) + "^"},
		{"short", 9, "short\n      |         ^"},
	} {
		text := Problems{{File: "f", Line: 1, Column: c.column, Message: "m", SourceLine: c.line}}.Format()
		if !strings.Contains(text, "    1 | "+c.want+"\n") {
			t.Errorf("column %d of %.20q:\n%s", c.column, c.line, text)
		}
	}
	long := Problems{{File: "f", Message: "m", Value: strings.Repeat("v ", 500)}}.Format()
	if len(long) > 300 || !strings.Contains(long, " ..") {
		t.Errorf("a long value is not cut:\n%s", long)
	}
}

func TestNearestName(t *testing.T) {
	names := []string{"recovery", "shock_recovery", "throat_mach", "lip_mach"}
	for typed, want := range map[string]string{
		"recovery": "recovery", "recvoery": "recovery", "Recovery": "recovery", "throat_mahc": "throat_mach",
		"lipmach": "lip_mach", "x": "", "something_else": "", strings.Repeat("recovery", 20): "",
	} {
		if got := nearest(typed, names); got != want {
			t.Errorf("nearest to %.20q is %q, want %q", typed, got, want)
		}
	}
}

// TestSpellingDistance checks the metric: kitten to sitting is 3 (Wagner &
// Fischer 1974), a swap of neighbours is 1, and it is symmetric.
func TestSpellingDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"kitten", "sitting", 3}, {"", "abc", 3}, {"abc", "acb", 1}, {"ä", "a", 1}, {"ab", "ab", 0}} {
		if got := distance(c.a, c.b); got != c.want {
			t.Errorf("distance(%q, %q) = %d, want %d", c.a, c.b, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		a, b := rapid.StringMatching(`[a-d]{0,8}`).Draw(t, "a"), rapid.StringMatching(`[a-d]{0,8}`).Draw(t, "b")
		d := distance(a, b)
		if d != distance(b, a) || (d == 0) != (a == b) || d > max(len(a), len(b)) || d < max(len(a), len(b))-min(len(a), len(b)) {
			t.Fatalf("distance(%q, %q) = %d", a, b, d)
		}
	})
}

func TestNumbersReadBackToTheLastBit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64().Draw(t, "value")
		if math.IsInf(v, 0) || math.IsNaN(v) {
			v = 0
		}
		got, hint, ok := decimal(exactNumber(v))
		if !ok || got != v {
			t.Fatalf("%v written as %s reads back as %v (%s)", v, exactNumber(v), got, hint)
		}
	})
}

func TestPlainDecimals(t *testing.T) {
	for text, want := range map[string]float64{"0": 0, "-0": 0, "10": 10, "-0.5": -0.5, "1e-3": 1e-3, "1E+2": 100, "0.10": 0.1, "1e-999": 0} {
		if got, hint, ok := decimal(text); !ok || got != want || math.Signbit(got) != math.Signbit(want) {
			t.Errorf("%q = %v, %v (%s), want %v", text, got, ok, hint, want)
		}
	}
	for _, text := range []string{"", "-", "+1", "00", "01", ".5", "5.", "1e", "1e+", "1e5x", "0x1", "1_0", "Inf", "NaN", "1,5", "1:30", " 1", "--1", "1.2.3"} {
		if v, _, ok := decimal(text); ok {
			t.Errorf("%q passes as %v", text, v)
		}
	}
}

// TestTableOfKeys checks that the documentation has no hole and that every
// default in it is one the reader takes.
func TestTableOfKeys(t *testing.T) {
	seen, flags := map[string]bool{}, map[string]bool{}
	for _, k := range Keys() {
		if k.Meaning == "" || k.Form == "" || k.Allowed() == "" || seen[k.Path()] {
			t.Errorf("%+v is incomplete or stated twice", k)
		}
		seen[k.Path()] = true
		if k.Flag && flags[k.Name] {
			t.Errorf("two keys are set by %s", k.FlagName())
		}
		flags[k.Name] = flags[k.Name] || k.Flag
		if k.Unit != "" && (conversion[k.Unit] == "" || !strings.HasSuffix(k.Name, "_"+k.Unit)) {
			t.Errorf("%s: the name does not end in its unit %s", k.Path(), k.Unit)
		}
		if v, _, ok := decimal(k.Default); ok && !k.holds(v) {
			t.Errorf("%s: the default %s is not allowed", k.Path(), k.Default)
		}
		if k.Required && k.Default != "" {
			t.Errorf("%s is required and has a default", k.Path())
		}
	}
	if got := len(FlagKeys()); got < 15 {
		t.Errorf("%d keys have a flag", got)
	}
	for path, want := range map[string]string{
		"inlet.width_m": "0.001 to 50 m", "gas.model": "perfect", "limits.at_least": "a decimal number or none", "range.from": "any decimal number", "flight": "list of up to 50 sections", "title": "text", "brief": "1",
	} {
		section, name, nested := strings.Cut(path, ".")
		if !nested {
			section, name = top, path
		}
		if got := known(section, name).Allowed(); got != want {
			t.Errorf("%s allows %q, want %q", path, got, want)
		}
	}
}
