package runstore

import (
	"context"
	"errors"
	"math"
	"os"
	"path/filepath"
	"sync"
	"sync/atomic"
	"testing"
	"testing/synctest"

	"rampwright/problems"
)

// sample is an evaluation of three quantities, the last one missing.
func sample(v float64) *problems.Evaluation {
	e := problems.NewEvaluation(3)
	e.Set(0, v)
	e.Set(1, -v/3)
	e.Miss(2, &problems.Status{Phrase: "shocks inside the lip"})
	return e
}

// expect fails unless the ledger holds sample(v) at x.
func expect(t *testing.T, l *Ledger, model string, x []float64, v float64) {
	t.Helper()
	got := problems.NewEvaluation(3)
	known, err := l.Lookup(model, Primary, x, got)
	if err != nil || !known {
		t.Fatalf("lookup of %v: known %v, error %v", x, known, err)
	}
	want := sample(v)
	for i := range want.Values {
		if !sameFloat(want.Values[i], got.Values[i]) || !equalReason(want.Reasons[i], got.Reasons[i]) {
			t.Fatalf("at %v: %v %v, want %v %v", x, got.Values[i], got.Reasons[i], want.Values[i], want.Reasons[i])
		}
	}
}

func TestLedgerCutAtEveryByteKeepsItsWholeLines(t *testing.T) {
	path := filepath.Join(t.TempDir(), ledgerName)
	whole := writeLedger(t, path, 3)
	ends := []int{0}
	for i, b := range whole {
		if b == '\n' {
			ends = append(ends, i+1)
		}
	}
	for cut := 0; cut <= len(whole); cut++ {
		lines := 0
		for ends[lines] < cut && lines+1 < len(ends) && ends[lines+1] <= cut {
			lines++
		}
		if err := os.WriteFile(path, whole[:cut], 0o666); err != nil {
			t.Fatal(err)
		}
		l, counts, err := openLedger(path, nil)
		if err != nil {
			t.Fatal(err)
		}
		torn := cut != ends[lines]
		if counts != (loaded{known: lines, torn: torn}) {
			t.Fatalf("cut at %d: %+v, want %d known and torn %v", cut, counts, lines, torn)
		}
		// What is appended next stands on its own line.
		if err := l.Append("m", Primary, []float64{99}, sample(99)); err != nil {
			t.Fatal(err)
		}
		if err := l.close(); err != nil {
			t.Fatal(err)
		}
		again, counts, err := openLedger(path, nil)
		if err != nil || counts != (loaded{known: lines + 1}) {
			t.Fatalf("cut at %d, appended, reopened: %+v, %v", cut, counts, err)
		}
		for i := range lines {
			expect(t, again, "m", []float64{float64(i)}, float64(i))
		}
		expect(t, again, "m", []float64{99}, 99)
		if err := again.close(); err != nil {
			t.Fatal(err)
		}
	}
}

