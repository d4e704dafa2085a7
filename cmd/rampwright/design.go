package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/cmd/rampwright/internal/runstore"
	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

func (a *app) designCommand() *cobra.Command {
	var dir string
	cmd := &cobra.Command{
		Use: "design BRIEF", Short: "Search the inlet a brief asks for and verify it exactly", Args: exactArgs(1),
		Long: `Search the inlet a brief asks for: sample the exact flow, fit surrogates to the
aim and every limited quantity, search them under the limits, add exact
evaluations until surrogate and exact agree at the optimum, and verify the
result by a second exact route. Everything is written to a result folder; a
run that was cut short resumes from it.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			if refused := brief.CheckSearch(study.brief); len(refused) > 0 {
				return refused
			}
			if dir == "" {
				dir = strings.TrimSuffix(filepath.Base(args[0]), filepath.Ext(args[0])) + "-result"
			}
			return a.design(study, dir)
		},
	}
	cmd.Flags().StringVarP(&dir, "output", "o", "", "result folder (default ./<brief name>-result)")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	a.searchFlags(cmd)
	briefFlags(cmd)
	return cmd
}

// searchFlags adds the flags of every command that searches.
func (a *app) searchFlags(cmd *cobra.Command) {
	cmd.Flags().IntVar(&a.jobs, "jobs", runtime.NumCPU(), "evaluations and fits side by side; never changes the result")
	cmd.Flags().StringVar(&a.timeLimit, "time-limit", "", "stop with the best so far after this time, such as 90s or 10m")
	a.progressFlags(cmd)
	cmd.Flags().BoolVar(&a.force, "force", false, "replace a result folder of another title")
}

// limit reads --time-limit.
func (a *app) limit() (time.Duration, error) {
	if a.timeLimit == "" {
		return 0, nil
	}
	limit, err := time.ParseDuration(a.timeLimit)
	if err != nil || limit <= 0 {
		return 0, &usageError{fmt.Sprintf("--time-limit %q is not a time above zero", a.timeLimit), "write 90s, 10m or 1h30m"}
	}
	return limit, nil
}

// settings are the brief's effort with the jobs of the command line.
func (a *app) settings(study *study) optimize.Settings {
	effort := study.brief.Effort
	return optimize.Settings{
		Samples: effort.Samples, Infill: effort.Infill, Batch: effort.Batch, Seed: effort.Seed, Agreement: effort.Agreement, Jobs: a.jobs,
	}
}

// design runs the main job into a result folder.
func (a *app) design(study *study, dir string) (err error) {
	limit, err := a.limit()
	if err != nil {
		return err
	}
	if a.jobs < 1 {
		return &usageError{fmt.Sprintf("--jobs %d: at least one", a.jobs), ""}
	}
	began := time.Now()
	model, err := study.modelHash()
	if err != nil {
		return err
	}
	folder, err := runstore.Open(dir, study.brief.Title, study.brief.Hash(), runstore.Options{Force: a.force, Models: []string{model}})
	if err != nil {
		return err
	}
	defer func() {
		if closing := folder.Abandon(); err == nil {
			err = closing
		}
	}()
	a.notices(folder)

	ctx, interruption := watch(limit, a.writesWhatThereIs)
	defer interruption.stop()
	cached, counter := runstore.Cached(study.model, folder.Ledger(), model)
	task := optimize.Task{Problem: cached, Limits: study.limits, Aim: study.brief.Aim}
	settings := a.settings(study)
	progress, searching := a.progress(), time.Now()
	result, err := optimize.Design(ctx, task, settings, progress.observe)
	progress.end()
	if err != nil {
		return a.cutShort(err, interruption)
	}
	a.hintBatch(settings, result.Counts, time.Since(searching))
	finished := report.Study{Problem: study.problem, Model: study.model, Aim: study.brief.Aim, Agreement: settings.Agreement, Result: result, Widest: brief.Widest}
	if err := a.followUp(ctx, study, cached, settings, &finished); err != nil {
		return err
	}
	document := report.NewDesign(study.head(settings.Seed), finished)
	files, err := resultFiles(study, document, &finished, runRecord(began, a.jobs, counter))
	if err != nil {
		return err
	}
	for _, f := range files {
		if err := folder.WriteFile(f.name, f.data); err != nil {
			return err
		}
	}
	if err := folder.Commit(); err != nil {
		return err
	}
	if err := a.print(document); err != nil {
		return err
	}
	a.say("result folder: %s\n", folder.Dir())
	return ending(finished.Result, interruption)
}

// followUp does what follows a search: the design that holds the confidence of the
// brief in place of the first, what is known of it on the exact model, its flow.
func (a *app) followUp(ctx context.Context, study *study, cached problems.Problem, settings optimize.Settings, finished *report.Study) error {
	searched, err := a.withConfidence(ctx, study, cached, settings, finished)
	if err != nil {
		return err
	}
	if err := a.afterwards(ctx, searched, settings, finished); err != nil && ctx.Err() == nil {
		return err // a search that was cut short is left out, and the document says so
	}
	if searched != study {
		if err := judgeAsAsked(study, finished); err != nil {
			return err
		}
	}
	return study.fly(context.WithoutCancel(ctx), finished)
}

// fly adds what the cautions of the best design come from: its exact flow, and the
// quantities that the tolerances of the brief move.
func (s *study) fly(ctx context.Context, finished *report.Study) (err error) {
	if s.problem == nil {
		return nil
	}
	x := finished.Result.Best.X
	if finished.Flow, err = s.problem.Flow(ctx, x); err != nil || !s.brief.Tolerance.Any() {
		return err
	}
	built, err := s.problem.Built(s.brief.Tolerance.Deviations())
	if err != nil {
		return err
	}
	finished.Moved, err = built.Moves(ctx, x)
	return err
}

// cutShort gives an end that came before there was anything to keep its code.
func (a *app) cutShort(err error, interruption *interruption) error {
	if !errors.Is(err, optimize.ErrNothingEvaluated) {
		return err
	}
	a.complain(optimize.ErrNothingEvaluated.Error(), "")
	if code := interruption.code.Load(); code != 0 {
		return &endedWith{int(code)}
	}
	return &endedWith{exitNotMet}
}

// afterwards runs what never feeds the search, on the exact model: the exact
// search as yardstick; the prices of the limits, the nearest design in tenths of a degree and the play of
// the variables where the limits hold; the reason why where nothing holds them.
func (a *app) afterwards(ctx context.Context, study *study, settings optimize.Settings, finished *report.Study) (err error) {
	task := optimize.Task{Problem: study.model, Limits: study.limits, Aim: study.brief.Aim}
	if finished.Result.Status == optimize.Infeasible {
		a.say("nothing holds every limit yet: searching the exact model for the reason\n")
		if err := explain(ctx, task, settings, finished); err != nil {
			return err
		}
	}
	if finished.Exact, err = optimize.SearchExact(ctx, task, settings); err != nil {
		return err
	}
	best := finished.Result.Best
	if !best.Assessment.Feasible {
		return nil
	}
	if err := optimize.Price(ctx, task, best.X, best.Assessment.Checks); err != nil {
		return err
	}
	if study.problem != nil { // the variables of an analytic problem are no angles
		if finished.Rounded, err = optimize.Round(ctx, task, best.X, roundedStep); err != nil {
			return err
		}
	}
	finished.Plays, err = optimize.Plays(ctx, task, best.X, report.PlayLoss)
	return err
}

// roundedStep is the angle, in degrees, a workshop is asked for.
const roundedStep = 0.1

// explain puts the design of least violation and the reason for it into a study,
// or the feasible design the surrogates did not lead to.
func explain(ctx context.Context, task optimize.Task, settings optimize.Settings, finished *report.Study) error {
	explained, err := optimize.Explain(ctx, task, settings)
	if err != nil {
		return err
	}
	result := finished.Result
	result.Best, result.Candidates = explained.Least, []optimize.Candidate{explained.Least}
	if !explained.Feasible {
		finished.Explained = explained
		return nil
	}
	result.Status = optimize.NotVerified
	result.Why = "the exact search found a design that holds every limit; the surrogates did not lead to one: raise effort.samples or effort.infill"
	return nil
}

// ending turns a status into the exit code.
func ending(result *optimize.Result, interruption *interruption) error {
	if code := interruption.code.Load(); code != 0 {
		return &endedWith{int(code)}
	}
	switch {
	case !result.Best.Assessment.Feasible, result.Status == optimize.NotVerified:
		return &endedWith{exitNotMet}
	case result.Status == optimize.Stopped:
		return &endedWith{exitStopped}
	}
	return nil
}

// record is run.json: what must not be in result.json.
type record struct {
	Format       int            `json:"format"`
	Program      string         `json:"program"`
	Started      string         `json:"started"`
	Seconds      float64        `json:"seconds"`
	Platform     string         `json:"platform"`
	Jobs         int            `json:"jobs"`
	ModelCalls   map[string]int `json:"model_calls"`
	LedgerAnswer map[string]int `json:"answered_from_ledger"`
}

func runRecord(began time.Time, jobs int, counter *runstore.Counter) record {
	calls, hits := map[string]int{}, map[string]int{}
	for _, route := range []runstore.Route{runstore.Primary, runstore.Second} {
		calls[string(route)], hits[string(route)] = counter.Calls(route), counter.Hits(route)
	}
	return record{
		Format: 1, Program: program, Started: began.UTC().Format(time.RFC3339), Seconds: time.Since(began).Seconds(),
		Platform: runtime.GOOS + "/" + runtime.GOARCH + " " + runtime.Version(), Jobs: jobs,
		ModelCalls: calls, LedgerAnswer: hits,
	}
}

// resultFiles are the files of a result.
func resultFiles(study *study, document *report.DesignDocument, finished *report.Study, run record) ([]file, error) {
	runJSON, err := json.MarshalIndent(run, "", "  ")
	if err != nil {
		return nil, err
	}
	files := []file{
		{"result.json", document.JSON()},
		{"run.json", append(runJSON, '\n')},
		{"brief.yaml", study.brief.ResolvedYAML()},
		{"samples.csv", report.SamplesCSV(study.model, finished.Result.Samples)},
	}
	if finished.Flow != nil {
		ofInlet, err := inletFiles(study, document, finished.Flow)
		if err != nil {
			return nil, err
		}
		files = append(files, ofInlet...)
	}
	return withPage(files, study, finished)
}

type file struct {
	name string
	data []byte
}

// inletFiles are the files only an inlet has.
func inletFiles(study *study, document *report.DesignDocument, flow *inlet.Flow) ([]file, error) {
	states, err := stations(document.Points)
	if err != nil {
		return nil, err
	}
	files := []file{{"stations.csv", states}}
	if flow.ContourErr != nil {
		return files, nil
	}
	drawing, err := drawings(study, flow)
	return append(files, drawing...), err
}

// drawings are the files of a contour that closes.
func drawings(study *study, flow *inlet.Flow) ([]file, error) {
	points, err := profile(flow)
	if err != nil {
		return nil, err
	}
	view, err := sideView(study.brief.Title, "preliminary geometry: inviscid flow, sharp edges; read the cautions of the result", flow, &flow.Points[0])
	if err != nil {
		return nil, err
	}
	return []file{{"profile.csv", points}, {"inlet.svg", view}}, nil
}
