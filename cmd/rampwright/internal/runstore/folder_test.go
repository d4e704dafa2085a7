package runstore

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"rampwright/problems"
)

const title = "VEYRIC-6 test article"

// open opens a folder that must open, and abandons it at the end of the test.
func open(t *testing.T, dir string, options Options) *Folder {
	t.Helper()
	f, err := Open(dir, title, "hash-1", options)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = f.Abandon() })
	return f
}

// finish makes dir a finished result holding result.json with text, and one
// evaluation of model m at x = at.
func finish(t *testing.T, dir, text string, at float64) {
	t.Helper()
	f := open(t, dir, Options{})
	if err := f.Ledger().Append("m", Primary, []float64{at}, sample(at)); err != nil {
		t.Fatal(err)
	}
	if err := f.WriteFile("result.json", []byte(text)); err != nil {
		t.Fatal(err)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
}

// resultIn returns the text of result.json in a folder, "" when there is none.
func resultIn(dir string) string {
	data, err := os.ReadFile(filepath.Join(dir, "result.json"))
	if err != nil {
		return ""
	}
	return string(data)
}

func exists(path string) bool {
	_, err := os.Lstat(path)
	return err == nil
}

// tree returns every path below root with its content, to show that nothing
// was touched.
func tree(t *testing.T, root string) string {
	t.Helper()
	var text strings.Builder
	err := filepath.Walk(root, func(path string, info os.FileInfo, err error) error {
		if err != nil {
			return err
		}
		content := []byte{}
		if info.Mode().IsRegular() {
			if content, err = os.ReadFile(path); err != nil {
				return err
			}
		}
		_, err = fmt.Fprintf(&text, "%s %v %q\n", path, info.Mode(), content)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return text.String()
}

func TestResultAppearsAtCommitAndTheLastOneIsKept(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "deep", "veyric-6-result")
	finish(t, dir, "first", 1)
	f := open(t, dir, Options{})
	if err := f.WriteFile("result.json", []byte("second")); err != nil {
		t.Fatal(err)
	}
	if got := resultIn(dir); got != "first" {
		t.Fatalf("before the commit DIR holds %q", got)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	finish(t, dir, "third", 1)
	if now, before := resultIn(dir), resultIn(f.previous()); now != "third" || before != "second" {
		t.Errorf("DIR %q, previous %q", now, before)
	}
	for _, path := range []string{f.part(), f.discard(), f.lockPath()} {
		if exists(path) {
			t.Errorf("%s is left", path)
		}
	}
	mark, err := ReadMark(dir)
	if want := (Mark{"rampwright", 1, title, "hash-1", true}); err != nil || mark != want {
		t.Errorf("mark %+v, %v", mark, err)
	}
}

func TestForceReplacesAnotherTitleAndKeepsIt(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	finish(t, dir, "veyric", 1)
	abandonWith(t, dir, 2)
	f, err := Open(dir, "ONDREL-3", "h", Options{Force: true})
	if err != nil {
		t.Fatal(err)
	}
	if n := f.Ledger().Len(); n != 0 {
		t.Errorf("%d evaluations of the other title are used", n)
	}
	if got := f.Notices(); len(got) != 1 || got[0] != `dropped: the unfinished run of "`+title+`"` {
		t.Errorf("notices %q", got)
	}
	if err := errors.Join(f.WriteFile("result.json", []byte("ondrel")), f.Commit()); err != nil {
		t.Fatal(err)
	}
	if now, before := resultIn(dir), resultIn(dir+".previous"); now != "ondrel" || before != "veyric" {
		t.Errorf("DIR %q, previous %q", now, before)
	}
}

// abandonWith leaves an unfinished run that knows one more evaluation.
func abandonWith(t *testing.T, dir string, at float64) {
	t.Helper()
	f := open(t, dir, Options{})
	if err := f.Ledger().Append("m", Primary, []float64{at}, sample(at)); err != nil {
		t.Fatal(err)
	}
	if err := f.Abandon(); err != nil {
		t.Fatal(err)
	}
}

func TestEmptyFolderAndCutOffFirstMarkAreAccepted(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	if err := errors.Join(os.Mkdir(dir, 0o777), os.Mkdir(dir+".part", 0o777),
		os.WriteFile(filepath.Join(dir+".part", temporary(markName)), []byte("{"), 0o666)); err != nil {
		t.Fatal(err)
	}
	finish(t, dir, "first", 1)
	if got := resultIn(dir); got != "first" {
		t.Errorf("DIR holds %q", got)
	}
}

func TestLinkedResultFolderIsSwappedWhereItLives(t *testing.T) {
	root := t.TempDir()
	dir, link := filepath.Join(root, "disk", "r"), filepath.Join(root, "r")
	finish(t, dir, "first", 1)
	if err := os.Symlink(dir, link); err != nil {
		t.Fatal(err)
	}
	finish(t, link, "second", 1)
	if resultIn(link) != "second" || resultIn(dir+".previous") != "first" || exists(link+".previous") {
		t.Errorf("link %q, previous %q", resultIn(link), resultIn(dir+".previous"))
	}
}

func TestUnfinishedRunResumes(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	finish(t, dir, "first", 1)
	abandonWith(t, dir, 2)
	// A file of the unfinished run must not end up in the result.
	if err := os.WriteFile(filepath.Join(dir+".part", "half.csv"), []byte("x"), 0o666); err != nil {
		t.Fatal(err)
	}
	f := open(t, dir, Options{Models: []string{"m"}})
	expect(t, f.Ledger(), "m", []float64{1}, 1) // of the finished result
	expect(t, f.Ledger(), "m", []float64{2}, 2) // of the unfinished run
	if got := f.Notices(); len(got) != 1 || !strings.HasPrefix(got[0], "resuming an unfinished run that knows 2 exact evaluations") {
		t.Errorf("notices %q", got)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	if exists(filepath.Join(dir, "half.csv")) {
		t.Error("a file of the unfinished run is in the result")
	}
	again := open(t, dir, Options{Models: []string{"m"}})
	expect(t, again.Ledger(), "m", []float64{2}, 2)
	if got := again.Notices(); len(got) != 1 || got[0] != "known from the last result: 2 exact evaluations" {
		t.Errorf("notices %q", got)
	}
}

func TestWhatTheLedgerDropsIsSaid(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	abandonWith(t, dir, 1)
	path := filepath.Join(dir+".part", ledgerName)
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	spoiled := append([]byte("not a line\n"), data...)
	if err := os.WriteFile(path, append(spoiled, data[:20]...), 0o666); err != nil {
		t.Fatal(err)
	}
	f := open(t, dir, Options{Models: []string{"another"}})
	notices := strings.Join(f.Notices(), "\n")
	for _, want := range []string{"of another model: 1 evaluation in", "unreadable: 1 line in", "dropped, cut short: the last line of"} {
		if !strings.Contains(notices, want) {
			t.Errorf("%q lacks %q", notices, want)
		}
	}
}

func TestLedgerOfEarlierResultsIsCarriedOnForTheSameModelOnly(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "r")
	run := func(model string, wantKnown int, wantNotice string) {
		t.Helper()
		f := open(t, dir, Options{Models: []string{model}})
		if known, notices := f.Ledger().Len(), strings.Join(f.Notices(), "\n"); known != wantKnown || !strings.Contains(notices, wantNotice) {
			t.Fatalf("%s: %d known, want %d; notices %q", model, known, wantKnown, notices)
		}
		for v := range 3 {
			x := []float64{float64(v)}
			if known, err := f.Ledger().Lookup(model, Primary, x, problems.NewEvaluation(3)); err != nil || known {
				continue
			}
			if err := f.Ledger().Append(model, Primary, x, sample(1)); err != nil {
				t.Fatal(err)
			}
		}
		if err := f.Commit(); err != nil {
			t.Fatal(err)
		}
	}
	run("before the edit", 0, "")
	run("after the edit", 0, "not used, of another model: 3 evaluations")
	run("before the edit", 3, "not used, of another model: 3 evaluations") // from DIR.previous
	for range 3 {
		run("before the edit", 3, "known from the last result: 3 exact evaluations")
	}
	data, err := os.ReadFile(filepath.Join(dir, ledgerName))
	if n := strings.Count(string(data), "\n"); err != nil || n != 3 {
		t.Errorf("the ledger has grown to %d lines (%v)", n, err)
	}
}

func TestAbandonedRunWithNothingNewLeavesNothing(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "r")
	finish(t, dir, "first", 1)
	before := tree(t, root)
	f := open(t, dir, Options{})
	if err := errors.Join(f.WriteFile("result.json", []byte("half")), f.Abandon(), f.Abandon()); err != nil {
		t.Fatal(err)
	}
	if after := tree(t, root); after != before {
		t.Errorf("left:\n%s", after)
	}
}

func TestNamesOutsideTheFolderAreRefused(t *testing.T) {
	f := open(t, filepath.Join(t.TempDir(), "r"), Options{})
	for _, name := range []string{"", ".", "..", "../x", "a/b", "/etc/x", markName, ledgerName, "Ledger.jsonl"} {
		var bad *BadName
		if err := f.WriteFile(name, nil); !errors.As(err, &bad) || bad.Name != name {
			t.Errorf("%q: %v", name, err)
		}
	}
}

func TestFailedWriteKeepsTheOldFile(t *testing.T) {
	f := open(t, filepath.Join(t.TempDir(), "r"), Options{})
	if err := f.WriteFile("result.json", []byte("old")); err != nil {
		t.Fatal(err)
	}
	draft := filepath.Join(f.part(), temporary("result.json"))
	for name, obstacle := range map[string]func() error{
		"a disk that refuses":            func() error { return os.Mkdir(draft, 0o777) },
		"another write of the same name": func() error { return os.WriteFile(draft, []byte("half"), 0o666) },
	} {
		if err := obstacle(); err != nil {
			t.Fatal(err)
		}
		var failure *Failure
		if err := f.WriteFile("result.json", []byte("new")); !errors.As(err, &failure) || filepath.Base(failure.Path) != "result.json" {
			t.Errorf("%s: got %v", name, err)
		}
		if got := resultIn(f.part()); got != "old" {
			t.Errorf("%s: the file holds %q", name, got)
		}
		if err := os.Remove(draft); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
	}
}

func TestFolderThatCannotBeCreated(t *testing.T) {
	root := t.TempDir()
	if err := os.WriteFile(filepath.Join(root, "file"), nil, 0o666); err != nil {
		t.Fatal(err)
	}
	before := tree(t, root)
	for _, dir := range []string{filepath.Join(root, "file", "r"), filepath.Join(root, "file", "deep", "r")} {
		_, err := Open(dir, title, "h", Options{})
		var failure *Failure
		if !errors.As(err, &failure) {
			t.Errorf("%s: %v", dir, err)
		}
	}
	if after := tree(t, root); after != before {
		t.Errorf("touched:\n%s", after)
	}
}

func TestFailingStepsOfOpenReleaseTheLock(t *testing.T) {
	for name, obstacle := range map[string]string{
		"ledger": ledgerName,
		"mark":   temporary(markName), // swept, so this one opens
	} {
		dir := filepath.Join(t.TempDir(), "r")
		abandonWith(t, dir, 1)
		if err := os.RemoveAll(filepath.Join(dir+".part", obstacle)); err != nil {
			t.Fatal(err)
		}
		if err := os.Mkdir(filepath.Join(dir+".part", obstacle), 0o777); err != nil {
			t.Fatal(err)
		}
		_, err := Open(dir, title, "h", Options{})
		if (err != nil) != (obstacle == ledgerName) {
			t.Errorf("%s: %v", name, err)
		}
		if err != nil && exists(dir+".lock") {
			t.Errorf("%s: the lock is left", name)
		}
	}
}

func TestPathsAreToldAsTheUserWroteThem(t *testing.T) {
	t.Chdir(t.TempDir())
	f := open(t, "./r-result/", Options{})
	if f.Dir() != "r-result" || !exists("r-result.part") {
		t.Errorf("Dir %q", f.Dir())
	}
	if err := os.WriteFile("thesis.txt", nil, 0o666); err != nil {
		t.Fatal(err)
	}
	var refused *Refused
	if _, err := Open(".", title, "h", Options{}); !errors.As(err, &refused) || refused.Why != NotOurs {
		t.Errorf("got %v", err)
	}
}
