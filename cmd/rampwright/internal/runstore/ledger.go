package runstore

import (
	"context"
	"encoding/binary"
	"errors"
	"math"
	"os"
	"slices"
	"sync"
	"time"

	"rampwright/problems"
)

// Ledger holds every exact evaluation of a run by model, route and the exact
// bits of x, and keeps each on disk as one line from the moment it is known.
// It is safe for concurrent use. The order of lines is that of arrival and
// carries no meaning; of two lines with one key the later counts.
type Ledger struct {
	mu      sync.Mutex
	shelves map[shelfKey]*shelf

	disk     sync.Mutex // the fields below; never taken while holding mu
	file     ledgerFile
	path     string
	size     int64 // bytes of whole lines
	line     []byte
	appended int
	synced   time.Time
	broken   error // the first failed write: nothing is written after it
}

// ledgerFile is the part of *os.File the ledger uses.
type ledgerFile interface {
	WriteAt(data []byte, offset int64) (int, error)
	Truncate(size int64) error
	Sync() error
	Close() error
}

type shelfKey struct {
	model string
	route Route
}

// shelf holds the evaluations of one model by one route, by the bits of x.
type shelf struct {
	known   map[string]*problems.Evaluation
	running map[string]chan struct{} // closed when that evaluation has ended
}

// syncEvery bounds what a power failure can take: a line is synced when the
// last sync is older. So each evaluation of a slow model is synced, and a fast
// model does not wait for the disk. A killed process loses nothing either way.
const syncEvery = time.Second

// Len returns the number of evaluations known.
func (l *Ledger) Len() int {
	l.mu.Lock()
	defer l.mu.Unlock()
	n := 0
	for _, s := range l.shelves {
		n += len(s.known)
	}
	return n
}

// Lookup copies the stored evaluation of x into dst and tells whether there is
// one. It returns *Mismatch when dst has another number of quantities.
func (l *Ledger) Lookup(model string, route Route, x []float64, dst *problems.Evaluation) (bool, error) {
	var buffer [keyBuffer]byte
	key := appendKey(buffer[:0], x)
	l.mu.Lock()
	var stored *problems.Evaluation
	if s := l.shelves[shelfKey{model, route}]; s != nil {
		stored = s.known[string(key)]
	}
	l.mu.Unlock()
	if stored == nil {
		return false, nil
	}
	return true, deliver(model, stored, dst)
}

// Append stores an evaluation of x: on disk first, then for Lookup. The reasons
// in e are replaced by the form in which the ledger gives them back. It returns
// *Failure when the disk refuses; every later Append then fails the same way.
func (l *Ledger) Append(model string, route Route, x []float64, e *problems.Evaluation) error {
	makeCanonical(e)
	if err := l.write(model, route, x, e); err != nil {
		return err
	}
	stored := e.Clone()
	l.mu.Lock()
	l.shelf(model, route).known[string(appendKey(nil, x))] = stored
	l.mu.Unlock()
	return nil
}

// evaluate is the signature of both exact routes of a problem.
type evaluate func(ctx context.Context, x []float64, dst *problems.Evaluation) error

// ask answers from the ledger, or runs the model and appends its answer. Of
// callers that ask for the same x at the same time one runs the model and the
// others wait for it; when it fails the next one tries.
func (l *Ledger) ask(ctx context.Context, model string, route Route, x []float64, dst *problems.Evaluation, run evaluate) (known bool, err error) {
	var buffer [keyBuffer]byte
	key := appendKey(buffer[:0], x)
	for {
		if err := ctx.Err(); err != nil {
			return false, err
		}
		l.mu.Lock()
		s := l.shelf(model, route)
		if stored := s.known[string(key)]; stored != nil {
			l.mu.Unlock()
			return true, deliver(model, stored, dst)
		}
		other, running := s.running[string(key)]
		if !running {
			ended := make(chan struct{})
			s.running[string(key)] = ended
			l.mu.Unlock()
			defer l.end(s, string(key), ended)
			if err := run(ctx, x, dst); err != nil {
				return false, err
			}
			return false, l.Append(model, route, x, dst)
		}
		l.mu.Unlock()
		select {
		case <-other:
		case <-ctx.Done():
		}
	}
}

// end lets go of the callers that wait for an evaluation.
func (l *Ledger) end(s *shelf, key string, ended chan struct{}) {
	l.mu.Lock()
	delete(s.running, key)
	l.mu.Unlock()
	close(ended)
}

// write puts one line on the disk.
func (l *Ledger) write(model string, route Route, x []float64, e *problems.Evaluation) error {
	l.disk.Lock()
	defer l.disk.Unlock()
	if l.broken != nil {
		return l.broken
	}
	if l.file == nil {
		return &Failure{"write", l.path, os.ErrClosed}
	}
	line, err := appendRecord(l.line[:0], model, route, x, e)
	l.line = line
	if err == nil {
		_, err = l.file.WriteAt(line, l.size)
	}
	if err == nil && time.Since(l.synced) > syncEvery {
		err = l.file.Sync()
		l.synced = time.Now()
	}
	if err != nil {
		l.broken = &Failure{"write", l.path, err}
		// Best effort: a fragment that stays is dropped when the file is loaded.
		_ = l.file.Truncate(l.size)
		return l.broken
	}
	l.size += int64(len(line))
	l.appended++
	return nil
}

// close syncs and closes the file; nothing can be appended afterwards. It returns
// the first failed write of the ledger's life, also when called again.
func (l *Ledger) close() error {
	l.disk.Lock()
	defer l.disk.Unlock()
	if l.file == nil {
		return l.broken
	}
	err := errors.Join(l.file.Sync(), l.file.Close())
	l.file = nil
	if err != nil && l.broken == nil {
		l.broken = &Failure{"write", l.path, err}
	}
	return l.broken
}

// shelf returns the shelf of a model and route; mu is held.
func (l *Ledger) shelf(model string, route Route) *shelf {
	key := shelfKey{model, route}
	s := l.shelves[key]
	if s == nil {
		s = &shelf{known: map[string]*problems.Evaluation{}, running: map[string]chan struct{}{}}
		l.shelves[key] = s
	}
	return s
}

// keyBuffer holds the key of up to 16 variables without allocation.
const keyBuffer = 16 * 8

// appendKey appends the exact bits of x.
func appendKey(dst []byte, x []float64) []byte {
	for _, v := range x {
		dst = binary.BigEndian.AppendUint64(dst, math.Float64bits(v))
	}
	return dst
}

// makeCanonical gives e the form in which the ledger gives it back.
func makeCanonical(e *problems.Evaluation) {
	for i, reason := range e.Reasons {
		if math.IsNaN(e.Values[i]) {
			e.Values[i] = math.NaN()
		}
		e.Reasons[i] = canonical(reason)
	}
}

// deliver copies a stored evaluation to the caller.
func deliver(model string, stored, dst *problems.Evaluation) error {
	if len(stored.Values) != len(dst.Values) {
		return &Mismatch{Model: model, Stored: len(stored.Values), Wanted: len(dst.Values)}
	}
	copy(dst.Values, stored.Values)
	copy(dst.Reasons, stored.Reasons)
	dst.Bounds = slices.Clone(stored.Bounds)
	return nil
}
