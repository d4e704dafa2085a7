package optimize_test

import (
	"context"
	"math"
	"sort"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// plane is two variables in [0, 10] and linear quantities of them: x, y, x + y.
type plane struct{}

func (plane) Variables() []problems.Variable {
	return []problems.Variable{{Name: "x", Unit: "deg", High: 10}, {Name: "y", Unit: "deg", High: 10}}
}

func (plane) Quantities() []problems.Quantity {
	return []problems.Quantity{{Name: "x", Point: "p"}, {Name: "y", Point: "p"}, {Name: "sum", Point: "p"}}
}

func (plane) Evaluate(_ context.Context, x []float64, dst *problems.Evaluation) error {
	dst.Set(0, x[0])
	dst.Set(1, x[1])
	dst.Set(2, x[0]+x[1])
	return nil
}

func between(quantity string, low, high float64) problems.Limit {
	return problems.Limit{Quantity: quantity, Point: "p", Low: low, High: high}
}

func highest(quantity string) problems.Aim {
	return problems.Aim{Highest: true, Text: quantity, Parts: []problems.Part{
		{Point: "p", Weight: 1, Reads: []problems.Read{{Quantity: quantity, Point: "p"}}},
	}}
}

func names(c optimize.Conflict) string {
	var list []string
	for _, m := range c.Members {
		side := ">="
		if m.Upper {
			side = "<="
		}
		list = append(list, m.Limit.Quantity+side)
	}
	sort.Strings(list)
	return strings.Join(list, " ")
}

// x <= 3, y <= 4 and x + y >= 9 contradict each other; each pair can be met. By
// hand: loosening x to 5, y to 6, or the sum to 7 is enough. The limit y >= 1 has
// no part in it.
func TestExplainFindsTheConflictAndTheSmallestRelaxation(t *testing.T) {
	inf := math.Inf(1)
	task := optimize.Task{Problem: plane{}, Aim: highest("x"), Limits: []problems.Limit{
		between("x", -inf, 3), between("y", 1, 4), between("sum", 9, inf),
	}}
	e, err := optimize.Explain(context.Background(), task, optimize.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	if e.Feasible {
		t.Fatal("an infeasible task is called feasible")
	}
	if len(e.Conflicts) != 1 || names(e.Conflicts[0]) != "sum>= x<= y<=" {
		t.Errorf("conflicts %v", e.Conflicts)
	}
	enough := map[string]float64{"x": 5, "y": 6, "sum": 7}
	for _, r := range e.Relaxations {
		if want := enough[r.Side.Limit.Quantity]; math.Abs(r.Bound-want) > 1e-6 {
			t.Errorf("relaxation of %s: %v, want %v", r.Side.Limit.Quantity, r.Bound, want)
		}
	}
	// The least sum of violations scaled by the bounds: 2 over 9, on the sum.
	if want := 2.0 / 9; math.Abs(e.Least.Assessment.Violation-want) > 1e-6 {
		t.Errorf("least violation %v, want %v", e.Least.Assessment.Violation, want)
	}
}

// Two contradictions that share nothing are both listed, and no single relaxation
// is enough.
func TestExplainListsSeparateConflicts(t *testing.T) {
	inf := math.Inf(1)
	task := optimize.Task{Problem: plane{}, Aim: highest("sum"), Limits: []problems.Limit{
		between("x", 12, inf), between("y", 11, inf),
	}}
	e, err := optimize.Explain(context.Background(), task, optimize.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	found := map[string]bool{}
	for _, c := range e.Conflicts {
		found[names(c)] = true
	}
	if len(e.Conflicts) != 2 || !found["x>="] || !found["y>="] {
		t.Errorf("conflicts %v, want x>= and y>= each alone", e.Conflicts)
	}
	for _, r := range e.Relaxations {
		if !math.IsNaN(r.Bound) {
			t.Errorf("loosening %s alone to %v cannot be enough", r.Side.Limit.Quantity, r.Bound)
		}
	}
}

// detachedInlet has a feasible region of a few per cent of its box: four ramps of
// 4 to 20 deg at Mach 2, where most designs detach.
func detachedInlet(t *testing.T) optimize.Task {
	t.Helper()
	turning := inlet.Between(0.5, 6)
	definition := inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.2, Width: 0.3, LipTurning: &turning, CowlWedge: inlet.Fixed(3), CowlLength: 0.2,
		ShockOnLip: inlet.Fixed(2), LipSetback: inlet.Fixed(0), TerminalShock: true, DuctFactor: 1,
		Points: []inlet.Point{{Name: "p", Mach: 2, Pressure: 10e3, Temperature: 220}},
	}
	for range 4 {
		definition.RampAngle = append(definition.RampAngle, inlet.Between(4, 20))
	}
	problem, err := inlet.New(definition)
	if err != nil {
		t.Fatal(err)
	}
	return optimize.Task{
		Problem: problem, Aim: highest("recovery"),
		Limits: append(inlet.HardLimits(definition), between("recovery", 0.9, math.Inf(1)), between("terminal_mach", 1.1, math.Inf(1))),
	}
}

// A feasible region hidden behind detached starts is found.
func TestExplainFindsARegionBehindDetachedStarts(t *testing.T) {
	task := detachedInlet(t)
	known, total := 0, 0
	evaluation := problems.NewEvaluation(len(task.Problem.Quantities()))
	for i := range 400 {
		x := make([]float64, 5)
		for j, v := range task.Problem.Variables() {
			_, fraction := math.Modf(float64(i) * math.Sqrt(float64(2+j*j+j)))
			x[j] = v.Low + fraction*(v.High-v.Low)
		}
		if err := task.Problem.Evaluate(context.Background(), x, evaluation); err != nil {
			t.Fatal(err)
		}
		if total++; !math.IsNaN(evaluation.Values[0]) {
			known++
		}
	}
	if known*10 > total {
		t.Fatalf("%d of %d starts have a flow: the region is not hidden", known, total)
	}
	e, err := optimize.Explain(context.Background(), task, optimize.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	if !e.Feasible {
		t.Errorf("no feasible design found; least violation %v", e.Least.Assessment.Violation)
	}
}

// The nearest rounded design keeps the limits that rounding to nearest would miss.
func TestRoundKeepsEveryLimit(t *testing.T) {
	inf := math.Inf(1)
	task := optimize.Task{Problem: plane{}, Aim: highest("x"), Limits: []problems.Limit{
		between("x", -inf, 3.04), between("sum", 7.07, inf),
	}}
	r, err := optimize.Round(context.Background(), task, []float64{3.04, 4.03}, 0.1)
	if err != nil {
		t.Fatal(err)
	}
	// Nearest is 3.0 and 4.0, a sum of 7.0; the nearest that holds is 3.0 and 4.1.
	if len(r.X) != 2 || r.X[0] != 3.0 || r.X[1] != 4.1 {
		t.Errorf("rounded to %v, want [3 4.1]", r.X)
	}
	impossible := optimize.Task{Problem: plane{}, Aim: highest("x"), Limits: []problems.Limit{between("x", 3.01, 3.09)}}
	if r, err = optimize.Round(context.Background(), impossible, []float64{3.04, 4}, 0.1); err != nil || r.X != nil {
		t.Errorf("rounded to %v (%v) where no tenth lies within the limit", r.X, err)
	}
}

// On the edge of x + y <= 8 the aim x + y leaves x and y open; the aim x does not.
func TestPlaysTellAnOpenOptimum(t *testing.T) {
	limits := []problems.Limit{between("sum", math.Inf(-1), 8)}
	open, err := optimize.Plays(context.Background(), optimize.Task{Problem: plane{}, Aim: highest("sum"), Limits: limits}, []float64{4, 4 - 1e-8}, 1e-6)
	if err != nil {
		t.Fatal(err)
	}
	if p := open[0]; math.Abs(p.Low) > 1e-4 || math.Abs(p.High-8) > 1e-4 {
		t.Errorf("play of x %v, want 0 to 8", p)
	}
	fixed, err := optimize.Plays(context.Background(), optimize.Task{Problem: plane{}, Aim: highest("x"), Limits: limits}, []float64{8 - 1e-8, 0}, 1e-6)
	if err != nil {
		t.Fatal(err)
	}
	if p := fixed[0]; p.High-p.Low > 1e-4 {
		t.Errorf("play of x %v, want none", p)
	}
}
