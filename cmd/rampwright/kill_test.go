//go:build unix

package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"io/fs"
	"maps"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"
)

// asProgram is set for a process of this test binary that is to be the program.
const asProgram = "RAMPWRIGHT_TEST_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		main() // ends with its exit code
	}
	os.Exit(m.Run())
}

// child is the program as a process of its own.
type child struct {
	*exec.Cmd
	out, messages bytes.Buffer
}

// spawn starts the program in a folder. It is killed when the test ends.
func spawn(t *testing.T, dir string, args ...string) *child {
	t.Helper()
	return spawnBy(t, dir, os.Args[:1], args...)
}

// spawnBy starts the program through another command.
func spawnBy(t *testing.T, dir string, command []string, args ...string) *child {
	t.Helper()
	c := &child{Cmd: exec.Command(command[0], append(slices.Clone(command[1:]), args...)...)}
	c.Dir, c.Env = dir, append(os.Environ(), asProgram+"=1")
	c.Stdout, c.Stderr = &c.out, &c.messages
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if c.ProcessState == nil {
			_ = c.Process.Kill() // may have ended by now
			_ = c.Wait()
		}
	})
	return c
}

// end waits for the program and returns its exit code, -1 when a signal ended it.
func (c *child) end(t *testing.T) int {
	t.Helper()
	var exit *exec.ExitError
	if err := c.Wait(); err != nil && !errors.As(err, &exit) {
		t.Fatal(err)
	}
	return c.ProcessState.ExitCode()
}

func (c *child) signal(t *testing.T, signals ...os.Signal) {
	t.Helper()
	for _, s := range signals {
		if err := c.Process.Signal(s); err != nil {
			t.Fatalf("%v: %v\n%s", s, err, c.messages.String())
		}
	}
}

// await returns when the ledger of the unfinished result in dir has so many
// lines. The run is then frozen, so that what follows does not race with it.
func (c *child) await(t *testing.T, result string, lines int) {
	t.Helper()
	for deadline := time.Now().Add(time.Minute); time.Now().Before(deadline); time.Sleep(time.Millisecond) {
		data, err := os.ReadFile(filepath.Join(result+".part", "ledger.jsonl"))
		if err != nil && !errors.Is(err, fs.ErrNotExist) {
			t.Fatal(err)
		}
		if bytes.Count(data, []byte("\n")) >= lines {
			c.signal(t, syscall.SIGSTOP)
			return
		}
	}
	t.Fatalf("the ledger never had %d lines:\n%s", lines, c.messages.String())
}

// slowStudy searches for about a second: many times what its exact evaluations
// take.
var slowStudy = []string{"design", "slow.yaml", "-o", "result", "--json", "--jobs", "2", "--samples", "30", "--infill", "25"}

// slowFolder is a fresh folder with the brief of the slow study.
func slowFolder(t *testing.T) string {
	t.Helper()
	data, err := os.ReadFile(starterBrief("veyric-6"))
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "slow.yaml"), data, 0o600); err != nil {
		t.Fatal(err)
	}
	return dir
}

// undisturbed is the slow study run to its end in one go.
type undisturbed struct {
	result []byte
	ledger []byte
	took   time.Duration
	failed string
}

var undisturbedOnce = sync.OnceValue(func() undisturbed {
	dir, err := os.MkdirTemp("", "rampwright-undisturbed")
	if err != nil {
		return undisturbed{failed: err.Error()}
	}
	defer os.RemoveAll(dir)
	began := time.Now()
	args := slices.Clone(slowStudy)
	args[1], args[3] = starterBrief("veyric-6"), filepath.Join(dir, "result")
	cmd := exec.Command(os.Args[0], args...)
	cmd.Env = append(os.Environ(), asProgram+"=1")
	var u undisturbed
	if u.result, err = cmd.Output(); err != nil {
		return undisturbed{failed: err.Error()}
	}
	u.took = time.Since(began)
	if u.ledger, err = os.ReadFile(filepath.Join(dir, "result", "ledger.jsonl")); err != nil {
		return undisturbed{failed: err.Error()}
	}
	return u
})

func undisturbedRun(t *testing.T) undisturbed {
	t.Helper()
	u := undisturbedOnce()
	if u.failed != "" {
		t.Fatal(u.failed)
	}
	return u
}

// keysOf returns the evaluations of a ledger, each of which it holds once. A last
// line that was being written counts as none.
func keysOf(t *testing.T, ledger []byte) map[string]bool {
	t.Helper()
	keys := map[string]bool{}
	for line := range bytes.Lines(ledger) {
		var entry struct {
			Model, Route string
			X            []string
		}
		if err := json.Unmarshal(line, &entry); err != nil {
			if !bytes.HasSuffix(line, []byte("\n")) {
				continue
			}
			t.Fatalf("%v in a whole line:\n%s", err, line)
		}
		key := entry.Model + " " + entry.Route + " " + strings.Join(entry.X, " ")
		if keys[key] {
			t.Fatalf("evaluated twice: %s", key)
		}
		keys[key] = true
	}
	return keys
}

