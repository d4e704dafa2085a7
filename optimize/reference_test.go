package optimize_test

import (
	"context"
	"fmt"
	"math"
	"slices"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/analytic"
	"rampwright/problems/gas"
	"rampwright/problems/ramp"
	"rampwright/problems/shock"
)

// chain is n ramps at one Mach number as a problem, angles in degrees: recovery,
// with a normal shock behind the last ramp where terminal; the Mach number behind
// the ramps; the total turning, linear.
type chain struct {
	mach     float64
	ramps    int
	terminal bool
}

func (c chain) Variables() []problems.Variable {
	list := make([]problems.Variable, c.ramps)
	for i := range list {
		list[i] = problems.Variable{Name: fmt.Sprintf("ramp %d", i+1), Low: 2, High: 15}
	}
	return list
}

func (chain) Quantities() []problems.Quantity {
	return []problems.Quantity{
		{Name: "recovery", Point: "p"}, {Name: "mach", Point: "p"}, {Name: "turning", Point: problems.Geometry, Explicit: true},
	}
}

func (c chain) Evaluate(_ context.Context, x []float64, dst *problems.Evaluation) error {
	turning := make([]float64, len(x))
	for i, v := range x {
		turning[i] = v * degree
	}
	c.EvaluateExplicit(x, dst)
	recovery, behind, ok := ramp.Recovery(gas.Air, c.mach, turning)
	if !ok {
		for i := range 2 {
			dst.Miss(i, &problems.Status{Phrase: "detached"})
		}
		return nil
	}
	if c.terminal {
		_, jump := shock.Normal(gas.Air, behind)
		recovery *= jump.TotalPressure
	}
	dst.Set(0, recovery)
	dst.Set(1, behind)
	return nil
}

func (c chain) EvaluateExplicit(x []float64, dst *problems.Evaluation) {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	dst.Set(2, sum)
}

func (c chain) LinearForm(i int) ([]float64, float64, bool) {
	a := make([]float64, c.ramps)
	for j := range a {
		a[j] = 1
	}
	return a, 0, i == 2
}

func chainTask(c chain, limit problems.Limit) optimize.Task {
	return optimize.Task{Problem: c, Limits: []problems.Limit{limit}, Aim: problems.Aim{Highest: true, Parts: []problems.Part{
		{Point: "p", Weight: 1, Reads: []problems.Read{{Quantity: "recovery", Point: "p"}}},
	}}}
}

// yardstick is a task with the evaluations it may take, median of ten seeds, to
// come within 1e-4 and 1e-6 of the optimum; 0 where nothing is asked.
type yardstick struct {
	name          string
	task          optimize.Task
	best          float64
	coarse, close int
}

// yardsticks are the best general-purpose routes measured, in evaluations.
func yardsticks(t testing.TB) []yardstick {
	t.Helper()
	turning := problems.Limit{Quantity: "turning", Point: problems.Geometry, Low: 30, High: math.Inf(1)}
	practical := problems.Limit{Quantity: "turning", Point: problems.Geometry, Low: math.Inf(-1), High: 30}
	slow := problems.Limit{Quantity: "mach", Point: "p", Low: math.Inf(-1), High: 3}
	list := []yardstick{
		{name: "turning", task: chainTask(chain{mach: 5, ramps: 4}, turning), coarse: 18, close: 24},
		{name: "mach", task: chainTask(chain{mach: 5, ramps: 4}, slow), coarse: 20, close: 30},
		{name: "terminal", task: chainTask(chain{mach: 3, ramps: 3, terminal: true}, practical), coarse: 15, close: 20},
	}
	for i := range list {
		found, err := optimize.SearchExact(context.Background(), list[i].task, optimize.Settings{})
		if err != nil || !found.Feasible {
			t.Fatal(list[i].name, err)
		}
		list[i].best = found.Aim
	}
	for _, c := range []struct {
		name   string
		coarse int
	}{
		{"g04", 23}, {"g06", 12}, {"g24", 18}, {"g08", 33}, {"speed_reducer", 65}, {"pressure_vessel", 31}, {"welded_beam", 67},
		{"g09", 0}, {"tension_spring", 0}, {"hs35", 0}, {"hs43", 0}, {"hs71", 0}, {"hs76", 0}, {"hs100", 0}, {"styblinski_tang", 0},
	} {
		problem, err := analytic.New(c.name)
		if err != nil {
			t.Fatal(err)
		}
		list = append(list, yardstick{
			name: c.name, best: problem.Lowest, coarse: c.coarse,
			task: optimize.Task{Problem: problem, Limits: problem.OwnLimits(), Aim: problem.Aim()},
		})
	}
	return list
}

