package envelope_test

import (
	"context"
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
)

// slope is a part whose answers are known: the aim peaks at the angle best(M), and a
// limit asks the angle to stay below least(M).
type slope struct {
	best, most func(mach float64) float64
}

func (slope) Quantities() []problems.Quantity {
	return []problems.Quantity{{Name: "recovery"}, {Name: "throat_mach"}}
}

func (s slope) At(_ context.Context, angle float64, at envelope.Condition, dst *problems.Evaluation) (envelope.Outcome, error) {
	off := (angle - s.best(at.Mach)) / degree
	dst.Set(0, 1-off*off)
	dst.Set(1, (s.most(at.Mach)-angle)/degree)
	return envelope.Outcome{}, nil
}

func recoveryOf(e *problems.Evaluation) float64 { return e.Values[0] }

func slopeSettings(low, high float64) envelope.ScheduleSettings {
	return envelope.ScheduleSettings{
		LowMach: 4, HighMach: 6, Points: 9, LowAngle: low * degree, HighAngle: high * degree,
		Limits: []problems.Limit{{Quantity: "throat_mach", Low: 0, High: math.Inf(1)}}, Aim: recoveryOf, Highest: true,
	}
}

// TestKnownSchedules: the best angle is the peak of the aim, cut by the limit and the
// hinge stops, and rises with Mach number where both do.
func TestKnownSchedules(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		line := func(name string) func(float64) float64 {
			at, rise := rapid.Float64Range(1, 12).Draw(t, name), rapid.Float64Range(0, 3).Draw(t, name+" per Mach")
			return func(mach float64) float64 { return (at + rise*(mach-5)) * degree }
		}
		s := slope{line("peak"), line("limit")}
		low := rapid.Float64Range(2, 5).Draw(t, "low stop")
		high := low + rapid.Float64Range(0.5, 6).Draw(t, "travel")
		schedule, err := envelope.Plan(context.Background(), s, slopeSettings(low, high))
		if err != nil {
			t.Fatal(err)
		}
		for i, row := range schedule.Rows {
			got := row.Best.Angle / degree
			if got < low-1e-12 || got > high+1e-12 {
				t.Fatalf("Mach %g: %g deg is beyond the stops %g .. %g", row.Mach, got, low, high)
			}
			most := s.most(row.Mach) / degree
			if !row.Best.Kept() {
				if most > low+1e-6 {
					t.Fatalf("Mach %g: angles up to %g deg keep the limit and none is found", row.Mach, most)
				}
				if miss := row.Best.Missed[0]; math.Abs(got-low) > 1e-4 || math.Abs(miss.Margin-(most-low)) > 1e-4 {
					t.Fatalf("Mach %g: least miss at %g deg, %g; want %g, %g", row.Mach, got, miss.Margin, low, most-low)
				}
				continue
			}
			want := math.Max(low, math.Min(s.best(row.Mach)/degree, math.Min(most, high)))
			if math.Abs(got-want) > 1e-4 {
				t.Fatalf("Mach %g: %g deg, want %g", row.Mach, got, want)
			}
			if math.Abs(row.Low/degree-low) > 1e-4 || math.Abs(row.High/degree-math.Min(most, high)) > 1e-4 {
				t.Fatalf("Mach %g: kept from %g to %g deg, want %g to %g", row.Mach, row.Low/degree, row.High/degree, low, math.Min(most, high))
			}
			if i > 0 && got < schedule.Rows[i-1].Best.Angle/degree-2e-5 {
				t.Fatalf("the schedule falls at Mach %g though peak and limit rise", row.Mach)
			}
		}
	})
}

// threeRampLimits are those the inlet of threeRamps was found under, with those that
// are on by default.
func threeRampLimits(d inlet.Definition) []problems.Limit {
	const other = "internal_contraction_over_self_start"
	var list []problems.Limit
	for _, limit := range append(inlet.HardLimits(d), inlet.DefaultLimits(d)...) {
		if limit.Quantity != other {
			list = append(list, limit)
		}
	}
	return append(list,
		problems.Limit{Quantity: other, Low: math.Inf(-1), High: 1.45},
		problems.Limit{Quantity: "throat_temperature_K", Low: 780, High: 1000},
		problems.Limit{Quantity: "cowl_outer_angle_deg", Low: math.Inf(-1), High: 12})
}

// TestTheDesignIsItsOwnSchedule: at the design Mach number the best position of a part
// is where the search for the same aim under the same limits put it.
func TestTheDesignIsItsOwnSchedule(t *testing.T) {
	problem, d := threeRamps(t)
	frozen := envelope.Freeze(problem, nil, heldAir, inlet.SearchTrace())
	moving, err := envelope.Hang(frozen, inlet.Hinge{})
	if err != nil {
		t.Fatal(err)
	}
	settings := envelope.ScheduleSettings{
		LowMach: 5.9, HighMach: 6, Points: 2, LowAngle: 5 * degree, HighAngle: 9 * degree, Angles: 15,
		Limits: threeRampLimits(d), Aim: recoveryOf, Highest: true,
	}
	var before *envelope.Schedule
	for _, jobs := range []int{1, 2} {
		settings.Jobs = jobs
		schedule, err := envelope.Plan(context.Background(), moving, settings)
		if err != nil {
			t.Fatal(err)
		}
		best := schedule.Rows[1].Best
		// The design stands on the floor of temperature, rounded to 1e-4 deg.
		if !best.Kept() || math.Abs(best.Angle/degree-8) > 1e-3 {
			t.Errorf("at Mach 6 the cowl stands at %.6f deg, designed at 8; missed %v", best.Angle/degree, best.Missed)
		}
		if math.Abs(best.Aim-0.655908) > 1e-5 {
			t.Errorf("its recovery is %.6f, designed 0.655908", best.Aim)
		}
		if before != nil {
			for i := range schedule.Rows {
				a, b := schedule.Rows[i], before.Rows[i]
				if a.Best.Angle != b.Best.Angle || a.Low != b.Low || a.High != b.High || !reflect.DeepEqual(a.Best.Missed, b.Best.Missed) {
					t.Errorf("jobs matter at Mach %g", a.Mach)
				}
			}
		}
		before = schedule
	}
}

func TestScheduleSettingsAreChecked(t *testing.T) {
	err := envelope.ScheduleSettings{LowMach: 7, HighMach: 0.5, Points: 1, Incidence: 1, LowAngle: 2, HighAngle: 1, Angles: 3, Tolerance: 1, Jobs: -1}.Validate()
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok || len(joined.Unwrap()) != 10 {
		t.Errorf("not every fault is reported: %v", err)
	}
}
