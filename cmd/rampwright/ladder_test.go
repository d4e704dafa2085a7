package main

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"

	"pgregory.net/rapid"

	"rampwright/optimize"
	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// ranOnce is a command that wrote a result folder.
type ranOnce struct {
	ended
	err   error
	files map[string][]byte
}

func inFolder(args ...string) *ranOnce {
	dir, err := os.MkdirTemp("", "rampwright-test")
	if err != nil {
		return &ranOnce{err: err}
	}
	defer os.RemoveAll(dir)
	folder := filepath.Join(dir, "result")
	r := &ranOnce{ended: command(append(args, "-o", folder, "--json", "--quiet")...)}
	r.files, r.err = readFolder(folder)
	return r
}

// done fails unless the command ended well and printed the file named.
func (r *ranOnce) done(t *testing.T, printed string) {
	t.Helper()
	if r.err != nil || r.code != exitDone {
		t.Fatalf("code %d, %v:\n%s", r.code, r.err, r.messages)
	}
	if !bytes.Equal(r.out, r.files[printed]) {
		t.Errorf("the document printed is not %s", printed)
	}
}

type ladderRows struct {
	Rows []struct {
		Ramps         int
		Status        string
		Reason        string
		Aim           struct{ Exact, Predicted *float64 }
		Variables     map[string]float64
		Gain          *float64
		RampAtMinimum []int    `json:"ramp_at_minimum"`
		EqualStrength *float64 `json:"equal_strength"`
	}
}

var veyricLadder = sync.OnceValue(func() *ranOnce {
	return inFolder("ladder", starterBrief("veyric-6"), "--count", "1-4", "--jobs", "2")
})

// Each rung reaches what an independent search of the exact model from many
// starts finds; one ramp alone cannot compress enough.
func TestLadderOfVeyric(t *testing.T) {
	run := veyricLadder()
	run.done(t, "ladder.json")
	var got ladderRows
	decode(t, run.out, &got)
	if len(got.Rows) != 4 || got.Rows[0].Status != "infeasible" || !strings.Contains(got.Rows[0].Reason, "throat_pressure_kPa") {
		t.Fatalf("%+v", got.Rows)
	}
	a := &app{jobs: 2}
	l, err := a.rungs(a.ladderCommand(), starterBrief("veyric-6"), "2-4")
	if err != nil {
		t.Fatal(err)
	}
	for i, r := range l.rungs {
		row := got.Rows[i+1]
		task := optimize.Task{Problem: r.study.model, Limits: r.study.limits, Aim: r.study.brief.Aim}
		exact, err := optimize.SearchExact(t.Context(), task, optimize.Settings{Jobs: 2})
		if err != nil || !exact.Feasible {
			t.Fatalf("%d ramps: %v, %+v", r.ramps, err, exact)
		}
		t.Logf("%d ramps: %s, %.6f, exact search %.6f, gain %v", row.Ramps, row.Status, *row.Aim.Exact, exact.Aim, row.Gain)
		if row.Status != "verified" || !(*row.Aim.Exact >= 0.9999*exact.Aim) {
			t.Errorf("%d ramps: %s with %.6f, exact search %.6f", row.Ramps, row.Status, *row.Aim.Exact, exact.Aim)
		}
		if len(row.Variables) != r.ramps+1 {
			t.Errorf("%d ramps: variables %v", row.Ramps, row.Variables)
		}
	}
	if gain := got.Rows[2].Gain; gain == nil || math.Abs(*gain-(*got.Rows[2].Aim.Exact-*got.Rows[1].Aim.Exact)) > 1e-15 {
		t.Errorf("gain of the third ramp %v", gain)
	}
	for _, name := range []string{"ladder.csv", "ladder.svg", "run.json", "brief.yaml", "ledger.jsonl"} {
		if len(run.files[name]) == 0 {
			t.Errorf("no %s", name)
		}
	}
}

// small is a search that ends within a fraction of a second.
var small = []string{"--samples", "24", "--infill", "20"}

