//go:build darwin || dragonfly || freebsd || linux || netbsd || openbsd

package runstore

import (
	"errors"
	"os"
	"syscall"
)

// openExclusive opens (or creates) path and locks it with flock(2), which the
// kernel undoes when the process ends. A file that was removed between opening
// and locking is no lock any more: then it starts over.
func openExclusive(path string) (*os.File, error) {
	for {
		file, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE, 0o666)
		if err != nil {
			return nil, err
		}
		if err := flock(file); err != nil {
			return nil, errors.Join(err, file.Close())
		}
		mine, err := file.Stat()
		if err != nil {
			return nil, errors.Join(err, file.Close())
		}
		current, err := os.Stat(path)
		if err == nil && os.SameFile(mine, current) {
			return file, nil
		}
		if closing := file.Close(); closing != nil {
			return nil, closing
		}
	}
}

func flock(file *os.File) error {
	for {
		err := syscall.Flock(int(file.Fd()), syscall.LOCK_EX|syscall.LOCK_NB)
		switch {
		case err == nil:
			return nil
		case errors.Is(err, syscall.EWOULDBLOCK):
			return errHeld
		case !errors.Is(err, syscall.EINTR):
			return os.NewSyscallError("flock", err)
		}
	}
}

// closeAndRemove removes the file while it is still locked, so that nobody can
// lock the name that is about to vanish.
func closeAndRemove(path string, file *os.File) error {
	return errors.Join(os.Remove(path), file.Close())
}

// syncDir makes the names in a folder durable.
func syncDir(path string) error {
	dir, err := os.Open(path)
	if err != nil {
		return &Failure{"sync", path, err}
	}
	err = dir.Sync()
	// Some network and user-space file systems have no sync of folders.
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, syscall.ENOTSUP) {
		err = nil
	}
	if err := errors.Join(err, dir.Close()); err != nil {
		return &Failure{"sync", path, err}
	}
	return nil
}
