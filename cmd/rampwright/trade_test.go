package main

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

type tradeCurve struct {
	Status string
	Curve  []struct {
		Values    map[string]float64
		Status    string
		Knee      bool
		Variables map[string]float64
		Rate      *float64
	}
	Hypervolume      float64
	HypervolumeShare float64 `json:"hypervolume_share"`
	Why              string
	Conflicts        []any
}

// Two curves of eleven verified points: monotone, between the limits of the
// brief, with one knee, each point what an independent search of the exact model
// finds under its bound.
func TestTradesOfVeyric(t *testing.T) {
	none := math.Inf(1)
	for second, c := range map[string]struct { // the quantity and its bound
		more  []string // arguments
		first float64  // the end of the best recovery stands on the brief's limit
		exact []int    // points to search exactly
		bound func(v float64) problems.Limit
	}{
		"length_m": {small, 0.62, []int{4, 8}, func(v float64) problems.Limit {
			return problems.Limit{Quantity: "length_m", Point: problems.Geometry, Low: -none, High: v}
		}},
		"throat_temperature_K": {nil, 780, []int{4, 10}, func(v float64) problems.Limit {
			return problems.Limit{Quantity: "throat_temperature_K", Point: "cruise", Low: v, High: none}
		}},
	} {
		t.Run(second, func(t *testing.T) {
			run := inFolder(append([]string{"trade", starterBrief("veyric-6"), "--between", "recovery," + second, "--jobs", "2"}, c.more...)...)
			run.done(t, "trade.json")
			var got tradeCurve
			decode(t, run.out, &got)
			if got.Status != "done" || len(got.Curve) != 11 {
				t.Fatalf("%s with %d points", got.Status, len(got.Curve))
			}
			knees := 0
			for i, p := range got.Curve {
				if p.Status != "verified" {
					t.Errorf("point %d is %s", i+1, p.Status)
				}
				if p.Knee {
					knees++
				}
				if i == 0 {
					continue
				}
				before := got.Curve[i-1].Values
				falls := p.Values["recovery"] < before["recovery"]
				if better := (p.Values[second] < before[second]) == (second == "length_m"); !falls || !better {
					t.Errorf("point %d, %v, after %v", i+1, p.Values, before)
				}
			}
			if knees != 1 || !(got.HypervolumeShare > 0.5 && got.HypervolumeShare < 1) {
				t.Errorf("%d knees, share %g", knees, got.HypervolumeShare)
			}
			// The independent search over the brief finds 0.65591; a limit is kept
			// to 1e-9 of its scale, and found to 1e-5.
			first := got.Curve[0].Values
			if math.Abs(first["recovery"]-0.65591) > 1e-5 || math.Abs(first[second]-c.first) > 1e-5*c.first {
				t.Errorf("first end %v", first)
			}
			study := starterStudy(t, "veyric-6")
			for _, i := range c.exact {
				p := got.Curve[i]
				task := optimize.Task{Problem: study.problem, Limits: narrowed(study.limits, c.bound(p.Values[second])), Aim: study.brief.Aim}
				exact, err := optimize.SearchExact(t.Context(), task, optimize.Settings{Jobs: 2})
				if err != nil || !exact.Feasible {
					t.Fatalf("point %d: %v, %+v", i+1, err, exact)
				}
				t.Logf("point %d: %.6f, exact search %.6f", i+1, p.Values["recovery"], exact.Aim)
				if !(p.Values["recovery"] >= 0.9999*exact.Aim) {
					t.Errorf("point %d: %.6f, exact search %.6f", i+1, p.Values["recovery"], exact.Aim)
				}
			}
			// A shorter inlet costs more recovery with each step.
			for i := 1; i < 10; i++ {
				if before, rate := *got.Curve[i-1].Rate, *got.Curve[i].Rate; second == "length_m" && !(rate > before) {
					t.Errorf("from point %d on %g for each m, %g before", i+1, rate, before)
				}
			}
		})
	}
}

// The same bytes for any number of workers; length against recovery is the same
// curve from the other side.
func TestTradeDoesNotDependOnWorkers(t *testing.T) {
	args := append([]string{"trade", starterBrief("veyric-6"), "--between", "length_m,recovery@cruise:highest", "--points", "3"}, small...)
	one := inFolder(append(args, "--jobs", "1")...)
	one.done(t, "trade.json")
	three := inFolder(append(args, "--jobs", "3")...)
	for _, name := range []string{"trade.json", "trade.csv", "trade.svg"} {
		if !bytes.Equal(one.files[name], three.files[name]) {
			t.Errorf("%s depends on the workers: %s", name, firstDifference(one.files[name], three.files[name]))
		}
	}
	var got tradeCurve
	decode(t, one.out, &got)
	last := len(got.Curve) - 1
	if last != 2 || got.Curve[0].Values["length_m"] >= got.Curve[last].Values["length_m"] || got.Curve[0].Values["recovery"] >= got.Curve[last].Values["recovery"] {
		t.Errorf("%+v", got.Curve)
	}
}

// The longest inlet is also the one of best recovery: no trade.
func TestTradeOfWhatDoesNotConflict(t *testing.T) {
	run := inFolder(append([]string{"trade", starterBrief("veyric-6"), "--between", "recovery,length_m:highest", "--points", "3"}, small...)...)
	if run.err != nil {
		t.Fatal(run.err)
	}
	var got tradeCurve
	decode(t, run.out, &got)
	if run.code != exitDone || len(got.Curve) != 1 {
		t.Errorf("code %d, %+v", run.code, got.Curve)
	}
}

