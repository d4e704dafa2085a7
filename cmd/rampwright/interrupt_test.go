//go:build unix

package main

import (
	"bufio"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"
)

// endedResult is what an ended search says of itself.
type endedResult struct {
	Status string
	Best   struct {
		Variables map[string]float64
		Feasible  bool
		Aim       struct{ Exact *float64 }
	}
	Evaluations struct{ Samples, Infill int }
}

// sampled is the slow study, frozen when its samples are evaluated; more
// arguments are added to it.
func sampled(t *testing.T, more ...string) (c *child, result string) {
	t.Helper()
	dir := slowFolder(t)
	result = filepath.Join(dir, "result")
	c = spawn(t, dir, append(slices.Clone(slowStudy), more...)...)
	c.await(t, result, 30)
	return c, result
}

// writtenResult reads result.json, which is also what was printed.
func (c *child) writtenResult(t *testing.T, result string) endedResult {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(result, "result.json"))
	if err != nil {
		t.Fatalf("%v\n%s", err, c.messages.String())
	}
	if string(data) != c.out.String() {
		t.Error("the document printed is not result.json")
	}
	var ended endedResult
	decode(t, data, &ended)
	return ended
}

// The first signal ends the search with what it has: the result folder holds the
// best so far, and a rerun resumes.
func TestInterruptedDesignWritesTheBestSoFar(t *testing.T) {
	for _, c := range []struct {
		signal os.Signal
		code   int
	}{{syscall.SIGINT, exitInterrupted}, {syscall.SIGTERM, exitTerminated}} {
		t.Run(c.signal.String(), func(t *testing.T) {
			run, result := sampled(t)
			run.signal(t, c.signal, syscall.SIGCONT)
			if code := run.end(t); code != c.code {
				t.Fatalf("code %d, want %d:\n%s", code, c.code, run.messages.String())
			}
			if !strings.Contains(run.messages.String(), "interrupted: writing what there is\n") {
				t.Errorf("said %q", run.messages.String())
			}
			ended := run.writtenResult(t, result)
			if ended.Status != "interrupted" || len(ended.Best.Variables) != 4 || !ended.Best.Feasible || ended.Best.Aim.Exact == nil || ended.Evaluations.Samples == 0 {
				t.Errorf("result %+v", ended)
			}
			if left := entries(t, filepath.Dir(result)); !slices.Equal(left, []string{"result", "slow.yaml"}) {
				t.Errorf("left behind: %q", left)
			}
			known := len(keysOf(t, ledgerIn(t, result)))
			again := spawn(t, filepath.Dir(result), slowStudy...)
			if code := again.end(t); code != exitDone || again.out.String() != string(undisturbedRun(t).result) {
				t.Errorf("the rerun: code %d:\n%s", code, again.messages.String())
			}
			if calls, all := modelCalls(t, result), len(keysOf(t, ledgerIn(t, result))); known+calls != all {
				t.Errorf("%d evaluations were known, %d computed, %d are known now", known, calls, all)
			}
		})
	}
}

// A second signal ends the process at once, with the code of the first: no result
// is written, and what was evaluated is kept. Both are pending when the frozen
// run goes on, so that the second comes before the first is dealt with; which of
// them is the first is up to the system.
func TestSecondSignalLeavesAtOnce(t *testing.T) {
	run, result := sampled(t)
	run.signal(t, syscall.SIGINT, syscall.SIGTERM, syscall.SIGCONT)
	if code := run.end(t); code != exitInterrupted && code != exitTerminated {
		t.Fatalf("code %d:\n%s", code, run.messages.String())
	}
	if run.out.Len() > 0 {
		t.Errorf("printed %q", run.out.String())
	}
	if _, err := os.Stat(result); !os.IsNotExist(err) {
		t.Errorf("a result was written: %v", err)
	}
	if messages := finish(t, filepath.Dir(result)).messages.String(); !strings.Contains(messages, "its lock is taken over") {
		t.Errorf("the next run said %q", messages)
	}
}

// The time limit ends a search with code 5 and its best where one is usable, with
// code 4 where nothing feasible was found. That is no proof that nothing is: the
// status is stopped in both.
func TestTimeLimit(t *testing.T) {
	const limit = 2 * time.Second
	usable, feasible := sampled(t, "--time-limit", limit.String())
	dir := t.TempDir()
	infeasible := filepath.Join(dir, "result")
	if err := os.WriteFile(filepath.Join(dir, "slow.yaml"), tightBrief(t), 0o600); err != nil {
		t.Fatal(err)
	}
	unusable := spawn(t, dir, append(slices.Clone(slowStudy), "--time-limit", limit.String())...)
	unusable.await(t, infeasible, 30)
	time.Sleep(limit) // both started before this
	usable.signal(t, syscall.SIGCONT)
	unusable.signal(t, syscall.SIGCONT)

	if code := usable.end(t); code != exitStopped {
		t.Errorf("usable: code %d, want %d:\n%s", code, exitStopped, usable.messages.String())
	}
	if ended := usable.writtenResult(t, feasible); ended.Status != "stopped" || !ended.Best.Feasible {
		t.Errorf("usable: %+v", ended)
	}
	if code := unusable.end(t); code != exitNotMet {
		t.Errorf("nothing feasible: code %d, want %d:\n%s", code, exitNotMet, unusable.messages.String())
	}
	if ended := unusable.writtenResult(t, infeasible); ended.Status != "stopped" || ended.Best.Feasible || len(ended.Best.Variables) != 4 {
		t.Errorf("nothing feasible: %+v", ended)
	}
}

// A command that keeps nothing of work cut short says so.
func TestInterruptedStudyWritesNothing(t *testing.T) {
	fixed := []string{"--ramp-angle-deg", "8.08,7.22,8.44", "--cowl-angle-deg", "8", "--progress", "json", "-o", "result"}
	for name, args := range map[string][]string{
		"spread":   {"spread", "slow.yaml", "--draws", "100000"},
		"schedule": {"schedule", "slow.yaml", "--move", "cowl_angle_deg=7..9", "--points", "200"},
		"envelope": {"envelope", "slow.yaml", "--points", "300x100"},
	} {
		t.Run(name, func(t *testing.T) {
			dir := slowFolder(t)
			run := exec.Command(os.Args[0], append(args, fixed...)...)
			run.Dir, run.Env = dir, append(os.Environ(), asProgram+"=1")
			messages, err := run.StderrPipe()
			if err != nil {
				t.Fatal(err)
			}
			if err := run.Start(); err != nil {
				t.Fatal(err)
			}
			defer func() { _ = run.Process.Kill() }() // has ended, unless the test failed
			lines := bufio.NewReader(messages)
			first, err := lines.ReadString('\n') // signals are watched by now
			if err != nil {
				t.Fatal(err)
			}
			if err := run.Process.Signal(syscall.SIGINT); err != nil {
				t.Fatal(err)
			}
			rest, err := io.ReadAll(lines)
			if err != nil {
				t.Fatal(err)
			}
			_ = run.Wait() // the code is judged
			if code := run.ProcessState.ExitCode(); code != exitInterrupted || !strings.Contains(string(rest), "interrupted: nothing was written") {
				t.Errorf("code %d, said %s%s", code, first, rest)
			}
			if left := entries(t, dir); !slices.Equal(left, []string{"slow.yaml"}) {
				t.Errorf("left behind: %q", left)
			}
		})
	}
}
