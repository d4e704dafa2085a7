package runstore

import (
	"context"
	"errors"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"maps"
	"path/filepath"
	"slices"
	"sync/atomic"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

// plain is a problem of one variable and three quantities that counts its runs.
type plain struct{ evaluated, verified atomic.Int64 }

func (p *plain) Variables() []problems.Variable { return []problems.Variable{{Name: "v", High: 1}} }

func (p *plain) Quantities() []problems.Quantity {
	return []problems.Quantity{{Name: "a"}, {Name: "b", Explicit: true}, {Name: "c"}}
}

func (p *plain) Evaluate(_ context.Context, x []float64, dst *problems.Evaluation) error {
	p.evaluated.Add(1)
	*dst = *sample(x[0])
	return nil
}

type explicitPart struct{}

func (explicitPart) EvaluateExplicit(x []float64, dst *problems.Evaluation) { dst.Set(1, x[0]+0.5) }

type verifierPart struct{ p *plain }

func (v verifierPart) Verify(_ context.Context, x []float64, dst *problems.Evaluation) error {
	v.p.verified.Add(1)
	*dst = *sample(x[0] * 2)
	return nil
}

type linearPart struct{}

func (linearPart) LinearForm(i int) ([]float64, float64, bool) { return []float64{1}, 0.5, i == 1 }

// variants are problems with every set of optional interfaces.
func variants() map[string]problems.Problem {
	p := &plain{}
	v := verifierPart{p}
	return map[string]problems.Problem{
		"plain": p,
		"explicit": struct {
			*plain
			explicitPart
		}{plain: p},
		"linear": struct {
			*plain
			linearPart
		}{plain: p},
		"explicit linear": struct {
			*plain
			explicitPart
			linearPart
		}{plain: p},
		"verifier": struct {
			*plain
			verifierPart
		}{p, v},
		"explicit verifier": struct {
			*plain
			explicitPart
			verifierPart
		}{plain: p, verifierPart: v},
		"linear verifier": struct {
			*plain
			linearPart
			verifierPart
		}{plain: p, verifierPart: v},
		"all": struct {
			*plain
			explicitPart
			linearPart
			verifierPart
		}{plain: p, verifierPart: v},
	}
}

// optional are the interfaces of package problems that Cached knows, each with
// the test of having it.
var optional = map[string]func(problems.Problem) bool{
	"Explicit": func(p problems.Problem) bool { _, ok := p.(problems.Explicit); return ok },
	"Linear":   func(p problems.Problem) bool { _, ok := p.(problems.Linear); return ok },
	"Verifier": func(p problems.Problem) bool { _, ok := p.(problems.Verifier); return ok },
}

func TestCachedHasExactlyTheInterfacesOfItsProblem(t *testing.T) {
	sets := map[string]bool{}
	for name, problem := range variants() {
		cached, _ := Cached(problem, newLedger(t), "m")
		set := ""
		for _, each := range slices.Sorted(maps.Keys(optional)) {
			if optional[each](cached) != optional[each](problem) {
				t.Errorf("%s: %s is %v", name, each, optional[each](cached))
			}
			set += fmt.Sprint(optional[each](problem))
		}
		sets[set] = true
		if len(cached.Variables()) != 1 || len(cached.Quantities()) != 3 {
			t.Errorf("%s: variables or quantities lost", name)
		}
	}
	if len(sets) != 1<<len(optional) {
		t.Errorf("%d sets of interfaces are tried", len(sets))
	}
}

// An interface that Cached does not pass on would silently switch off what a
// search does with it. Perturbable is asked of the model itself: the ledger keeps no
// draws.
func TestCachedKnowsEveryOptionalInterface(t *testing.T) {
	files, err := filepath.Glob("../../../../problems/*.go")
	if err != nil || len(files) == 0 {
		t.Fatal(files, err)
	}
	var declared []string
	for _, path := range files {
		file, err := parser.ParseFile(token.NewFileSet(), path, nil, 0)
		if err != nil {
			t.Fatal(err)
		}
		ast.Inspect(file, func(node ast.Node) bool {
			if spec, ok := node.(*ast.TypeSpec); ok {
				if _, ok := spec.Type.(*ast.InterfaceType); ok && !slices.Contains([]string{"Problem", "Perturbable"}, spec.Name.Name) {
					declared = append(declared, spec.Name.Name)
				}
			}
			return true
		})
	}
	slices.Sort(declared)
	if known := slices.Sorted(maps.Keys(optional)); !slices.Equal(declared, known) {
		t.Errorf("package problems declares %q, Cached passes on %q", declared, known)
	}
}

// A repetition is worth something only if the model itself is run.
func TestCachedRepeatsWithTheModel(t *testing.T) {
	cached, counter := Cached(variants()["plain"], newLedger(t), "m")
	dst := problems.NewEvaluation(3)
	if err := cached.Evaluate(context.Background(), []float64{0.1}, dst); err != nil {
		t.Fatal(err)
	}
	if err := cached.(optimize.Repeater).Repeat(context.Background(), []float64{0.1}, dst); err != nil || dst.Values[0] != 0.1 {
		t.Errorf("repeated: %v, %v", dst.Values, err)
	}
	if counter.Calls(Primary) != 2 || counter.Hits(Primary) != 0 {
		t.Errorf("%d calls, %d hits", counter.Calls(Primary), counter.Hits(Primary))
	}
}

func TestCachedAsksNothingTwice(t *testing.T) {
	ctx := context.Background()
	problem := variants()["all"]
	p := problem.(interface{ inner() *plain }).inner()
	cached, counter := Cached(problem, newLedger(t), "m")
	dst := problems.NewEvaluation(3)
	for range 3 {
		for _, v := range []float64{0.1, 0.2} {
			if err := cached.Evaluate(ctx, []float64{v}, dst); err != nil || dst.Values[0] != v {
				t.Fatalf("evaluate: %v, %v", dst.Values, err)
			}
			if err := cached.(problems.Verifier).Verify(ctx, []float64{v}, dst); err != nil || dst.Values[0] != 2*v {
				t.Fatalf("verify: %v, %v", dst.Values, err)
			}
		}
	}
	if p.evaluated.Load() != 2 || p.verified.Load() != 2 {
		t.Errorf("the model ran %d and %d times, want 2 and 2", p.evaluated.Load(), p.verified.Load())
	}
	got := [4]int{counter.Calls(Primary), counter.Hits(Primary), counter.Calls(Second), counter.Hits(Second)}
	if got != [4]int{2, 4, 2, 4} {
		t.Errorf("calls and hits %v", got)
	}
}

func (p *plain) inner() *plain { return p }

func TestCachedPassesOnWhatCostsNoRun(t *testing.T) {
	cached, counter := Cached(variants()["explicit linear"], newLedger(t), "m")
	dst := problems.NewEvaluation(3)
	cached.(problems.Explicit).EvaluateExplicit([]float64{1}, dst)
	if a, b, ok := cached.(problems.Linear).LinearForm(1); !ok || len(a) != 1 || b != 0.5 {
		t.Errorf("linear form %v, %v, %v", a, b, ok)
	}
	if dst.Values[1] != 1.5 || counter.Calls(Primary)+counter.Hits(Primary) != 0 {
		t.Errorf("%v", dst.Values)
	}
}

func TestCachedHonoursTheContext(t *testing.T) {
	problem := &plain{}
	cached, _ := Cached(problem, newLedger(t), "m")
	ctx, cancel := context.WithCancel(context.Background())
	dst := problems.NewEvaluation(3)
	if err := cached.Evaluate(ctx, []float64{0.1}, dst); err != nil {
		t.Fatal(err)
	}
	cancel()
	for _, v := range []float64{0.1, 0.2} { // known or not
		if err := cached.Evaluate(ctx, []float64{v}, dst); !errors.Is(err, context.Canceled) {
			t.Errorf("at %v: %v", v, err)
		}
	}
	if problem.evaluated.Load() != 1 {
		t.Errorf("a cancelled call ran the model")
	}
}

// wrapping answers with a reason of a type of its own.
type wrapping struct{ plain }

type solverError struct{ code int }

func (e solverError) Error() string { return "solver gave up" }

func (w *wrapping) Evaluate(_ context.Context, x []float64, dst *problems.Evaluation) error {
	dst.Miss(0, solverError{7})
	dst.Miss(1, solverError{7})
	dst.Set(2, x[0])
	return nil
}

func TestFirstAnswerEqualsTheRepeatedOne(t *testing.T) {
	cached, _ := Cached(&wrapping{}, newLedger(t), "m")
	first, second := problems.NewEvaluation(3), problems.NewEvaluation(3)
	for _, dst := range []*problems.Evaluation{first, second} {
		if err := cached.Evaluate(context.Background(), []float64{0.1}, dst); err != nil {
			t.Fatal(err)
		}
	}
	for i := range first.Reasons {
		if !equalReason(first.Reasons[i], second.Reasons[i]) {
			t.Errorf("%#v, then %#v", first.Reasons[i], second.Reasons[i])
		}
	}
	want := &Recorded{Type: "runstore.solverError", Text: "solver gave up"}
	if !equalReason(first.Reasons[0], want) {
		t.Errorf("got %#v", first.Reasons[0])
	}
}
