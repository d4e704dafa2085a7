package main

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems/analytic"
	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/pce"
)

// analyticBrief writes a brief that poses an analytic problem.
func analyticBrief(t *testing.T, name, more string) string {
	t.Helper()
	file := filepath.Join(t.TempDir(), name+".yaml")
	if err := os.WriteFile(file, []byte("brief: 1\ntitle: yardstick "+name+"\nproblem: {analytic: "+name+"}\n"+more), 0o600); err != nil {
		t.Fatal(err)
	}
	return file
}

// fitsResult is what a script reads of a study.
type fitsResult struct {
	Status string
	Rows   []struct {
		Quantity, At, Kind string
		Chosen             bool
		Samples, Designs   int
		Median             float64 `json:"median_abs_error"`
		RMSE               float64
		Q2                 float64
		Coverage           float64
		Loss               *float64
		Seconds            float64 `json:"fit_seconds"`
	}
	Moments []struct {
		Route, Kind string
		Mean        float64
		Deviation   float64  `json:"standard_deviation"`
		MeanError   *float64 `json:"mean_abs_error"`
	}
	Advice    []string
	ModelRuns int `json:"model_runs"`
}

func fitsOf(t *testing.T, args ...string) fitsResult {
	t.Helper()
	got := command(append([]string{"fits", "--json", "--quiet"}, args...)...)
	if got.code != exitDone {
		t.Fatalf("code %d: %s", got.code, got.messages)
	}
	var result fitsResult
	decode(t, got.out, &result)
	return result
}

// Polynomials of low degree are reproduced exactly by an expansion with enough
// samples, and both routes to the moments then give the published ones.
func TestFitsOfAPolynomial(t *testing.T) {
	r := fitsOf(t, analyticBrief(t, "sum_of_squares", ""), "--counts", "60,30", "--replicates", "2", "--test-points", "200", "--kinds", "polynomial; weighted")
	if r.ModelRuns != 200+2*(30+60) || len(r.Rows) != 6 {
		t.Fatalf("%d model runs, %d rows", r.ModelRuns, len(r.Rows))
	}
	const exact = 1e-9 * 221.1 // of the spread, sqrt(55 (1e4/5 - 1e4/9))
	for _, row := range r.Rows {
		if row.Quantity != "value" || row.At != "model" || row.Designs != 2 || row.Seconds <= 0 {
			t.Errorf("row %+v", row)
		}
		if row.Samples == 60 && (row.Kind == "polynomial chaos" || row.Chosen) && (row.RMSE > exact || 1-row.Q2 > 1e-15) {
			t.Errorf("a quadratic is not reproduced: %+v", row)
		}
	}
	routes := map[string]bool{}
	for _, m := range r.Moments {
		routes[m.Route] = true
		if m.Route == "coefficients" && m.Kind == "polynomial chaos" {
			if math.Abs(m.Mean-500) > 1e-6 || math.Abs(m.Deviation-math.Sqrt(55*4e4/45)) > 1e-6 || *m.MeanError > exact {
				t.Errorf("moments by coefficients: %+v", m)
			}
		}
	}
	if len(routes) != 4 {
		t.Errorf("routes %v", routes)
	}
}

// withoutSeconds is a document less the only figures that depend on the machine.
func withoutSeconds(t *testing.T, data []byte) map[string]any {
	t.Helper()
	var document map[string]any
	decode(t, data, &document)
	for _, row := range document["rows"].([]any) {
		delete(row.(map[string]any), "fit_seconds")
	}
	return document
}

func TestFitsSameForAnyJobs(t *testing.T) {
	file := analyticBrief(t, "ishigami", "effort: {seed: 5}\n")
	args := []string{"fits", file, "--counts", "12,24", "--replicates", "3", "--test-points", "300", "--noise-inputs", "1", "--noise", "0.1", "--json", "--quiet", "--kinds", "polynomial; Gaussian process", "--jobs"}
	first := command(append(args, "1")...)
	for _, jobs := range []string{"2", "5"} {
		if again := command(append(args, jobs)...); !reflect.DeepEqual(withoutSeconds(t, first.out), withoutSeconds(t, again.out)) {
			t.Errorf("--jobs %s changes the result", jobs)
		}
	}
	other := command(append(args, "1", "--seed", "6")...)
	if reflect.DeepEqual(withoutSeconds(t, first.out), withoutSeconds(t, other.out)) {
		t.Error("another seed changes nothing")
	}
	var r fitsResult
	decode(t, first.out, &r)
	for _, row := range r.Rows {
		if row.Loss == nil {
			t.Errorf("no loss in %+v", row)
		}
	}
	if !strings.Contains(strings.Join(r.Advice, " "), "1 inert input and noise of deviation 0.1") {
		t.Errorf("advice %q", r.Advice)
	}
}

