package runstore

import (
	"errors"
	"os"
	"path/filepath"
)

// Commit makes the run's files the result: DIR becomes DIR.previous, DIR.part
// becomes DIR. When a step fails the ones before it are undone and DIR is the
// result it was; when the machine stops between two steps the next Open puts
// things right. After an error the run can still be committed or abandoned.
// Notices tells what went wrong once the result was in place.
func (f *Folder) Commit() error {
	if f.lock == nil {
		return &Failure{"commit", f.dir, os.ErrClosed}
	}
	if err := f.ledger.close(); err != nil {
		return err
	}
	f.committing = true
	complete := f.mark
	complete.Complete = true
	if err := f.do("complete", func() error { return writeMark(f.part(), complete) }); err != nil {
		return err
	}
	if err := syncDir(f.part()); err != nil {
		return err
	}
	if err := f.swap(); err != nil {
		return err
	}
	f.settle()
	return nil
}

// settle makes the swap durable, removes what DIR.previous held before and
// frees the lock. The result is in place by now, so a failure is said and not
// returned; the next Open tries the last two again.
func (f *Folder) settle() {
	for _, err := range []error{syncDir(filepath.Dir(f.dir)), f.clear(), f.release()} {
		if err != nil {
			f.notice("the result is in place, but the system answered: %v", err)
		}
	}
}

// move is one renaming of a swap.
type move struct{ from, to string }

// swap renames the folders, or leaves them as they were.
func (f *Folder) swap() error {
	now, err := f.survey(true)
	if err != nil {
		return err
	}
	var moves []move
	switch now.dir.state {
	case ours:
		if now.previous.state != absent {
			moves = append(moves, move{f.previous(), f.discard()})
		}
		moves = append(moves, move{f.dir, f.previous()})
	case empty:
		if err := os.Remove(f.dir); err != nil {
			return &Failure{"replace", f.dir, err}
		}
	}
	moves = append(moves, move{f.part(), f.dir})
	for i, m := range moves {
		if err := f.rename(m); err != nil {
			return errors.Join(err, f.undo(moves[:i]))
		}
	}
	return nil
}

// undo takes the moves back, the last one first.
func (f *Folder) undo(moves []move) error {
	var err error
	for i := len(moves) - 1; i >= 0; i-- {
		err = errors.Join(err, f.rename(move{moves[i].to, moves[i].from}))
	}
	return err
}

func (f *Folder) rename(m move) error {
	return f.do("rename "+filepath.Base(m.from)+" "+filepath.Base(m.to), func() error {
		if err := os.Rename(m.from, m.to); err != nil {
			return &Failure{"rename", m.from, err}
		}
		return nil
	})
}

// do runs a step behind the tests' hook.
func (f *Folder) do(step string, run func() error) error {
	if f.before != nil {
		if err := f.before(step); err != nil {
			return err
		}
	}
	return run()
}

// clear removes what DIR.previous held before.
func (f *Folder) clear() error {
	there, err := inspect(f.discard())
	if err != nil || there.state == absent {
		return err
	}
	return f.do("clear", func() error { return removeFolder(f.discard()) })
}

// recover finishes or takes back a swap that the machine's end cut short, and
// returns what stands then.
func (f *Folder) recover(now survey) (survey, error) {
	if now.discard.state != absent {
		if err := f.settleDiscard(now); err != nil {
			return now, err
		}
	}
	if now.dir.state == absent && now.part.state == ours && now.part.mark.Complete {
		if err := f.rename(move{f.part(), f.dir}); err != nil {
			return now, err
		}
		f.notice("an earlier run ended while its result was put in place; that is done now")
	}
	return f.survey(true)
}

// settleDiscard gives the folder its name back if the swap did not come far
// enough to replace it, and removes it otherwise.
func (f *Folder) settleDiscard(now survey) error {
	if now.previous.state == absent {
		return f.rename(move{f.discard(), f.previous()})
	}
	return removeFolder(f.discard())
}
