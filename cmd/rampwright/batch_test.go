//go:build unix

package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"rampwright/optimize"
)

// batchBrief is a starter that asks for four evaluations a round.
func batchBrief(t *testing.T) string {
	t.Helper()
	text, err := os.ReadFile(starterBrief("veyric-6"))
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "batch.yaml")
	if err := os.WriteFile(file, append(text, "\neffort: {samples: 20, infill: 20, batch: 4, agreement: 0.01}\n"...), 0o600); err != nil {
		t.Fatal(err)
	}
	return file
}

// A batch is of the brief: its rounds, and every byte, are those of any number of
// workers, and of a run that was cut off within a round and resumed.
func TestBatchDoesNotDependOnWorkersOrInterruption(t *testing.T) {
	file := batchBrief(t)
	dir := filepath.Join(t.TempDir(), "result")
	first := command("design", file, "--json", "-o", dir, "--jobs", "1", "--quiet")
	if first.code != exitDone {
		t.Fatalf("design ended with code %d:\n%s", first.code, first.messages)
	}
	for _, jobs := range []int{2, 8} {
		sameResult(t, "batch of 4, --jobs "+strconv.Itoa(jobs), first.out, file, t.TempDir()+"/result", jobs)
	}
	checkRounds(t, first.out, 4)

	// Within the second round of the search.
	const kept = 20 + 4 + 2
	ledger := filepath.Join(dir, "ledger.jsonl")
	data, err := os.ReadFile(ledger)
	if err != nil {
		t.Fatal(err)
	}
	lines := bytes.SplitAfter(data, []byte("\n"))
	if err := os.WriteFile(ledger, bytes.Join(lines[:kept], nil), 0o600); err != nil {
		t.Fatal(err)
	}
	sameResult(t, "resumed within a round", first.out, file, dir, 8)
	if calls := modelCalls(t, dir); calls != len(keysOf(t, data))-kept {
		t.Errorf("%d evaluations were computed again, the ledger lacked %d", calls, len(keysOf(t, data))-kept)
	}
}

// checkRounds holds the history of a result against its batch and its counts.
func checkRounds(t *testing.T, result []byte, batch int) {
	t.Helper()
	var document struct {
		Evaluations struct{ Samples, Infill, Rounds int }
		History     []struct{ Evaluations int }
	}
	decode(t, result, &document)
	spent := document.Evaluations
	if len(document.History) == 0 || document.History[0].Evaluations != spent.Samples {
		t.Fatalf("the history does not begin with the %d samples: %+v", spent.Samples, document.History)
	}
	document.History = document.History[1:]
	if spent.Rounds != len(document.History) || spent.Rounds*batch < spent.Infill || spent.Rounds >= spent.Infill {
		t.Errorf("%+v with %d lines of history in batches of %d", spent, len(document.History), batch)
	}
	before := spent.Samples
	for _, step := range document.History {
		if n := step.Evaluations - before; n < 1 || n > batch {
			t.Errorf("a round holds %d of %d evaluations", n, batch)
		}
		before = step.Evaluations
	}
}

// The hint names a batch that the jobs can evaluate, and only where it would help.
func TestBatchHint(t *testing.T) {
	counts := optimize.Counts{Samples: 40, Rounds: 20} // 25 waves of eight jobs
	for _, c := range []struct {
		name        string
		jobs, batch int
		took        time.Duration
		want        string
	}{
		{"slow model", 8, 0, 25 * slowRound, "--batch 8"},
		{"more jobs than a batch may hold", 99, 0, 25 * slowRound, "--batch 32"},
		{"fast model", 8, 0, time.Minute, ""},
		{"two jobs", 2, 0, time.Hour, ""},
		{"a batch already", 8, 4, time.Hour, ""},
	} {
		got := batchHint(optimize.Settings{Jobs: c.jobs, Batch: c.batch}, counts, c.took)
		if (got == "") != (c.want == "") || !strings.Contains(got, c.want) {
			t.Errorf("%s: %q, want %q in it", c.name, got, c.want)
		}
	}
	if hint := batchHint(optimize.Settings{Jobs: 8}, optimize.Counts{Samples: 40}, time.Hour); hint != "" {
		t.Errorf("a search without rounds: %q", hint)
	}
}
