package ramp

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/optimize"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

// optimumRows are the published optima: Mach number, the ramp counts in order,
// the best recoveries as printed.
func optimumRows(t *testing.T) map[string][]string {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/shocks.csv")
	if err != nil {
		t.Fatal(err)
	}
	reader := csv.NewReader(strings.NewReader(string(data)))
	reader.Comment, reader.FieldsPerRecord = '#', 6
	records, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	rows := map[string][]string{}
	for _, r := range records {
		if kind, _, _ := strings.Cut(r[0], "-"); kind != "OPT" {
			continue
		}
		if r[2] != "best recovery" {
			t.Fatalf("%s: no quantity %q", r[0], r[2])
		}
		rows[r[1]] = strings.Split(r[3], ";")
	}
	return rows
}

func TestPublishedOptima(t *testing.T) {
	known := map[string]struct {
		mach  float64
		first int
	}{
		"M0=3 n=0..3 ramps + normal shock": {3, 0},
		"M0=2 n=1..3 ramps + normal shock": {2, 1},
	}
	rows := optimumRows(t)
	if len(rows) != len(known) {
		t.Fatalf("%d rows of optima, the test knows %d", len(rows), len(known))
	}
	for inputs, printed := range rows {
		c, found := known[inputs]
		if !found {
			t.Fatalf("unknown inputs %q", inputs)
		}
		for i, cell := range printed {
			want, err := strconv.ParseFloat(cell, 64)
			if err != nil {
				t.Fatal(err)
			}
			if got := EqualStrength(gas.Air, c.mach, c.first+i).Recovery; math.Abs(got-want) > 5e-7 {
				t.Errorf("Mach %v, %d ramps: recovery %.8f, printed %s", c.mach, c.first+i, got, cell)
			}
		}
	}
}

// Oswatitsch 1944 (NACA TM 1140), Mach 3, gamma 1.4: turnings in degrees, and
// recovery of four ramps, recomputed independently to the digits given.
func TestOptimumTurnings(t *testing.T) {
	for _, want := range [][]float64{{22.590}, {14.977, 18.812}, {11.064, 13.140, 15.360}} {
		got := EqualStrength(gas.Air, 3, len(want))
		for i := range want {
			if math.Abs(got.Turning[i]/degree-want[i]) > 5e-4 {
				t.Errorf("%d ramps, ramp %d: %.5f deg, want %v", len(want), i+1, got.Turning[i]/degree, want[i])
			}
		}
		if share := normalMach(t, 3, got.Turning)[0]; got.Terminal/share < 0.94 || got.Terminal/share > 0.97 {
			t.Errorf("%d ramps: terminal Mach number %v, %v of the oblique ones", len(want), got.Terminal, got.Terminal/share)
		}
	}
	if got := EqualStrength(gas.Air, 3, 4).Recovery; math.Abs(got-0.889237) > 5e-7 {
		t.Errorf("four ramps: recovery %v", got)
	}
}

func normalMach(t *testing.T, mach float64, turning []float64) []float64 {
	t.Helper()
	waves := make([]shock.Oblique, len(turning))
	if _, err := March(gas.Air, mach, turning, waves); err != nil {
		t.Fatal(err)
	}
	list := make([]float64, len(waves))
	for i := range waves {
		list[i] = waves[i].NormalMach
	}
	return list
}

// A general maximiser that knows nothing of equal strength finds the same
// recovery and, by itself, equal normal Mach numbers.
func TestOptimumAgainstIndependentMaximisation(t *testing.T) {
	for _, mach := range []float64{2, 3} {
		for n := 1; n <= 3; n++ {
			best, turning := maximizeRecovery(t, mach, n)
			equal := EqualStrength(gas.Air, mach, n)
			if math.Abs(equal.Recovery-best) > 1e-6 {
				t.Errorf("Mach %v, %d ramps: equal strength %v, maximiser %v", mach, n, equal.Recovery, best)
			}
			for _, normal := range normalMach(t, mach, turning) {
				if math.Abs(normal-equal.NormalMach) > 1e-4 {
					t.Errorf("Mach %v, %d ramps: normal Mach number %v, equal strength %v", mach, n, normal, equal.NormalMach)
				}
			}
		}
	}
}

// maximizeRecovery starts Nelder and Mead's simplex from a grid of equal
// turnings and polishes the best end by starting again from it.
func maximizeRecovery(t *testing.T, mach float64, n int) (recovery float64, turning []float64) {
	t.Helper()
	loss := func(x []float64) float64 {
		chain, behind, ok := Recovery(gas.Air, mach, x)
		if !ok || !(behind >= 1) {
			return 1
		}
		_, terminal := shock.NormalByPrandtl(gas.Air, behind)
		return -chain * terminal.TotalPressure
	}
	settings := &optimize.Settings{Converger: &optimize.FunctionConverge{Absolute: 1e-15, Iterations: 200}}
	climb := func(start []float64) (float64, []float64) {
		result, err := optimize.Minimize(optimize.Problem{Func: loss}, start, settings, &optimize.NelderMead{SimplexSize: 0.02})
		if err != nil {
			t.Fatal(err)
		}
		return result.F, result.X
	}
	least := 1.0
	for _, total := range []float64{2, 6, 10, 14, 18, 22} {
		start := make([]float64, n)
		for i := range start {
			start[i] = total * degree / float64(n) * (1 + 0.2*float64(i))
		}
		if value, x := climb(start); value < least {
			least, turning = value, x
		}
	}
	least, turning = climb(turning)
	return -least, turning
}
