package main

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"rampwright/optimize"
)

// heard is one JSON line of the stream of messages.
type heard struct {
	Format      int
	Event       string
	Phase       string
	Done, Total int
	Unit        string
	Best        *float64
	Violation   *float64
	SecondsLeft *float64 `json:"seconds_left"`
	Text, Hint  string
}

func hear(t *testing.T, messages string) []heard {
	t.Helper()
	var list []heard
	for _, line := range splitLines(messages) {
		var h heard
		if err := json.Unmarshal([]byte(line), &h); err != nil || h.Format != 1 {
			t.Fatalf("%q: %v", line, err)
		}
		list = append(list, h)
	}
	return list
}

// shown runs a search of two phases through a display whose clock goes 0.1 s
// further with every event.
func shown(form progressForm, moving bool) string {
	var out bytes.Buffer
	a := &app{messages: &out, form: form}
	clock := time.Unix(0, 0)
	p := &progress{app: a, moving: moving, now: func() time.Time { return clock }, began: clock}
	for i := 1; i <= 8; i++ {
		clock = clock.Add(100 * time.Millisecond)
		e := optimize.Event{Phase: "samples", Evaluations: i, Planned: 10, Aim: math.NaN(), Violation: 0.25}
		if i > 5 {
			e.Phase, e.Aim, e.Violation = "infill", 0.5+float64(i)/100, 0
		}
		p.observe(e)
	}
	p.end()
	return out.String()
}

func TestProgressInJSON(t *testing.T) {
	list := hear(t, shown(jsonLines, false))
	// Every 0.2 s and the end of each phase.
	var done []int
	for _, h := range list {
		done = append(done, h.Done)
		if h.Event != "progress" || h.Total != 10 || h.Unit != "exact evaluation" {
			t.Errorf("%+v", h)
		}
		// The pace is 0.1 s an evaluation.
		if h.SecondsLeft == nil || math.Abs(*h.SecondsLeft-0.1*float64(10-h.Done)) > 1e-9 {
			t.Errorf("%d of %d done: %v s left", h.Done, h.Total, h.SecondsLeft)
		}
	}
	if want := []int{1, 3, 5, 6, 8}; !slices.Equal(done, want) {
		t.Fatalf("told at %v, want %v", done, want)
	}
	if h := list[0]; h.Phase != "samples" || h.Best != nil || h.Violation == nil || *h.Violation != 0.25 {
		t.Errorf("%+v", h)
	}
	if h := list[4]; h.Phase != "infill" || h.Best == nil || *h.Best != 0.58 {
		t.Errorf("%+v", h)
	}
}

func TestProgressInPlainLines(t *testing.T) {
	want := "samples: 5 exact evaluations, nothing feasible yet (least violation 0.25)\ninfill: 8 exact evaluations, best 0.58\n"
	for _, form := range []progressForm{autoProgress, plainLines} {
		if got := shown(form, false); got != want {
			t.Errorf("%s: %q", form, got)
		}
	}
}

var escapes = regexp.MustCompile(`\x1b\[[0-9;]*[A-Za-z]`)

// On a terminal each phase is one line that moves and then stays, within 80
// columns.
func TestProgressOnATerminal(t *testing.T) {
	text := shown(autoProgress, true)
	lines := strings.Split(escapes.ReplaceAllString(text, ""), "\n")
	if len(lines) != 3 || lines[2] != "" {
		t.Fatalf("%d lines: %q", len(lines)-1, text)
	}
	for i, want := range []string{"samples, none feasible yet", "infill, best 0.58"} {
		states := strings.Split(lines[i], "\r")
		for _, state := range states {
			if len(state) > 80 {
				t.Errorf("wider than a terminal: %q", state)
			}
		}
		if last := strings.TrimSpace(states[len(states)-1]); !strings.HasPrefix(last, want) || strings.Contains(last, "left") {
			t.Errorf("line %d ends as %q", i+1, last)
		}
	}
	if !strings.Contains(lines[0], ", 1s left") || !strings.Contains(lines[1], "(8/10)") {
		t.Errorf("no time left, or no count, in %q", lines)
	}
}

// Every line on the stream of messages is JSON where that is asked for: progress,
// messages, and errors.
func TestProgressFlag(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "result")
	got := command("design", starterBrief("veyric-6"), "-o", dir, "--progress", "json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	phases := map[string]heard{}
	said := ""
	for _, h := range hear(t, got.messages) {
		switch h.Event {
		case "progress":
			phases[h.Phase] = h
		case "message":
			said += h.Text
		}
	}
	if h := phases["samples"]; h.Done != 60 {
		t.Errorf("samples end as %+v", h)
	}
	var result struct {
		Best struct{ Aim struct{ Exact float64 } }
	}
	data, err := os.ReadFile(filepath.Join(dir, "result.json"))
	if err != nil {
		t.Fatal(err)
	}
	decode(t, data, &result)
	if h := phases["infill"]; h.Best == nil || *h.Best != result.Best.Aim.Exact {
		t.Errorf("infill ends as %+v, the result has %g", h, result.Best.Aim.Exact)
	}
	if !strings.Contains(said, "result folder: ") {
		t.Errorf("said %q", said)
	}

	broken := filepath.Join(t.TempDir(), "broken.yaml")
	if err := os.WriteFile(broken, []byte("brief: 1\nflight: 3\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{"design", broken}, {"design", "no-such.yaml"}, {"fits", starterBrief("veyric-6"), "--counts", "x"}} {
		got := command(append(args, "--progress", "json")...)
		list := hear(t, got.messages)
		if got.code != exitUsage || len(list) == 0 || list[0].Event != "error" || list[0].Text == "" {
			t.Errorf("%q: code %d, %q", args, got.code, got.messages)
		}
	}
	fits := command("fits", analyticBrief(t, "g09", ""), "--counts", "20", "--replicates", "2", "--test-points", "16", "--kinds", "polynomial chaos", "--progress", "json")
	list := hear(t, fits.messages)
	if last := list[len(list)-1]; fits.code != exitDone || last.Phase != "fitting" || last.Done != 2 || last.Total != 2 || last.Best != nil {
		t.Errorf("%+v", fits)
	}
	if got := command("design", starterBrief("veyric-6"), "--progress", "loud"); got.code != exitUsage || !strings.Contains(got.messages, "auto, lines and json") {
		t.Errorf("%+v", got)
	}
}
