package optimize_test

import (
	"context"
	"math"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// externalCompression is an aligned cowl with a terminal normal shock and the
// model's hard limits alone: the inlet of Oswatitsch 1944 (NACA TM 1140).
func externalCompression(t *testing.T, mach float64, ramps int) (optimize.Task, *inlet.Problem) {
	t.Helper()
	aligned := inlet.Fixed(0)
	definition := inlet.Definition{
		Gas: gas.Air, CaptureHeight: 0.2, Width: 0.3,
		LipTurning: &aligned, CowlWedge: inlet.Fixed(3), CowlLength: 0.2,
		ShockOnLip: inlet.Fixed(mach), LipSetback: inlet.Fixed(0),
		TerminalShock: true, DuctFactor: 1,
		Points: []inlet.Point{{Name: "design", Mach: mach, Pressure: 10e3, Temperature: 220}},
	}
	for range ramps {
		definition.RampAngle = append(definition.RampAngle, inlet.Between(1, 25))
	}
	problem, err := inlet.New(definition)
	if err != nil {
		t.Fatal(err)
	}
	return optimize.Task{
		Problem: problem,
		Limits:  inlet.HardLimits(definition),
		Aim: problems.Aim{Highest: true, Parts: []problems.Part{
			{Point: "design", Weight: 1, Reads: []problems.Read{{Quantity: "recovery", Point: "design"}}},
		}},
	}, problem
}

// The best recovery with n ramps and a normal shock, and the equality of the
// oblique normal Mach numbers: independent maximisation of the published
// relations, carried in the reference table as OPT-2 and OPT-3.
func TestDesignFindsTheEqualStrengthOptimum(t *testing.T) {
	want := map[float64][]float64{
		2: {0.902949, 0.956958, 0.976674},
		3: {0.581215, 0.743652, 0.836143},
	}
	for _, mach := range []float64{2, 3} {
		for ramps := 1; ramps <= 3; ramps++ {
			task, problem := externalCompression(t, mach, ramps)
			result, err := optimize.Design(context.Background(), task, optimize.Settings{Infill: 25 * ramps, Jobs: 2}, nil)
			if err != nil {
				t.Fatal(err)
			}
			if result.Status != optimize.Verified {
				t.Errorf("Mach %g, %d ramps: %v: %s", mach, ramps, result.Status, result.Why)
			}
			if got := result.Best.AimExact; math.Abs(got-want[mach][ramps-1]) > 1e-6 {
				t.Errorf("Mach %g, %d ramps: recovery %.7f, want %.6f", mach, ramps, got, want[mach][ramps-1])
			}
			flow, err := problem.Flow(context.Background(), result.Best.X)
			if err != nil {
				t.Fatal(err)
			}
			stations := flow.Points[0].Stations[1 : 1+ramps]
			for _, s := range stations {
				if math.Abs(s.NormalMach-stations[0].NormalMach) > 1e-4 {
					t.Errorf("Mach %g, %d ramps: normal Mach %.6f on %s, %.6f on ramp 1", mach, ramps, s.NormalMach, s.Name, stations[0].NormalMach)
				}
			}
		}
	}
}
