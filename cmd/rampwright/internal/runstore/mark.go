package runstore

import (
	"encoding/json"
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
)

const (
	program    = "rampwright"
	format     = 1
	markName   = "rampwright-folder.json"
	ledgerName = "ledger.jsonl"

	markSizeLimit = 1 << 20 // bytes; a mark is a few hundred
)

// Mark is what a result folder says about itself.
type Mark struct {
	Program   string `json:"program"`
	Format    int    `json:"format"`
	Title     string `json:"title"`
	BriefHash string `json:"brief_hash"`
	// Complete is true from the moment a run has written everything: such a
	// DIR.part needs only its last rename.
	Complete bool `json:"complete"`
}

// ReadMark returns the mark of a folder, or *Refused when it carries none or
// one of a newer format.
func ReadMark(dir string) (Mark, error) {
	file, err := os.Open(filepath.Join(dir, markName))
	if errors.Is(err, fs.ErrNotExist) {
		return Mark{}, &Refused{Path: dir, Why: NotOurs}
	}
	if err != nil {
		return Mark{}, &Failure{"read", filepath.Join(dir, markName), err}
	}
	defer file.Close()
	data, err := io.ReadAll(io.LimitReader(file, markSizeLimit))
	if err != nil {
		return Mark{}, &Failure{"read", filepath.Join(dir, markName), err}
	}
	var mark Mark
	if json.Unmarshal(data, &mark) != nil || mark.Program != program || mark.Format < 1 {
		return Mark{}, &Refused{Path: dir, Why: NotOurs}
	}
	if mark.Format > format {
		return Mark{}, &Refused{Path: dir, Why: NewerFormat, Found: strconv.Itoa(mark.Format), Wanted: strconv.Itoa(format)}
	}
	return mark, nil
}

// writeMark replaces the mark of a folder.
func writeMark(dir string, mark Mark) error {
	data, err := json.MarshalIndent(mark, "", "  ")
	if err != nil {
		return &Failure{"write", filepath.Join(dir, markName), err}
	}
	return writeAtomic(dir, markName, append(data, '\n'))
}

// state is what stands at a path this run wants to use.
type state int

const (
	absent state = iota
	empty        // a folder without mark or content
	ours         // a marked folder
)

type found struct {
	state state
	mark  Mark
}

// inspect looks at a path and refuses what this program must not replace.
func inspect(path string) (found, error) {
	info, err := os.Lstat(path)
	if errors.Is(err, fs.ErrNotExist) {
		return found{state: absent}, nil
	}
	if err != nil {
		return found{}, &Failure{"read", path, err}
	}
	if !info.IsDir() {
		return found{}, &Refused{Path: path, Why: InTheWay}
	}
	mark, err := ReadMark(path)
	if err == nil {
		return found{state: ours, mark: mark}, nil
	}
	var refused *Refused
	if !errors.As(err, &refused) || refused.Why != NotOurs {
		return found{}, err
	}
	entries, failed := os.ReadDir(path)
	if failed != nil {
		return found{}, &Failure{"read", path, failed}
	}
	for _, entry := range entries {
		if entry.Name() != temporary(markName) { // a first mark that a crash cut short
			return found{}, err
		}
	}
	return found{state: empty}, nil
}
