package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/optimize"
	"rampwright/problems/inlet"
	"rampwright/problems/ramp"
)

func (a *app) ladderCommand() *cobra.Command {
	var counts, dir string
	cmd := &cobra.Command{
		Use: "ladder BRIEF", Short: "Design the inlet with one ramp more at a time: what does each ramp gain?", Args: exactArgs(1),
		Long: `Design the inlet of a brief for each number of ramps, each search warm-started
from the one before, and show what every ramp gains, why a number is infeasible,
and which ramp ended at its smallest angle and may go. Every design is verified
by both exact routes, as design does it. A ramp beyond those of the brief takes
the range of the last. The result folder holds ladder.json, ladder.csv and
ladder.svg; a run that was cut short resumes from it.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			rungs, err := a.rungs(cmd, args[0], counts)
			if err != nil {
				return err
			}
			if dir == "" {
				dir = strings.TrimSuffix(filepath.Base(args[0]), filepath.Ext(args[0])) + "-ladder"
			}
			return a.ladder(rungs, dir)
		},
	}
	cmd.Flags().StringVar(&counts, "count", "1-5", "numbers of ramps, such as 1-5 or 3")
	cmd.Flags().StringVarP(&dir, "output", "o", "", "result folder (default ./<brief name>-ladder)")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	a.searchFlags(cmd)
	briefFlags(cmd)
	return cmd
}

// rung is one number of ramps.
type rung struct {
	ramps   int
	study   *study
	refused brief.Problems // why no search over it can succeed
}

// ladder holds the rungs and the brief they come from.
type ladder struct {
	base  *study
	rungs []rung
}

// rungs reads the brief once as it is and once for each number of ramps.
func (a *app) rungs(cmd *cobra.Command, file, counts string) (*ladder, error) {
	low, high, err := parseCount(counts)
	if err != nil {
		return nil, err
	}
	if cmd.Flags().Changed("ramps") {
		return nil, &usageError{"--ramps fixes what the ladder varies", "give the numbers of ramps with --count"}
	}
	base, err := read(cmd, file)
	if err != nil {
		return nil, err
	}
	if base.problem == nil {
		return nil, &usageError{"a ladder counts ramps; this brief poses the analytic problem " + base.analyticName(), ""}
	}
	if base.brief.Definition.Outline != nil {
		return nil, brief.CheckSearch(base.brief)
	}
	l := &ladder{base: base}
	open := false
	for n := low; n <= high; n++ {
		study, err := withRamps(cmd, file, base.problem.Definition().RampAngle, n)
		if err != nil {
			return nil, err
		}
		refused := brief.CheckSearch(study.brief)
		open = open || len(refused) == 0
		l.rungs = append(l.rungs, rung{n, study, refused})
	}
	if !open {
		return nil, l.rungs[0].refused
	}
	return l, nil
}

// parseCount reads --count.
func parseCount(text string) (low, high int, err error) {
	from, to, ranged := strings.Cut(text, "-")
	if !ranged {
		to = from
	}
	low, errLow := strconv.Atoi(strings.TrimSpace(from))
	high, errHigh := strconv.Atoi(strings.TrimSpace(to))
	if errLow != nil || errHigh != nil || low < 1 || high > ramp.MaxRamps || low > high {
		return 0, 0, &usageError{fmt.Sprintf("--count %q is not a number or a range within 1 to %d", text, ramp.MaxRamps), "write 1-5, or 3"}
	}
	return low, high, nil
}

// withRamps reads the brief with n ramps: those it has, then more like the last.
func withRamps(cmd *cobra.Command, file string, angles []inlet.Setting, n int) (*study, error) {
	texts := make([]string, n)
	for i := range texts {
		texts[i] = settingText(angles[min(i, len(angles)-1)])
	}
	err := errors.Join(cmd.Flags().Set("ramps", strconv.Itoa(n)), cmd.Flags().Set("ramp-angle-deg", strings.Join(texts, ",")))
	if err != nil {
		return nil, err
	}
	return read(cmd, file)
}

// settingText writes a setting as a flag takes it.
func settingText(s inlet.Setting) string {
	number := func(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }
	if !s.Searched {
		return number(s.Value)
	}
	return number(s.Low) + ".." + number(s.High)
}

// ladder designs every rung into a result folder.
func (a *app) ladder(l *ladder, dir string) (err error) {
	studies := make([]*study, len(l.rungs))
	for i, r := range l.rungs {
		studies[i] = r.study
	}
	s, err := a.openSession(dir, "ladder", l.base, studies, a.writesWhatThereIs)
	if err != nil {
		return err
	}
	defer s.close(&err)
	finished := report.LadderStudy{Definition: l.base.problem.Definition(), Aim: l.base.brief.Aim}
	for i := range l.rungs {
		result, err := s.climb(&l.rungs[i], finished.Rungs)
		if err != nil {
			return err
		}
		finished.Rungs = append(finished.Rungs, *result)
	}
	results := finished.Results()
	if len(results) == 0 {
		return a.cutShort(optimize.ErrNothingEvaluated, s.interruption)
	}
	document := report.NewLadder(l.base.head(a.settings(l.base).Seed), finished)
	picture, err := document.Picture()
	if err != nil {
		return err
	}
	files := []file{{"ladder.json", document.JSON()}, {"ladder.csv", document.CSV()}, {"ladder.svg", picture}}
	if err := s.finish(l.base, document, files); err != nil {
		return err
	}
	return s.ending(results, document.Cut())
}

// climb designs one rung, started from the nearest lower one that has a design.
func (s *session) climb(r *rung, below []report.Rung) (*report.Rung, error) {
	out := &report.Rung{Ramps: r.ramps, Equal: equalStrength(r.study.problem.Definition(), r.ramps)}
	if len(r.refused) > 0 {
		for _, p := range r.refused {
			out.Refused = append(out.Refused, refusal(p))
		}
		return out, nil
	}
	if s.ctx.Err() != nil {
		return out, nil
	}
	s.app.say("%s\n", count(r.ramps, "ramp"))
	task := optimize.Task{Limits: r.study.limits, Aim: r.study.brief.Aim}
	for _, lower := range slices.Backward(below) {
		if lower.Study != nil {
			task.Starts = [][]float64{carried(lower.Study.Problem, lower.Study.Result.Best.X, r.study.problem)}
			break
		}
	}
	finished, err := s.design(r.study, task, s.app.settings(r.study))
	if s.cut(err) {
		return out, nil
	}
	if err != nil {
		return nil, err
	}
	if err := s.explain(r.study, task, finished); err != nil {
		return nil, err
	}
	out.Study = finished
	return out, s.flow(r.study, finished)
}

// refusal is a problem of a brief in one line, without its place.
func refusal(p brief.Problem) string {
	text := p.Message
	if p.Value != "" {
		text += " (" + p.Value + ")"
	}
	if p.Allowed != "" {
		text += ": " + p.Allowed
	}
	return text
}

// carried is a design of one number of ramps as a start for another: the same
// total turning, laid along the new ramps as it lies along the old ones, and
// everything else as it was.
func carried(from *inlet.Problem, x []float64, to *inlet.Problem) []float64 {
	known := map[string]float64{}
	for i, v := range from.Variables() {
		known[v.Name] = x[i]
	}
	var angles []float64
	for i, s := range from.Definition().RampAngle {
		angle := s.Value
		if s.Searched {
			angle = known[rampVariable(i)]
		}
		angles = append(angles, angle)
	}
	for i, angle := range laidOut(angles, len(to.Definition().RampAngle)) {
		known[rampVariable(i)] = angle
	}
	start := make([]float64, len(to.Variables()))
	for i, v := range to.Variables() {
		start[i] = known[v.Name]
	}
	return start
}

// rampVariable names the angle of ramp i, from 0.
func rampVariable(i int) string { return fmt.Sprintf("ramp_%d_angle_deg", i+1) }

// laidOut lays turnings out over n ramps: each old one is spread evenly over its
// share of the chain, each new one takes what lies in its own. The sum stays.
func laidOut(angles []float64, n int) []float64 {
	m := len(angles)
	out := make([]float64, n)
	for i, angle := range angles {
		for k := range out {
			// Shares in units of 1/(m n): old ramp i covers [i n, (i+1) n).
			common := min((i+1)*n, (k+1)*m) - max(i*n, k*m)
			out[k] += angle * float64(max(0, common)) / float64(n)
		}
	}
	return out
}

// equalStrength is the recovery that n ramps of free turning can reach, nil
// where no terminal shock makes that a bound. The lip shock of a cowl below the
// last ramp counts as one more oblique shock.
func equalStrength(d inlet.Definition, n int) *report.EqualStrength {
	if !d.TerminalShock {
		return nil
	}
	shocks := n + 1
	if lip := d.LipTurning; lip != nil && !lip.Searched && lip.Value == 0 {
		shocks = n
	}
	best := ramp.EqualStrength(d.Gas, d.Points[0].Mach, shocks)
	return &report.EqualStrength{Shocks: shocks, Recovery: best.Recovery * d.DuctFactor}
}