func TestFitsOfAnInlet(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "curves")
	got := command("fits", starterBrief("tarvane-7"), "--counts", "20", "--replicates", "3", "--test-points", "400", "--kinds", "weighted chaos", "-o", dir, "--quiet")
	if got.code != exitDone {
		t.Fatalf("code %d: %s", got.code, got.messages)
	}
	files, err := readFolder(dir)
	if err != nil || len(files) != 3 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	var r fitsResult
	decode(t, files["fits.json"], &r)
	// Published with the method: four ramps of 2..10 deg at Mach 7, median error
	// 2.6e-3 with 20 samples; three designs here, so with room.
	if last := r.Rows[len(r.Rows)-1]; !last.Chosen || last.Quantity != "recovery" || last.Median > 4e-3 {
		t.Errorf("choice %+v", last)
	}
	if !strings.HasPrefix(string(files["fits.svg"]), "<svg") || !strings.HasPrefix(string(files["fits.csv"]), "quantity,") {
		t.Error("picture or table is not what it should be")
	}
	if !strings.Contains(string(got.out), "recovery at cruise") {
		t.Errorf("printed %s", got.out)
	}
	// The same again is fine; a stranger in the folder is not.
	if again := command("fits", starterBrief("tarvane-7"), "--counts", "20", "--replicates", "1", "--test-points", "50", "--kinds", "polynomial", "-o", dir, "--quiet"); again.code != exitDone {
		t.Errorf("code %d: %s", again.code, again.messages)
	}
	if err := os.WriteFile(filepath.Join(dir, "thesis.txt"), nil, 0o600); err != nil {
		t.Fatal(err)
	}
	if refused := command("fits", starterBrief("tarvane-7"), "-o", dir); refused.code != exitUsage || !strings.Contains(refused.messages, "thesis.txt") {
		t.Errorf("code %d: %s", refused.code, refused.messages)
	}
}

func TestFitsUsage(t *testing.T) {
	file := analyticBrief(t, "g06", "")
	for want, args := range map[string][]string{
		"--counts: \"3\"":              {file, "--counts", "3"},
		"--counts: \"x\"":              {file, "--counts", "20,x"},
		"--replicates 0":               {file, "--replicates", "0"},
		"--test-points 1":              {file, "--test-points", "1"},
		"--noise-inputs -1":            {file, "--noise-inputs", "-1"},
		"--noise -1":                   {file, "--noise", "-1"},
		"--noise NaN":                  {file, "--noise", "NaN"},
		"--accuracy 0":                 {file, "--accuracy", "0"},
		"--jobs 0":                     {file, "--jobs", "0"},
		"no kind \"splines\"":          {file, "--kinds", "splines"},
		"no quantity recovery":         {file, "--quantity", "recovery"},
		"no quantity g1@cruise":        {file, "--quantity", "g1@cruise"},
		"--time-limit \"soon\"":        {file, "--time-limit", "soon"},
		"expected 1 argument":          {},
		"cannot read the brief":        {file + "x"},
		"--noise -1 is not a number f": {file, "--noise", "-1", "--replicates", "0"}, // both are said
	} {
		got := command(append([]string{"fits"}, args...)...)
		if got.code != exitUsage || !strings.Contains(got.messages, want) {
			t.Errorf("%q: code %d, %s", want, got.code, got.messages)
		}
	}
}

// stopping is a kind whose fits end the context after a number of them.
type stopping struct {
	surrogate.Model
	left *int
	stop context.CancelFunc
}

func (m stopping) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	if *m.left--; *m.left < 0 {
		m.stop()
	}
	return m.Model.Fit(ctx, x, y)
}

