package optimize

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/optimize/local"
	"rampwright/problems"
)

// polished searches the exact model of a task from a point of the unit cube.
func polished(t testing.TB, task Task, start []float64) (*plan, *solution) {
	t.Helper()
	p := mustPlan(t, task)
	low, high := p.cube()
	found, err := newSearcher(p, newExactLandscape(context.Background(), p), 0.7).polish(context.Background(), start, low, high, exactPolish)
	if err != nil {
		t.Fatal(err)
	}
	return p, found
}

// Known solutions from every corner of the start, with the prices of the limits.
func TestPolishKnownSolutions(t *testing.T) {
	for _, c := range []struct {
		name   string
		task   Task
		x      []float64
		aim    float64
		prices []float64
	}{
		{"disk", disk(1), diskX(1), diskAim(1), []float64{diskPrice(1)}},
		{"larger disk", disk(4), diskX(4), diskAim(4), []float64{diskPrice(4)}},
		{"Hock & Schittkowski 35", beale(3), bealeX, bealeAim, []float64{bealePrice}},
		{"Charalambous & Bandler 2", charalambous2(), []float64{1.139037652, 0.899559938}, 1.952224494, nil},
		{"Charalambous & Bandler 3", charalambous3(), []float64{1, 1}, 2, nil},
	} {
		rapid.Check(t, func(t *rapid.T) {
			p, err := newPlan(c.task)
			if err != nil {
				t.Fatal(err)
			}
			start := make([]float64, p.dimension())
			for j := range start {
				start[j] = rapid.Float64Range(0, 1).Draw(t, "start")
			}
			low, high := p.cube()
			search := newSearcher(p, newExactLandscape(context.Background(), p), 0.7)
			found, err := search.polish(context.Background(), start, low, high, exactPolish)
			if err != nil {
				t.Fatal(err)
			}
			// Back-off moves a solution by about 1e-9; differences of step 6e-6
			// leave 1e-6 of the minimax points.
			if math.Abs(found.aim-c.aim) > 1e-7 || farthest(p.denormal(found.u), c.x) > 1e-4 {
				t.Errorf("%s from %v: %v with %.10g at %v, want %.10g at %v",
					c.name, start, found.status, found.aim, p.denormal(found.u), c.aim, c.x)
			}
			if found.violation != 0 || !p.insideLinear(found.u) && p.linearViolation(found.u) > 1e-12 {
				t.Errorf("%s from %v: violation %g, linear %g", c.name, start, found.violation, p.linearViolation(found.u))
			}
			if c.prices != nil && farthest(found.prices, c.prices) > 1e-4 {
				t.Errorf("%s: prices %v, want %v", c.name, found.prices, c.prices)
			}
		})
	}
}

// The worst of several parts is raised through one more variable: the program's
// functions and derivatives agree for highest and lowest.
func TestSearcherProgramGradient(t *testing.T) {
	highest := charalambous2()
	highest.Aim.Highest = true
	formula := disk(1)
	formula.Aim.Parts[0].Reads = append(formula.Aim.Parts[0].Reads, problems.Read{Quantity: "square", Point: "here"})
	formula.Aim.Parts[0].Formula = func(v []float64) float64 { return v[0] * v[0] / (1 + v[1]) }
	for name, task := range map[string]Task{
		"worst of lowest": charalambous2(), "worst of highest": highest, "single": disk(1), "formula": formula, "linear rows": beale(3),
	} {
		p := mustPlan(t, task)
		search := newSearcher(p, newExactLandscape(context.Background(), p), 0.7)
		low, high := p.cube()
		rapid.Check(t, func(t *rapid.T) {
			start := make([]float64, p.dimension())
			for j := range start {
				start[j] = rapid.Float64Range(0.01, 0.99).Draw(t, "u")
			}
			program, x := search.program(start, low, high)
			if err := program.Validate(); err != nil {
				t.Fatal(err)
			}
			checkProgram(t, name, program, x)
		})
	}
}