// A brief that nothing meets gives its reason in place of a curve.
func TestTradeOfAnInfeasibleBrief(t *testing.T) {
	file := filepath.Join(t.TempDir(), "tight.yaml")
	if err := os.WriteFile(file, tightBrief(t), 0o600); err != nil {
		t.Fatal(err)
	}
	run := inFolder(append([]string{"trade", file, "--between", "recovery,length_m", "--points", "3"}, small...)...)
	if run.err != nil {
		t.Fatal(run.err)
	}
	var got tradeCurve
	decode(t, run.out, &got)
	if run.code != exitNotMet || got.Status != "infeasible" || len(got.Curve) != 0 || !strings.Contains(got.Why, "self_start") || len(got.Conflicts) == 0 {
		t.Errorf("code %d, %+v", run.code, got)
	}
}

func TestTradeUsage(t *testing.T) {
	file := starterBrief("veyric-6")
	dir := filepath.Join(t.TempDir(), "result")
	for name, c := range map[string]struct {
		args []string
		says string
	}{
		"nothing":       {[]string{file}, "--between is missing"},
		"three":         {[]string{file, "--between", "recovery,length_m,capture"}, "two quantities"},
		"unknown":       {[]string{file, "--between", "recovry,length_n"}, "recovry; the problem has no quantity length_n"},
		"unknown point": {[]string{file, "--between", "recovery@dash,length_m"}, "recovery@dash"},
		"direction":     {[]string{file, "--between", "recovery:up,length_m"}, "up"},
		"itself":        {[]string{file, "--between", "recovery,recovery@cruise"}, "itself"},
		"group lowest":  {[]string{file, "--between", "recovery,separation_margin:lowest"}, "least of several"},
		"points":        {[]string{file, "--between", "recovery,length_m", "--points", "1"}, "2 to 101"},
		"jobs":          {[]string{file, "--between", "recovery,length_m", "--jobs", "0"}, "at least one"},
	} {
		got := command(append([]string{"trade", "-o", dir}, c.args...)...)
		if got.code != exitUsage || !strings.Contains(got.messages, c.says) || len(got.out) > 0 {
			t.Errorf("%s: code %d:\n%s", name, got.code, got.messages)
		}
	}
}

// A time limit no design ends in leaves nothing behind.
func TestTradeWithoutTime(t *testing.T) {
	run := inFolder("trade", starterBrief("veyric-6"), "--between", "recovery,length_m", "--time-limit", "1ms")
	if run.code != exitNotMet || run.err == nil || !strings.Contains(run.messages, optimize.ErrNothingEvaluated.Error()) {
		t.Errorf("code %d, %v:\n%s", run.code, run.err, run.messages)
	}
}

// A group is driven by its least member; every member is limited.
func TestTradedGroup(t *testing.T) {
	study := starterStudy(t, "veyric-6")
	study.model = study.problem
	pair, err := study.tradedPair("separation_margin, length_m")
	if err != nil {
		t.Fatal(err)
	}
	if aim := pair[0].aim(); len(aim.Parts) != 3 || aim.Aggregate != problems.Worst || !aim.Highest {
		t.Errorf("two corners and the lip: %+v", aim)
	}
	evaluation := problems.NewEvaluation(len(study.model.Quantities()))
	if err := study.model.Evaluate(t.Context(), []float64{8, 7, 8, 8}, evaluation); err != nil {
		t.Fatal(err)
	}
	least := math.Inf(1)
	for i, q := range study.model.Quantities() {
		if q.Name == "separation_margin" {
			least = math.Min(least, evaluation.Values[i])
		}
	}
	if got := pair[0].value(evaluation); got != least || math.IsNaN(got) {
		t.Errorf("value %g, least %g", got, least)
	}
}

// A bound is drawn into a limit that holds there already; a limit of the model
// stays as it is, with the bound beside it.
func TestNarrowed(t *testing.T) {
	inf := math.Inf(1)
	limits := []problems.Limit{
		{Quantity: "throat_mach", Point: "cruise", Low: 1, High: inf, Kind: problems.Hard},
		{Quantity: "throat_mach", Point: "cruise", Low: 2.3, High: inf},
		{Quantity: "length_m", Point: problems.Geometry, Low: -inf, High: 0.62},
		{Quantity: "lip_mach", Point: "cruise", Low: 1, High: inf, Kind: problems.Hard},
	}
	for _, c := range []struct {
		more problems.Limit
		at   int
		want [2]float64
	}{
		{problems.Limit{Quantity: "length_m", Point: problems.Geometry, Low: -inf, High: 0.5}, 2, [2]float64{-inf, 0.5}},
		{problems.Limit{Quantity: "length_m", Point: problems.Geometry, Low: -inf, High: 0.7}, 2, [2]float64{-inf, 0.62}},
		{problems.Limit{Quantity: "throat_mach", Point: "cruise", Low: -inf, High: 3}, 1, [2]float64{2.3, 3}},
		{problems.Limit{Quantity: "lip_mach", Point: "cruise", Low: -inf, High: 4}, 4, [2]float64{-inf, 4}},
	} {
		got := narrowed(limits, c.more)
		if len(got) != max(4, c.at+1) || got[c.at].Low != c.want[0] || got[c.at].High != c.want[1] {
			t.Errorf("%+v: %+v", c.more, got)
		}
	}
	if limits[2].High != 0.62 || len(limits) != 4 {
		t.Errorf("the limits given were changed: %+v", limits)
	}
}
