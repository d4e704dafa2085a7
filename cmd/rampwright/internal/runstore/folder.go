package runstore

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// Options of Open; the zero value takes no folder of another title and serves
// every model in the ledger.
type Options struct {
	// Force replaces a result of another title (kept as DIR.previous) and drops
	// its unfinished run. It never lifts the refusal of a folder without mark.
	Force bool
	// Models are the model hashes this run evaluates. Lines of other models in
	// the ledger of an unfinished run are left in the file, those of a finished
	// result are not carried over; neither is loaded, and a notice says so.
	Models []string
}

// Folder is the result folder of a run at work. Use it as
//
//	folder, err := Open(..)
//	defer folder.Abandon()
//	.. folder.Ledger(), folder.WriteFile(..) ..
//	err = folder.Commit()
type Folder struct {
	dir        string // see resolve
	mark       Mark
	ledger     *Ledger
	lock       *lock
	notices    []string
	fresh      bool // DIR.part is of this run
	committing bool // Commit has begun: DIR.part may be the only complete result

	// before runs ahead of each step that changes names; an error stands for a
	// failure of that step. Set by tests only.
	before func(step string) error
}

func (f *Folder) part() string     { return f.dir + ".part" }
func (f *Folder) previous() string { return f.dir + ".previous" }
func (f *Folder) discard() string  { return f.dir + ".discard" }
func (f *Folder) lockPath() string { return f.dir + ".lock" }

// Open starts, or resumes, the run of a brief in the result folder dir.
//
// Errors: *Busy when another run holds it, *Refused when one of its paths holds
// what is not this run's (nothing is touched), *Failure when the system refuses.
func Open(dir, title, briefHash string, options Options) (*Folder, error) {
	dir, err := resolve(dir)
	if err != nil {
		return nil, err
	}
	if err := os.MkdirAll(filepath.Dir(dir), 0o777); err != nil {
		return nil, &Failure{"create", filepath.Dir(dir), err}
	}
	f := &Folder{dir: dir, mark: Mark{Program: program, Format: format, Title: title, BriefHash: briefHash}}
	held, stale, err := acquire(f.lockPath(), dir)
	if err != nil {
		return nil, err
	}
	f.lock = held
	if stale != nil {
		f.notice("an earlier run (%s) ended without finishing; its lock is taken over", stale)
	}
	if err := f.open(options); err != nil {
		return nil, errors.Join(err, f.release())
	}
	return f, nil
}

// open does what Open does once the lock is held.
func (f *Folder) open(options Options) error {
	now, err := f.survey(options.Force)
	if err != nil {
		return err
	}
	if now, err = f.recover(now); err != nil {
		return err
	}
	if err := f.prepare(now.part); err != nil {
		return err
	}
	if err := f.inherit(now, options.Models); err != nil {
		return err
	}
	if err := f.load(options.Models); err != nil {
		return err
	}
	// From here on the ledger is found again after a power failure.
	return errors.Join(syncDir(f.part()), syncDir(filepath.Dir(f.dir)))
}

// resolve returns dir as the user wrote it, unless that is no name to put a
// suffix on: a link is followed, so the swap renames the folder itself on its own
// disk, and "." and ".." get their names.
func resolve(dir string) (string, error) {
	dir = filepath.Clean(dir)
	if base := filepath.Base(dir); base == "." || base == ".." {
		absolute, err := filepath.Abs(dir)
		if err != nil {
			return "", &Failure{"find", dir, err}
		}
		dir = absolute
	}
	info, err := os.Lstat(dir)
	if err != nil || info.Mode()&os.ModeSymlink == 0 {
		return dir, nil
	}
	target, err := filepath.EvalSymlinks(dir)
	if errors.Is(err, os.ErrNotExist) {
		return dir, nil // a dangling link, which inspect refuses
	}
	if err != nil {
		return "", &Failure{"find", dir, err}
	}
	return target, nil
}

// survey is what stands at the four folders a run may replace.
type survey struct {
	dir, part, previous, discard found
}

// survey inspects all of them before any is touched.
func (f *Folder) survey(force bool) (survey, error) {
	var now survey
	for _, place := range []struct {
		path string
		into *found
	}{
		{f.dir, &now.dir}, {f.part(), &now.part}, {f.previous(), &now.previous}, {f.discard(), &now.discard},
	} {
		there, err := inspect(place.path)
		if err != nil {
			return now, err
		}
		if there.state == ours && there.mark.Title != f.mark.Title && !force {
			return now, &Refused{Path: place.path, Why: OtherTitle, Found: there.mark.Title, Wanted: f.mark.Title}
		}
		*place.into = there
	}
	return now, nil
}

