package main

import (
	"errors"
	"fmt"
	"math"
	"runtime"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
)

// scheduleFlags are the flags of `schedule` as typed.
type scheduleFlags struct {
	of        string
	move      string
	mach      string
	incidence *float64 // deg; nil where none is given
	points    int
	limitsOf  string
	highest   string
	lowest    string
	dir       string
}

func (a *app) scheduleCommand() *cobra.Command {
	var flags scheduleFlags
	var incidence float64
	cmd := &cobra.Command{
		Use: "schedule BRIEF", Short: "Schedule a movable ramp or cowl over Mach number: the angle that keeps the limits", Args: exactArgs(1),
		Long: `Find, for each Mach number of a range, the angle of one movable part that keeps
every limit and, of those, has the best aim; where none keeps them, the one that
misses them least and by how much. The rest of the frozen geometry stays.

--move cowl_angle_deg=2..9 turns the cowl about its lip, --move ramp_2_angle_deg=4..12
turns ramp 2 and those behind it about its leading corner, between hinge stops.
Every position is traced. Values the brief searches, ambient air and limits are
those of envelope.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			if cmd.Flags().Changed("incidence-deg") {
				flags.incidence = &incidence
			}
			return a.schedule(study, flags)
		},
	}
	set := cmd.Flags()
	set.StringVar(&flags.of, "of", "", "take searched values from this result folder")
	set.StringVar(&flags.move, "move", "", "the angle to schedule with its hinge stops, such as cowl_angle_deg=2..9, deg")
	set.StringVar(&flags.mach, "mach", "", "range of Mach numbers, such as 4..6 (default that of the flight points)")
	set.Float64Var(&incidence, "incidence-deg", 0, "incidence, deg (default that of the design point)")
	set.IntVar(&flags.points, "points", envelope.DefaultSchedulePoints, "Mach numbers")
	set.StringVar(&flags.limitsOf, "limits-of", "", "flight point whose limits hold at every Mach number (default the design point)")
	set.StringVar(&flags.highest, "highest", "", "quantity to drive up, in place of the brief's aim")
	set.StringVar(&flags.lowest, "lowest", "", "quantity to drive down, in place of the brief's aim")
	set.StringVarP(&flags.dir, "output", "o", "", "folder for schedule.json, schedule.csv and schedule.svg")
	set.BoolVar(&a.json, "json", false, "print one JSON document")
	set.IntVar(&a.jobs, "jobs", runtime.NumCPU(), "Mach numbers side by side; never changes the result")
	a.progressFlags(cmd)
	set.BoolVar(&a.force, "force", false, "write into a folder that holds other files")
	briefFlags(cmd)
	return cmd
}

// schedulePlan is a schedule to be found.
type schedulePlan struct {
	moving   *envelope.Moving
	hinge    inlet.Hinge
	settings envelope.ScheduleSettings
	aim      problems.Aim
	air      envelope.Air
	limitsOf string
}

// scheduleFiles are the files of a schedule.
var scheduleFiles = []string{"schedule.json", "schedule.csv", "schedule.svg"}

// schedule finds a schedule and hands out what was asked for.
func (a *app) schedule(study *study, flags scheduleFlags) error {
	plan, err := a.schedulePlan(study, flags)
	if err != nil {
		return err
	}
	folder := filesFolder{dir: flags.dir, of: "schedule", ours: oneOf(scheduleFiles), force: a.force}
	if err := folder.check(); err != nil {
		return err
	}
	ctx, interruption := watch(0, nil)
	defer interruption.stop()
	shown := a.progress()
	plan.settings.Observe = shown.showing()
	found, err := envelope.Plan(ctx, plan.moving, plan.settings)
	shown.end()
	if err != nil {
		return a.surveyFailed(err, interruption)
	}
	document := report.NewSchedule(study.head(0), report.ScheduleStudy{
		Definition: study.problem.Definition(), Hinge: plan.hinge, Design: plan.moving.Angle(), Aim: plan.aim,
		LimitsOf: plan.limitsOf, Air: plan.air, Quantities: plan.moving.Quantities(), Traces: mapTrace, Schedule: found,
	})
	if flags.dir != "" {
		picture, err := document.Picture()
		if err != nil {
			return err
		}
		if err := folder.write([]file{{"schedule.json", document.JSON()}, {"schedule.csv", document.CSV()}, {"schedule.svg", picture}}); err != nil {
			return err
		}
		a.say("written: %s\n", flags.dir)
	}
	if err := a.print(document); err != nil {
		return err
	}
	if document.Kept() == 0 {
		return &endedWith{exitNotMet}
	}
	return nil
}

// schedulePlan turns the flags into a plan; everything wrong with them is reported at
// once.
func (a *app) schedulePlan(study *study, flags scheduleFlags) (*schedulePlan, error) {
	x, err := study.contoured("schedule", "moves a part of an inlet", flags.of)
	if err != nil {
		return nil, err
	}
	plan := &schedulePlan{air: study.air(), limitsOf: flags.limitsOf}
	s := &plan.settings
	var wrong []error
	note := func(err error) {
		if err != nil {
			wrong = append(wrong, err)
		}
	}
	var low, high float64
	plan.hinge, low, high, err = parseMove(flags.move)
	note(err)
	s.LowAngle, s.HighAngle = low/degree, high/degree
	s.LowMach, s.HighMach, err = rangeOr("--mach", flags.mach, study.flownMach)
	note(err)
	s.Incidence = study.problem.Definition().Points[0].Incidence
	if flags.incidence != nil {
		s.Incidence = *flags.incidence / degree
	}
	plan.aim, err = study.aimOr(flags.highest, flags.lowest)
	note(err)
	s.Points, s.Jobs, s.Highest = flags.points, a.jobs, plan.aim.Highest
	s.Limits, err = study.limitsAt(&plan.limitsOf, problems.Geometry)
	note(err)
	// The library takes a zero for its default; typed, it is a mistake.
	if flags.points < 2 {
		note(fmt.Errorf("--points %d: at least two", flags.points))
	}
	if a.jobs < 1 {
		note(fmt.Errorf("--jobs %d: at least one", a.jobs))
	}
	if wrong == nil {
		frozen := envelope.Freeze(study.problem, x, plan.air, mapTrace)
		if plan.moving, err = envelope.Hang(frozen, plan.hinge); err != nil {
			note(err)
		} else if s.Aim, err = aimOf(plan.aim, plan.moving.Quantities()); err != nil {
			note(err)
		} else {
			note(s.Validate())
		}
	}
	if wrong != nil {
		return nil, &usageError{strings.ReplaceAll(errors.Join(wrong...).Error(), "\n", "; "), "see rampwright schedule --help"}
	}
	return plan, nil
}

// parseMove reads NAME=LOW..HIGH.
func parseMove(text string) (hinge inlet.Hinge, low, high float64, err error) {
	if text == "" {
		return hinge, 0, 0, errors.New("--move is missing: name the angle and its hinge stops, such as cowl_angle_deg=2..9")
	}
	name, stops, _ := strings.Cut(text, "=")
	if name != hinge.Name() {
		k, found := strings.CutPrefix(strings.TrimSuffix(name, "_angle_deg"), "ramp_")
		hinge.Ramp, err = strconv.Atoi(k)
		if !found || err != nil || hinge.Ramp < 1 || hinge.Name() != name {
			return hinge, 0, 0, fmt.Errorf("--move %q: the angle is cowl_angle_deg or ramp_1_angle_deg, ramp_2_angle_deg and so on", text)
		}
	}
	if stops == "" {
		return hinge, 0, 0, fmt.Errorf("--move %q: the hinge stops are missing, such as %s=2..9", text, name)
	}
	low, high, err = rangeOr("--move "+name+"=", stops, nil)
	return hinge, low, high, err
}

// flownMach spans the Mach numbers of the flight points; of a single one a unit below.
func (s *study) flownMach() (low, high float64) {
	low, high = math.Inf(1), 0
	for _, p := range s.problem.Definition().Points {
		low, high = min(low, p.Mach), max(high, p.Mach)
	}
	if low == high {
		low = max(low-1, envelope.LeastMach)
	}
	return low, high
}

// aimOr is the quantity given, or the aim of the brief.
func (s *study) aimOr(highest, lowest string) (problems.Aim, error) {
	switch {
	case highest != "" && lowest != "":
		return problems.Aim{}, errors.New("--highest and --lowest: keep one")
	case highest+lowest != "":
		name := highest + lowest
		return problems.Aim{Highest: highest != "", Text: name, Parts: []problems.Part{{Reads: []problems.Read{{Quantity: name}}}}}, nil
	case len(s.brief.Aim.Parts) == 0:
		return problems.Aim{}, errors.New("the brief has no aim: of the positions that keep the limits none is the best; name a quantity with --highest or --lowest")
	}
	return s.brief.Aim, nil
}

// aimOf reads an aim at one condition, whatever points it names: its
// first part, the least member of a group.
func aimOf(aim problems.Aim, quantities []problems.Quantity) (func(*problems.Evaluation) float64, error) {
	part := aim.Parts[0]
	indices := make([][]int, len(part.Reads))
	for k, read := range part.Reads {
		for i, q := range quantities {
			if q.Name == read.Quantity && (read.Member == "" || q.Member == read.Member) {
				indices[k] = append(indices[k], i)
			}
		}
		if indices[k] == nil {
			return nil, fmt.Errorf("the aim reads %s, which a single condition does not have", read.Quantity)
		}
	}
	return func(e *problems.Evaluation) float64 {
		values := make([]float64, len(indices))
		for k, list := range indices {
			values[k] = math.NaN()
			for _, i := range list {
				if v := e.Values[i]; !(values[k] <= v) && !math.IsNaN(v) {
					values[k] = v
				}
			}
			if math.IsNaN(values[k]) {
				return math.NaN()
			}
		}
		if part.Formula == nil {
			return values[0]
		}
		return part.Formula(values)
	}, nil
}
