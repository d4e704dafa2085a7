package report

import (
	"context"
	"math"
	"sync"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

var head = Head{Program: "rampwright 0", Title: "test article", BriefHash: "abc", Seed: 1}

func settings(n int, s inlet.Setting) []inlet.Setting {
	list := make([]inlet.Setting, n)
	for i := range list {
		list[i] = s
	}
	return list
}

func setting(s inlet.Setting) *inlet.Setting { return &s }

// supersonic is a Mach 6 article with a supersonic throat, three searched ramps
// and a searched cowl.
func supersonic() inlet.Definition {
	return inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.16, Width: 0.20,
		RampAngle: settings(3, inlet.Between(3, 16)), CowlAngle: setting(inlet.Between(2, 12)),
		CowlWedge: inlet.Fixed(4), CowlLength: 0.25, ShockOnLip: inlet.Fixed(6), LipSetback: inlet.Fixed(0), DuctFactor: 1,
		Points: []inlet.Point{{Name: "cruise", Mach: 6, Pressure: 1984, Temperature: 223.18}},
	}
}

// ramjet is a Mach 3 inlet with a terminal shock at four flight points.
func ramjet() inlet.Definition {
	return inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.20, Width: 0.28,
		RampAngle: settings(3, inlet.Between(2, 15)), LipTurning: setting(inlet.Between(0.5, 8)),
		CowlWedge: inlet.Fixed(3), CowlLength: 0.25, ShockOnLip: inlet.Fixed(3.2), LipSetback: inlet.Fixed(0),
		TerminalShock: true, DuctFactor: 0.95,
		Points: []inlet.Point{
			{Name: "cruise", Mach: 3, Pressure: 7505, Temperature: 216.65},
			{Name: "takeover", Mach: 2, Pressure: 22632, Temperature: 216.65},
			{Name: "climb", Mach: 2.5, Pressure: 12045, Temperature: 216.65},
			{Name: "dash", Mach: 3.2, Pressure: 6936, Temperature: 216.65},
		},
	}
}

func flowOf(t testing.TB, d inlet.Definition, x ...float64) (*inlet.Problem, *inlet.Flow) {
	t.Helper()
	problem, err := inlet.New(d)
	if err != nil {
		t.Fatal(err)
	}
	flow, err := problem.Flow(context.Background(), x)
	if err != nil {
		t.Fatal(err)
	}
	return problem, flow
}

func asked(quantity, point string, low, high float64) problems.Limit {
	return problems.Limit{Quantity: quantity, Point: point, Low: low, High: high, Source: "line 9"}
}

// merged replaces the defaults of what is asked and keeps the rest.
func merged(d inlet.Definition, own []problems.Limit) []problems.Limit {
	limits := append(inlet.HardLimits(d), own...)
	for _, standard := range inlet.DefaultLimits(d) {
		replaced := false
		for _, l := range own {
			replaced = replaced || l.Quantity == standard.Quantity && l.Point == standard.Point
		}
		if !replaced {
			limits = append(limits, standard)
		}
	}
	return limits
}

var recovery = problems.Aim{
	Highest: true, Text: "recovery", Where: "cruise",
	Parts: []problems.Part{{Point: "cruise", Weight: 1, Reads: []problems.Read{{Quantity: "recovery", Point: "cruise"}}}},
}

// finished designs the Mach 6 article once for all tests.
var finished = sync.OnceValues(func() (Study, error) {
	d := supersonic()
	problem, err := inlet.New(d)
	if err != nil {
		return Study{}, err
	}
	inf := math.Inf(1)
	task := optimize.Task{Problem: problem, Aim: recovery, Limits: merged(d, []problems.Limit{
		asked("throat_temperature_K", "cruise", 780, 1000),
		asked("throat_pressure_kPa", "cruise", 60, 120),
		asked("throat_mach", "cruise", 2.3, inf),
		asked("cowl_outer_angle_deg", "geometry", -inf, 12),
		asked("length_m", "geometry", -inf, 0.62),
		asked(selfStartQuantity, "cruise", -inf, 1.45),
	})}
	ctx := context.Background()
	result, err := optimize.Design(ctx, task, optimize.Settings{Jobs: 2}, nil)
	if err != nil {
		return Study{}, err
	}
	search, err := optimize.SearchExact(ctx, task, optimize.Settings{Jobs: 2})
	if err != nil {
		return Study{}, err
	}
	flow, err := problem.Flow(ctx, result.Best.X)
	return Study{Problem: problem, Aim: task.Aim, Result: result, Exact: search, Flow: flow}, err
})

func study(t testing.TB) Study {
	t.Helper()
	s, err := finished()
	if err != nil {
		t.Fatal(err)
	}
	return s
}
