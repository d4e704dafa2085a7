package brief

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// value compiles and evaluates a formula over named values.
func valueOf(t testing.TB, text string, values map[string]float64) float64 {
	t.Helper()
	f, err := compileFormula(text, inletVocabulary())
	if err != nil {
		t.Fatalf("%q: %v", text, err)
	}
	read := make([]float64, len(f.references))
	for i, ref := range f.references {
		name := ref.quantity
		if ref.point != "" {
			name += "@" + ref.point
		}
		v, ok := values[name]
		if !ok {
			t.Fatalf("%q reads %s", text, name)
		}
		read[i] = v
	}
	return f.evaluate(read)
}

func TestFormulaValues(t *testing.T) {
	values := map[string]float64{"recovery": 0.6, "length_m": 2, "recovery@cruise": 0.7, "recovery@a_1": 0.25, "throat_mach": -3}
	for _, c := range []struct {
		text string
		want float64
	}{
		{"recovery", 0.6},
		{"  recovery  ", 0.6},
		{"recovery@cruise - recovery@a_1", 0.7 - 0.25},
		{"1 + 2 * 3", 7},
		{"(1 + 2) * 3", 9},
		{"7 / 2", 3.5},
		{"1 - 2 - 3", -4},
		{"2 ^ 3 ^ 2", 512},
		{"-2 ^ 2", -4},
		{"2 ^ -1", 0.5},
		{"-(-length_m)", 2},
		{"+length_m", 2},
		{"- - length_m", 2},
		{"min(length_m, recovery)", 0.6},
		{"max(length_m, 5, recovery)", 5},
		{"abs(throat_mach)", 3},
		{"sqrt(length_m + 2)", 2},
		{"log(exp(length_m))", 2},
		{"1.5e3 * recovery", 1.5e3 * 0.6},
		{"2E-1*length_m", 0.4},
		{"recovery*recovery + length_m", 0.6*0.6 + 2},
		{"9007199254740993 + length_m * 0", 9007199254740992},
	} {
		if got := valueOf(t, c.text, values); math.Abs(got-c.want) > 1e-15*math.Abs(c.want) {
			t.Errorf("%s = %v, want %v", c.text, got, c.want)
		}
	}
	if f, _ := compileFormula("recovery + recovery@cruise + recovery", inletVocabulary()); len(f.references) != 2 {
		t.Errorf("equal references share a slot: %+v", f.references)
	}
	for _, text := range []string{"1 / (length_m - 2)", "log(length_m - 2)", "sqrt(throat_mach)"} {
		if got := valueOf(t, text, values); !math.IsNaN(got) && !math.IsInf(got, 0) {
			t.Errorf("%s = %v, want a value that is not finite", text, got)
		}
	}
}