// ledgerIn reads the ledger of a result folder, or of its unfinished run.
func ledgerIn(t *testing.T, result string) []byte {
	t.Helper()
	for _, dir := range []string{result + ".part", result} {
		data, err := os.ReadFile(filepath.Join(dir, "ledger.jsonl"))
		if err == nil {
			return data
		}
		if !errors.Is(err, fs.ErrNotExist) {
			t.Fatal(err)
		}
	}
	return nil
}

// finish reruns the slow study to its end: result.json has the bytes of the
// undisturbed run, and only what the ledger lacked was evaluated.
func finish(t *testing.T, dir string) *child {
	t.Helper()
	want := undisturbedRun(t)
	result := filepath.Join(dir, "result")
	known := len(keysOf(t, ledgerIn(t, result)))
	wanted := []string{"result", "slow.yaml"}
	if _, err := os.Stat(result); err == nil {
		wanted = slices.Insert(wanted, 1, "result.previous")
	}
	c := spawn(t, dir, slowStudy...)
	if code := c.end(t); code != exitDone {
		t.Fatalf("the last run ended with code %d:\n%s", code, c.messages.String())
	}
	written, err := os.ReadFile(filepath.Join(result, "result.json"))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(written, want.result) || !bytes.Equal(c.out.Bytes(), want.result) {
		t.Errorf("result.json differs from that of an undisturbed run: %s", firstDifference(want.result, written))
	}
	found := keysOf(t, ledgerIn(t, result))
	if needed := keysOf(t, want.ledger); !maps.Equal(found, needed) {
		t.Errorf("%d evaluations are known, an undisturbed run needs these %d", len(found), len(needed))
	}
	if calls := modelCalls(t, result); known+calls != len(found) {
		t.Errorf("%d evaluations were known, %d were computed and %d are known now", known, calls, len(found))
	}
	if left := entries(t, dir); !slices.Equal(left, wanted) {
		t.Errorf("left behind: %q", left)
	}
	return c
}

// modelCalls is how often the last run of a result computed the exact flow.
func modelCalls(t *testing.T, result string) int {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(result, "run.json"))
	if err != nil {
		t.Fatal(err)
	}
	var record struct {
		ModelCalls map[string]int `json:"model_calls"`
	}
	decode(t, data, &record)
	sum := 0
	for _, calls := range record.ModelCalls {
		sum += calls
	}
	return sum
}

// A design killed twenty times, half of them while it samples, resumes each time
// and ends as if nothing had happened.
func TestKilledDesignResumes(t *testing.T) {
	took := undisturbedRun(t).took
	dir := slowFolder(t)
	result := filepath.Join(dir, "result")
	random := rand.New(rand.NewPCG(9, 20))
	known := map[string]bool{}
	landed := 0
	for i := range 20 {
		share := 0.8 * random.Float64()
		if i%2 == 0 {
			share *= 0.2
		}
		c := spawn(t, dir, slowStudy...)
		time.Sleep(time.Duration(share * float64(took)))
		if err := c.Process.Kill(); err != nil && !errors.Is(err, os.ErrProcessDone) {
			t.Fatal(err)
		}
		switch code := c.end(t); code {
		case -1:
			landed++
		case exitDone: // this run was too quick to be killed
		default:
			t.Fatalf("run %d ended with code %d:\n%s", i, code, c.messages.String())
		}
		now := keysOf(t, ledgerIn(t, result))
		for key := range known {
			if !now[key] {
				t.Fatalf("run %d lost %s", i, key)
			}
		}
		known = now
	}
	t.Logf("%d of 20 runs were killed, %d evaluations known", landed, len(known))
	if landed < 10 {
		t.Errorf("only %d of 20 runs were killed in time", landed)
	}
	finish(t, dir)
}

// A line of the ledger that was cut short is dropped, said, and computed again.
func TestTornLedgerLine(t *testing.T) {
	dir := slowFolder(t)
	c := spawn(t, dir, slowStudy...)
	c.await(t, filepath.Join(dir, "result"), 20)
	c.signal(t, syscall.SIGKILL)
	c.end(t)
	path := filepath.Join(dir, "result.part", "ledger.jsonl")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, data[:len(data)-40], 0o600); err != nil {
		t.Fatal(err)
	}
	messages := finish(t, dir).messages.String()
	for _, want := range []string{"its lock is taken over", "resuming an unfinished run", "dropped, cut short: the last line"} {
		if !strings.Contains(messages, want) {
			t.Errorf("%q lacks %q", messages, want)
		}
	}
}

// Of two runs on one folder the second is refused; the first does not notice.
func TestTwoRunsOnOneFolder(t *testing.T) {
	dir := slowFolder(t)
	first := spawn(t, dir, slowStudy...)
	first.await(t, filepath.Join(dir, "result"), 5)
	second := spawn(t, dir, append(slices.Clone(slowStudy), "--force")...)
	if code := second.end(t); code != exitError || second.out.Len() > 0 || !strings.Contains(second.messages.String(), "another run is writing result") {
		t.Errorf("the second run: code %d, %q", code, second.messages.String())
	}
	first.signal(t, syscall.SIGCONT)
	if code := first.end(t); code != exitDone || !bytes.Equal(first.out.Bytes(), undisturbedRun(t).result) {
		t.Errorf("the first run: code %d, %q", code, first.messages.String())
	}
}
