//go:build unix

package main

import (
	"bytes"
	"os"
	"path/filepath"
	"syscall"
	"testing"
)

// slowLadder searches long enough to be stopped in its second rung, which begins
// within the first 60 evaluations.
var slowLadder = []string{"ladder", "slow.yaml", "-o", "result", "--json", "--jobs", "2", "--count", "2-4", "--samples", "30", "--infill", "20"}

// An interrupted ladder keeps the rows it has; a rerun resumes and ends as an
// undisturbed run does.
func TestInterruptedLadderResumes(t *testing.T) {
	dir := slowFolder(t)
	result := filepath.Join(dir, "result")
	child := spawn(t, dir, slowLadder...)
	child.await(t, result, 60)
	child.signal(t, syscall.SIGINT, syscall.SIGCONT)
	if code := child.end(t); code != exitInterrupted {
		t.Fatalf("code %d:\n%s", code, child.messages.String())
	}
	var got ladderRows
	decode(t, child.out.Bytes(), &got)
	if got.Rows[0].Status != "verified" || got.Rows[1].Status != "interrupted" || got.Rows[2].Status != "not_run" {
		t.Errorf("%+v", got.Rows)
	}

	again := spawn(t, dir, slowLadder...)
	if code := again.end(t); code != exitDone {
		t.Fatalf("code %d:\n%s", code, again.messages.String())
	}
	resumed, err := os.ReadFile(filepath.Join(result, "ladder.json"))
	if err != nil {
		t.Fatal(err)
	}
	fresh := slowFolder(t)
	if code := spawn(t, fresh, slowLadder...).end(t); code != exitDone {
		t.Fatalf("undisturbed: code %d", code)
	}
	undisturbed, err := os.ReadFile(filepath.Join(fresh, "result", "ladder.json"))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(resumed, undisturbed) {
		t.Errorf("the resumed ladder differs: %s", firstDifference(undisturbed, resumed))
	}
}