func TestFormulaProblems(t *testing.T) {
	for _, c := range []struct {
		text    string
		offset  int
		message string
		hint    string
	}{
		{"recovery +", 9, "not a formula: it ends too early", ""},
		{"(recovery", 8, "not a formula: it ends too early", ""},
		{"recovery length_m", 9, "not a formula: length_m does not belong here", ""},
		{"recovery ** 2", 9, "** is not an operator", "^"},
		{"recovery // 2", 9, "no comments", ""},
		{"recovery /* 2 */", 9, "no comments", ""},
		{"recovery > 2", 9, "not allowed", "min, max"},
		{"recovery ? 1 : 2", 9, "not allowed", ""},
		{"recovery | abs", 9, "not allowed", ""},
		{"$env", 0, "not allowed", ""},
		{"recovery['a']", 8, "not allowed", ""},
		{"récovery", 1, "not allowed", ""},
		{"recovery.cruise", 8, "a point between names", "recovery@cruise"},
		{"recovery @ cruise", 9, "between a quantity and a point", "recovery@cruise"},
		{"@cruise", 0, "between a quantity and a point", ""},
		{"recovery@", 8, "between a quantity and a point", ""},
		{"recovery@a@b", 0, "more than one @", ""},
		{"0x10 * recovery", 0, "not a plain decimal", "in decimal"},
		{"recovery * 1_000", 11, "not a plain decimal", "underscores"},
		{"recovery * .5", 11, "not a plain decimal", "zero before"},
		{"recovery * 5.", 11, "not a plain decimal", "point at the end"},
		{"recovery * 1..2", 11, "not a plain decimal", ""},
		{"recovery * 2recovery", 11, "not a plain decimal", ""},
		{"recovery * 1e999", 11, "not a plain decimal", "too large"},
		{"recovery * 99999999999999999999", 11, "too many digits", "1e20"},
		{"recovery and 1", 9, "and is not an operator", "+ - * / ^"},
		{"recovery in recovery", 9, "in is not an operator", ""},
		{"not recovery", 0, "not is not an operator", ""},
		{"true", 0, "not a formula of quantities", ""},
		{"nil + recovery", 0, "not a formula of quantities", ""},
		{"let x = 1", 6, "not allowed", ""},
		{"if recovery 1", 12, "not a formula", ""},
		{"sin(recovery)", 0, "sin is not a function", "sqrt"},
		{"len(recovery)", 0, "len is not a function", ""},
		{"all(recovery, recovery)", 0, "all is not a function", ""},
		{"abs(recovery, 1)", 0, "abs takes one argument", ""},
		{"sqrt()", 0, "sqrt takes one argument", ""},
		{"min(recovery)", 0, "min takes two arguments or more", ""},
		{"max", 0, "max is a function and needs parentheses", "max(..)"},
		{"recovery(2)", 0, "recovery is not a function", ""},
		{"(recovery)(2)", 10, "not a formula", ""},
		{"recovery@cruise(2)", 0, "recovery@cruise is not a function", ""},
		{"1 + throat_temperature", 4, "unknown quantity throat_temperature", "write throat_temperature_K"},
		{"length_m@cruise", 0, "belongs to the geometry", "write length_m"},
		{strings.Repeat("1+", 120) + "recovery", -1, "the formula is too long", ""},
		{strings.Repeat(" ", longestFormula) + "recovery", 0, "the formula is too long", ""},
		{strings.Repeat("(", 400) + "recovery" + strings.Repeat(")", 399), -1, "not a formula", ""},
	} {
		_, err := compileFormula(c.text, inletVocabulary())
		var e *formulaError
		if !errors.As(err, &e) {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		if c.offset >= 0 && e.offset != c.offset || !strings.Contains(e.Error(), c.message) || !strings.Contains(e.hint, c.hint) {
			t.Errorf("%q: at %d %q, hint %q; want at %d %q, hint %q", c.text, e.offset, e.message, e.hint, c.offset, c.message, c.hint)
		}
	}
}

// tree draws a formula with its value computed on the way, a second route that
// shares no code with the compiler.
func tree(depth int) *rapid.Generator[[2]string] {
	return rapid.Custom(func(t *rapid.T) [2]string {
		if depth == 0 || rapid.Bool().Draw(t, "leaf") {
			if rapid.Bool().Draw(t, "name") {
				return [2]string{"recovery", exactNumber(0.75)}
			}
			v := rapid.Float64Range(0.01, 100).Draw(t, "number")
			return [2]string{exactNumber(v), exactNumber(v)}
		}
		a, b := tree(depth-1).Draw(t, "left"), tree(depth-1).Draw(t, "right")
		x, _ := strconv.ParseFloat(a[1], 64)
		y, _ := strconv.ParseFloat(b[1], 64)
		var text string
		var v float64
		switch rapid.IntRange(0, 7).Draw(t, "operation") {
		case 0:
			text, v = a[0]+"+"+b[0], x+y
		case 1:
			text, v = a[0]+"-("+b[0]+")", x-y
		case 2:
			text, v = "("+a[0]+")*("+b[0]+")", x*y
		case 3:
			text, v = "("+a[0]+")/("+b[0]+")", x/y
		case 4:
			text, v = "min("+a[0]+", "+b[0]+")", min(x, y)
		case 5:
			text, v = "max("+a[0]+", "+b[0]+")", max(x, y)
		case 6:
			text, v = "sqrt(abs("+a[0]+"))", math.Sqrt(math.Abs(x))
		default:
			text, v = "-("+a[0]+")", -x
		}
		return [2]string{"(" + text + ")", strconv.FormatFloat(v, 'g', -1, 64)}
	})
}

func TestFormulaAgreesWithDirectEvaluation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		drawn := tree(4).Draw(t, "formula")
		want, err := strconv.ParseFloat(drawn[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		f, err := compileFormula(drawn[0], inletVocabulary())
		if err != nil {
			t.Fatalf("%s: %v", drawn[0], err)
		}
		got := f.evaluate(make([]float64, 0, 1)[:len(f.references):1])
		if len(f.references) == 1 {
			got = f.evaluate([]float64{0.75})
		}
		if got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Fatalf("%s = %v, want %v", drawn[0], got, want)
		}
	})
}

func BenchmarkFormula(b *testing.B) {
	f, err := compileFormula("recovery - 0.1*max(length_m, 2) + sqrt(throat_mach)", inletVocabulary())
	if err != nil {
		b.Fatal(err)
	}
	values := []float64{0.6, 2.5, 2}
	b.ReportAllocs()
	for b.Loop() {
		f.evaluate(values)
	}
}

func FuzzFormula(f *testing.F) {
	for _, seed := range []string{"recovery", "recovery@cruise - 0.1*length_m", "min(recovery, 2)^-1", "((1", "let x = 2; x", "a?.b ?? c",
		"all(recovery, {#})", "1..2", "not in", "recovery | abs()", "if 1 {2} else {3}", "::min(1,2)", "recovery $ 2"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		compiled, err := compileFormula(text, inletVocabulary())
		if err != nil {
			var e *formulaError
			if !errors.As(err, &e) || e.message == "" || e.offset < 0 {
				t.Fatalf("error %#v", err)
			}
			return
		}
		values := make([]float64, len(compiled.references))
		for i := range values {
			values[i] = 0.5
		}
		first, second := compiled.evaluate(values), compiled.evaluate(values)
		if first != second && !math.IsNaN(first) {
			t.Fatalf("%q gives %v, then %v", text, first, second)
		}
	})
}
