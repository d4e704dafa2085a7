package main

import (
	"os"
	"path/filepath"
	"testing"
)

// A file that cannot be put in its place leaves nothing beside it, which the next
// run would refuse as no file of its own.
func TestAFileThatCannotBeReplaced(t *testing.T) {
	dir := t.TempDir()
	name := filepath.Join(dir, "map.svg")
	if err := os.MkdirAll(filepath.Join(name, "in the way"), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := replaceFile(name, []byte("x")); err == nil {
		t.Error("a file takes the place of a folder")
	}
	entries, err := os.ReadDir(dir)
	if err != nil || len(entries) != 1 {
		t.Errorf("the folder holds %v (%v)", entries, err)
	}
}
