package report

import (
	"bytes"
	"context"
	"encoding/csv"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

func TestSamplesReadBack(t *testing.T) {
	problem, err := inlet.New(ramjet())
	if err != nil {
		t.Fatal(err)
	}
	var samples []Sample
	for _, x := range [][]float64{{8, 5, 5, 3}, {9, 9, 9, 4}, {1.0 / 3, 15, 15, 8}} {
		e := problems.NewEvaluation(len(problem.Quantities()))
		if err := problem.Evaluate(context.Background(), x, e); err != nil {
			t.Fatal(err)
		}
		samples = append(samples, Sample{Purpose: "sample", X: x, Evaluation: e})
	}
	raw := SamplesCSV(problem, samples)
	if !bytes.Equal(raw, SamplesCSV(problem, samples)) {
		t.Error("two tables of the same samples differ")
	}
	rows, err := csv.NewReader(bytes.NewReader(raw)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != 1+len(samples) {
		t.Fatalf("%d rows", len(rows))
	}
	for _, name := range []string{"ramp_1_angle_deg", "recovery@takeover", "separation_margin@climb/lip shock", "length_m@geometry"} {
		if !slices.Contains(rows[0], name) {
			t.Errorf("no column %s", name)
		}
	}
	for i, s := range samples {
		for j, want := range slices.Concat(s.X, s.Evaluation.Values) {
			text := rows[i+1][3+j]
			if got, err := strconv.ParseFloat(text, 64); text == "" != math.IsNaN(want) || text != "" && (err != nil || got != want) {
				t.Errorf("row %d, %s: wrote %v, read %q", i+1, rows[0][3+j], want, text)
			}
		}
	}
	if status, reason := rows[1][1], rows[1][2]; status != "complete" || reason != "" {
		t.Errorf("attached everywhere: %s, %q", status, reason)
	}
	if status, reason := rows[2][1], rows[2][2]; status != "incomplete" || !strings.Contains(reason, "takeover: ramp 3 detached at Mach 1.363") {
		t.Errorf("detached at takeover: %s, %q", status, reason)
	}
}
