package runstore

import (
	"errors"
	"os"
	"path/filepath"
	"syscall"
	"testing"
)

func TestForeignPathsAreRefusedUntouched(t *testing.T) {
	foreignFolder := func(path string) error {
		return errors.Join(os.Mkdir(path, 0o777), os.WriteFile(filepath.Join(path, "thesis.txt"), []byte("mine"), 0o666))
	}
	file := func(path string) error { return os.WriteFile(path, []byte("mine"), 0o666) }
	marked := func(mark Mark) func(string) error {
		return func(path string) error { return errors.Join(os.Mkdir(path, 0o777), writeMark(path, mark)) }
	}
	otherTitle := marked(Mark{program, format, "ONDREL-3", "h", true})
	newer := marked(Mark{program, format + 1, title, "h", true})
	cases := []struct {
		name  string
		put   func(path string) error
		at    string // suffix of the result folder
		why   Why
		force bool
	}{
		{"folder without mark", foreignFolder, "", NotOurs, true},
		{"part without mark", foreignFolder, ".part", NotOurs, true},
		{"previous without mark", foreignFolder, ".previous", NotOurs, true},
		{"discard without mark", foreignFolder, ".discard", NotOurs, true},
		{"file as folder", file, "", InTheWay, true},
		{"file as part", file, ".part", InTheWay, true},
		{"file as previous", file, ".previous", InTheWay, true},
		{"file as lock", file, ".lock", NotOurs, true},
		{"folder as lock", foreignFolder, ".lock", InTheWay, true},
		{"other title", otherTitle, "", OtherTitle, false},
		{"other title at work", otherTitle, ".part", OtherTitle, false},
		{"other title before", otherTitle, ".previous", OtherTitle, false},
		{"newer format", newer, "", NewerFormat, true},
		{"mark of another program", marked(Mark{"other", 1, title, "h", true}), "", NotOurs, true},
		{"dangling link", func(path string) error { return os.Symlink(path+"-gone", path) }, "", InTheWay, true},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			root := t.TempDir()
			dir := filepath.Join(root, "r-result")
			if err := c.put(dir + c.at); err != nil {
				t.Fatal(err)
			}
			before := tree(t, root)
			_, err := Open(dir, title, "h", Options{Force: c.force})
			var refused *Refused
			if !errors.As(err, &refused) || refused.Why != c.why || refused.Path != dir+c.at {
				t.Fatalf("got %v", err)
			}
			if refused.Hint() == "" {
				t.Error("no hint")
			}
			if after := tree(t, root); after != before {
				t.Errorf("touched:\n%s\nwas\n%s", after, before)
			}
		})
	}
}

func TestErrorsSayWhatAndWhere(t *testing.T) {
	for want, err := range map[string]error{
		`r holds the result of "A", not of "B"`:                      &Refused{"r", OtherTitle, "A", "B"},
		`r was not written by rampwright`:                            &Refused{Path: "r", Why: NotOurs},
		`r is in the way: not a folder`:                              &Refused{Path: "r", Why: InTheWay},
		`r has format 2; this program knows 1`:                       &Refused{"r", NewerFormat, "2", "1"},
		`another run is writing r`:                                   &Busy{Folder: "r"},
		`another run is writing r: process 7`:                        &Busy{Folder: "r", PID: 7},
		`another run is writing r: process 7 on mill`:                &Busy{Folder: "r", PID: 7, Host: "mill"},
		`cannot write r/x: no space left on device`:                  &Failure{"write", "r/x", &os.PathError{Op: "write", Path: "r/x", Err: errNoSpace}},
		`"../x" cannot be a file of a result folder`:                 &BadName{"../x"},
		`the ledger holds 3 quantities for model m, the model has 4`: &Mismatch{"m", 3, 4},
	} {
		if got := err.Error(); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}

// A place where nothing may be written has a hint; a full disk is no better elsewhere.
func TestAFailureHintsAtAnotherFolder(t *testing.T) {
	for _, c := range []struct {
		failure *Failure
		hinted  bool
	}{
		{&Failure{"lock", "r.lock", &os.PathError{Op: "open", Path: "r.lock", Err: syscall.EACCES}}, true},
		{&Failure{"create", "r.part", &os.PathError{Op: "mkdir", Path: "r.part", Err: syscall.EROFS}}, true},
		{&Failure{"create", "r", &os.PathError{Op: "mkdir", Path: "r", Err: syscall.ENOTDIR}}, true},
		{&Failure{"write", "r/x", &os.PathError{Op: "write", Path: "r/x", Err: errNoSpace}}, false},
		{&Failure{"read", "r/x", &os.PathError{Op: "open", Path: "r/x", Err: syscall.EACCES}}, false},
	} {
		if hint := c.failure.Hint(); (hint != "") != c.hinted {
			t.Errorf("%v: hint %q", c.failure, hint)
		}
	}
}
