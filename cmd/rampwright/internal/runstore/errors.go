package runstore

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"syscall"
	"time"
)

// Why says what stands against using a folder.
type Why int

const (
	// OtherTitle is a result folder of another brief title.
	OtherTitle Why = iota
	// NotOurs is a folder or lock with content this program did not write.
	NotOurs
	// InTheWay is a file, link or device where a folder is needed.
	InTheWay
	// NewerFormat is a result folder of a format this program does not know.
	NewerFormat
)

// Refused says that a path is not this run's to use. Nothing was touched.
type Refused struct {
	Path   string
	Why    Why
	Found  string // OtherTitle: the title in the mark; NewerFormat: its format
	Wanted string // OtherTitle: the title of this run; NewerFormat: the newest format known
}

func (e *Refused) Error() string {
	switch e.Why {
	case OtherTitle:
		return fmt.Sprintf("%s holds the result of %q, not of %q", e.Path, e.Found, e.Wanted)
	case InTheWay:
		return fmt.Sprintf("%s is in the way: not a folder", e.Path)
	case NewerFormat:
		return fmt.Sprintf("%s has format %s; this program knows %s", e.Path, e.Found, e.Wanted)
	default:
		return fmt.Sprintf("%s was not written by %s", e.Path, program)
	}
}

// Hint says what the user can do about it.
func (e *Refused) Hint() string {
	switch e.Why {
	case OtherTitle:
		return "choose another folder with -o, or replace this one with --force (the last result is kept beside it)"
	case NewerFormat:
		return "choose another folder with -o, or use the version that wrote this one"
	default:
		return "choose another folder with -o, or move this one away"
	}
}

// Busy says that another run holds the folder.
type Busy struct {
	Folder  string
	PID     int       // 0 when the other run has not yet said who it is
	Host    string    // where it runs; "" when unknown
	Started time.Time // zero when unknown
}

func (e *Busy) Error() string {
	if e.PID == 0 {
		return fmt.Sprintf("another run is writing %s", e.Folder)
	}
	return fmt.Sprintf("another run is writing %s: %s", e.Folder, holder{e.PID, e.Host, e.Started})
}

// Hint says what the user can do about it.
func (e *Busy) Hint() string { return "wait for it to end, or choose another folder with -o" }

// Failure is a file operation the system refused: a full or read-only disk, a
// missing right. The last finished result is unchanged.
type Failure struct {
	Doing string // "write", "read", "rename", ..
	Path  string
	Err   error
}

func (e *Failure) Error() string {
	cause := e.Err
	switch inner := cause.(type) { // these repeat operation and path
	case *os.PathError:
		cause = inner.Err
	case *os.LinkError:
		cause = inner.Err
	}
	return fmt.Sprintf("cannot %s %s: %v", e.Doing, e.Path, cause)
}

// Hint says what the user can do about a place where nothing may be written, and
// nothing where something else failed.
func (e *Failure) Hint() string {
	if e.Doing == "read" {
		return ""
	}
	for _, refusal := range []error{fs.ErrPermission, syscall.EROFS, syscall.ENOTDIR} {
		if errors.Is(e.Err, refusal) {
			return "cannot write here: choose another folder with -o"
		}
	}
	return ""
}

// Unwrap returns the system's error.
func (e *Failure) Unwrap() error { return e.Err }

// Mismatch says that the ledger holds an evaluation of the same model hash with
// another number of quantities: the hash does not tell two models apart.
type Mismatch struct {
	Model  string
	Stored int
	Wanted int
}

func (e *Mismatch) Error() string {
	return fmt.Sprintf("the ledger holds %d quantities for model %s, the model has %d", e.Stored, e.Model, e.Wanted)
}

// BadName says that a file name cannot stand in a result folder.
type BadName struct {
	Name string
}

func (e *BadName) Error() string {
	return fmt.Sprintf("%q cannot be a file of a result folder", e.Name)
}