// reached returns after how many evaluations a design stood within each share of
// the best, feasible to 1e-8 of the scale of each limit; a large number where it
// never did.
func (y yardstick) reached(result *optimize.Result, shares ...float64) []int {
	out := make([]int, len(shares))
	for k, share := range shares {
		out[k] = never
		for i, s := range result.Samples {
			gap := math.Abs(s.Evaluation.Values[0] - y.best)
			feasible := true
			for _, row := range result.Rows {
				feasible = feasible && row.Margin(s.Evaluation.Values[row.Index]) >= -1e-8*row.Scale
			}
			if feasible && gap <= share*math.Max(math.Abs(y.best), 1e-12) {
				out[k] = i + 1
				break
			}
		}
	}
	return out
}

const never = 999 // evaluations: not reached

// smallDesign is a first design of two points more than variables.
func smallDesign(n int) optimize.Settings { return optimize.Settings{Samples: n + 2, Infill: 30 * n} }

// evaluations runs a yardstick from seeds 1 to n and returns, ascending, after how
// many evaluations it came within 1e-4 and 1e-6, and how many were spent.
func (y yardstick) evaluations(t testing.TB, settings optimize.Settings, seeds int64) (coarse, close, spent []int) {
	t.Helper()
	for seed := int64(1); seed <= seeds; seed++ {
		settings.Seed, settings.Jobs = seed, 2
		result, err := optimize.Design(t.Context(), y.task, settings, nil)
		if err != nil {
			t.Fatal(err)
		}
		reached := y.reached(result, 1e-4, 1e-6)
		coarse, close, spent = append(coarse, reached[0]), append(close, reached[1]), append(spent, len(result.Samples))
		if reached[0] == never {
			t.Logf("seed %d ends at %g, best %g: %s", seed, result.Best.AimExact, y.best, result.Why)
		}
	}
	for _, list := range [][]int{coarse, close, spent} {
		slices.Sort(list)
	}
	return coarse, close, spent
}

// From a small first design the optimum is reached in no more evaluations than by
// the best general-purpose route measured (here half the seeds of the benchmark
// and the yardsticks that cost least; all ten seeds of the one with many valleys).
func TestFewEvaluationsReachTheOptimum(t *testing.T) {
	for _, y := range yardsticks(t) {
		if !slices.Contains([]string{"turning", "mach", "terminal", "g04", "g06", "g08", "g24"}, y.name) {
			continue
		}
		seeds := 5
		if y.name == "g08" {
			seeds = 10
		}
		settings := smallDesign(len(y.task.Problem.Variables()))
		settings.Infill = max(y.coarse, y.close) // later ones are not asked about
		coarse, close, _ := y.evaluations(t, settings, int64(seeds))
		if coarse[(seeds-1)/2] > y.coarse || y.close > 0 && close[(seeds-1)/2] > y.close {
			t.Errorf("%s: to 1e-4 in %v evaluations, to 1e-6 in %v; medians wanted %d and %d", y.name, coarse, close, y.coarse, y.close)
		}
	}
}

// BenchmarkEvaluationsToTheOptimum reports, for every yardstick and for a small
// first design and the default one, the median evaluations to 1e-4 and 1e-6 over
// ten seeds, those spent, and how many seeds missed 1e-4. Run it with -benchtime 1x.
func BenchmarkEvaluationsToTheOptimum(b *testing.B) {
	const seeds = 10
	for _, y := range yardsticks(b) {
		for _, effort := range []struct {
			name     string
			settings optimize.Settings
		}{{"small", smallDesign(len(y.task.Problem.Variables()))}, {"default", optimize.Settings{}}} {
			b.Run(y.name+"/"+effort.name, func(b *testing.B) {
				for b.Loop() {
					coarse, close, spent := y.evaluations(b, effort.settings, seeds)
					misses := len(coarse) - len(slices.DeleteFunc(slices.Clone(coarse), func(n int) bool { return n == never }))
					b.ReportMetric(float64(coarse[seeds/2-1]+coarse[seeds/2])/2, "to-1e-4")
					b.ReportMetric(float64(close[seeds/2-1]+close[seeds/2])/2, "to-1e-6")
					b.ReportMetric(float64(spent[seeds/2-1]+spent[seeds/2])/2, "spent")
					b.ReportMetric(float64(misses), "misses")
				}
			})
		}
	}
}
