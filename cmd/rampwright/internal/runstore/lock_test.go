package runstore

import (
	"errors"
	"os"
	"path/filepath"
	"sync"
	"sync/atomic"
	"testing"
)

// Taking and letting go at full speed: a lock file that is removed while another
// run opens it must not give the lock twice, nor be taken for a dead run's.
func TestLockIsHeldByOneAtATime(t *testing.T) {
	path := filepath.Join(t.TempDir(), "r.lock")
	var inside, taken atomic.Int64
	var group sync.WaitGroup
	for range 8 {
		group.Go(func() {
			for range 400 {
				held, stale, err := acquire(path, "r")
				var busy *Busy
				if errors.As(err, &busy) {
					continue
				}
				if err != nil {
					t.Error(err)
					return
				}
				if n := inside.Add(1); n != 1 {
					t.Errorf("%d hold the lock", n)
				}
				if stale != nil {
					t.Errorf("taken over from %v", stale)
				}
				taken.Add(1)
				inside.Add(-1)
				if err := held.release(); err != nil {
					t.Error(err)
				}
			}
		})
	}
	group.Wait()
	if taken.Load() == 0 {
		t.Error("nobody got it")
	}
}

func TestTwoRunsAtOnce(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	f := open(t, dir, Options{})
	_, err := Open(dir, title, "hash-1", Options{Force: true})
	var busy *Busy
	if !errors.As(err, &busy) || busy.PID != os.Getpid() || busy.Folder != f.Dir() || busy.Started.IsZero() || busy.Hint() == "" {
		t.Fatalf("got %v", err)
	}
	if err := f.Abandon(); err != nil {
		t.Fatal(err)
	}
	if got := open(t, dir, Options{}).Notices(); len(got) != 0 {
		t.Errorf("a lock let go of in order is called stale: %q", got)
	}
}

func TestOnlyOneOfManyRunsGetsTheFolder(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	for range 20 {
		const runs = 6
		folders, failures := make([]*Folder, runs), make([]error, runs)
		done := make(chan int)
		for i := range runs {
			go func() {
				folders[i], failures[i] = Open(dir, title, "h", Options{})
				done <- i
			}()
		}
		for range runs {
			<-done
		}
		var winner *Folder
		for i := range runs {
			var busy *Busy
			switch {
			case failures[i] == nil && winner == nil:
				winner = folders[i]
			case !errors.As(failures[i], &busy):
				t.Fatalf("run %d: %v", i, failures[i])
			}
		}
		if winner == nil {
			t.Fatal("nobody got it")
		}
		if len(winner.Notices()) != 0 {
			t.Fatalf("notices %q", winner.Notices())
		}
		if err := winner.Abandon(); err != nil {
			t.Fatal(err)
		}
	}
}

func TestLockFileWithoutContentNamesNobody(t *testing.T) {
	for _, content := range []string{"", "\x00\x00\x00"} {
		dir := filepath.Join(t.TempDir(), "r")
		if err := os.WriteFile(dir+".lock", []byte(content), 0o666); err != nil {
			t.Fatal(err)
		}
		if got := open(t, dir, Options{}).Notices(); len(got) != 0 {
			t.Errorf("%q: notices %q", content, got)
		}
	}
}