func TestFitsStoppedEarly(t *testing.T) {
	model, err := analytic.New("ishigami")
	if err != nil {
		t.Fatal(err)
	}
	stopAfter := func(fits int) (*report.FitsStudy, error) {
		ctx, cancel := context.WithCancel(context.Background())
		defer cancel()
		return runFits(ctx, &fitsPlan{
			model: model, quantities: []int{0}, counts: []int{10, 20}, designs: 2, testPoints: 50, jobs: 1, seed: 1, accuracy: 1e-3,
			kinds: []surrogate.Model{stopping{pce.OLS{}, &fits, cancel}},
		}, nil)
	}
	if _, err := stopAfter(0); !errors.Is(err, errNothingFitted) {
		t.Errorf("stopped at once: %v", err)
	}
	study, err := stopAfter(3) // one fit a design: the last of four is cut off
	if err != nil || !study.Stopped {
		t.Fatalf("stopped %v, %v", study, err)
	}
	for i, want := range []int{2, 1, 2, 1} { // the kind at 10 and 20 samples, then the choice
		if got := len(study.Curves[0].Cells[i].Scores); got != want {
			t.Errorf("cell %d holds %d designs, want %d", i, got, want)
		}
	}
	if document := report.NewFits(report.Head{}, *study); document.Status != "stopped" {
		t.Errorf("status %s", document.Status)
	}
	got := command("fits", analyticBrief(t, "g09", ""), "--time-limit", "1ns", "--quiet")
	if got.code != exitError || !strings.Contains(got.messages, "before a single design was fitted") {
		t.Errorf("code %d: %s", got.code, got.messages)
	}
}

func TestFitsKinds(t *testing.T) {
	every := crossval.Every(1)
	names := func(text string) string {
		kept, err := chooseKinds(text, every)
		if err != nil {
			return err.Error()
		}
		var list []string
		for _, k := range kept {
			list = append(list, k.Kind())
		}
		return strings.Join(list, "; ")
	}
	if got := names(""); strings.Count(got, ";") != len(every)-1 {
		t.Errorf("all kinds: %s", got)
	}
	if got := names("weighted chaos; POLYNOMIAL"); got != "polynomial chaos; weighted chaos" {
		t.Errorf("two kinds: %s", got)
	}
	if got := names("sparse"); !strings.HasPrefix(got, "sparse chaos, l") || strings.Count(got, ";") != 1 {
		t.Errorf("a beginning: %s", got)
	}
}

func TestUsualCountsAreCut(t *testing.T) {
	for n, want := range map[int][]int{2: {20, 40, 80, 160, 320}, 12: {40, 80, 160, 320}, 100: {320}} {
		if got, err := parseCounts("", n); err != nil || !slices.Equal(got, want) {
			t.Errorf("%d inputs: %v, %v", n, got, err)
		}
	}
}

// check and design of an analytic problem by their commands; flow refuses it.
func TestCommandsOnAnAnalyticProblem(t *testing.T) {
	file := analyticBrief(t, "hs35", "")
	if got := command("check", file, "--json"); got.code != exitDone || !strings.Contains(string(got.out), `"lowest value at model"`) {
		t.Errorf("check: code %d\n%s%s", got.code, got.out, got.messages)
	}
	dir := filepath.Join(t.TempDir(), "result")
	got := command("design", file, "--json", "--quiet", "-o", dir)
	if got.code != exitDone { // verified: run again, it gives the same bits
		t.Fatalf("design: code %d: %s", got.code, got.messages)
	}
	var result struct {
		Best struct {
			Exact map[string]map[string]float64
		}
		Inlet any
	}
	decode(t, got.out, &result)
	// Hock & Schittkowski 1981, problem 35: 1/9.
	if v := result.Best.Exact["model"]["value"]; v < 1./9-1e-9 || v > 1./9+1e-3 || result.Inlet != nil {
		t.Errorf("value %g, inlet %v", v, result.Inlet)
	}
	files, err := readFolder(dir)
	if err != nil || files["inlet.svg"] != nil || files["stations.csv"] != nil || !json.Valid(files["result.json"]) || !strings.Contains(string(files["brief.yaml"]), "problem: {analytic: hs35}") {
		t.Errorf("files %v, %v", len(files), err)
	}
	if got := command("flow", file); got.code != exitUsage || !strings.Contains(got.messages, "analytic problem hs35") {
		t.Errorf("flow: code %d: %s", got.code, got.messages)
	}
}
