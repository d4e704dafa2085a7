package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"syscall"

	"rampwright/cmd/rampwright/internal/runstore"
)

// filesFolder is a folder for the files of one command: its own, which may hold
// those of an earlier run, or the result folder of a design, beside its files. One
// with other files is refused.
type filesFolder struct {
	dir   string // "" writes nothing
	of    string // the command
	ours  func(name string) bool
	force bool
}

// oneOf tells the files of a list.
func oneOf(names []string) func(string) bool {
	return func(name string) bool { return slices.Contains(names, name) }
}

// check refuses a folder with files that are not ours, and one that cannot be
// written, before anything is computed for it.
func (f filesFolder) check() error {
	if f.dir == "" {
		return nil
	}
	if err := f.checkOurs(); err != nil {
		return err
	}
	if err := tryToWrite(f.dir); err != nil {
		return f.unwritable(err)
	}
	return nil
}

func (f filesFolder) checkOurs() error {
	if f.force {
		return nil
	}
	if _, err := runstore.ReadMark(f.dir); err == nil {
		return nil
	}
	entries, err := os.ReadDir(f.dir)
	if errors.Is(err, fs.ErrNotExist) || errors.Is(err, syscall.ENOTDIR) {
		return nil // none yet, or none at all, which writing there tells
	}
	if err != nil {
		return f.unwritable(err)
	}
	for _, entry := range entries {
		if !f.ours(entry.Name()) {
			return &usageError{fmt.Sprintf("%s holds %s, which is no file of %s", f.dir, entry.Name(), f.of), "name another folder, or --force"}
		}
	}
	return nil
}

// write writes the files, each whole or not at all, and removes those of an earlier
// run that this one does not have.
func (f filesFolder) write(files []file) error {
	if err := f.put(files); err != nil {
		return f.unwritable(err)
	}
	return nil
}

func (f filesFolder) unwritable(err error) error {
	return &unwritable{f.dir, "choose another folder with -o", err}
}

func (f filesFolder) put(files []file) error {
	if err := os.MkdirAll(f.dir, 0o777); err != nil {
		return err
	}
	fresh := map[string]bool{}
	for _, each := range files {
		fresh[each.name] = true
		name := filepath.Join(f.dir, each.name)
		if err := replaceFile(name, each.data); err != nil {
			return err
		}
	}
	entries, err := os.ReadDir(f.dir)
	if err != nil {
		return err
	}
	for _, entry := range entries {
		if f.ours(entry.Name()) && !fresh[entry.Name()] {
			if err := os.Remove(filepath.Join(f.dir, entry.Name())); err != nil {
				return err
			}
		}
	}
	return nil
}

// replaceFile writes a file beside its place and moves it there; a failure leaves
// nothing beside it.
func replaceFile(name string, data []byte) error {
	part := name + ".part"
	err := os.WriteFile(part, data, 0o666)
	if err == nil {
		err = os.Rename(part, name)
	}
	if err != nil {
		_ = os.Remove(part) // the failure is the news
	}
	return err
}

// unwritable is a file or folder that the system does not let us write.
type unwritable struct {
	path string
	hint string // what to choose in its place
	err  error
}

func (e *unwritable) Error() string {
	cause := e.err
	if inner := (*fs.PathError)(nil); errors.As(cause, &inner) {
		cause = inner.Err // the path is said, or that of a draft
	}
	return fmt.Sprintf("cannot write %s: %v", e.path, cause)
}

// Hint says what the user can do about it.
func (e *unwritable) Hint() string { return e.hint }

func (e *unwritable) Unwrap() error { return e.err }

// tryToWrite makes a folder in dir, or where dir is to be made, and removes it.
func tryToWrite(dir string) error {
	dir = filepath.Clean(dir)
	for {
		_, err := os.Stat(dir)
		if parent := filepath.Dir(dir); errors.Is(err, fs.ErrNotExist) && parent != dir {
			dir = parent
			continue
		}
		break
	}
	trial, err := os.MkdirTemp(dir, "*.part")
	if err != nil {
		return err
	}
	return os.Remove(trial)
}