// writeLedger writes n evaluations of model m at x = 0..n-1.
func writeLedger(t *testing.T, path string, n int) []byte {
	t.Helper()
	l, _, err := openLedger(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	for i := range n {
		if err := l.Append("m", Primary, []float64{float64(i)}, sample(float64(i))); err != nil {
			t.Fatal(err)
		}
	}
	if err := l.close(); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

func TestLineIsOnDiskWhenAppendReturns(t *testing.T) {
	path := filepath.Join(t.TempDir(), ledgerName)
	l, _, err := openLedger(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	defer l.close()
	for i := range 5 {
		if err := l.Append("m", Primary, []float64{float64(i)}, sample(1)); err != nil {
			t.Fatal(err)
		}
		reader := memoryLedger()
		file, err := os.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		counts, err := reader.load(file, nil)
		if err != nil || counts.known != i+1 {
			t.Fatalf("after %d appends the file holds %d (%v)", i+1, counts.known, err)
		}
		if err := file.Close(); err != nil {
			t.Fatal(err)
		}
	}
}

func TestLedgerTellsModelsRoutesAndBitsApart(t *testing.T) {
	l := newLedger(t)
	x := []float64{0}
	if err := l.Append("m", Primary, x, sample(1)); err != nil {
		t.Fatal(err)
	}
	got := problems.NewEvaluation(3)
	for name, lookup := range map[string]func() (bool, error){
		"other model": func() (bool, error) { return l.Lookup("n", Primary, x, got) },
		"other route": func() (bool, error) { return l.Lookup("m", Second, x, got) },
		"minus zero":  func() (bool, error) { return l.Lookup("m", Primary, []float64{math.Copysign(0, -1)}, got) },
		"denormal": func() (bool, error) {
			return l.Lookup("m", Primary, []float64{math.SmallestNonzeroFloat64}, got)
		},
		"two variables": func() (bool, error) { return l.Lookup("m", Primary, []float64{0, 0}, got) },
	} {
		if known, err := lookup(); known || err != nil {
			t.Errorf("%s: known %v, error %v", name, known, err)
		}
	}
	expect(t, l, "m", x, 1)
}

func TestStoredEvaluationIsNotTheCallers(t *testing.T) {
	l := newLedger(t)
	e := sample(1)
	if err := l.Append("m", Primary, []float64{1}, e); err != nil {
		t.Fatal(err)
	}
	e.Clear()
	expect(t, l, "m", []float64{1}, 1)
	got := problems.NewEvaluation(3)
	if _, err := l.Lookup("m", Primary, []float64{1}, got); err != nil {
		t.Fatal(err)
	}
	got.Clear()
	expect(t, l, "m", []float64{1}, 1)
}

func TestLookupRefusesAnotherNumberOfQuantities(t *testing.T) {
	l := newLedger(t)
	if err := l.Append("m", Primary, []float64{1}, sample(1)); err != nil {
		t.Fatal(err)
	}
	_, err := l.Lookup("m", Primary, []float64{1}, problems.NewEvaluation(4))
	var mismatch *Mismatch
	if !errors.As(err, &mismatch) || *mismatch != (Mismatch{"m", 3, 4}) {
		t.Errorf("got %v", err)
	}
}

func TestAppendFromManyGoroutines(t *testing.T) {
	path := filepath.Join(t.TempDir(), ledgerName)
	l, _, err := openLedger(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	const workers, each = 8, 50
	var group sync.WaitGroup
	for w := range workers {
		group.Go(func() {
			for i := range each {
				v := float64(w*each + i)
				if err := l.Append("m", Primary, []float64{v}, sample(v)); err != nil {
					t.Error(err)
				}
			}
		})
	}
	group.Wait()
	if err := l.close(); err != nil {
		t.Fatal(err)
	}
	again, counts, err := openLedger(path, nil)
	if err != nil || counts != (loaded{known: workers * each}) {
		t.Fatalf("%+v, %v", counts, err)
	}
	defer again.close()
	for v := range workers * each {
		expect(t, again, "m", []float64{float64(v)}, float64(v))
	}
}

// fullDisk accepts room bytes and then fails in the middle of a write, as a
// full disk does.
type fullDisk struct {
	ledgerFile
	room int
}

var errNoSpace = errors.New("no space left on device")

func (d *fullDisk) WriteAt(data []byte, offset int64) (int, error) {
	if len(data) <= d.room {
		d.room -= len(data)
		return d.ledgerFile.WriteAt(data, offset)
	}
	n, err := d.ledgerFile.WriteAt(data[:d.room], offset)
	d.room = 0
	return n, errors.Join(errNoSpace, err)
}

func TestFullDiskLeavesWholeLinesAndFailsForGood(t *testing.T) {
	path := filepath.Join(t.TempDir(), ledgerName)
	l, _, err := openLedger(path, nil)
	if err != nil {
		t.Fatal(err)
	}
	l.file = &fullDisk{l.file, 200} // one line of about 150 bytes, and a part of the next
	if err := l.Append("m", Primary, []float64{0}, sample(0)); err != nil {
		t.Fatal(err)
	}
	for range 2 {
		err := l.Append("m", Primary, []float64{1}, sample(1))
		var failure *Failure
		if !errors.As(err, &failure) || failure.Path != path || !errors.Is(err, errNoSpace) {
			t.Fatalf("got %v", err)
		}
	}
	if known, _ := l.Lookup("m", Primary, []float64{1}, problems.NewEvaluation(3)); known {
		t.Error("an evaluation that is not on disk is served")
	}
	if err := l.close(); !errors.Is(err, errNoSpace) {
		t.Errorf("closing hides the failure: %v", err)
	}
	again, counts, err := openLedger(path, nil)
	if err != nil || counts != (loaded{known: 1}) {
		t.Fatalf("%+v, %v", counts, err)
	}
	defer again.close()
	expect(t, again, "m", []float64{0}, 0)
}

func TestLedgerOfAnotherModelIsLeftAlone(t *testing.T) {
	path := filepath.Join(t.TempDir(), ledgerName)
	before := writeLedger(t, path, 4)
	l, counts, err := openLedger(path, []string{"other", "third"})
	if err != nil || counts != (loaded{foreign: 4}) {
		t.Fatalf("%+v, %v", counts, err)
	}
	if err := l.close(); err != nil {
		t.Fatal(err)
	}
	after, err := os.ReadFile(path)
	if err != nil || string(after) != string(before) {
		t.Errorf("the file changed (%v)", err)
	}
}

func TestCallersOfOnePointShareOneModelRun(t *testing.T) {
	l := newLedger(t)
	var calls atomic.Int64
	const callers = 16
	entered := make(chan struct{}, callers)
	release := make(chan struct{})
	run := func(_ context.Context, x []float64, dst *problems.Evaluation) error {
		calls.Add(1)
		entered <- struct{}{}
		<-release
		*dst = *sample(x[0])
		return nil
	}
	var group sync.WaitGroup
	for range callers {
		group.Go(func() {
			dst := problems.NewEvaluation(3)
			if _, err := l.ask(context.Background(), "m", Primary, []float64{5}, dst, run); err != nil || dst.Values[0] != 5 {
				t.Errorf("%v %v", dst.Values, err)
			}
		})
	}
	<-entered
	close(release)
	group.Wait()
	if calls.Load() != 1 {
		t.Errorf("the model ran %d times", calls.Load())
	}
}

func TestFailedRunIsNotStoredAndTheNextCallerTries(t *testing.T) {
	l := newLedger(t)
	broken := errors.New("solver crashed")
	fails := func(context.Context, []float64, *problems.Evaluation) error { return broken }
	works := func(_ context.Context, x []float64, dst *problems.Evaluation) error {
		*dst = *sample(x[0])
		return nil
	}
	dst := problems.NewEvaluation(3)
	if _, err := l.ask(context.Background(), "m", Primary, []float64{5}, dst, fails); !errors.Is(err, broken) {
		t.Fatal(err)
	}
	if l.Len() != 0 {
		t.Fatal("a failed run was stored")
	}
	if known, err := l.ask(context.Background(), "m", Primary, []float64{5}, dst, works); known || err != nil {
		t.Fatalf("known %v, %v", known, err)
	}
	expect(t, l, "m", []float64{5}, 5)
}

func TestWaitingCallerCanBeCancelled(t *testing.T) {
	l := newLedger(t)
	synctest.Test(t, func(t *testing.T) {
		release := make(chan struct{})
		go func() {
			_, err := l.ask(context.Background(), "m", Primary, []float64{5}, problems.NewEvaluation(3),
				func(_ context.Context, x []float64, dst *problems.Evaluation) error {
					<-release
					*dst = *sample(5)
					return nil
				})
			if err != nil {
				t.Error(err)
			}
		}()
		synctest.Wait() // the first caller is in the model
		ctx, cancel := context.WithCancel(context.Background())
		defer cancel()
		var waiting error
		go func() {
			_, waiting = l.ask(ctx, "m", Primary, []float64{5}, problems.NewEvaluation(3), nil)
		}()
		synctest.Wait() // the second waits for it
		cancel()
		synctest.Wait()
		if !errors.Is(waiting, context.Canceled) {
			t.Errorf("got %v", waiting)
		}
		close(release)
	})
}
