package constraints

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// evaluationOf holds the values given for the first responses; the rest are
// missing without a reason.
func evaluationOf(values ...float64) *problems.Evaluation {
	e := problems.NewEvaluation(len(responses))
	for i, v := range values {
		e.Set(i, v)
	}
	return e
}

func TestAssessSumsScaledViolations(t *testing.T) {
	rows := mustRows(t, limit("mach", "cruise", 1, 4), limit("margin", "cruise", 2, above))
	for _, c := range []struct {
		name             string
		values           []float64
		violation, worst float64
		feasible         bool
	}{
		{"inside", []float64{2, 3, 4}, 0, 0, true},
		{"on a side", []float64{4, 2, 2}, 0, 0, true},
		{"beyond one side", []float64{5, 3, 4}, 0.25, 0.25, false},
		{"a member short", []float64{2, 3, 1}, 0.5, 0.5, false},
		{"all broken", []float64{0, 1, -2}, 0.25 + 0.5 + 2, 2, false},
		{"a member missing", []float64{2, 3}, MissingViolation, MissingViolation, false},
		{"a member missing, another short", []float64{2, 1}, MissingViolation + 0.5, MissingViolation, false},
	} {
		a := Assess(rows, evaluationOf(c.values...))
		if math.Abs(a.Violation-c.violation) > 1e-14 || math.Abs(a.Worst-c.worst) > 1e-14 || a.Feasible != c.feasible || len(a.Checks) != 3 {
			t.Errorf("%s: %+v", c.name, a)
		}
	}
}

// A missing value breaks its limit, with the reason kept; one that does not apply
// asks nothing, even wrapped.
func TestAssessMissingValues(t *testing.T) {
	rows := mustRows(t, limit("mach", "cruise", 1, 4))
	detached := &problems.Detached{Shock: "ramp 2", Mach: 2, By: 0.1}
	inapplicable := &problems.NotApplicable{Why: "no terminal shock"}
	for _, c := range []struct {
		name    string
		reason  error
		applies bool
	}{
		{"detached", detached, true},
		{"no reason", nil, true},
		{"does not apply", inapplicable, false},
		{"wrapped", &wrapped{inapplicable}, false},
	} {
		e := problems.NewEvaluation(len(responses))
		e.Miss(0, c.reason)
		a := Assess(rows, e)
		check := a.Checks[0]
		if check.Applies != c.applies || check.Met == c.applies || a.Feasible == c.applies || check.Active {
			t.Errorf("%s: %+v", c.name, check)
		}
		if !math.IsNaN(check.Value) || !math.IsNaN(check.Margin) || check.Missing == nil || c.reason != nil && check.Missing != c.reason {
			t.Errorf("%s: value %g, margin %g, reason %v", c.name, check.Value, check.Margin, check.Missing)
		}
		want := 0.0
		if c.applies {
			want = MissingViolation
		}
		if a.Violation != want || a.Worst != want {
			t.Errorf("%s: violation %g, want %g", c.name, a.Violation, want)
		}
	}
}

type wrapped struct{ inner error }

func (e *wrapped) Error() string { return "at climb: " + e.inner.Error() }
func (e *wrapped) Unwrap() error { return e.inner }

// Rounding is forgiven, no more: a limit met to the last digit is met, and one
// within the width of active limits is active from either side.
func TestAssessAtTheEdge(t *testing.T) {
	rows := mustRows(t, limit("mach", "cruise", below, 4))
	for _, c := range []struct {
		value       float64
		met, active bool
	}{
		{4, true, true},
		{math.Nextafter(4, 5), true, true},
		{4 + 4e-13, false, true},
		{4 - 3e-6, true, true},
		{4 - 5e-6, true, false},
		{4 + 3e-6, false, true},
		{4 + 5e-6, false, false},
	} {
		if check := Assess(rows, evaluationOf(c.value)).Checks[0]; check.Met != c.met || check.Active != c.active {
			t.Errorf("%.17g: met %t, active %t", c.value, check.Met, check.Active)
		}
	}
}

// Whatever the rows and values, the assessment agrees with its checks.
func TestAssessmentProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rows := make([]Row, rapid.IntRange(0, 6).Draw(t, "rows"))
		for i := range rows {
			rows[i] = someRow(t)
			rows[i].Index = rapid.IntRange(0, len(responses)-1).Draw(t, "index")
		}
		e := problems.NewEvaluation(len(responses))
		for i := range e.Values {
			switch rapid.IntRange(0, 5).Draw(t, "sort") {
			case 0:
				e.Miss(i, &problems.NotApplicable{Why: "not here"})
			case 1:
				e.Miss(i, &problems.Status{Phrase: "lost"})
			default:
				e.Set(i, rapid.Float64Range(-2e4, 2e4).Draw(t, "value"))
			}
		}
		a := Assess(rows, e)
		feasible, sum, worst := true, 0.0, 0.0
		for i, check := range a.Checks {
			if check.Index != rows[i].Index || check.Price != 0 {
				t.Errorf("check %d is of %d with a price of %g", i, check.Index, check.Price)
			}
			feasible = feasible && check.Met
			violation := 0.0
			switch {
			case !math.IsNaN(check.Value):
				if check.Met != (check.Margin >= -Rounding*check.Scale) || !check.Applies || check.Missing != nil {
					t.Errorf("check %d: %+v", i, check)
				}
				if !check.Met {
					violation = -check.Margin / check.Scale
				}
			case check.Met == check.Applies:
				t.Errorf("check %d is missing: %+v", i, check)
			case check.Applies:
				violation = MissingViolation
			}
			sum += violation
			worst = math.Max(worst, violation)
		}
		if a.Feasible != feasible || math.Abs(a.Violation-sum) > 1e-12*(1+sum) || a.Worst != worst || (a.Violation == 0) != a.Feasible {
			t.Errorf("%+v: violation %g, worst %g, feasible %t by its checks", a, sum, worst, feasible)
		}
	})
}
