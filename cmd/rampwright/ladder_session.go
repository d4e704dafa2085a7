package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"time"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/cmd/rampwright/internal/runstore"
	"rampwright/optimize"
	"rampwright/problems"
)

// session is a command that runs several designs into one result folder, with
// one ledger.
type session struct {
	app          *app
	ctx          context.Context
	interruption *interruption
	folder       *runstore.Folder
	began        time.Time
	cached       map[*study]problems.Problem // the model of each study, behind the ledger
	counters     []*runstore.Counter
}

// openSession starts the session of a command over studies of one brief. The
// kind goes into the title of the folder: a ladder does not replace a design. The first signal is told to notice.
func (a *app) openSession(dir, kind string, base *study, studies []*study, notice func()) (*session, error) {
	limit, err := a.limit()
	if err != nil {
		return nil, err
	}
	if a.jobs < 1 {
		return nil, &usageError{fmt.Sprintf("--jobs %d: at least one", a.jobs), ""}
	}
	s := &session{app: a, began: time.Now(), cached: map[*study]problems.Problem{}}
	hashes := make([]string, len(studies))
	for i, study := range studies {
		if hashes[i], err = study.modelHash(); err != nil {
			return nil, err
		}
	}
	title := base.brief.Title + " (" + kind + ")"
	s.folder, err = runstore.Open(dir, title, base.brief.Hash(), runstore.Options{Force: a.force, Models: hashes})
	if err != nil {
		return nil, err
	}
	a.notices(s.folder)
	for i, study := range studies {
		cached, counter := runstore.Cached(study.model, s.folder.Ledger(), hashes[i])
		s.cached[study], s.counters = cached, append(s.counters, counter)
	}
	s.ctx, s.interruption = watch(limit, notice)
	return s, nil
}

// close ends a session; without a commit the folder stays as it was.
func (s *session) close(err *error) {
	s.interruption.stop()
	if closing := s.folder.Abandon(); *err == nil {
		*err = closing
	}
}

// design searches and verifies one task on the model of a study. A search cut
// short gives its best so far, one that had no time to begin the error
// optimize.ErrNothingEvaluated.
func (s *session) design(of *study, task optimize.Task, settings optimize.Settings) (*report.Study, error) {
	task.Problem = s.cached[of]
	progress := s.app.progress()
	result, err := optimize.Design(s.ctx, task, settings, progress.observe)
	progress.end()
	if err != nil {
		return nil, err
	}
	return &report.Study{Problem: of.problem, Model: of.model, Aim: task.Aim, Agreement: settings.Agreement, Result: result, Widest: brief.Widest}, nil
}

// explain looks for the reason where nothing holds every limit.
func (s *session) explain(of *study, task optimize.Task, finished *report.Study) error {
	if finished.Result.Status != optimize.Infeasible {
		return nil
	}
	s.app.say("nothing holds every limit yet: searching the exact model for the reason\n")
	task.Problem = of.model
	err := explain(s.ctx, task, s.app.settings(of), finished)
	if err != nil && s.ctx.Err() != nil {
		return nil // left out: the document then says what the nearest design misses
	}
	return err
}

// flow adds the exact flow of the best design, from which its cautions come.
func (s *session) flow(of *study, finished *report.Study) error {
	return of.fly(context.WithoutCancel(s.ctx), finished)
}

// finish writes the files of the session with its record and the brief, makes
// them the result, and prints the document.
func (s *session) finish(base *study, printed document, files []file) error {
	runJSON, err := json.MarshalIndent(s.record(), "", "  ")
	if err != nil {
		return err
	}
	files = append(files, file{"run.json", append(runJSON, '\n')}, file{"brief.yaml", base.brief.ResolvedYAML()})
	for _, f := range files {
		if err := s.folder.WriteFile(f.name, f.data); err != nil {
			return err
		}
	}
	if err := s.folder.Commit(); err != nil {
		return err
	}
	if err := s.app.print(printed); err != nil {
		return err
	}
	s.app.say("result folder: %s\n", s.folder.Dir())
	return nil
}

// record is run.json, summed over the models.
func (s *session) record() record {
	run := runRecord(s.began, s.app.jobs, s.counters[0])
	for _, counter := range s.counters[1:] {
		for _, route := range []runstore.Route{runstore.Primary, runstore.Second} {
			run.ModelCalls[string(route)] += counter.Calls(route)
			run.LedgerAnswer[string(route)] += counter.Hits(route)
		}
	}
	return run
}

// cut reports whether an error is only that time ran out or the user stopped.
func (s *session) cut(err error) bool {
	return s.ctx.Err() != nil && (errors.Is(err, optimize.ErrNothingEvaluated) || errors.Is(err, s.ctx.Err()))
}

// ending is the exit code of several designs: done when one is verified, stopped
// when time ran out before the last with a usable one.
func (s *session) ending(results []*optimize.Result, stopped bool) error {
	verified := slices.ContainsFunc(results, func(r *optimize.Result) bool { return r.Status == optimize.Verified })
	feasible := slices.ContainsFunc(results, func(r *optimize.Result) bool { return r.Best.Assessment.Feasible })
	switch code := s.interruption.code.Load(); {
	case code != 0:
		return &endedWith{int(code)}
	case feasible && stopped:
		return &endedWith{exitStopped}
	case !verified:
		return &endedWith{exitNotMet}
	}
	return nil
}