// The same bytes for any number of workers, for the resolved brief, and from the
// ledger of a finished run.
func TestLadderDoesNotDependOnWorkers(t *testing.T) {
	args := append([]string{"ladder", starterBrief("veyric-6"), "--count", "2-3", "--jobs"}, "1")
	one := inFolder(append(args, small...)...)
	one.done(t, "ladder.json")
	args[len(args)-1] = "3"
	three := inFolder(append(args, small...)...)
	three.done(t, "ladder.json")
	dir := filepath.Join(t.TempDir(), "result")
	file := filepath.Join(t.TempDir(), "brief.yaml")
	if err := os.WriteFile(file, one.files["brief.yaml"], 0o600); err != nil {
		t.Fatal(err)
	}
	for range 2 {
		if again := command("ladder", file, "--count", "2-3", "-o", dir, "--quiet"); again.code != exitDone {
			t.Fatalf("code %d:\n%s", again.code, again.messages)
		}
	}
	resolved, err := readFolder(dir)
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"ladder.json", "ladder.csv", "ladder.svg"} {
		if !bytes.Equal(one.files[name], three.files[name]) {
			t.Errorf("%s depends on the workers: %s", name, firstDifference(one.files[name], three.files[name]))
		}
		if !bytes.Equal(one.files[name], resolved[name]) {
			t.Errorf("%s of the resolved brief differs: %s", name, firstDifference(one.files[name], resolved[name]))
		}
	}
	var record struct {
		ModelCalls map[string]int `json:"model_calls"`
	}
	decode(t, resolved["run.json"], &record)
	if calls := record.ModelCalls["evaluate"] + record.ModelCalls["verify"]; calls != 0 {
		t.Errorf("%d model calls in a second run", calls)
	}
}

// A rung whose box cannot keep a limit is a row with the reason; a ramp on its
// lower bound asks to be deleted.
func TestLadderRefusedRowAndRampToDelete(t *testing.T) {
	data, err := os.ReadFile(starterBrief("veyric-6"))
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "turned.yaml")
	if err := os.WriteFile(file, bytes.Replace(data, []byte("limits:\n"), []byte("limits:\n  - {quantity: total_turning_deg, at_least: 17}\n"), 1), 0o600); err != nil {
		t.Fatal(err)
	}
	// Three ramps want 8.08, 7.22 and 8.44 deg.
	run := inFolder(append([]string{"ladder", file, "--count", "1,3", "--ramp-angle-deg", "7.5..16"}, small...)...)
	if run.code != exitUsage {
		t.Errorf("--count 1,3 ends with %d", run.code)
	}
	run = inFolder(append([]string{"ladder", file, "--count", "1-3", "--ramp-angle-deg", "7.5..16"}, small...)...)
	run.done(t, "ladder.json")
	var got ladderRows
	decode(t, run.out, &got)
	if row := got.Rows[0]; row.Status != "refused" || !strings.Contains(row.Reason, "total_turning_deg") {
		t.Errorf("%+v", row)
	}
	if row := got.Rows[2]; !slices.Equal(row.RampAtMinimum, []int{2}) || row.Variables["ramp_2_angle_deg"] != 7.5 {
		t.Errorf("%+v", row)
	}
}

func TestLadderUsage(t *testing.T) {
	file := starterBrief("veyric-6")
	dir := filepath.Join(t.TempDir(), "result")
	for name, args := range map[string][]string{
		"no brief":      {},
		"count 0":       {file, "--count", "0-3"},
		"count 9":       {file, "--count", "9"},
		"count falling": {file, "--count", "4-2"},
		"count words":   {file, "--count", "two"},
		"ramps":         {file, "--ramps", "2"},
		"jobs":          {file, "--jobs", "0"},
		"time limit":    {file, "--time-limit", "soon"},
	} {
		if got := command(append([]string{"ladder", "-o", dir}, args...)...); got.code != exitUsage || len(got.out) > 0 {
			t.Errorf("%s: code %d:\n%s", name, got.code, got.messages)
		}
	}
	if _, err := os.Stat(dir); !os.IsNotExist(err) {
		t.Errorf("a refused command left %v", err)
	}
}

// A ladder does not replace the design of the same brief.
func TestLadderKeepsADesign(t *testing.T) {
	dir := designStarter(t, "veyric-6").folder(t)
	before, err := readFolder(dir)
	if err != nil {
		t.Fatal(err)
	}
	got := command("ladder", starterBrief("veyric-6"), "--count", "2", "-o", dir, "--quiet")
	after, err := readFolder(dir)
	if got.code != exitError || err != nil || len(after) != len(before) || !bytes.Equal(after["result.json"], before["result.json"]) {
		t.Errorf("code %d, %v:\n%s", got.code, err, got.messages)
	}
}

