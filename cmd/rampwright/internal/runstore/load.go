package runstore

import (
	"bufio"
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"os"
	"slices"
)

// loaded counts what a ledger file held.
type loaded struct {
	known      int  // distinct evaluations taken over
	foreign    int  // lines of other models; they stay in the file
	unreadable int  // whole lines that are no evaluation; they stay in the file
	torn       bool // a last line without its end was cut off
}

// openLedger opens the ledger at path, created when absent, with the
// evaluations of the given models (of all when there are none). A last line
// without its newline, what a killed run leaves, is cut off the file.
func openLedger(path string, models []string) (*Ledger, loaded, error) {
	file, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE, 0o666)
	if err != nil {
		return nil, loaded{}, &Failure{"open", path, err}
	}
	l := &Ledger{shelves: map[shelfKey]*shelf{}, file: file, path: path}
	counts, err := l.load(file, models)
	if err == nil && counts.torn {
		err = file.Truncate(l.size)
	}
	if err != nil {
		return nil, loaded{}, &Failure{"read", path, errors.Join(err, file.Close())}
	}
	return l, counts, nil
}

// load reads all whole lines and leaves l.size at their end.
func (l *Ledger) load(from io.Reader, models []string) (loaded, error) {
	var counts loaded
	reader := bufio.NewReaderSize(from, 1<<16)
	for {
		line, err := reader.ReadBytes('\n')
		if err == io.EOF {
			counts.torn = len(line) > 0
			counts.known = l.Len()
			return counts, nil
		}
		if err != nil {
			return counts, err
		}
		l.size += int64(len(line))
		l.take(line, models, &counts)
	}
}

// take shelves one line, or counts why not.
func (l *Ledger) take(line []byte, models []string, counts *loaded) {
	var r record
	if json.Unmarshal(line, &r) != nil {
		counts.unreadable++
		return
	}
	if !wanted(r.Model, models) {
		counts.foreign++
		return
	}
	evaluation, ok := r.evaluation()
	if !ok {
		counts.unreadable++
		return
	}
	l.shelf(r.Model, r.Route).known[r.key()] = evaluation
}

// wanted tells whether a run of the given models, all when there are none, uses
// a line of model.
func wanted(model string, models []string) bool {
	return len(models) == 0 || slices.Contains(models, model)
}

// linesOf returns the readable lines a run of the given models uses, and
// the number of those it does not.
func linesOf(data []byte, models []string) (own []byte, foreign int) {
	for line := range bytes.Lines(data) {
		var r struct {
			Model string `json:"model"`
		}
		switch {
		case json.Unmarshal(line, &r) != nil:
		case wanted(r.Model, models):
			own = append(own, line...)
		default:
			foreign++
		}
	}
	return own, foreign
}

// key returns the key of the line's x.
func (r *record) key() string {
	x := make([]float64, len(r.X))
	for i, b := range r.X {
		x[i] = b.float()
	}
	return string(appendKey(nil, x))
}
