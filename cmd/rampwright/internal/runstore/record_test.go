package runstore

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// hardFloats are the values of IEEE 754-2008 binary64 a decimal form can lose.
var hardFloats = []float64{
	0, math.Copysign(0, -1), 1, -1, 0.1, 1.0 / 3, 1e21, 1e-7, 123456789.123456789,
	math.SmallestNonzeroFloat64, -math.SmallestNonzeroFloat64, 0x1p-1022, 0x1.fffffffffffffp-1023,
	math.MaxFloat64, -math.MaxFloat64, math.Inf(1), math.Inf(-1), math.NaN(),
}

// anyFloat draws from all bit patterns, the hard ones on purpose.
func anyFloat() *rapid.Generator[float64] {
	return rapid.OneOf(
		rapid.SampledFrom(hardFloats),
		rapid.Float64(),
		rapid.Map(rapid.Uint64(), math.Float64frombits),
	)
}

// sameFloat compares bits; any NaN equals any other.
func sameFloat(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || math.IsNaN(a) && math.IsNaN(b)
}

func TestEveryFloatSurvivesAsValueAndAsVariable(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.SliceOfN(anyFloat(), 1, 20).Draw(t, "x")
		e := problems.NewEvaluation(rapid.IntRange(1, 8).Draw(t, "quantities"))
		for i := range e.Values {
			e.Set(i, anyFloat().Draw(t, "value"))
		}
		if rapid.Bool().Draw(t, "bounded") {
			e.Widen(0, rapid.OneOf(rapid.Just(math.Inf(1)), rapid.Float64Min(0)).Draw(t, "bound"))
		}
		r, back := roundTrip(t, x, e)
		if r.key() != string(appendKey(nil, x)) {
			t.Fatalf("x %x came back as %x", x, r.X)
		}
		for i := range e.Values {
			if !sameFloat(e.Values[i], back.Values[i]) {
				t.Fatalf("value %x came back as %x", e.Values[i], back.Values[i])
			}
			if back.Bound(i) != e.Bound(i) || (back.Bounds == nil) != (e.Bounds == nil) {
				t.Fatalf("bound %v came back as %v", e.Bound(i), back.Bound(i))
			}
			if back.Reasons[i] != nil {
				t.Fatalf("a present value came back with the reason %v", back.Reasons[i])
			}
		}
	})
}

func TestDifferentBitsAreDifferentKeys(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := anyFloat().Draw(t, "a"), anyFloat().Draw(t, "b")
		same := string(appendKey(nil, []float64{a})) == string(appendKey(nil, []float64{b}))
		if same != (math.Float64bits(a) == math.Float64bits(b)) {
			t.Fatalf("%x and %x: same key %v", a, b, same)
		}
	})
}

