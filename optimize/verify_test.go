package optimize

import (
	"math"
	"testing"

	"rampwright/constraints"
	"rampwright/problems"
)

func TestRouteGap(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		a, b []float64
		want float64
	}{
		{[]float64{1, 200}, []float64{1, 202}, 0.01},
		{[]float64{1e-3}, []float64{2e-3}, 1e-3}, // absolute below 1
		{[]float64{nan, 2}, []float64{nan, 2}, 0},
		{[]float64{nan, 2}, []float64{1, 2}, math.Inf(1)},
		{[]float64{1, 2}, []float64{1, nan}, math.Inf(1)},
	} {
		if got := routeGap(&problems.Evaluation{Values: c.a}, &problems.Evaluation{Values: c.b}); math.Abs(got-c.want) > 1e-15 && got != c.want {
			t.Errorf("%v against %v: %g, want %g", c.a, c.b, got, c.want)
		}
	}
}

// Numerical routes may differ by the bounds of the second, no more, and a value
// without a finite bound agrees with nothing.
func TestRouteGapBeyondTheBounds(t *testing.T) {
	for _, c := range []struct{ b, bound, want float64 }{
		{2.01, 0.02, 0}, {2.01, 0.005, 0.0025}, {1.99, 0.005, 0.0025}, {2, math.Inf(1), math.Inf(1)}, {2, 0, 0},
	} {
		second := problems.NewEvaluation(2)
		second.Set(0, c.b)
		second.Set(1, 5)
		second.Widen(0, c.bound)
		first := &problems.Evaluation{Values: []float64{2, 5}}
		if got := routeGap(first, second); math.Abs(got-c.want) > 1e-12 && got != c.want {
			t.Errorf("2 against %g within %g: %g, want %g", c.b, c.bound, got, c.want)
		}
	}
}

// A limit on a quantity the second route resolves better must hold there as well.
func TestLimitsHoldOnTheFinerRoute(t *testing.T) {
	rows, err := constraints.Rows(
		[]problems.Quantity{{Name: "traced"}, {Name: "exact"}},
		[]problems.Limit{{Quantity: "traced", Low: 1, High: math.Inf(1)}, {Quantity: "exact", Low: 1, High: math.Inf(1)}})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		fine   float64
		broken int
	}{{1.01, 0}, {0.99, 1}} {
		second := &problems.Evaluation{Values: []float64{c.fine, 1 - 1e-13}, Reasons: make([]error, 2)}
		second.Widen(0, 0.05)
		candidate := Candidate{Exact: &problems.Evaluation{Values: []float64{1, 1}, Reasons: make([]error, 2)}}
		candidate.Assessment = constraints.Assess(rows, candidate.Exact)
		candidate.Broken = broken(candidate.Assessment, second)
		if len(candidate.Broken) != c.broken || candidate.confirmed() == (c.broken > 0) {
			t.Errorf("%g finely: %d limits broken, confirmed %t", c.fine, len(candidate.Broken), candidate.confirmed())
		}
		// Against limits loosened to what the finer route holds, nothing is broken.
		looser, err := constraints.Rows(
			[]problems.Quantity{{Name: "traced"}, {Name: "exact"}}, []problems.Limit{{Quantity: "traced", Low: 0.98, High: math.Inf(1)}})
		if err != nil {
			t.Fatal(err)
		}
		candidate.Second = second
		if candidate.Judge(looser); len(candidate.Broken) > 0 || !candidate.Verified(1e-3) || len(candidate.Assessment.Checks) != 1 {
			t.Errorf("against looser limits: %+v", candidate)
		}
		if candidate.SurrogateError = 2e-3; candidate.Verified(1e-3) {
			t.Error("verified by surrogates that were wrong")
		}
	}
}
