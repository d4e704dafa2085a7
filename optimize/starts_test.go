package optimize_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"rampwright/optimize"
)

// Starts are evaluated first, inside the box and once each, over the samples
// asked for; with the optimum among them nothing better is found, and no less.
func TestDesignBeginsWithItsStarts(t *testing.T) {
	task, _ := veyric(t)
	optimum := []float64{8.0804, 7.2237, 8.4396, 8} // tenths of a millidegree inside the limits
	task.Starts = [][]float64{optimum, {1, 7, 20, 8}, slices.Clone(optimum)}
	settings := optimize.Settings{Samples: 30, Infill: 20}
	result, err := optimize.Design(t.Context(), task, settings, nil)
	if err != nil {
		t.Fatal(err)
	}
	if result.Counts.Samples != 32 {
		t.Errorf("%d samples, want 30 and the two starts that differ", result.Counts.Samples)
	}
	for i, want := range [][]float64{optimum, {3, 7, 16, 8}} {
		for j, x := range result.Samples[i].X {
			if math.Abs(x-want[j]) > 1e-12 {
				t.Errorf("sample %d is %v, want %v", i, result.Samples[i].X, want)
				break
			}
		}
	}
	if result.Status != optimize.Verified {
		t.Errorf("%v: %s", result.Status, result.Why)
	}
	// The independent search over the brief of the same inlet finds 0.65591.
	if !(result.Best.AimExact > 0.6559) {
		t.Errorf("recovery %g", result.Best.AimExact)
	}
}

func TestBadStarts(t *testing.T) {
	task, _ := veyric(t)
	for name, start := range map[string][]float64{
		"too short": {8, 7, 8}, "too long": {8, 7, 8, 8, 8}, "no number": {8, math.NaN(), 8, 8},
	} {
		task.Starts = [][]float64{{8, 7, 8, 8}, start}
		_, err := optimize.Design(t.Context(), task, optimize.Settings{}, nil)
		var bad *optimize.BadStart
		if !errors.As(err, &bad) || bad.Index != 1 || bad.Values != len(start) || bad.Wanted != 4 {
			t.Errorf("%s: %v", name, err)
		}
	}
}