// prepare makes DIR.part ours and empty but for a ledger of the same title.
func (f *Folder) prepare(part found) error {
	f.fresh = part.state != ours || part.mark.Title != f.mark.Title
	if part.state == ours && f.fresh {
		if err := removeFolder(f.part()); err != nil {
			return err
		}
		f.notice("dropped: the unfinished run of %q", part.mark.Title)
	}
	if err := os.Mkdir(f.part(), 0o777); err != nil && !errors.Is(err, os.ErrExist) {
		return &Failure{"create", f.part(), err}
	}
	// What a killed run was writing is not part of this result.
	if err := sweep(f.part(), markName, ledgerName); err != nil {
		return err
	}
	return writeMark(f.part(), f.mark)
}

// inherit copies what this run's models know from the finished result, or from
// the one before it, when the run at work has no ledger yet. A copy, because
// those folders must stay whole; and without other models, because a folder whose
// brief is edited again and again must not grow with every edit.
func (f *Folder) inherit(now survey, models []string) error {
	if _, err := os.Lstat(filepath.Join(f.part(), ledgerName)); err == nil {
		return nil
	}
	for _, source := range []struct {
		path  string
		there found
	}{{f.dir, now.dir}, {f.previous(), now.previous}} {
		if source.there.state != ours || source.there.mark.Title != f.mark.Title {
			continue
		}
		path := filepath.Join(source.path, ledgerName)
		data, err := os.ReadFile(path)
		if err != nil && !errors.Is(err, os.ErrNotExist) {
			return &Failure{"read", path, err}
		}
		own, foreign := linesOf(data, models)
		f.noticeForeign(foreign, path)
		if len(own) > 0 {
			return writeAtomic(f.part(), ledgerName, own)
		}
	}
	return nil
}

// noticeForeign says that a ledger holds evaluations this run cannot use.
func (f *Folder) noticeForeign(lines int, path string) {
	if lines > 0 {
		f.notice("not used, of another model: %s in %s", count(lines, "evaluation"), path)
	}
}

// load opens the ledger of DIR.part and says what it brings.
func (f *Folder) load(models []string) error {
	path := filepath.Join(f.part(), ledgerName)
	ledger, counts, err := openLedger(path, models)
	if err != nil {
		return err
	}
	f.ledger = ledger
	switch {
	case counts.known > 0 && f.fresh:
		f.notice("known from the last result: %s", count(counts.known, "exact evaluation"))
	case counts.known > 0:
		f.notice("resuming an unfinished run that knows %s", count(counts.known, "exact evaluation"))
	}
	f.noticeForeign(counts.foreign, path)
	if counts.unreadable > 0 {
		f.notice("not used, unreadable: %s in %s", count(counts.unreadable, "line"), path)
	}
	if counts.torn {
		f.notice("dropped, cut short: the last line of %s", path)
	}
	return nil
}

// Dir returns the path of the finished result.
func (f *Folder) Dir() string { return f.dir }

// Ledger returns the ledger of the run.
func (f *Folder) Ledger() *Ledger { return f.ledger }

// Notices returns what the user should be told: a lock taken over, evaluations
// resumed, a torn line. Commit may add to it.
func (f *Folder) Notices() []string { return append([]string(nil), f.notices...) }

func (f *Folder) notice(text string, arguments ...any) {
	f.notices = append(f.notices, fmt.Sprintf(text, arguments...))
}

// count returns "1 line", "2 lines".
func count(n int, noun string) string {
	if n != 1 {
		noun += "s"
	}
	return fmt.Sprintf("%d %s", n, noun)
}

// WriteFile puts a file into the result, whole or not at all. The name is a
// plain file name; *BadName otherwise.
func (f *Folder) WriteFile(name string, data []byte) error {
	reserved := strings.EqualFold(name, markName) || strings.EqualFold(name, ledgerName)
	if reserved || name == "." || !filepath.IsLocal(name) || filepath.Base(name) != name {
		return &BadName{name}
	}
	return writeAtomic(f.part(), name, data)
}

// Abandon ends the run without a result: DIR stays as it is, DIR.part keeps the
// ledger for the next run (it is removed when this run made it and appended
// nothing). After Commit it does nothing, so it can be deferred.
func (f *Folder) Abandon() error {
	if f.lock == nil {
		return nil
	}
	err := f.ledger.close()
	if f.fresh && !f.committing && f.ledger.appended == 0 {
		err = errors.Join(err, removeFolder(f.part()))
	}
	return errors.Join(err, f.release())
}

// release frees the lock.
func (f *Folder) release() error {
	if f.lock == nil {
		return nil
	}
	err := f.lock.release()
	f.lock = nil
	if err != nil {
		return &Failure{"remove", f.lockPath(), err}
	}
	return nil
}
