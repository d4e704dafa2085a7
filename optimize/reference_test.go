package optimize_test

import (
	"context"
	"fmt"
	"maps"
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

// cost is what a yardstick took from each of some seeds, each list ascending: the
// evaluations, and the rounds after the samples, to 1e-4 and to 1e-6, and the
// evaluations spent in all.
type cost struct{ coarse, close, coarseRounds, closeRounds, spent []int }

// evaluations runs a yardstick from seeds 1 to n.
func (y yardstick) evaluations(t testing.TB, settings optimize.Settings, seeds int64) (c cost) {
	t.Helper()
	for seed := int64(1); seed <= seeds; seed++ {
		settings.Seed, settings.Jobs = seed, 2
		result, err := optimize.Design(t.Context(), y.task, settings, nil)
		if err != nil {
			t.Fatal(err)
		}
		reached := y.reached(result, 1e-4, 1e-6)
		c.coarse, c.close, c.spent = append(c.coarse, reached[0]), append(c.close, reached[1]), append(c.spent, len(result.Samples))
		c.coarseRounds = append(c.coarseRounds, roundOf(result, reached[0]))
		c.closeRounds = append(c.closeRounds, roundOf(result, reached[1]))
		if reached[0] == never {
			t.Logf("seed %d ends at %g, best %g: %s", seed, result.Best.AimExact, y.best, result.Why)
		}
	}
	for _, list := range [][]int{c.coarse, c.close, c.coarseRounds, c.closeRounds, c.spent} {
		slices.Sort(list)
	}
	return c
}

// roundOf is the round after the samples in which an evaluation was made.
func roundOf(result *optimize.Result, evaluation int) int {
	if evaluation == never {
		return never
	}
	if evaluation <= result.Counts.Samples {
		return 0
	}
	for i, step := range result.History {
		if step.Evaluations >= evaluation {
			return i + 1
		}
	}
	return len(result.History) + 1
}

// median of an ascending list.
func median(list []int) float64 {
	n := len(list)
	return float64(list[(n-1)/2]+list[n/2]) / 2
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
		c := y.evaluations(t, settings, int64(seeds))
		coarse, close := c.coarse, c.close
		if coarse[(seeds-1)/2] > y.coarse || y.close > 0 && close[(seeds-1)/2] > y.close {
			t.Errorf("%s: to 1e-4 in %v evaluations, to 1e-6 in %v; medians wanted %d and %d", y.name, coarse, close, y.coarse, y.close)
		}
	}
}

// Four points a round lead to the optimum in two thirds of the rounds at most, and
// from every seed (here half the seeds of the benchmark and two yardsticks).
func TestBatchSavesRoundsToTheOptimum(t *testing.T) {
	for _, y := range yardsticks(t) {
		if !slices.Contains([]string{"turning", "mach"}, y.name) {
			continue
		}
		settings := smallDesign(len(y.task.Problem.Variables()))
		alone := y.evaluations(t, settings, 5)
		settings.Batch = 4
		batch := y.evaluations(t, settings, 5)
		if 3*batch.coarseRounds[2] > 2*alone.coarseRounds[2] || batch.coarse[4] == never {
			t.Errorf("%s: to 1e-4 in %v rounds of four, in %v without a batch", y.name, batch.coarseRounds, alone.coarseRounds)
		}
	}
}

// BenchmarkEvaluationsToTheOptimum reports, for every yardstick, for a small first
// design with and without batches and for the default effort, medians over ten
// seeds: evaluations and rounds after the samples to 1e-4 and 1e-6, evaluations
// spent; and how many seeds missed 1e-4. Run it with -benchtime 1x.
func BenchmarkEvaluationsToTheOptimum(b *testing.B) {
	const seeds = 10
	for _, y := range yardsticks(b) {
		small := smallDesign(len(y.task.Problem.Variables()))
		efforts := map[string]optimize.Settings{"default": {}, "small": small}
		for _, batch := range []int{1, 4, 8} {
			small.Batch = batch
			if batch == 4 { // and for 8
				small.Infill *= 2
			}
			efforts[fmt.Sprintf("small,batch=%d", batch)] = small
		}
		for _, name := range slices.Sorted(maps.Keys(efforts)) {
			b.Run(y.name+"/"+name, func(b *testing.B) {
				for b.Loop() {
					c := y.evaluations(b, efforts[name], seeds)
					b.ReportMetric(median(c.coarse), "to-1e-4")
					b.ReportMetric(median(c.close), "to-1e-6")
					b.ReportMetric(median(c.coarseRounds), "rounds-to-1e-4")
					b.ReportMetric(median(c.closeRounds), "rounds-to-1e-6")
					b.ReportMetric(median(c.spent), "spent")
					b.ReportMetric(float64(seeds-slices.IndexFunc(append(c.coarse, never), func(n int) bool { return n == never })), "misses")
				}
			})
		}
	}
}
