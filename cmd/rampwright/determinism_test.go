package main

import (
	"bytes"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"testing"
)

// sameResult designs into dir and fails unless result.json has the bytes wanted.
func sameResult(t *testing.T, what string, want []byte, file, dir string, jobs int) {
	t.Helper()
	got := command("design", file, "--json", "-o", dir, "--jobs", strconv.Itoa(jobs), "--quiet")
	if got.code != exitDone {
		t.Fatalf("%s: design ended with code %d:\n%s", what, got.code, got.messages)
	}
	written, err := os.ReadFile(filepath.Join(dir, "result.json"))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(written, got.out) {
		t.Errorf("%s: the document printed is not result.json", what)
	}
	if !bytes.Equal(written, want) {
		t.Errorf("%s: result.json differs: %s", what, firstDifference(want, written))
	}
}

// firstDifference shows the first line that two texts do not share.
func firstDifference(want, got []byte) string {
	wanted, found := bytes.Split(want, []byte("\n")), bytes.Split(got, []byte("\n"))
	for i := range min(len(wanted), len(found)) {
		if !bytes.Equal(wanted[i], found[i]) {
			return "line " + strconv.Itoa(i+1) + " wanted " + string(wanted[i]) + ", got " + string(found[i])
		}
	}
	return "one ends early"
}

// The same seed gives the same bytes for any number of workers and processors.
func TestResultDoesNotDependOnWorkers(t *testing.T) {
	want := designStarter(t, "veyric-6").files["result.json"]
	before := runtime.GOMAXPROCS(0)
	defer runtime.GOMAXPROCS(before)
	for _, c := range []struct{ jobs, processors int }{{1, 1}, {2, 5}, {7, 2}} {
		runtime.GOMAXPROCS(c.processors)
		what := "--jobs " + strconv.Itoa(c.jobs) + ", " + strconv.Itoa(c.processors) + " processors"
		sameResult(t, what, want, starterBrief("veyric-6"), t.TempDir()+"/result", c.jobs)
	}
	runtime.GOMAXPROCS(before)
	sameResult(t, "several flight points, --jobs 1", designStarter(t, "ondrel-3").files["result.json"],
		starterBrief("ondrel-3"), t.TempDir()+"/result", 1)
}

// A second run in the same folder takes every evaluation from the ledger.
func TestSecondRunInTheSameFolder(t *testing.T) {
	first := designStarter(t, "veyric-6")
	dir := first.folder(t)
	sameResult(t, "second run", first.files["result.json"], starterBrief("veyric-6"), dir, 2)
	data, err := os.ReadFile(filepath.Join(dir, "run.json"))
	if err != nil {
		t.Fatal(err)
	}
	var record struct {
		ModelCalls map[string]int `json:"model_calls"`
		Answered   map[string]int `json:"answered_from_ledger"`
	}
	decode(t, data, &record)
	for route, calls := range record.ModelCalls {
		if calls != 0 || record.Answered[route] == 0 {
			t.Errorf("%s: %d model calls, %d answered from the ledger", route, calls, record.Answered[route])
		}
	}
}

// brief.yaml of a result is a brief of the same result.
func TestResolvedBriefGivesTheSameResult(t *testing.T) {
	first := designStarter(t, "veyric-6")
	file := filepath.Join(first.folder(t), "brief.yaml")
	sameResult(t, "from the resolved brief", first.files["result.json"], file, t.TempDir()+"/result", 2)
}
