package runstore

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
)

// temporary returns the name under which a file is written before it takes its
// own.
func temporary(name string) string { return "." + name + ".tmp" }

// writeAtomic makes dir/name hold data, or leaves it as it was. The data is on
// the disk before the name is; the name itself is made durable by syncDir.
func writeAtomic(dir, name string, data []byte) error {
	path := filepath.Join(dir, name)
	draft := filepath.Join(dir, temporary(name))
	if err := writeDraft(draft, data); err != nil {
		return &Failure{"write", path, err}
	}
	if err := os.Rename(draft, path); err != nil {
		return &Failure{"write", path, errors.Join(err, os.Remove(draft))}
	}
	return nil
}

// writeDraft creates path with data and syncs it; on failure no file is left.
func writeDraft(path string, data []byte) error {
	file, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	_, err = file.Write(data)
	if err == nil {
		err = file.Sync()
	}
	if closing := file.Close(); err == nil {
		err = closing
	}
	if err != nil {
		return errors.Join(err, os.Remove(path))
	}
	return nil
}

// removeFolder deletes a marked folder, its mark last: a removal cut short
// leaves a folder that is still known as ours.
func removeFolder(path string) error {
	if err := sweep(path, markName); err != nil {
		return err
	}
	if err := os.Remove(filepath.Join(path, markName)); err != nil && !errors.Is(err, fs.ErrNotExist) {
		return &Failure{"remove", filepath.Join(path, markName), err}
	}
	if err := os.Remove(path); err != nil {
		return &Failure{"remove", path, err}
	}
	return nil
}

// sweep deletes everything in a folder but the names to keep.
func sweep(path string, keep ...string) error {
	entries, err := os.ReadDir(path)
	if err != nil {
		return &Failure{"read", path, err}
	}
	for _, entry := range entries {
		if slices.Contains(keep, entry.Name()) {
			continue
		}
		victim := filepath.Join(path, entry.Name())
		if err := os.RemoveAll(victim); err != nil {
			return &Failure{"remove", victim, err}
		}
	}
	return nil
}