// anyReason draws reasons of every kind, with text that is hard to quote.
func anyReason() *rapid.Generator[error] {
	text := rapid.OneOf(rapid.String(), rapid.SampledFrom([]string{
		"", "shocks inside the lip", "line\nbreak", `"quoted\`, "<&>", "\u2028", "nul\x00", "bad\xff\xfeutf8",
	}))
	return rapid.Custom(func(t *rapid.T) error {
		s := text.Draw(t, "text")
		switch rapid.IntRange(0, 5).Draw(t, "kind") {
		case 0:
			return nil
		case 1:
			return &problems.NotApplicable{Why: s}
		case 2:
			return &problems.Detached{Shock: s, Mach: anyFloat().Draw(t, "mach"), By: anyFloat().Draw(t, "by")}
		case 3:
			return &problems.Status{Phrase: s}
		case 4:
			return errors.New(s)
		default:
			return fmt.Errorf("at cruise: %w", &problems.Status{Phrase: s})
		}
	})
}

func TestReasonsSurvive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		reasons := rapid.SliceOfN(anyReason(), 1, 6).Draw(t, "reasons")
		e := problems.NewEvaluation(0)
		for _, reason := range reasons {
			// Runs of one cause are stored once.
			for range rapid.IntRange(1, 3).Draw(t, "repeat") {
				e.Values = append(e.Values, math.NaN())
				e.Reasons = append(e.Reasons, reason)
			}
		}
		given := e.Clone()
		makeCanonical(e)
		_, back := roundTrip(t, []float64{1}, e)
		for i := range e.Reasons {
			if !equalReason(e.Reasons[i], back.Reasons[i]) {
				t.Fatalf("reason %#v came back as %#v", e.Reasons[i], back.Reasons[i])
			}
			if given.Reasons[i] != nil && validText(given.Reasons[i].Error()) != back.Reasons[i].Error() {
				t.Fatalf("text %q came back as %q", given.Reasons[i], back.Reasons[i])
			}
		}
	})
}

// equalReason compares by type and fields, floats by bits.
func equalReason(a, b error) bool {
	x, isDetached := a.(*problems.Detached)
	if !isDetached {
		return reflect.DeepEqual(a, b)
	}
	y, ok := b.(*problems.Detached)
	return ok && x.Shock == y.Shock && sameFloat(x.Mach, y.Mach) && sameFloat(x.By, y.By)
}

func TestTypedReasonIsFoundInsideAWrappedOne(t *testing.T) {
	detached := &problems.Detached{Shock: "ramp 2", Mach: 2.1, By: 0.01}
	e := problems.NewEvaluation(1)
	e.Miss(0, fmt.Errorf("takeover: %w", detached))
	makeCanonical(e)
	_, back := roundTrip(t, []float64{1}, e)
	for name, reason := range map[string]error{"first run": e.Reasons[0], "resumed": back.Reasons[0]} {
		var got *problems.Detached
		if !errors.As(reason, &got) || *got != *detached {
			t.Errorf("%s: %v holds no %v", name, reason, detached)
		}
		if want := "takeover: " + detached.Error(); reason.Error() != want {
			t.Errorf("%s: text %q, want %q", name, reason, want)
		}
	}
}

func TestRunsOfOneCauseAreStoredOnce(t *testing.T) {
	e := problems.NewEvaluation(40)
	for i := range e.Values {
		e.Miss(i, &problems.Detached{Shock: "ramp 1", Mach: 2, By: 0.1})
	}
	makeCanonical(e)
	line, err := appendRecord(nil, "m", Primary, []float64{1}, e)
	if err != nil {
		t.Fatal(err)
	}
	if n := bytes.Count(line, []byte("ramp 1")); n != 1 {
		t.Errorf("the reason is written %d times: %s", n, line)
	}
}

func TestLinesThatDoNotFitTogetherAreUnreadable(t *testing.T) {
	good := `{"model":"m","route":"evaluate","x":["3ff0000000000000"],"values":[1,null],"missing":[{"first":1,"count":1,"reason":{"type":"status","text":"t"}}]}`
	for name, line := range map[string]string{
		"not JSON":           `{`,
		"zero bytes":         "\x00\x00",
		"no values":          `{"model":"m","route":"evaluate","x":[]}`,
		"no route":           `{"model":"m","x":[],"values":[1]}`,
		"bad bits":           `{"model":"m","route":"evaluate","x":["zz"],"values":[1]}`,
		"bad value":          `{"model":"m","route":"evaluate","x":[],"values":["one"]}`,
		"past the end":       `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":1,"count":1,"reason":{"type":"status"}}]}`,
		"overflowing count":  `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":1,"count":9223372036854775807,"reason":{"type":"status"}}]}`,
		"before the start":   `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":-1,"count":1,"reason":{"type":"status"}}]}`,
		"bounds too few":     `{"model":"m","route":"verify","x":[],"values":[1,2],"bounds":[0]}`,
		"no reason":          `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":0,"count":1}]}`,
		"unknown reason":     `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":0,"count":1,"reason":{"type":"later"}}]}`,
		"unknown one inside": `{"model":"m","route":"evaluate","x":[],"values":[1],"missing":[{"first":0,"count":1,"reason":{"type":"other","inner":{"type":"later"}}}]}`,
	} {
		l := memoryLedger()
		var counts loaded
		l.take([]byte(line), nil, &counts)
		l.take([]byte(good), nil, &counts)
		if counts.unreadable != 1 || l.Len() != 1 {
			t.Errorf("%s: %d unreadable, %d known; want 1 and 1", name, counts.unreadable, l.Len())
		}
	}
}

// roundTrip writes and reads one line.
func roundTrip(t interface{ Fatal(...any) }, x []float64, e *problems.Evaluation) (record, *problems.Evaluation) {
	line, err := appendRecord(nil, "hash", Primary, x, e)
	if err != nil {
		t.Fatal(err)
	}
	if bytes.IndexByte(line, '\n') != len(line)-1 {
		t.Fatal("not one line:", string(line))
	}
	var r record
	if err := json.Unmarshal(line, &r); err != nil {
		t.Fatal(err)
	}
	back, ok := r.evaluation()
	if !ok {
		t.Fatal("unreadable:", string(line))
	}
	return r, back
}

func memoryLedger() *Ledger { return &Ledger{shelves: map[shelfKey]*shelf{}} }

// newLedger opens a ledger in a fresh folder.
func newLedger(t testing.TB) *Ledger {
	t.Helper()
	l, _, err := openLedger(filepath.Join(t.TempDir(), ledgerName), nil)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = l.close() })
	return l
}
