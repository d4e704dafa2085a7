package runstore

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"time"
)

// holder is what a lock file says of the run that holds it. It is for people:
// whether a lock is alive is decided by the system, which frees the locks of a
// dead process, so a process number used again can never keep a folder locked.
type holder struct {
	PID     int       `json:"pid"`
	Host    string    `json:"host"`
	Started time.Time `json:"started"`
}

func (h holder) String() string {
	text := fmt.Sprintf("process %d", h.PID)
	if h.Host != "" {
		text += " on " + h.Host
	}
	if !h.Started.IsZero() {
		text += ", started " + h.Started.Format(time.DateTime)
	}
	return text
}

// lock is a held lock file.
type lock struct {
	path string
	file *os.File
}

// errHeld is returned by openExclusive when another process holds the file.
var errHeld = errors.New("held by another run")

// acquire takes the lock at path for a run on folder. stale is the holder of a
// lock whose run died, nil when there was none. A live one is *Busy.
func acquire(path, folder string) (held *lock, stale *holder, err error) {
	if info, err := os.Lstat(path); err == nil && !info.Mode().IsRegular() {
		return nil, nil, &Refused{Path: path, Why: InTheWay}
	}
	file, err := openExclusive(path)
	if errors.Is(err, errHeld) {
		return nil, nil, busy(path, folder)
	}
	if err != nil {
		return nil, nil, &Failure{"lock", path, err}
	}
	held = &lock{path, file}
	stale, err = readHolder(path, file)
	if err != nil {
		// Not ours to empty or remove: only let go of it.
		return nil, nil, errors.Join(err, file.Close())
	}
	if err := held.sign(); err != nil {
		return nil, nil, &Failure{"write", path, errors.Join(err, held.release())}
	}
	return held, stale, nil
}

// readHolder reads who wrote a lock file. An empty file, or one of zero bytes
// only (what a power failure leaves), names nobody.
func readHolder(path string, file io.Reader) (*holder, error) {
	const limit = 4096 // bytes; ours have about a hundred
	data, err := io.ReadAll(io.LimitReader(file, limit))
	if err != nil {
		return nil, &Failure{"read", path, err}
	}
	blank := true
	for _, b := range data {
		blank = blank && b == 0
	}
	if blank {
		return nil, nil
	}
	var h holder
	if json.Unmarshal(data, &h) != nil || h.PID == 0 {
		return nil, &Refused{Path: path, Why: NotOurs}
	}
	return &h, nil
}

// busy reports the live holder as far as its lock file tells.
func busy(path, folder string) error {
	e := &Busy{Folder: folder}
	file, err := os.Open(path)
	if err != nil {
		return e // let go of in this very moment: still busy when asked
	}
	defer file.Close()
	if h, err := readHolder(path, file); err == nil && h != nil {
		e.PID, e.Host, e.Started = h.PID, h.Host, h.Started
	}
	return e
}

// sign writes this process into the lock file.
func (l *lock) sign() error {
	host, err := os.Hostname()
	if err != nil {
		host = "" // unknown: the message leaves it out
	}
	data, err := json.Marshal(holder{os.Getpid(), host, time.Now().UTC().Truncate(time.Second)})
	if err != nil {
		return err
	}
	if err := l.file.Truncate(0); err != nil {
		return err
	}
	_, err = l.file.WriteAt(append(data, '\n'), 0)
	return err
}

// release frees the lock and removes its file.
func (l *lock) release() error { return closeAndRemove(l.path, l.file) }