// The time limit leaves rows that were not reached, and the code says so.
func TestLadderTimeLimit(t *testing.T) {
	run := inFolder("ladder", starterBrief("veyric-6"), "--count", "2-8", "--time-limit", "700ms", "--jobs", "1")
	if run.err != nil {
		// Nothing at all was evaluated in time.
		if run.code != exitNotMet || !strings.Contains(run.messages, optimize.ErrNothingEvaluated.Error()) {
			t.Fatalf("code %d, %v:\n%s", run.code, run.err, run.messages)
		}
		return
	}
	var got ladderRows
	decode(t, run.out, &got)
	if last := got.Rows[len(got.Rows)-1]; len(got.Rows) != 7 || last.Status != "not_run" || run.code != exitStopped && run.code != exitNotMet {
		t.Errorf("code %d, %+v", run.code, got.Rows)
	}
}

// The turning of a chain stays when it is laid out over another number of ramps,
// and comes back over the same.
func TestLaidOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		angles := rapid.SliceOfN(rapid.Float64Range(0, 20), 1, 8).Draw(t, "angles")
		n := rapid.IntRange(1, 8).Draw(t, "n")
		sum := func(list []float64) (s float64) {
			for _, v := range list {
				s += v
			}
			return s
		}
		out := laidOut(angles, n)
		if len(out) != n || math.Abs(sum(out)-sum(angles)) > 1e-12*sum(angles) {
			t.Fatalf("%v over %d ramps: %v", angles, n, out)
		}
		for i, v := range laidOut(angles, len(angles)) {
			if math.Abs(v-angles[i]) > 1e-12 {
				t.Fatalf("%v over itself: %v", angles, laidOut(angles, len(angles)))
			}
		}
	})
	if got := laidOut([]float64{6, 9}, 3); math.Abs(got[0]-4)+math.Abs(got[1]-5)+math.Abs(got[2]-6) > 1e-12 {
		t.Errorf("6, 9 over three ramps: %v, want 4, 5, 6", got)
	}
}

// A start carries the design over: what is fixed stays, what is searched goes
// where the other problem has it.
func TestCarried(t *testing.T) {
	cowl := inlet.Between(2, 12)
	build := func(angles ...inlet.Setting) *inlet.Problem {
		p, err := inlet.New(inlet.Definition{
			Gas: gas.Air, CaptureHeight: 0.16, Width: 0.2, RampAngle: angles, CowlAngle: &cowl, CowlWedge: inlet.Fixed(4),
			ShockOnLip: inlet.Between(5, 6), DuctFactor: 1, Points: []inlet.Point{{Name: "cruise", Mach: 6, Pressure: 1984, Temperature: 223.18}},
		})
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	searched := inlet.Between(3, 16)
	got := carried(build(inlet.Fixed(6), searched), []float64{9, 7, 5.5}, build(searched, searched, searched))
	for i, want := range []float64{4, 5, 6, 7, 5.5} {
		if math.Abs(got[i]-want) > 1e-12 {
			t.Errorf("got %v, want 4 5 6 7 5.5", got)
			break
		}
	}
}

// Equal strength at Mach 3 with four oblique shocks: 0.889237 (Oswatitsch 1944,
// recomputed with 50 digits), be the fourth on a ramp or on the lip.
func TestEqualStrengthCountsTheLipShock(t *testing.T) {
	aligned, turned := inlet.Fixed(0), inlet.Between(0.5, 8)
	d := inlet.Definition{Gas: gas.Air, TerminalShock: true, DuctFactor: 0.95, LipTurning: &aligned, Points: []inlet.Point{{Mach: 3}}}
	for _, c := range []struct {
		lip   *inlet.Setting
		ramps int
	}{{&aligned, 4}, {&turned, 3}} {
		d.LipTurning = c.lip
		got := equalStrength(d, c.ramps)
		if got.Shocks != 4 || math.Abs(got.Recovery-0.95*0.889237) > 1e-6 {
			t.Errorf("%d ramps: %+v", c.ramps, got)
		}
	}
	if d.TerminalShock = false; equalStrength(d, 3) != nil {
		t.Error("a bound without a terminal shock")
	}
}

// An analytic problem has no ramps and no quantities to trade.
func TestLadderAndTradeNeedAnInlet(t *testing.T) {
	file := filepath.Join(t.TempDir(), "analytic.yaml")
	if err := os.WriteFile(file, []byte("brief: 1\ntitle: yardstick\nproblem: {analytic: branin}\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{"ladder", file}, {"trade", file, "--between", "a,b"}} {
		if got := command(args...); got.code != exitUsage || !strings.Contains(got.messages, "analytic problem") {
			t.Errorf("%s: code %d:\n%s", args[0], got.code, got.messages)
		}
	}
}
