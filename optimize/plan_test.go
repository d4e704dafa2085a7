package optimize

import (
	"errors"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"rampwright/constraints"
	"rampwright/problems"
)

// mixed has one quantity of every sort: fitted, explicit linear, explicit curved.
func mixed(limits ...problems.Limit) Task {
	return Task{
		Problem: explicitToy{
			verifiedToy{&toy{
				variables: []problems.Variable{variable("x", -3, 7), variable("y", 100, 101)},
				quantities: []problems.Quantity{
					quantity("aim"), quantity("fitted"), quantity("idle"),
					{Name: "linear", Point: "here", Explicit: true}, {Name: "curved", Point: "here", Explicit: true},
				},
				fill: func(x []float64, dst *problems.Evaluation) {
					dst.Set(0, math.Sin(x[0]))
					dst.Set(1, x[0]*x[1]/100)
					dst.Set(2, 0)
					dst.Set(3, 5+2*x[0]-3*x[1])
					dst.Set(4, math.Exp(x[0]/10)*(x[1]-100))
				},
			}},
			map[int]linearForm{3: {[]float64{2, -3}, 5}},
		},
		Limits: limits,
		Aim:    aimAt("aim", true),
	}
}

func TestPlanSortsLimits(t *testing.T) {
	both := problems.Limit{Quantity: "linear", Point: "here", Low: -320, High: -280}
	p := mustPlan(t, mixed(
		atMost("fitted", 3), both, atLeast("curved", 0.1),
		problems.Limit{Quantity: "idle", Point: "here", Low: math.Inf(-1), High: math.Inf(1)},
	))
	if !slices.Equal(p.straight, []int{1}) || !slices.Equal(p.curved, []int{0, 2}) {
		t.Errorf("straight rows %v, curved rows %v, want [1], [0 2]", p.straight, p.curved)
	}
	if !slices.Equal(p.fitted, []int{0, 1}) || !slices.Equal(p.exact, []int{4}) {
		t.Errorf("fitted %v, explicit %v, want [0 1], [4]", p.fitted, p.exact)
	}
	if len(p.linear.B) != 2 || len(p.linear.A) != 4 {
		t.Errorf("%d linear sides with %d coefficients", len(p.linear.B), len(p.linear.A))
	}
}

// A linear side in the unit cube is the limit itself, backed off.
func TestPlanLinearRowsAreTheLimits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-320, -300).Draw(t, "low")
		high := rapid.Float64Range(-300, -280).Draw(t, "high")
		p, err := newPlan(mixed(problems.Limit{Quantity: "linear", Point: "here", Low: low, High: high}))
		if err != nil {
			t.Fatal(err)
		}
		u := []float64{rapid.Float64Range(0, 1).Draw(t, "u"), rapid.Float64Range(0, 1).Draw(t, "v")}
		x := p.denormal(u)
		value := 5 + 2*x[0] - 3*x[1]
		inward := backoff * math.Max(math.Abs(low), math.Abs(high))
		for r, want := range []float64{low - value + inward, value - high + inward} {
			if got := p.linear.A[2*r]*u[0] + p.linear.A[2*r+1]*u[1] - p.linear.B[r]; math.Abs(got-want) > 1e-11 {
				t.Errorf("side %d at %v exceeds by %.12g, the limit by %.12g", r, u, got, want)
			}
		}
		clear := math.Min(value-low, high-value)
		if math.Abs(clear-inward) > 1e-10 && p.insideLinear(u) != (clear > inward) {
			t.Errorf("inside %t with a margin of %g", p.insideLinear(u), clear)
		}
		if (p.linearViolation(u) == 0) != p.insideLinear(u) {
			t.Errorf("violation %g, inside %t", p.linearViolation(u), p.insideLinear(u))
		}
	})
}

// The faces of the cube are the exact bounds, whatever rounding would make of
// them, and points between keep their place.
func TestPlanUnits(t *testing.T) {
	rounded := &plan{variables: []problems.Variable{variable("x", -1, 0.1)}} // -1 + (0.1 + 1) is above 0.1
	if got := rounded.denormal([]float64{1})[0]; got != 0.1 {
		t.Errorf("the high face is x = %v", got)
	}
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-1e3, 1e3).Draw(t, "low")
		high := low + rapid.Float64Range(1e-3, 1e3).Draw(t, "width")
		p := &plan{variables: []problems.Variable{variable("x", low, high)}}
		for _, c := range []struct{ u, want float64 }{{0, low}, {-1e-17, low}, {-1, low}, {1, high}, {1.5, high}} {
			if got := p.denormal([]float64{c.u})[0]; got != c.want {
				t.Errorf("u = %g is x = %v, want %v", c.u, got, c.want)
			}
		}
		u := rapid.Float64Range(0, 1).Draw(t, "u")
		x := p.denormal([]float64{u})
		if x[0] < low || x[0] > high {
			t.Errorf("u = %v leaves the box: %v", u, x[0])
		}
		if back := p.normal(x)[0]; math.Abs(back-u) > 1e-12*(1+math.Max(math.Abs(low), math.Abs(high))/(high-low)) {
			t.Errorf("u = %v comes back as %v", u, back)
		}
	})
}

func TestPlanRefusals(t *testing.T) {
	bare := disk(1)
	bare.Problem = &toy{quantities: []problems.Quantity{quantity("height"), quantity("square")}}
	if _, err := newPlan(bare); !errors.Is(err, ErrNothingToSearch) {
		t.Errorf("no variable: %v", err)
	}
	task := disk(1)
	task.Limits = append(task.Limits, atMost("depth", 1))
	var unknown *constraints.Unknown
	if _, err := newPlan(task); !errors.As(err, &unknown) || unknown.Limit.Quantity != "depth" {
		t.Errorf("unknown limit: %v", err)
	}
	task = disk(1)
	task.Aim = aimAt("depth", true)
	if _, err := newPlan(task); err == nil {
		t.Error("an unknown aim is accepted")
	}
	task = mixed(atLeast("curved", 0.1))
	task.Problem = task.Problem.(explicitToy).verifiedToy
	if _, err := newPlan(task); err == nil {
		t.Error("explicit quantities without a way to evaluate them are accepted")
	}
}

func TestSettingsReportEverythingAtOnce(t *testing.T) {
	err := Settings{Samples: 3, Infill: -1, Agreement: 2, Jobs: -1}.Validate(2)
	var list interface{ Unwrap() []error }
	if !errors.As(err, &list) || len(list.Unwrap()) != 4 {
		t.Errorf("four settings are wrong, told: %v", err)
	}
	if err := (Settings{}).WithDefaults(2).Validate(2); err != nil {
		t.Errorf("the defaults are refused: %v", err)
	}
	if got, want := (Settings{}).WithDefaults(3), (Settings{Samples: 45, Infill: 30, Seed: 1, Agreement: 1e-3, Jobs: 1}); got != want {
		t.Errorf("defaults of three variables %+v, want %+v", got, want)
	}
	given := Settings{Samples: 9, Infill: 2, Seed: 5, Agreement: 0.1, Jobs: 3}
	if got := given.WithDefaults(3); got != given {
		t.Errorf("%+v became %+v", given, got)
	}
}
