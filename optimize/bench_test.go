package optimize_test

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"rampwright/optimize"
	"rampwright/optimize/local"
	"rampwright/problems/gas"
	"rampwright/problems/ramp"
)

const degree = math.Pi / 180

// bareChain is the recovery of four ramps of 2 to 15 degrees at Mach 5 that turn
// the flow by 30 degrees or more in all, as a program.
func bareChain() local.Program {
	const n = 4
	const mach = 5
	program := local.Program{
		Low: make([]float64, n), High: make([]float64, n),
		AtMost: local.Rows{A: make([]float64, n), B: []float64{-30 * degree}},
		Value: func(x, _ []float64) float64 {
			recovery, _, ok := ramp.Recovery(gas.Air, mach, x)
			if !ok {
				return math.NaN()
			}
			return -recovery
		},
		Gradient: func(x, grad, _ []float64) {
			ramp.RecoveryGradient(gas.Air, mach, x, grad, nil)
			for j := range grad {
				grad[j] = -grad[j]
			}
		},
	}
	for j := range n {
		program.Low[j], program.High[j], program.AtMost.A[j] = 2*degree, 15*degree, -1
	}
	return program
}

// chainStarts are random points of the box.
func chainStarts(count int) [][]float64 {
	random := rand.New(rand.NewPCG(4, 30))
	starts := make([][]float64, count)
	for i := range starts {
		starts[i] = make([]float64, 4)
		for j := range starts[i] {
			starts[i][j] = (2 + 13*random.Float64()) * degree
		}
	}
	return starts
}

// Every random start ends at the same point, on the limit of the total turning.
func TestPolishOfTheBareChain(t *testing.T) {
	program := bareChain()
	best := math.NaN()
	for _, start := range chainStarts(300) {
		result, err := local.Minimize(context.Background(), &program, start, local.Settings{})
		if err != nil {
			t.Fatal(err)
		}
		total := 0.0
		for _, angle := range result.X {
			total += angle
		}
		if math.IsNaN(best) {
			best = result.F
		}
		if result.Status != local.Converged || math.Abs(result.F-best) > 1e-9 || math.Abs(total-30*degree) > 1e-9 {
			t.Errorf("from %v: %v, recovery %.10f with %g deg of turning, others %.10f", start, result.Status, -result.F, total/degree, -best)
		}
	}
}

func BenchmarkSQPPolishBareChain(b *testing.B) {
	program := bareChain()
	starts := chainStarts(256)
	var workspace local.Workspace
	values := 0
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		result, err := workspace.Minimize(context.Background(), &program, starts[i%len(starts)], local.Settings{})
		if err != nil || result.Status != local.Converged {
			b.Fatal(err, result.Status)
		}
		values += result.Values
	}
	b.ReportMetric(float64(values)/float64(b.N), "evaluations/op")
}

func BenchmarkDesignVeyric(b *testing.B) {
	for _, jobs := range []int{1, 2} {
		b.Run(fmt.Sprintf("jobs=%d", jobs), func(b *testing.B) {
			task, _ := veyric(b)
			benchmarkDesign(b, task, jobs)
		})
	}
}

// BenchmarkDesignSlowModel is a design whose every evaluation waits 0.1 s, as for
// a solver that runs elsewhere.
func BenchmarkDesignSlowModel(b *testing.B) {
	for _, jobs := range []int{1, 2} {
		b.Run(fmt.Sprintf("jobs=%d", jobs), func(b *testing.B) {
			task, problem := veyric(b)
			task.Problem = &metered{Problem: problem, lasts: 100 * time.Millisecond}
			benchmarkDesign(b, task, jobs)
		})
	}
}

func BenchmarkSearchExactVeyric(b *testing.B) {
	task, _ := veyric(b)
	for b.Loop() {
		if found, err := optimize.SearchExact(context.Background(), task, optimize.Settings{Jobs: 2}); err != nil || !found.Feasible {
			b.Fatal(err)
		}
	}
}

func benchmarkDesign(b *testing.B, task optimize.Task, jobs int) {
	b.Helper()
	for b.Loop() {
		result, err := optimize.Design(context.Background(), task, optimize.Settings{Jobs: jobs}, nil)
		if err != nil || result.Status != optimize.Verified {
			b.Fatal(err, result.Status)
		}
	}
}
