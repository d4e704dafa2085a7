package runstore

import (
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// stepsOf returns the steps of committing over a finished and a previous result.
func stepsOf(t *testing.T) []string {
	t.Helper()
	f := ready(t)
	var steps []string
	f.before = func(step string) error {
		steps = append(steps, step)
		return nil
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	return steps
}

// ready returns a run that has written everything for "third", with "second"
// finished and "first" kept as the previous result.
func ready(t *testing.T) *Folder {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "r")
	finish(t, dir, "first", 1)
	finish(t, dir, "second", 2)
	f := open(t, dir, Options{})
	if err := f.Ledger().Append("m", Primary, []float64{3}, sample(3)); err != nil {
		t.Fatal(err)
	}
	if err := f.WriteFile("result.json", []byte("third")); err != nil {
		t.Fatal(err)
	}
	return f
}

func TestSwapHasTheStepsTheTestsInterrupt(t *testing.T) {
	want := []string{"complete", "rename r.previous r.discard", "rename r r.previous", "rename r.part r", "clear"}
	got := stepsOf(t)
	if len(got) != len(want) {
		t.Fatalf("steps %q", got)
	}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("step %d is %q, want %q", i, got[i], want[i])
		}
	}
}

var errInjected = errors.New("input/output error")

func TestFailureAtEachStepLeavesEveryResult(t *testing.T) {
	for _, failing := range stepsOf(t) {
		t.Run(failing, func(t *testing.T) {
			f := ready(t)
			f.before = func(step string) error {
				if step == failing {
					return errInjected
				}
				return nil
			}
			err := f.Commit()
			if failing == "clear" {
				// The result is in place: said, not failed.
				if err != nil || resultIn(f.dir) != "third" || resultIn(f.previous()) != "second" || len(f.Notices()) != 2 {
					t.Fatalf("%v, %q", err, f.Notices())
				}
				open(t, f.dir, Options{})
				if exists(f.discard()) {
					t.Error("the next run does not clear up")
				}
				return
			}
			if !errors.Is(err, errInjected) {
				t.Fatalf("got %v", err)
			}
			if resultIn(f.dir) != "second" || resultIn(f.previous()) != "first" || resultIn(f.part()) != "third" || exists(f.discard()) {
				t.Fatalf("DIR %q, previous %q, part %q", resultIn(f.dir), resultIn(f.previous()), resultIn(f.part()))
			}
			// The disk recovers: the same run can still be committed.
			f.before = nil
			if err := f.Commit(); err != nil || resultIn(f.dir) != "third" || resultIn(f.previous()) != "second" {
				t.Errorf("second try: %v, DIR %q, previous %q", err, resultIn(f.dir), resultIn(f.previous()))
			}
		})
	}
}

// crash runs Commit up to the failing step as a machine that stops there: no
// step is undone, and the system frees the lock without removing its file.
func crash(t *testing.T, f *Folder, failing string) {
	t.Helper()
	f.before = func(step string) error {
		if step == failing {
			panic(errInjected)
		}
		return nil
	}
	func() {
		defer func() {
			if recover() != errInjected {
				t.Fatalf("step %q was not reached", failing)
			}
		}()
		_ = f.Commit()
	}()
	if err := f.lock.file.Close(); err != nil {
		t.Fatal(err)
	}
	f.lock = nil
}

func TestCrashAtEachStepIsPutRight(t *testing.T) {
	for _, failing := range stepsOf(t) {
		t.Run(failing, func(t *testing.T) {
			f := ready(t)
			crash(t, f, failing)
			found := map[string]bool{}
			for _, path := range []string{f.dir, f.part(), f.previous(), f.discard()} {
				found[resultIn(path)] = true
			}
			if !found["second"] || !found["third"] {
				t.Fatalf("a whole result is gone: %v", found)
			}
			next := open(t, f.dir, Options{})
			dir, previous := resultIn(f.dir), resultIn(f.previous())
			restored := dir == "second" && previous == "first"
			completed := dir == "third" && previous == "second"
			if !restored && !completed || exists(f.discard()) {
				t.Fatalf("after the crash DIR %q, previous %q", dir, previous)
			}
			for _, v := range []float64{1, 2, 3} {
				expect(t, next.Ledger(), "m", []float64{v}, v)
			}
			// The run is repeated and ends as if nothing had happened.
			if err := errors.Join(next.WriteFile("result.json", []byte("third")), next.Commit()); err != nil {
				t.Fatal(err)
			}
			if got := resultIn(f.dir); got != "third" {
				t.Errorf("DIR holds %q", got)
			}
		})
	}
}

func TestFailedUndoIsCompletedByTheNextRun(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	finish(t, dir, "second", 2)
	// A run that asked nothing new: abandoning it would normally leave nothing.
	f := open(t, dir, Options{})
	if err := f.WriteFile("result.json", []byte("third")); err != nil {
		t.Fatal(err)
	}
	f.before = func(step string) error {
		if step == "rename r.part r" || step == "rename r.previous r" {
			return errInjected
		}
		return nil
	}
	if err := f.Commit(); !errors.Is(err, errInjected) {
		t.Fatalf("got %v", err)
	}
	if err := f.Abandon(); err != nil {
		t.Fatal(err)
	}
	next := open(t, dir, Options{})
	if resultIn(dir) != "third" || resultIn(f.previous()) != "second" {
		t.Errorf("DIR %q, previous %q, notices %q", resultIn(dir), resultIn(f.previous()), next.Notices())
	}
}

func TestCommitRefusesWhatAppearedMeanwhile(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	f := open(t, dir, Options{})
	if err := f.WriteFile("result.json", []byte("first")); err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(os.Mkdir(dir, 0o777), os.WriteFile(filepath.Join(dir, "thesis.txt"), nil, 0o666)); err != nil {
		t.Fatal(err)
	}
	var refused *Refused
	if err := f.Commit(); !errors.As(err, &refused) || refused.Why != NotOurs {
		t.Errorf("got %v", err)
	}
	if !exists(filepath.Join(dir, "thesis.txt")) || resultIn(f.part()) != "first" {
		t.Error("something is gone")
	}
}

func TestCommitAfterALostEvaluationFails(t *testing.T) {
	f := ready(t)
	f.ledger.file = &fullDisk{f.ledger.file, 10}
	if err := f.Ledger().Append("m", Primary, []float64{4}, sample(4)); err == nil {
		t.Fatal("a full disk took a line")
	}
	for range 2 {
		if err := f.Commit(); !errors.Is(err, errNoSpace) {
			t.Fatalf("got %v", err)
		}
	}
	if resultIn(f.dir) != "second" {
		t.Errorf("DIR holds %q", resultIn(f.dir))
	}
}

func TestCommitTwiceIsAnError(t *testing.T) {
	f := ready(t)
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	if err := f.Commit(); !errors.Is(err, os.ErrClosed) {
		t.Errorf("got %v", err)
	}
	if err := f.Abandon(); err != nil {
		t.Errorf("abandon after commit: %v", err)
	}
	if resultIn(f.dir) != "third" {
		t.Errorf("DIR holds %q", resultIn(f.dir))
	}
}
