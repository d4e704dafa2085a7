package main

import (
	"fmt"
	"runtime"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
)

// fitsFlags are the flags of `fits` as typed.
type fitsFlags struct {
	counts     string
	kinds      string
	quantities []string
	designs    int
	testPoints int
	inert      int
	noise      float64
	accuracy   float64
	dir        string
}

func (a *app) fitsCommand() *cobra.Command {
	var flags fitsFlags
	cmd := &cobra.Command{
		Use: "fits BRIEF", Short: "Learning curves of every surrogate kind against the exact model", Args: exactArgs(1),
		Long: `Learning curves: fit every surrogate kind, and the choice among them by
leave-one-out, to replicated space-filling designs of growing size, and compare
with fresh exact evaluations. Tells which kind follows which quantity, how many
samples an error takes, whether the 95 % intervals can be believed, what inert
inputs and noise cost, and whether the fit or the sampling limits mean and
deviation. Limits of the brief play no part.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			plan, err := a.fitsPlan(study, flags)
			if err != nil {
				return err
			}
			return a.fits(study, plan, flags.dir)
		},
	}
	set := cmd.Flags()
	set.StringVar(&flags.counts, "counts", "", "numbers of samples, such as 20,40,80 (default 20,40,80,160,320 where the inputs allow)")
	set.StringVar(&flags.kinds, "kinds", "", "kinds to compare, by name or the beginning of one, separated by ; (default all)")
	set.StringArrayVar(&flags.quantities, "quantity", nil, "quantity to fit, NAME@POINT; may be repeated (default those of the aim)")
	set.IntVar(&flags.designs, "replicates", 10, "designs for each number of samples")
	set.IntVar(&flags.testPoints, "test-points", 4096, "fresh exact evaluations to compare with")
	set.IntVar(&flags.inert, "noise-inputs", 0, "inert inputs added to the problem")
	set.Float64Var(&flags.noise, "noise", 0, "standard deviation of the noise added to the samples, in the unit of the quantity")
	set.Float64Var(&flags.accuracy, "accuracy", 1e-3, "error asked for, as a fraction of the spread of the quantity")
	set.StringVarP(&flags.dir, "output", "o", "", "folder for fits.json, fits.csv and fits.svg, perhaps that of a design")
	set.BoolVar(&a.json, "json", false, "print one JSON document")
	set.IntVar(&a.jobs, "jobs", runtime.NumCPU(), "fits side by side; changes no figure but the seconds")
	set.StringVar(&a.timeLimit, "time-limit", "", "stop with the designs done so far after this time, such as 90s or 10m")
	a.progressFlags(cmd)
	set.BoolVar(&a.force, "force", false, "write into a folder that holds other files")
	briefFlags(cmd)
	return cmd
}

// Bounds of the flags: beyond them a study takes days.
const (
	mostSamples    = 5000
	mostDesigns    = 1000
	mostTestPoints = 1_000_000
	mostInert      = 50
)

// usualCounts are the numbers of samples a study takes unless told otherwise.
var usualCounts = []int{20, 40, 80, 160, 320}

// fitsPlan turns the flags into a plan; everything wrong with them is reported
// at once.
func (a *app) fitsPlan(study *study, flags fitsFlags) (*fitsPlan, error) {
	plan := &fitsPlan{
		model: study.model, seed: study.brief.Effort.Seed, jobs: a.jobs, designs: flags.designs,
		testPoints: flags.testPoints, inert: flags.inert, noise: flags.noise, accuracy: flags.accuracy,
	}
	var wrong, hints []string
	complain := func(message, hint string) {
		wrong = append(wrong, message)
		if hint != "" && !slices.Contains(hints, hint) {
			hints = append(hints, hint)
		}
	}
	within := func(name string, v, low, high int) {
		if v < low || v > high {
			complain(fmt.Sprintf("--%s %d is not within %d to %d", name, v, low, high), "")
		}
	}
	within("replicates", flags.designs, 1, mostDesigns)
	within("test-points", flags.testPoints, 16, mostTestPoints)
	within("noise-inputs", flags.inert, 0, mostInert)
	within("jobs", a.jobs, 1, 1024)
	if !(flags.noise >= 0 && flags.noise < 1e300) {
		complain(fmt.Sprintf("--noise %g is not a number from 0 on", flags.noise), "")
	}
	if !(flags.accuracy > 0 && flags.accuracy <= 1) {
		complain(fmt.Sprintf("--accuracy %g is not within 0 to 1", flags.accuracy), "it is a fraction of the spread of the quantity, such as 1e-3")
	}
	n := len(study.model.Variables()) + max(flags.inert, 0)
	if len(study.model.Variables()) == 0 {
		complain("the brief searches nothing: there is nothing to fit over", "write a value of the inlet as {from: .., to: ..}")
	}
	var err error
	if plan.counts, err = parseCounts(flags.counts, n); err != nil {
		complain(err.Error(), "")
	}
	if plan.quantities, err = study.fitted(flags.quantities); err != nil {
		complain(err.Error(), "name one with --quantity NAME@POINT")
	}
	if plan.kinds, err = chooseKinds(flags.kinds, crossval.Every(plan.seed)); err != nil {
		complain(err.Error(), "")
	}
	if wrong != nil {
		return nil, &usageError{strings.Join(wrong, "; "), strings.Join(hints, "; ")}
	}
	return plan, nil
}

// parseCounts reads --counts for n inputs. The usual numbers are cut to those
// that fit a straight line with samples to spare.
func parseCounts(text string, n int) ([]int, error) {
	if text == "" {
		var counts []int
		for _, c := range usualCounts {
			if c >= 2*(n+1) {
				counts = append(counts, c)
			}
		}
		return counts, nil
	}
	var counts []int
	for _, piece := range strings.Split(text, ",") {
		c, err := strconv.Atoi(strings.TrimSpace(piece))
		if err != nil || c < n+2 || c > mostSamples {
			return nil, fmt.Errorf("--counts: %q is not a whole number within %d to %d", piece, n+2, mostSamples)
		}
		counts = append(counts, c)
	}
	slices.Sort(counts)
	return slices.Compact(counts), nil
}

// fitted returns the indices of the quantities named, of those of the aim where
// none is.
func (s *study) fitted(names []string) ([]int, error) {
	var places []problems.Read
	for _, name := range names {
		quantity, point, _ := strings.Cut(name, "@")
		places = append(places, problems.Read{Quantity: quantity, Point: point})
	}
	if names == nil {
		for _, part := range s.brief.Aim.Parts {
			places = append(places, part.Reads...)
		}
	}
	if len(places) == 0 {
		return nil, fmt.Errorf("the brief has no aim to take the quantity from")
	}
	var list []int
	for _, place := range places {
		found := false
		for i, q := range s.model.Quantities() {
			if q.Name == place.Quantity && (place.Point == "" || q.Point == place.Point) {
				found = true
				if !slices.Contains(list, i) {
					list = append(list, i)
				}
			}
		}
		if !found {
			return nil, fmt.Errorf("the problem has no quantity %s", strings.TrimSuffix(place.Quantity+"@"+place.Point, "@"))
		}
	}
	slices.Sort(list)
	return list, nil
}

// chooseKinds keeps the kinds whose name begins with one of those given.
func chooseKinds(text string, every []surrogate.Model) ([]surrogate.Model, error) {
	if text == "" {
		return every, nil
	}
	var names []string
	for _, model := range every {
		names = append(names, model.Kind())
	}
	wanted := make([]bool, len(every))
	for _, piece := range strings.Split(text, ";") {
		piece = strings.ToLower(strings.TrimSpace(piece))
		found := false
		for i, name := range names {
			if lower := strings.ToLower(name); lower == piece || piece != "" && strings.HasPrefix(lower, piece) && !slices.Contains(names, piece) {
				wanted[i], found = true, true
			}
		}
		if !found {
			return nil, fmt.Errorf("--kinds: there is no kind %q; there are %s", piece, strings.Join(names, "; "))
		}
	}
	var kept []surrogate.Model
	for i, model := range every {
		if wanted[i] {
			kept = append(kept, model)
		}
	}
	return kept, nil
}

// fits runs the study and hands out what was asked for.
func (a *app) fits(study *study, plan *fitsPlan, dir string) error {
	limit, err := a.limit()
	if err != nil {
		return err
	}
	folder := filesFolder{dir: dir, of: "fits", ours: oneOf(fitsFiles), force: a.force}
	if err := folder.check(); err != nil {
		return err
	}
	ctx, interruption := watch(limit, nil)
	defer interruption.stop()
	progress := a.progress()
	result, err := runFits(ctx, plan, func(done, total int) {
		if ctx.Err() != nil {
			return // what is left is not fitted
		}
		progress.show(stage{phase: "fitting", done: done, total: total, unit: "design"})
	})
	progress.end()
	if code := interruption.code.Load(); err != nil && code != 0 {
		return a.nothingWritten(code)
	}
	if err != nil {
		return err
	}
	document := report.NewFits(study.head(plan.seed), *result)
	if dir != "" {
		picture, err := document.Picture()
		if err != nil {
			return err
		}
		if err := folder.write([]file{{"fits.json", document.JSON()}, {"fits.csv", document.CSV()}, {"fits.svg", picture}}); err != nil {
			return err
		}
		a.say("written: %s\n", dir)
	}
	if err := a.print(document); err != nil {
		return err
	}
	if code := interruption.code.Load(); code != 0 {
		return &endedWith{int(code)}
	}
	if result.Stopped {
		return &endedWith{exitStopped}
	}
	return nil
}

// fitsFiles are the files of a study.
var fitsFiles = []string{"fits.json", "fits.csv", "fits.svg"}
