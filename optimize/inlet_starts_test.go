package optimize_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"rampwright/optimize/local"
	"rampwright/problems/gas"
	"rampwright/problems/ramp"
)

// rampProgram is the highest recovery of a chain of ramps with exact derivatives:
// angles in radians, total turning at least what is given, Mach number behind the
// chain at most what is given (0: no such limit).
func rampProgram(mach float64, ramps int, low, high, turning, behind float64) local.Program {
	program := local.Program{Low: make([]float64, ramps), High: make([]float64, ramps)}
	for j := range ramps {
		program.Low[j], program.High[j] = low*degree, high*degree
	}
	if turning > 0 {
		program.AtMost = local.Rows{A: slices.Repeat([]float64{-1}, ramps), B: []float64{-turning * degree}}
	}
	if behind > 0 {
		program.Inequalities = 1
	}
	program.Value = func(x, c []float64) float64 {
		recovery, end, ok := ramp.Recovery(gas.Air, mach, x)
		if !ok {
			return math.NaN()
		}
		if behind > 0 {
			c[0] = end - behind
		}
		return -recovery
	}
	program.Gradient = func(x, grad, jac []float64) {
		if behind == 0 {
			jac = nil
		}
		ramp.RecoveryGradient(gas.Air, mach, x, grad, jac)
		for j := range grad {
			grad[j] = -grad[j]
		}
	}
	return program
}

// From 300 random starts of the box the local search ends at one optimum on three
// inlet problems, at a KKT residual of 1e-9 and on the limit: on the Mach number
// behind the ramps; on a lower one that every start violates; on the turning of
// six ramps.
func TestEveryStartEndsAtOneOptimum(t *testing.T) {
	const starts, least, mostMedian = 300, 297, 20
	for name, c := range map[string]struct {
		program    local.Program
		infeasible bool // starts that meet the limit are drawn again
	}{
		"active Mach limit": {rampProgram(5, 4, 2, 15, 0, 3), false},
		"infeasible starts": {rampProgram(5, 4, 2, 15, 0, 2.5), true},
		"six ramps":         {rampProgram(6, 6, 1, 10, 32, 0), false},
	} {
		t.Run(name, func(t *testing.T) {
			random := rand.New(rand.NewPCG(6, 300))
			p := &c.program
			n := p.Dimension()
			values := make([]float64, 0, starts)
			var evaluations []int
			best := math.Inf(1)
			constraint := make([]float64, p.Inequalities)
			for len(values) < starts {
				start := make([]float64, n)
				for j := range start {
					start[j] = p.Low[j] + (p.High[j]-p.Low[j])*random.Float64()
				}
				if f := p.Value(start, constraint); math.IsNaN(f) || c.infeasible && constraint[0] <= 0 {
					continue
				}
				result, err := local.Minimize(t.Context(), p, start, local.Settings{Tolerance: 1e-9})
				if err != nil {
					t.Fatal(err)
				}
				value := math.NaN()
				if result.Status == local.Converged && result.KKT <= 1e-9 && result.Violation <= 1e-10 {
					value = result.F
					best = math.Min(best, value)
				}
				margin := 0.0
				for _, c := range result.Constraints {
					margin = -c
				}
				if result.Status == local.Converged && math.Abs(margin) > 1e-9 {
					t.Errorf("the limit on the Mach number has a margin of %g", margin)
				}
				values, evaluations = append(values, value), append(evaluations, result.Values)
				inBox := func(j int) bool { return result.X[j] >= p.Low[j] && result.X[j] <= p.High[j] }
				for j := range n {
					if !inBox(j) {
						t.Errorf("angle %d is %g, outside its range", j+1, result.X[j]/degree)
					}
				}
			}
			same := 0
			for _, v := range values {
				if v-best <= 1e-9 {
					same++
				}
			}
			slices.Sort(evaluations)
			median := evaluations[starts/2]
			t.Logf("%d of %d starts at recovery %.10f, evaluations median %d, most %d", same, starts, -best, median, evaluations[starts-1])
			if same < least || median > mostMedian {
				t.Errorf("%d of %d starts end at recovery %.10f, wanted %d; evaluations median %d, wanted %d", same, starts, -best, least, median, mostMedian)
			}
		})
	}
}
