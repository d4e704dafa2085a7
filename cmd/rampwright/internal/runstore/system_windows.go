package runstore

import (
	"errors"
	"os"
	"syscall"
)

// sharingViolation is ERROR_SHARING_VIOLATION of the Windows system error codes.
const sharingViolation = syscall.Errno(32)

// openExclusive opens (or creates) path so that others can read but not write
// it; the system closes the handle when the process ends.
func openExclusive(path string) (*os.File, error) {
	name, err := syscall.UTF16PtrFromString(path)
	if err != nil {
		return nil, err
	}
	handle, err := syscall.CreateFile(name, syscall.GENERIC_READ|syscall.GENERIC_WRITE, syscall.FILE_SHARE_READ,
		nil, syscall.OPEN_ALWAYS, syscall.FILE_ATTRIBUTE_NORMAL, 0)
	if errors.Is(err, sharingViolation) {
		return nil, errHeld
	}
	if err != nil {
		return nil, &os.PathError{Op: "open", Path: path, Err: err}
	}
	return os.NewFile(uintptr(handle), path), nil
}

// closeAndRemove closes the file and removes it, unless another run has opened
// it in between: then it is that run's lock. The file is emptied first, so that
// the other run does not take it for a dead one's.
func closeAndRemove(path string, file *os.File) error {
	if err := errors.Join(file.Truncate(0), file.Close()); err != nil {
		return err
	}
	err := os.Remove(path)
	if errors.Is(err, sharingViolation) || errors.Is(err, os.ErrNotExist) {
		return nil
	}
	return err
}

// syncDir does nothing: Windows makes names durable with the files themselves.
func syncDir(string) error { return nil }
