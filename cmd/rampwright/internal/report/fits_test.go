package report

import (
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/problems"
)

// fitsFixture is a study of two kinds at three numbers of samples, three designs
// each: the error of "steady" is 0.1/n, that of "late" 1/n^2; the choice takes
// the better one.
func fitsFixture(disturbed bool) FitsStudy {
	counts := []int{10, 20, 40}
	kinds := []string{"steady", "late"}
	error := func(kind string, n float64) float64 {
		if kind == "steady" {
			return 0.1 / n
		}
		return 1 / (n * n)
	}
	build := func(factor float64) FitsCurve {
		c := FitsCurve{Quantity: problems.Quantity{Name: "throat_pressure_kPa", Point: "cruise", Unit: "kPa"}, Spread: 2}
		for _, kind := range []string{"steady", "late", ""} {
			for _, n := range counts {
				cell := FitsCell{Kind: kind, Samples: n}
				by := kind
				if kind == "" {
					by = "steady"
					if n > 10 {
						by = "late"
					}
				}
				for _, scatter := range []float64{1, 0.5, 2} { // over the designs
					m := factor * scatter * error(by, float64(n))
					cell.Scores = append(cell.Scores, FitsScore{
						Kind: by, Median: m, P10: m / 10, P90: 3 * m, RMSE: 2 * m, Max: 10 * m, Q2: 1 - m, Inside: 9, Judged: 10, Seconds: 0.25,
					})
				}
				c.Cells = append(c.Cells, cell)
			}
		}
		return c
	}
	s := FitsStudy{
		Setup:     FitsSetup{Counts: counts, Designs: 3, TestPoints: 100, Kinds: kinds, Inputs: []string{"x1", "x2"}, Accuracy: 1e-3, IntervalsOn: 10},
		Curves:    []FitsCurve{build(1)},
		ModelRuns: 310,
	}
	q := s.Curves[0].Quantity
	none := math.NaN()
	s.Moments = []FitsMoments{
		{Quantity: q, Route: ExactDraws, Mean: 5, Deviation: 2, MeanError: none, DeviationError: none, MeanSampling: 0.1, DeviationSampling: 0.07},
		{Quantity: q, Route: ByCoefficients, Kind: "late", Samples: 40, Mean: 5, Deviation: 2, MeanError: 1e-4, DeviationError: 2e-4, MeanSampling: none, DeviationSampling: none},
		{Quantity: q, Route: BySurrogateDraws, Kind: FitsChoice, Samples: 40, Mean: 5, Deviation: 2, MeanError: 1e-4, DeviationError: 2e-4, MeanSampling: 0.1, DeviationSampling: 0.07},
	}
	if disturbed {
		s.Setup.InertInputs, s.Setup.Noise = 2, 0.01
		s.Plain = s.Curves
		s.Curves = []FitsCurve{build(4)}
	}
	return s
}

var fitsHead = Head{Program: "rampwright 0", Title: "Two kinds", BriefHash: "abc", Seed: 7}

func TestFitsRows(t *testing.T) {
	d := NewFits(fitsHead, fitsFixture(true))
	if len(d.Rows) != 9 {
		t.Fatalf("%d rows", len(d.Rows))
	}
	for _, r := range d.Rows {
		if r.Chosen != (len(r.Taken) > 0) || r.Designs != 3 || r.At != "cruise" || r.FitSeconds != 0.25 || r.Coverage != 0.9 {
			t.Errorf("row %+v", r)
		}
		if math.Abs(float64(r.Loss)-4) > 1e-12 {
			t.Errorf("loss %g", r.Loss)
		}
	}
	last := d.Rows[8]
	want := 4. / 1600
	if !last.Chosen || last.Kind != "late" || last.Samples != 40 || last.Taken[0].Value != 3 {
		t.Errorf("choice %+v", last)
	}
	for name, pair := range map[string][2]float64{
		"median": {float64(last.MedianAbsError), want}, "low": {float64(last.MedianAbsErrorP10), 0.6 * want}, "high": {float64(last.MedianAbsErrorP90), 1.8 * want},
		"p10": {float64(last.AbsErrorP10), want / 10}, "p90": {float64(last.AbsErrorP90), 3 * want}, "rmse": {float64(last.RMSE), 2 * want},
		"max": {float64(last.MaxAbsError), 10 * want}, "q2": {float64(last.Q2), 1 - want},
	} {
		if math.Abs(pair[0]-pair[1]) > 1e-12 {
			t.Errorf("%s: %g, want %g", name, pair[0], pair[1])
		}
	}
}

// The keys a script relies on.
func TestFitsKeys(t *testing.T) {
	var got struct {
		Format int
		Rows   []map[string]any
		Status string
	}
	if err := json.Unmarshal(NewFits(fitsHead, fitsFixture(false)).JSON(), &got); err != nil {
		t.Fatal(err)
	}
	if got.Format != 1 || got.Status != "done" || len(got.Rows) != 9 {
		t.Fatalf("document %+v", got)
	}
	for _, key := range []string{"quantity", "at", "kind", "chosen", "samples", "median_abs_error", "rmse", "max_abs_error", "q2", "fit_seconds"} {
		if v, ok := got.Rows[8][key]; !ok || v == nil {
			t.Errorf("row has no %s: %v", key, v)
		}
	}
	if got.Rows[0]["loss"] != nil || got.Rows[0]["missing"].(map[string]any)["loss"] == "" {
		t.Errorf("a null without reason: %v", got.Rows[0])
	}
}

