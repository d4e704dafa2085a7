package main

import (
	"errors"
	"fmt"
	"math"
	"regexp"
	"runtime"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// envelopeFlags are the flags of `envelope` as typed.
type envelopeFlags struct {
	of        string
	mach      string
	incidence string
	points    string
	limitsOf  string
	show      []string
	dir       string
}

func (a *app) envelopeCommand() *cobra.Command {
	var flags envelopeFlags
	cmd := &cobra.Command{
		Use: "envelope BRIEF", Short: "Map the frozen geometry over Mach number and incidence, with its operating boundary", Args: exactArgs(1),
		Long: `Map the frozen geometry of a brief over Mach number and incidence: state, capture,
recovery, throat, spillage and margins at every condition of a grid, and the
boundaries between them, each followed along the zero of its margin. Values the
brief searches are fixed by flags or by --of DIR, as for flow. The ambient air
is that of the design point: its dynamic pressure is held where the brief states
one, its pressure and temperature otherwise. The limits of one flight point hold
over the whole map. If the brief says throat: traced at any flight point, every
condition is traced wave by wave; else those that the chain of straight shocks does
not answer.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			return a.envelope(study, flags)
		},
	}
	set := cmd.Flags()
	set.StringVar(&flags.of, "of", "", "take searched values from this result folder")
	set.StringVar(&flags.mach, "mach", "", "range of Mach numbers, such as 3..7 (default around those of the brief)")
	set.StringVar(&flags.incidence, "incidence-deg", "", "range of incidences, such as -4..4, deg (default 4 deg around those of the brief)")
	set.StringVar(&flags.points, "points", "40x13", "Mach numbers x incidences of the grid")
	set.StringVar(&flags.limitsOf, "limits-of", "", "flight point whose limits hold over the map (default the design point)")
	set.StringArrayVar(&flags.show, "show", nil, "MACH,INCIDENCE to draw with every wave, such as 6.5,0; may be repeated (default the flight points)")
	set.StringVarP(&flags.dir, "output", "o", "", "folder for tables and pictures")
	set.BoolVar(&a.json, "json", false, "print one JSON document")
	set.IntVar(&a.jobs, "jobs", runtime.NumCPU(), "conditions side by side; never changes the result")
	a.progressFlags(cmd)
	set.BoolVar(&a.force, "force", false, "write into a folder that holds other files")
	briefFlags(cmd)
	return cmd
}

// mapTrace are the settings of traces on a map and in a schedule: the defaults,
// written out because they are stated in the result.
var mapTrace = wave.Settings{Wavelet: wave.DefaultWavelet, Threshold: wave.DefaultThreshold, WithoutError: true}

// envelopePlan is a map to be computed.
type envelopePlan struct {
	study    *study
	x        []float64
	air      envelope.Air
	frozen   *envelope.Frozen
	settings envelope.Settings
	limitsOf string
	show     []envelope.Condition
}

// envelope maps the inlet and hands out what was asked for.
func (a *app) envelope(study *study, flags envelopeFlags) error {
	plan, err := a.envelopePlan(study, flags)
	if err != nil {
		return err
	}
	folder := filesFolder{dir: flags.dir, of: "envelope", ours: envelopeFile, force: a.force}
	if err := folder.check(); err != nil {
		return err
	}
	ctx, interruption := watch(0, nil)
	defer interruption.stop()
	shown := a.progress()
	plan.settings.Observe = shown.showing()
	survey, err := envelope.Run(ctx, plan.frozen, plan.settings)
	shown.end()
	if err != nil {
		return a.surveyFailed(err, interruption)
	}
	document := report.NewEnvelope(study.head(0), report.EnvelopeStudy{
		Definition: study.problem.Definition(), Variables: study.problem.Variables(), X: plan.x,
		LimitsOf: plan.limitsOf, Air: plan.air, Quantities: plan.frozen.Quantities(),
		Map: mapTrace, Boundaries: inlet.SearchTrace(), Survey: survey,
	})
	if flags.dir != "" {
		files, err := plan.files(document)
		if err != nil {
			return err
		}
		if err := folder.write(files); err != nil {
			return err
		}
		a.say("written: %s\n", flags.dir)
	}
	return a.print(document)
}

// surveyFailed turns the end of a survey into what the command returns: nothing of
// it is kept.
func (a *app) surveyFailed(err error, interruption *interruption) error {
	var high *envelope.NoAltitude
	if code := interruption.code.Load(); code != 0 {
		return a.nothingWritten(code)
	}
	if errors.As(err, &high) {
		return &usageError{err.Error(), "choose another range with --mach"}
	}
	return err
}

// contoured returns the fixed values of an inlet whose contour closes, for a command
// that does something to one.
func (s *study) contoured(command, does, of string) ([]float64, error) {
	if s.problem == nil {
		return nil, &usageError{command + " " + does + "; this brief poses the analytic problem " + s.analyticName(), ""}
	}
	x, err := s.fixed(command, of)
	if err != nil {
		return nil, err
	}
	return x, s.closes(x)
}

// envelopePlan turns the flags into a plan; everything wrong with them is reported
// at once.
func (a *app) envelopePlan(study *study, flags envelopeFlags) (*envelopePlan, error) {
	x, err := study.contoured("envelope", "maps an inlet", flags.of)
	if err != nil {
		return nil, err
	}
	plan := &envelopePlan{study: study, x: x, air: study.air(), limitsOf: flags.limitsOf}
	s := &plan.settings
	var wrong []error
	note := func(err error) {
		if err != nil {
			wrong = append(wrong, err)
		}
	}
	s.LowMach, s.HighMach, err = rangeOr("--mach", flags.mach, study.machRange)
	note(err)
	low, high, err := rangeOr("--incidence-deg", flags.incidence, study.incidenceRange)
	note(err)
	s.LowIncidence, s.HighIncidence = low/degree, high/degree
	s.MachPoints, s.IncidencePoints, err = parsePoints(flags.points)
	note(err)
	s.Limits, err = study.limitsAt(&plan.limitsOf)
	note(err)
	plan.show, err = study.shown(flags.show)
	note(err)
	s.Jobs = a.jobs
	if a.jobs < 1 {
		note(&envelope.Invalid{What: fmt.Sprintf("--jobs %d: at least one", a.jobs)})
		s.Jobs = 1
	}
	if wrong == nil {
		note(s.Validate())
	}
	if wrong != nil {
		return nil, &usageError{strings.ReplaceAll(errors.Join(wrong...).Error(), "\n", "; "), "see rampwright envelope --help"}
	}
	plan.frozen = envelope.Freeze(study.problem, x, plan.air, mapTrace)
	s.Boundaries = plan.frozen.With(inlet.SearchTrace())
	return plan, nil
}

// closes refuses a geometry without a contour: there is nothing to fly.
func (s *study) closes(x []float64) error {
	if _, err := s.problem.Freeze(x).Contour(); err != nil {
		return &usageError{"the contour does not close: " + err.Error(), "choose other angles; flow tells how far the shocks hold"}
	}
	return nil
}

// air is that of the design point: its dynamic pressure where the brief states one.
func (s *study) air() envelope.Air {
	point := s.problem.Definition().Points[0]
	air := envelope.Air{Pressure: point.Pressure, Temperature: point.Temperature}
	if strings.HasPrefix(s.brief.Flight[0].Stated, "dynamic_pressure_kPa ") {
		air.Hold = envelope.HeldDynamicPressure
		air.DynamicPressure = s.problem.Definition().Gas.DynamicPressure(point.Pressure, point.Mach)
	}
	return air
}

// machRange spans from three quarters of the lowest Mach number of the brief to a
// seventh above its highest, in halves.
func (s *study) machRange() (low, high float64) {
	low, high = math.Inf(1), 0
	for _, p := range s.problem.Definition().Points {
		low, high = min(low, p.Mach), max(high, p.Mach)
	}
	low = max(math.Floor(1.5*low)/2, 1.5)
	return low, min(math.Ceil(16./7*high)/2, envelope.MostMach)
}

// incidenceRange spans 4 deg on each side of the incidences of the brief, deg.
func (s *study) incidenceRange() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, c := range s.brief.Flight {
		low, high = min(low, c.IncidenceDeg), max(high, c.IncidenceDeg)
	}
	return math.Floor(low) - 4, math.Ceil(high) + 4
}

// rangePattern is LOW..HIGH, or LOW-HIGH; either number may have a sign.
var rangePattern = regexp.MustCompile(`^(-?[0-9]+(?:\.[0-9]+)?)(?:\.\.|-)(-?[0-9]+(?:\.[0-9]+)?)$`)

// rangeOr reads a range of numbers, the one given where there is none.
func rangeOr(flag, text string, otherwise func() (low, high float64)) (low, high float64, err error) {
	if text == "" {
		low, high = otherwise()
		return low, high, nil
	}
	found := rangePattern.FindStringSubmatch(strings.TrimSpace(text))
	if found == nil {
		return 0, 0, fmt.Errorf("%s %q is not a range such as 3..7", flag, text)
	}
	low, lowErr := strconv.ParseFloat(found[1], 64)
	high, highErr := strconv.ParseFloat(found[2], 64)
	return low, high, errors.Join(lowErr, highErr)
}

// parsePoints reads NxM.
func parsePoints(text string) (n, m int, err error) {
	first, second, found := strings.Cut(text, "x")
	n, errN := strconv.Atoi(strings.TrimSpace(first))
	m, errM := strconv.Atoi(strings.TrimSpace(second))
	if !found || errN != nil || errM != nil || n < 2 || m < 2 || n > envelope.MostPoints || m > envelope.MostPoints {
		return 0, 0, fmt.Errorf("--points %q is not MACHxINCIDENCE such as 40x13, each within 2 to %d", text, envelope.MostPoints)
	}
	return n, m, nil
}

// limitsAt are the limits at one flight point, the design point where none is named,
// and at other places.
func (s *study) limitsAt(point *string, also ...string) ([]problems.Limit, error) {
	if *point == "" {
		*point = s.brief.Flight[0].Name
	}
	var list []problems.Limit
	for _, limit := range s.limits {
		if limit.Point == *point || slices.Contains(also, limit.Point) {
			list = append(list, limit)
		}
	}
	for _, c := range s.brief.Flight {
		if c.Name == *point {
			return list, nil
		}
	}
	return nil, fmt.Errorf("--limits-of %s: the brief has no such flight point", *point)
}

// shown are the conditions to draw: those given, or the flight points.
func (s *study) shown(texts []string) ([]envelope.Condition, error) {
	var list []envelope.Condition
	for _, text := range texts {
		first, second, _ := strings.Cut(text, ",")
		mach, errMach := strconv.ParseFloat(strings.TrimSpace(first), 64)
		incidence, errIncidence := strconv.ParseFloat(strings.TrimSpace(second), 64)
		ok := mach >= envelope.LeastMach && mach <= envelope.MostMach && math.Abs(incidence) <= envelope.MostIncidence
		if errMach != nil || errIncidence != nil || !ok {
			return nil, fmt.Errorf("--show %q is not MACH,INCIDENCE such as 6.5,0, Mach within %g to %g, incidence within %g deg", text, envelope.LeastMach, envelope.MostMach, envelope.MostIncidence)
		}
		list = append(list, envelope.Condition{Mach: mach, Incidence: incidence / degree})
	}
	if len(list) > mostShown {
		return nil, fmt.Errorf("--show is given %d times, at most %d", len(list), mostShown)
	}
	if list == nil {
		for _, p := range s.problem.Definition().Points {
			if len(list) < mostShown {
				list = append(list, envelope.Condition{Mach: p.Mach, Incidence: p.Incidence})
			}
		}
	}
	return list, nil
}

// mostShown is how many conditions are drawn.
const mostShown = 12

// showing returns an observer of the phases of a survey.
func (p *progress) showing() func(envelope.Event) {
	return func(e envelope.Event) {
		p.show(stage{phase: e.Phase, done: e.Done, total: e.Total, unit: e.Unit})
	}
}

// files are the tables and pictures of a map.
func (p *envelopePlan) files(document *report.EnvelopeDocument) ([]file, error) {
	files := []file{{"envelope.json", document.JSON()}, {"envelope.csv", document.CSV()}, {"boundary.csv", document.BoundaryCSV()}}
	for _, picture := range []struct {
		name string
		draw func() ([]byte, error)
	}{
		{"map.svg", document.Map},
		{"capture.svg", func() ([]byte, error) { return document.Against("capture", "capture, A0/Ac") }},
		{"drag.svg", func() ([]byte, error) { return document.Against("spillage_drag", "spillage drag over q0 Ac") }},
	} {
		data, err := picture.draw()
		if err != nil {
			return nil, err
		}
		files = append(files, file{picture.name, data})
	}
	for i, at := range p.show {
		whole, duct, err := p.waves(at)
		if err != nil {
			return nil, err
		}
		files = append(files, file{fmt.Sprintf("waves-%d.svg", i+1), whole}, file{fmt.Sprintf("duct-%d.svg", i+1), duct})
	}
	return files, nil
}

// envelopeFile reports whether a file is one the command writes.
func envelopeFile(name string) bool {
	switch name {
	case "envelope.json", "envelope.csv", "boundary.csv", "map.svg", "capture.svg", "drag.svg":
		return true
	}
	for k := range mostShown {
		if name == fmt.Sprintf("waves-%d.svg", k+1) || name == fmt.Sprintf("duct-%d.svg", k+1) {
			return true
		}
	}
	return false
}
