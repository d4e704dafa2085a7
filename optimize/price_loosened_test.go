package optimize_test

import (
	"math"
	"slices"
	"testing"

	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems/analytic"
)

// priceTolerance is how far a price may be from what the aim gains.
const priceTolerance = 1e-3

// The price of every active limit is what the aim gains when the limit is loosened
// and the optimum found anew on the exact model, per unit: on published problems
// and on the inlet test article.
func TestPricesOfPublishedProblems(t *testing.T) {
	tasks := map[string]optimize.Task{}
	for _, name := range []string{"g06", "g24", "hs43", "hs71", "hs76", "pressure_vessel", "welded_beam"} {
		problem, err := analytic.New(name)
		if err != nil {
			t.Fatal(err)
		}
		tasks[name] = optimize.Task{Problem: problem, Limits: problem.OwnLimits(), Aim: problem.Aim()}
	}
	tasks["test article"], _ = veyric(t)
	for name, task := range tasks {
		result, err := optimize.Design(t.Context(), task, optimize.Settings{Jobs: 2}, nil)
		if err != nil {
			t.Fatal(err)
		}
		checks := result.Best.Assessment.Checks
		if err := optimize.Price(t.Context(), task, result.Best.X, checks); err != nil {
			t.Fatal(err)
		}
		active := 0
		for _, check := range checks {
			if !check.Active {
				if check.Price != 0 {
					t.Errorf("%s: %s is not active and has a price of %g", name, check.Quantity.Name, check.Price)
				}
				continue
			}
			active++
			step := 1e-4 * check.Scale
			gain := (loosenedAim(t, task, check, step) - loosenedAim(t, task, check, -step)) / (2 * step)
			t.Logf("%s: %s %s price %.6g, gain %.6g", name, check.Quantity.Name, check.Quantity.Member, check.Price, gain)
			if !(math.Abs(check.Price-gain) <= priceTolerance*math.Abs(gain)) {
				t.Errorf("%s: price of %s %.6g, the aim gains %.6g", name, check.Quantity.Name, check.Price, gain)
			}
			if check.Price > 0 {
				compareOverRange(t, name, task, check)
			}
		}
		if active == 0 {
			t.Errorf("%s: no limit is active", name)
		}
	}
}

// compareOverRange checks that over half the range of a price the aim gains price
// times loosening, within a tenth.
func compareOverRange(t *testing.T, name string, task optimize.Task, check constraints.Check) {
	t.Helper()
	half := check.PriceRange / 2
	gain := (loosenedAim(t, task, check, half) - loosenedAim(t, task, check, 0)) / half
	t.Logf("%s: %s holds for %.6g, end %v, over half of it %.5f", name, check.Quantity.Name, check.PriceRange, check.PriceEnd, gain/check.Price)
	if !(math.Abs(check.Price-gain) <= 0.1*check.Price) {
		t.Errorf("%s: price of %s %.6g, over %.6g the aim gains %.6g", name, check.Quantity.Name, check.Price, half, gain)
	}
}

// loosenedAim is the best aim, higher better, with the limit of a check loosened by
// step.
func loosenedAim(t *testing.T, task optimize.Task, check constraints.Check, step float64) float64 {
	t.Helper()
	limits := slices.Clone(task.Limits)
	for i := range limits {
		l := &limits[i]
		switch {
		case l.Quantity != check.Quantity.Name || l.Point != check.Quantity.Point:
		case math.Abs(check.Value-l.Low) < math.Abs(check.Value-l.High):
			l.Low -= step
		default:
			l.High += step
		}
	}
	task.Limits = limits
	found, err := optimize.SearchExact(t.Context(), task, optimize.Settings{Jobs: 2})
	if err != nil || !found.Feasible {
		t.Fatal(err, found)
	}
	if task.Aim.Highest {
		return found.Aim
	}
	return -found.Aim
}
