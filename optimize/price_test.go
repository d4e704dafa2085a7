package optimize

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The price of a limit is what the aim gains when the limit is loosened and the
// design found anew, here by the exact search.
func TestPricesAreTheGainOfLoosening(t *testing.T) {
	for name, c := range map[string]struct {
		task  func(bound float64) Task
		bound float64
		want  float64
	}{
		"curved":   {disk, 4, diskPrice(4)},
		"straight": {beale, 3, bealePrice},
	} {
		result := mustDesign(t, c.task(c.bound), Settings{})
		check := result.Best.Assessment.Checks[0]
		if !check.Active {
			t.Errorf("%s: the limit is not active, margin %g", name, check.Margin)
		}
		const step = 1e-3
		looser, tighter := exactAim(t, c.task(c.bound+step)), exactAim(t, c.task(c.bound-step))
		gain := math.Abs(looser-tighter) / (2 * step)
		// The slopes are those of surrogates: good to about a thousandth.
		if math.Abs(check.Price-gain) > 3e-3*gain || math.Abs(gain-c.want) > 1e-4*c.want {
			t.Errorf("%s: price %.6f, the aim gains %.6f, expected %.6f", name, check.Price, gain, c.want)
		}
	}
}

func exactAim(t *testing.T, task Task) float64 {
	t.Helper()
	found, err := SearchExact(context.Background(), task, Settings{})
	if err != nil || !found.Feasible {
		t.Fatal(err, found)
	}
	return found.Aim
}

// Where a face of the box carries part of the slope, the limit's price is its
// own part alone: d sqrt(1 + x + y/2)/dy at (1, 0.2).
func TestPriceBesideAFace(t *testing.T) {
	check := mustDesign(t, cliff(), Settings{}).Best.Assessment.Checks[0]
	if want := 0.25 / math.Sqrt(2.1); math.Abs(check.Price-want) > 1e-2*want {
		t.Errorf("price %.6f, want %.6f, margin %g", check.Price, want, check.Margin)
	}
}

// A limit that is not active costs nothing.
func TestPriceOfAnInactiveLimit(t *testing.T) {
	task := disk(1)
	task.Limits = append(task.Limits, atMost("square", 3))
	checks := mustDesign(t, task, Settings{}).Best.Assessment.Checks
	if checks[1].Active || checks[1].Price != 0 || !(checks[0].Price > 0) {
		t.Errorf("active limit priced %g, the other %g (active %t)", checks[0].Price, checks[1].Price, checks[1].Active)
	}
}

// Non-negative least squares satisfies its first-order conditions: no unused
// column lowers the residual, no used one could be moved.
func TestBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 5).Draw(t, "n")
		m := rapid.IntRange(0, n).Draw(t, "m")
		entry := rapid.Float64Range(-1, 1)
		slope := rapid.SliceOfN(entry, n, n).Draw(t, "slope")
		columns := make([][]float64, m)
		for k := range columns {
			columns[k] = rapid.SliceOfN(entry, n, n).Draw(t, "column")
			if norm(columns[k]) < 1e-3 {
				return
			}
		}
		if m > 0 {
			list := make([]int, m)
			for k := range list {
				list[k] = k
			}
			if _, ok := leastSquares(slope, columns, list); !ok {
				return // the columns depend on each other: left out by design
			}
		}
		x := balance(slope, columns)
		residual := append([]float64(nil), slope...)
		for k, column := range columns {
			if x[k] < 0 {
				t.Errorf("multiplier %d is %g", k, x[k])
			}
			addScaled(residual, x[k], column)
		}
		for k, column := range columns {
			gain := 0.0
			for j, v := range column {
				gain -= v * residual[j] / norm(column)
			}
			if gain > 1e-7 || x[k] > 0 && gain < -1e-7 {
				t.Errorf("multiplier %d is %g, moving it gains %g", k, x[k], gain)
			}
		}
	})
}

// The column that lowers the residual most at first may have to go: its own
// multiplier would be -1/4 beside the other two.
func TestBalanceGivesUpColumns(t *testing.T) {
	x := balance([]float64{-1, -1, -0.05}, [][]float64{{1, 1, -0.2}, {1, 0, 0}, {0, 1, 0}})
	if farthest(x, []float64{0, 1, 1}) > 1e-12 {
		t.Errorf("multipliers %v, want 0 1 1", x)
	}
}

// Columns that repeat each other share one multiplier between them.
func TestBalanceWithRepeatedColumns(t *testing.T) {
	x := balance([]float64{-2, -1}, [][]float64{{1, 0}, {1, 0}, {0, 1}, {0, -1}})
	if math.Abs(x[0]+x[1]-2) > 1e-12 || math.Abs(x[2]-1) > 1e-12 || x[3] != 0 {
		t.Errorf("multipliers %v", x)
	}
}

// A column at right angles to the slope balances nothing: it is given up at once.
func TestColumnsOfNoUseAreGivenUp(t *testing.T) {
	for _, columns := range [][][]float64{{{0, 1}}, {{0, 1}, {1, 0}}} {
		x, used := make([]float64, len(columns)), make([]bool, len(columns))
		used[0] = true
		if !settle([]float64{-1, 0}, columns, x, used) || x[0] != 0 || used[0] {
			t.Errorf("columns %v: multipliers %v, used %v", columns, x, used)
		}
	}
}
