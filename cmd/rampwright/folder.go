package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"

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

// check refuses a folder with files that are not ours.
func (f filesFolder) check() error {
	if f.dir == "" || f.force {
		return nil
	}
	if _, err := runstore.ReadMark(f.dir); err == nil {
		return nil
	}
	entries, err := os.ReadDir(f.dir)
	if os.IsNotExist(err) {
		return nil
	}
	if err != nil {
		return &usageError{"cannot write there: " + err.Error(), "name a folder"}
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