// checkProgram compares a program's gradients with differences of its values.
func checkProgram(t *rapid.T, name string, program local.Program, x []float64) {
	n, m := program.Dimension(), program.Constraints()
	grad, jac := make([]float64, n), make([]float64, n*m)
	program.Value(x, make([]float64, m))
	program.Gradient(x, grad, jac)
	up, down := make([]float64, m), make([]float64, m)
	probe := append([]float64(nil), x...)
	for j := range x {
		const step = 1e-5
		probe[j] = x[j] + step
		above := program.Value(probe, up)
		probe[j] = x[j] - step
		below := program.Value(probe, down)
		probe[j] = x[j]
		if want := (above - below) / (2 * step); math.Abs(grad[j]-want) > 1e-6*(1+math.Abs(want)) {
			t.Errorf("%s: slope %d of the aim is %g, differences say %g", name, j, grad[j], want)
		}
		for i := range m {
			if want := (up[i] - down[i]) / (2 * step); math.Abs(jac[i*n+j]-want) > 1e-6*(1+math.Abs(want)) {
				t.Errorf("%s: slope %d of row %d is %g, differences say %g", name, j, i, jac[i*n+j], want)
			}
		}
	}
}

// Without a predictable aim a search looks for the limits alone.
func TestBlindSearchFindsFeasibility(t *testing.T) {
	p := mustPlan(t, disk(0.04))
	low, high := p.cube()
	search := newSearcher(p, newExactLandscape(context.Background(), p), 1)
	search.blind = true
	found, err := search.polish(context.Background(), []float64{1, 1}, low, high, exactPolish)
	if err != nil {
		t.Fatal(err)
	}
	if found.violation != 0 {
		t.Errorf("violation %g at %v", found.violation, p.denormal(found.u))
	}
}

// A limit whose quantity does not apply asks nothing of a search.
func TestSearchPastALimitThatDoesNotApply(t *testing.T) {
	task := disk(1)
	inner := task.Problem.(verifiedToy).fill
	task.Problem = verifiedToy{&toy{
		variables: task.Problem.Variables(), quantities: task.Problem.Quantities(),
		fill: func(x []float64, dst *problems.Evaluation) {
			inner(x, dst)
			dst.Miss(1, &problems.NotApplicable{Why: "no limit on the square"})
		},
	}}
	p, found := polished(t, task, []float64{0.2, 0.3})
	if x := p.denormal(found.u); x[0] != 1.5 || x[1] != 2 || found.violation != 0 {
		t.Errorf("ends at %v with violation %g, want the corner (1.5, 2)", x, found.violation)
	}
}

// The yardstick search finds the solutions as well, and says what it cannot find.
func TestSearchExact(t *testing.T) {
	for name, c := range map[string]struct {
		task Task
		aim  float64
	}{
		"disk":                     {disk(1), diskAim(1)},
		"Hock & Schittkowski 35":   {beale(3), bealeAim},
		"Charalambous & Bandler 3": {charalambous3(), 2},
		"edge of what is known":    {cliff(), math.Sqrt(2.1)},
	} {
		one, err := SearchExact(context.Background(), c.task, Settings{Jobs: 1})
		if err != nil {
			t.Fatal(err)
		}
		if !one.Feasible || math.Abs(one.Aim-c.aim) > 1e-7 || one.Violation != 0 {
			t.Errorf("%s: %+v, want %.10g", name, one, c.aim)
		}
		three, err := SearchExact(context.Background(), c.task, Settings{Jobs: 3})
		if err != nil {
			t.Fatal(err)
		}
		if one.Aim != three.Aim || one.Evaluations != three.Evaluations || farthest(one.X, three.X) != 0 {
			t.Errorf("%s: %+v with one job, %+v with three", name, one, three)
		}
	}
	impossible := disk(1)
	impossible.Limits = []problems.Limit{atLeast("square", 8)}
	found, err := SearchExact(context.Background(), impossible, Settings{})
	if err != nil {
		t.Fatal(err)
	}
	// The farthest corner has 1.5^2 + 2^2 = 6.25 of 8.
	if found.Feasible || math.Abs(found.Violation-1.75/8) > 1e-6 {
		t.Errorf("%+v, want infeasible by %g", found, 1.75/8)
	}
}

func TestSearchExactReportsABrokenModel(t *testing.T) {
	task := disk(1)
	task.Problem = brokenAt{task.Problem, 0.4}
	if _, err := SearchExact(context.Background(), task, Settings{Jobs: 2}); err == nil {
		t.Error("a model that breaks gives a result")
	}
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := SearchExact(ended, disk(1), Settings{}); err == nil {
		t.Error("a cancelled search gives a result")
	}
}
