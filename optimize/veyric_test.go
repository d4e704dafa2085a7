package optimize_test

import (
	"context"
	"math"
	"slices"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// veyric is the VEYRIC-6 test article: three ramps at Mach 6, highest recovery
// with a floor on throat temperature.
func veyric(t testing.TB) (optimize.Task, *inlet.Problem) {
	t.Helper()
	cowl := inlet.Between(2, 12)
	definition := inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.16, Width: 0.2,
		RampAngle: []inlet.Setting{inlet.Between(3, 16), inlet.Between(3, 16), inlet.Between(3, 16)},
		CowlAngle: &cowl, CowlWedge: inlet.Fixed(4), CowlLength: 0.25,
		ShockOnLip: inlet.Fixed(6), LipSetback: inlet.Fixed(0), DuctFactor: 1,
		Points: []inlet.Point{{Name: "cruise", Mach: 6, Pressure: 1984, Temperature: 223.18}},
	}
	problem, err := inlet.New(definition)
	if err != nil {
		t.Fatal(err)
	}
	none := math.Inf(1)
	asked := []problems.Limit{
		{Quantity: "throat_temperature_K", Point: "cruise", Low: 780, High: 1000},
		{Quantity: "throat_pressure_kPa", Point: "cruise", Low: 60, High: 120},
		{Quantity: "throat_mach", Point: "cruise", Low: 2.3, High: none},
		{Quantity: "cowl_outer_angle_deg", Point: problems.Geometry, Low: -none, High: 12},
		{Quantity: "length_m", Point: problems.Geometry, Low: -none, High: 0.62},
		{Quantity: "internal_contraction_over_self_start", Point: "cruise", Low: -none, High: 1.45},
	}
	limits := inlet.HardLimits(definition)
	for _, standard := range inlet.DefaultLimits(definition) {
		if !slices.ContainsFunc(asked, func(l problems.Limit) bool { return l.Quantity == standard.Quantity }) {
			limits = append(limits, standard)
		}
	}
	return optimize.Task{
		Problem: problem,
		Limits:  append(limits, asked...),
		Aim: problems.Aim{Highest: true, Parts: []problems.Part{
			{Point: "cruise", Weight: 1, Reads: []problems.Read{{Quantity: "recovery", Point: "cruise"}}},
		}},
	}, problem
}

// metered counts the runs of the true model and makes each evaluation last.
type metered struct {
	*inlet.Problem
	lasts                      time.Duration
	evaluations, verifications atomic.Int64
}

func (m *metered) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	m.evaluations.Add(1)
	time.Sleep(m.lasts)
	return m.Problem.Evaluate(ctx, x, dst)
}

func (m *metered) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	m.verifications.Add(1)
	return m.Problem.Verify(ctx, x, dst)
}

// leastSpeedUp is the gain of two jobs over one where evaluations are all that
// costs time.
const leastSpeedUp = 1.5

// A design asks the true model for its samples and its infill and no more, the
// second route for its candidates alone, and keeps two jobs busy: in the time of
// a bubble, where only the model takes any, one second an evaluation.
func TestDesignKeepsToItsBudgetAndItsJobs(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		task, problem := veyric(t)
		model := &metered{Problem: problem, lasts: time.Second}
		task.Problem = model
		settings := optimize.Settings{Jobs: 2}.WithDefaults(4)
		began := time.Now()
		result, err := optimize.Design(t.Context(), task, settings, nil)
		if err != nil {
			t.Fatal(err)
		}
		if result.Status != optimize.Verified {
			t.Errorf("%v: %s", result.Status, result.Why)
		}
		// The independent search over the brief of the same inlet finds 0.65591.
		if !(result.Best.AimExact > 0.6559) {
			t.Errorf("recovery %g", result.Best.AimExact)
		}
		evaluations, verifications := model.evaluations.Load(), model.verifications.Load()
		if most := int64(settings.Samples + settings.Infill); evaluations > most || evaluations != int64(result.Counts.Samples+result.Counts.Infill) {
			t.Errorf("%d evaluations, %d allowed, %+v reported", evaluations, most, result.Counts)
		}
		if n := int64(len(result.Candidates)); verifications != n || n > 3 || result.Counts.Verify != int(n) {
			t.Errorf("%d verifications of %d candidates", verifications, n)
		}
		rounds := time.Since(began).Seconds()
		gain := float64(evaluations) / rounds
		t.Logf("%d evaluations in the time of %g: a gain of %.3g", evaluations, rounds, gain)
		if !(gain >= leastSpeedUp) {
			t.Errorf("%d evaluations took the time of %g: a gain of %.3g", evaluations, rounds, gain)
		}
	})
}
