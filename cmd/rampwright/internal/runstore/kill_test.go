package runstore

import (
	"bufio"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"rampwright/problems"
)

// childFolder names the folder for the process that TestKilledRunResumes kills.
const childFolder = "RUNSTORE_TEST_CHILD_FOLDER"

// TestMain is the run that gets killed when childFolder is set: it evaluates
// x = 0, 1, .. without end and says each when the ledger has it.
func TestMain(m *testing.M) {
	dir := os.Getenv(childFolder)
	if dir == "" {
		os.Exit(m.Run())
	}
	f, err := Open(dir, title, "hash-1", Options{})
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(2)
	}
	problem, _ := Cached(&plain{}, f.Ledger(), "m")
	dst := problems.NewEvaluation(3)
	for i := 0; ; i++ {
		if err := problem.Evaluate(context.Background(), []float64{float64(i)}, dst); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(2)
		}
		fmt.Println(i)
	}
}

func TestKilledRunResumes(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	said := 0
	for round := 1; round <= 3; round++ {
		child := exec.Command(os.Args[0])
		child.Env = append(os.Environ(), childFolder+"="+dir)
		child.Stderr = os.Stderr
		output, err := child.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := child.Start(); err != nil {
			t.Fatal(err)
		}
		lines := bufio.NewScanner(output)
		for said = 0; said < 40*round && lines.Scan(); said++ {
		}
		_, err = Open(dir, title, "hash-1", Options{})
		var busy *Busy
		if !errors.As(err, &busy) || busy.PID != child.Process.Pid {
			t.Errorf("while the run lives: %v", err)
		}
		if err := child.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		_ = child.Wait() // reports the kill
	}
	f := open(t, dir, Options{})
	if notices := strings.Join(f.Notices(), "\n"); !strings.Contains(notices, "its lock is taken over") {
		t.Errorf("notices %q", notices)
	}
	if f.Ledger().Len() < said {
		t.Errorf("%d evaluations were reported, %d are known", said, f.Ledger().Len())
	}
	problem := &plain{}
	cached, counter := Cached(problem, f.Ledger(), "m")
	dst := problems.NewEvaluation(3)
	for i := range said {
		if err := cached.Evaluate(context.Background(), []float64{float64(i)}, dst); err != nil || dst.Values[0] != float64(i) {
			t.Fatal(dst.Values, err)
		}
	}
	if counter.Calls(Primary) != 0 || problem.evaluated.Load() != 0 {
		t.Errorf("%d of %d evaluations were asked again", counter.Calls(Primary), said)
	}
	// No evaluation was written twice over the three runs.
	seen := map[string]bool{}
	data, err := os.ReadFile(f.Ledger().path)
	if err != nil {
		t.Fatal(err)
	}
	for line := range strings.Lines(string(data)) {
		var r record
		if err := json.Unmarshal([]byte(line), &r); err != nil || seen[r.key()] {
			t.Fatalf("line %q: %v, seen %v", line, err, seen[r.key()])
		}
		seen[r.key()] = true
	}
}