func TestFitsAdvice(t *testing.T) {
	d := NewFits(fitsHead, fitsFixture(false))
	advice := strings.Join(d.Advice, "\n")
	for _, want := range []string{
		"steady at 10; late at 20, 40 samples", "leave it to the choice",
		// 1/n^2 falls to 2e-3 at n = sqrt(500) = 22.4.
		"a median error of 0.00200 (0.001 of the spread) takes about 23 samples",
		"intervals can be believed",
	} {
		if !strings.Contains(advice, want) {
			t.Errorf("advice lacks %q:\n%s", want, advice)
		}
	}
	s := fitsFixture(true)
	s.Setup.Accuracy = 1e-4
	for i := range s.Curves[0].Cells {
		for k := range s.Curves[0].Cells[i].Scores {
			s.Curves[0].Cells[i].Scores[k].Inside = 7
		}
	}
	advice = strings.Join(NewFits(fitsHead, s).Advice, "\n")
	for _, want := range []string{"with 2 inert inputs and noise of deviation 0.01 they hurt", "the choice 4; steady 4; late 4", "promise too much at 10, 20, 40 samples (cover down to 70 %)",
		// 4/n^2 falls to 2e-4 at n = sqrt(2e4) = 141.4.
		"the curve carried on reaches it near 142"} {
		if !strings.Contains(advice, want) {
			t.Errorf("advice lacks %q:\n%s", want, advice)
		}
	}
	// A choice that misses the best kind, on a curve that no longer falls.
	s = fitsFixture(false)
	cells := s.Curves[0].Cells
	cells[8].Scores = cells[7].Scores
	advice = strings.Join(NewFits(fitsHead, s).Advice, "\n")
	for _, want := range []string{"up to 4 times worse (at 40 samples)", "by a factor of only 1"} {
		if !strings.Contains(advice, want) {
			t.Errorf("advice lacks %q:\n%s", want, advice)
		}
	}
}

func TestFitsWithoutAnyFit(t *testing.T) {
	s := fitsFixture(false)
	for i := range s.Curves[0].Cells {
		c := &s.Curves[0].Cells[i]
		switch c.Samples {
		case 10:
			c.Scores = []FitsScore{{Err: errors.New("too few samples")}}
		case 40:
			c.Scores = nil
		}
	}
	s.Stopped = true
	d := NewFits(fitsHead, s)
	if d.Status != "stopped" || d.Rows[0].Designs != 0 {
		t.Errorf("status %s, row %+v", d.Status, d.Rows[0])
	}
	if why, _ := d.Rows[0].Missing.Get("median_abs_error"); why != "too few samples" {
		t.Errorf("reason %q", why)
	}
	if strings.Contains(string(d.JSON()), "NaN") || strings.Contains(d.Text(100), "NaN") {
		t.Error("NaN is shown")
	}
	if _, err := d.Picture(); err != nil {
		t.Error(err)
	}
}

func TestFitsText(t *testing.T) {
	for _, width := range []int{80, 100, 140} {
		text := NewFits(fitsHead, fitsFixture(true)).Text(width)
		for _, line := range strings.Split(text, "\n") {
			if n := len([]rune(line)); n > width {
				t.Errorf("width %d: a line of %d: %s", width, n, line)
			}
		}
		for _, want := range []string{"Two kinds", "throat_pressure_kPa at cruise, kPa (spread 2.0000)", "choice", "3 late", "1.0e-2", "coefficients", "the draws limit the answer", "2 inert inputs"} {
			if !strings.Contains(strings.Join(strings.Fields(text), " "), want) {
				t.Errorf("width %d lacks %q:\n%s", width, want, text)
			}
		}
	}
}

func TestFitsCSV(t *testing.T) {
	rows, err := csv.NewReader(strings.NewReader(string(NewFits(fitsHead, fitsFixture(false)).CSV()))).ReadAll()
	if err != nil || len(rows) != 10 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	column := slices.Index(rows[0], "median_abs_error")
	if rows[9][column] != "0.000625" || rows[9][slices.Index(rows[0], "chosen")] != "true" || rows[9][slices.Index(rows[0], "loss")] != "" {
		t.Errorf("last row %v", rows[9])
	}
}

func TestQuantile(t *testing.T) {
	// Definition 7 of Hyndman & Fan, by hand.
	for p, want := range map[float64]float64{0: 1, 0.1: 1.3, 0.5: 2.5, 1: 4} {
		if got := Quantile([]float64{4, 1, 3, 2}, p); math.Abs(got-want) > 1e-15 {
			t.Errorf("quantile %g: %g, want %g", p, got, want)
		}
	}
	if !math.IsNaN(Quantile(nil, 0.5)) {
		t.Error("a quantile of nothing")
	}
}

func ExampleFitsDocument() {
	fmt.Println(NewFits(fitsHead, fitsFixture(false)).Advice[1])
	// Output: throat_pressure_kPa at cruise: a median error of 0.00200 (0.001 of the spread) takes about 23 samples.
}
