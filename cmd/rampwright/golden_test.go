package main

import (
	"bytes"
	"flag"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
)

var updateGolden = flag.Bool("update-golden", false, "rewrite the recorded files in testdata/golden")

const goldenDir = "../../testdata/golden"

// Everything the program writes of a given design is as recorded, to six digits:
// JSON, CSV, SVG and HTML of the design, of its waves, of a ladder, a trade curve and
// learning curves, and of a comparison.
func TestGolden(t *testing.T) {
	files := goldenFiles(t)
	if *updateGolden {
		for _, f := range files {
			if err := os.WriteFile(filepath.Join(goldenDir, f.name), recorded(f.data), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		return
	}
	names := []string{"sorrel-5.yaml"}
	for _, f := range files {
		names = append(names, f.name)
		want, err := os.ReadFile(filepath.Join(goldenDir, f.name))
		if err != nil {
			t.Error(err)
		} else if got := recorded(f.data); !bytes.Equal(got, want) {
			t.Errorf("%s is not as recorded: %s\n-update-golden records it anew; read the difference", f.name, whereDiffers(want, got))
		}
	}
	entries, err := os.ReadDir(goldenDir)
	if err != nil {
		t.Fatal(err)
	}
	for _, entry := range entries {
		if !slices.Contains(names, entry.Name()) {
			t.Errorf("nothing makes %s", entry.Name())
		}
	}
}

// whereDiffers shows the first line that differs.
func whereDiffers(want, got []byte) string {
	before, after := strings.Split(string(want), "\n"), strings.Split(string(got), "\n")
	for i, line := range after {
		if i >= len(before) || before[i] != line {
			at := 0
			for i < len(before) && at < min(len(line), len(before[i])) && line[at] == before[i][at] {
				at++
			}
			return "line " + strconv.Itoa(i+1) + ", from column " + strconv.Itoa(at+1) + ": " + line[at:min(at+80, len(line))]
		}
	}
	return "it ends early"
}

// embeddedFace is a face as a drawing or a page carries it.
var embeddedFace = regexp.MustCompile(`(url\(data:font/woff;base64),[\w+/=]+\)`)

// recorded is a file as it is recorded: with fixed digits, and without the bytes
// of a face, which tests of the chart hold.
func recorded(data []byte) []byte {
	return fixedDigits(embeddedFace.ReplaceAll(data, []byte("$1,..)")))
}

// decimalNumber is a number with decimals or an exponent.
var decimalNumber = regexp.MustCompile(`-?\d+\.\d+(e[-+]?\d+)?|-?\b\d+e[-+]?\d+\b`)

// fixedDigits writes numbers with more than six digits to six, and what is
// rounding as zero, so that a recorded file does not depend on the last bits.
func fixedDigits(data []byte) []byte {
	return decimalNumber.ReplaceAllFunc(data, func(text []byte) []byte {
		v, err := strconv.ParseFloat(string(text), 64)
		mantissa, _, _ := strings.Cut(string(text), "e")
		digits := strings.TrimLeft(strings.NewReplacer("-", "", ".", "").Replace(mantissa), "0")
		switch {
		case err != nil:
			return text
		case v != 0 && math.Abs(v) < 1e-7:
			return []byte("0")
		case len(digits) <= 6:
			return text
		}
		return strconv.AppendFloat(nil, v, 'g', 6, 64)
	})
}

func TestFixedDigits(t *testing.T) {
	for text, want := range map[string]string{
		`{"a": 0.30000000000000004, "b": 12, "c": -1.5e-17}`: `{"a": 0.3, "b": 12, "c": 0}`,
		`M1.25 -3.5L2.00 "sha": "27d1e4f" 3e-9`:              `M1.25 -3.5L2.00 "sha": "27d1e4f" 0`,
		`1234567.8 9.9999999 -4.5e-3 0.000 0.50`:             `1.23457e+06 10 -4.5e-3 0.000 0.50`,
	} {
		if got := string(fixedDigits([]byte(text))); got != want {
			t.Errorf("%s became %s", text, got)
		}
	}
}

// goldenFiles are the files of the given design and what is made of it.
func goldenFiles(t *testing.T) []file {
	t.Helper()
	of := goldenStudy(t)
	finished := goldenDesign(t, of, 9, 8)
	head := of.head(1)
	run := record{
		Format: 1, Program: program, Started: "2026-01-02T03:04:05Z", Seconds: 1.25, Platform: "linux/amd64", Jobs: 2,
		ModelCalls: map[string]int{"evaluate": 16, "verify": 1}, LedgerAnswer: map[string]int{"evaluate": 0, "verify": 0},
	}
	files, err := resultFiles(of, report.NewDesign(head, *finished), finished, run)
	if err != nil {
		t.Fatal(err)
	}
	other := goldenDesign(t, of, 10, 8.5)
	others, err := resultFiles(of, report.NewDesign(head, *other), other, run)
	if err != nil {
		t.Fatal(err)
	}
	folder, beside := folderOf(files), folderOf(others)
	compare, err := report.NewCompare(program, []report.Named{{Name: "given", Folder: folder}, {Name: "beside", Folder: beside}})
	if err != nil {
		t.Fatal(err)
	}
	sheet, err := compare.Page()
	if err != nil {
		t.Fatal(err)
	}
	files = append(files, file{"compare.json", compare.JSON()}, file{"compare.html", sheet})
	for _, made := range goldenStudies(of, head, finished, other) {
		picture, err := made.document.Picture()
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, file{made.name + ".json", made.document.JSON()}, file{made.name + ".csv", made.document.CSV()}, file{made.name + ".svg", picture})
		folder.Studies = append(folder.Studies, report.StudyFile{Name: made.name, Document: made.document.JSON(), Pictures: []report.StudyPicture{{Name: made.name, Data: picture}}})
	}
	waves := goldenWaves(t, of, head, 9, 8)
	folder.Studies = append(folder.Studies, report.StudyFile{Name: "flow", Document: waves[0].data})
	files = append(files, waves...)
	page, err := report.Page(folder)
	if err != nil {
		t.Fatal(err)
	}
	i := slices.IndexFunc(files, func(f file) bool { return f.name == pageName })
	files[i].data = page // the one with the studies
	return files
}

// goldenWaves are the files of the waves of a given design, flow.json first.
func goldenWaves(t *testing.T, of *study, head report.Head, x ...float64) []file {
	t.Helper()
	flow, err := of.problem.Flow(t.Context(), x)
	if err != nil {
		t.Fatal(err)
	}
	if err := wavesFolder("waves").trace(of.problem.Freeze(x), flow); err != nil {
		t.Fatal(err)
	}
	files, err := waveFiles(flow, report.NewFlow(head, of.problem, flow))
	if err != nil {
		t.Fatal(err)
	}
	return files
}

// goldenStudy reads the invented brief.
func goldenStudy(t *testing.T) *study {
	t.Helper()
	name := filepath.Join(goldenDir, "sorrel-5.yaml")
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	b, err := brief.Read("sorrel-5.yaml", data, nil)
	if err != nil {
		t.Fatal(err)
	}
	problem, err := inlet.New(b.Definition)
	if err != nil {
		t.Fatal(err)
	}
	return &study{
		brief: b, model: problem, problem: problem,
		limits: b.Resolve(inlet.HardLimits(b.Definition), inlet.DefaultLimits(b.Definition)),
	}
}

// goldenDesign is a result made by hand: a design that is given, samples on a
// grid, surrogates between its corners.
func goldenDesign(t *testing.T, of *study, x ...float64) *report.Study {
	t.Helper()
	evaluate := func(x []float64) *problems.Evaluation {
		e := problems.NewEvaluation(len(of.model.Quantities()))
		if err := of.model.Evaluate(t.Context(), x, e); err != nil {
			t.Fatal(err)
		}
		return e
	}
	rows, err := constraints.Rows(of.model.Quantities(), of.limits)
	if err != nil {
		t.Fatal(err)
	}
	result := &optimize.Result{
		Status: optimize.NotVerified, Rows: rows, Why: "the design is given",
		Counts: optimize.Counts{Samples: 16, Infill: 1, Rounds: 1, Verify: 1, Surrogate: 40},
	}
	for i := range 16 {
		u := []float64{float64(i%4) / 3, float64(i/4) / 3}
		at := []float64{4 + 10*u[0], 4 + 10*u[1]}
		result.Samples = append(result.Samples, optimize.Sample{Purpose: "sample", X: at, Evaluation: evaluate(at)})
	}
	exact := evaluate(x)
	result.Samples = append(result.Samples, optimize.Sample{Purpose: "infill", X: x, Evaluation: exact})
	best := optimize.Candidate{X: x, Exact: exact, RouteGap: 0, SurrogateError: 0.002, Assessment: constraints.Assess(rows, exact)}
	for i, q := range of.model.Quantities() {
		best.Predicted = append(best.Predicted, math.NaN())
		if q.Name != "recovery" && q.Name != "throat_temperature_K" {
			continue
		}
		var y []float64
		for _, s := range result.Samples[:16] {
			y = append(y, s.Evaluation.Values[i])
		}
		fit := newHandFit(y)
		choice := crossval.Choice{Fitted: fit, Kind: "made by hand", Widening: 1, Quality: surrogate.Assess(fit, y)}
		result.Fits = append(result.Fits, optimize.Fit{Quantity: i, Samples: 16, Choice: choice})
		best.Predicted[i] = choice.Mean([]float64{(x[0] - 4) / 10, (x[1] - 4) / 10})
		if q.Name == "recovery" && q.Point == "cruise" {
			best.AimExact, best.AimPredicted = exact.Values[i], best.Predicted[i]
		}
	}
	result.Best, result.Candidates = best, []optimize.Candidate{best}
	for i := range 3 {
		result.History = append(result.History, optimize.Step{Evaluations: 16 + i, Aim: best.AimExact - 0.01*float64(2-i), Error: math.Pow(10, -float64(i+1)), Radius: 0.25})
	}
	flow, err := of.problem.Flow(t.Context(), x)
	if err != nil {
		t.Fatal(err)
	}
	return &report.Study{
		Problem: of.problem, Model: of.model, Aim: of.brief.Aim, Agreement: 1e-3, Result: result, Flow: flow, Widest: brief.Widest,
		Exact: &optimize.ExactSearch{Feasible: true, X: x, Aim: best.AimExact, Evaluations: 100},
	}
}

// handFit is bilinear between the corners of a grid of four by four samples, and
// off by turns when one is left out.
type handFit struct {
	surrogate.Fitted // nothing else is asked of it
	corners          [4]float64
	left, deviation  []float64
}

func newHandFit(y []float64) *handFit {
	f := &handFit{corners: [4]float64{y[0], y[3], y[12], y[15]}}
	size := math.Abs(y[15]-y[0]) / 100
	for i, v := range y {
		f.left = append(f.left, v+size*float64(i%3-1))
		f.deviation = append(f.deviation, size*(0.4+0.1*float64(i%4)))
	}
	return f
}

func (f *handFit) Mean(u []float64) float64 {
	low := f.corners[0] + u[0]*(f.corners[1]-f.corners[0])
	high := f.corners[2] + u[0]*(f.corners[3]-f.corners[2])
	return low + u[1]*(high-low)
}

func (f *handFit) LeaveOneOut() []float64          { return f.left }
func (f *handFit) LeaveOneOutDeviation() []float64 { return f.deviation }
func (f *handFit) Describe() string                { return "bilinear" }

// studied is a document with a table and a picture.
type studied interface {
	JSON() []byte
	CSV() []byte
	Picture() ([]byte, error)
}

// namedStudied is one with the name of its files.
type namedStudied struct {
	name     string
	document studied
}

// goldenStudies are a ladder, a trade curve and learning curves made by hand.
func goldenStudies(of *study, head report.Head, a, b *report.Study) []namedStudied {
	definition := of.problem.Definition()
	ladder := report.LadderStudy{Definition: definition, Aim: of.brief.Aim, Rungs: []report.Rung{
		{Ramps: 1, Refused: []string{"no inlet of the search box keeps a limit"}}, {Ramps: 2, Study: b}, {Ramps: 3, Study: a}, {Ramps: 4},
	}}
	trade := report.TradeStudy{
		Definition: definition, Asked: 3, Hypervolume: 0.02, Rectangle: 0.04, Reference: [2]float64{0.5, 0.7},
		Between: [2]report.Traded{{Name: "recovery", At: "cruise", Highest: true}, {Name: "length_m", At: "geometry", Unit: "m"}},
		Points: []report.TradePoint{
			{Study: a, Values: [2]float64{0.7, 0.7}}, {Study: b, Values: [2]float64{0.66, 0.55}, Knee: true}, {Study: b, Values: [2]float64{0.5, 0.5}},
		},
	}
	curve := report.FitsCurve{Quantity: problems.Quantity{Name: "recovery", Point: "cruise"}, Spread: 0.1}
	for _, kind := range []string{"polynomial chaos", "Gaussian process", ""} {
		for _, n := range []int{10, 20, 40} {
			cell := report.FitsCell{Kind: kind, Samples: n}
			for _, scatter := range []float64{0.8, 1, 1.5} {
				m := scatter / float64(n*n+len(kind))
				cell.Scores = append(cell.Scores, report.FitsScore{Kind: "Gaussian process", Median: m, P10: m / 5, P90: 3 * m, RMSE: 2 * m, Max: 9 * m, Q2: 1 - m, Inside: 19, Judged: 20, Seconds: 0.25})
			}
			curve.Cells = append(curve.Cells, cell)
		}
	}
	fits := report.FitsStudy{
		Setup: report.FitsSetup{
			Counts: []int{10, 20, 40}, Designs: 3, TestPoints: 100, Kinds: []string{"polynomial chaos", "Gaussian process"},
			Inputs: []string{"ramp_1_angle_deg", "ramp_2_angle_deg"}, Accuracy: 1e-3, IntervalsOn: 20,
		},
		Curves: []report.FitsCurve{curve}, ModelRuns: 310,
	}
	return []namedStudied{{"ladder", report.NewLadder(head, ladder)}, {"trade", report.NewTrade(head, trade)}, {"fits", report.NewFits(head, fits)}}
}
