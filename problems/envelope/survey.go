package envelope

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"sync/atomic"

	"rampwright/problems"
)

// Settings choose the map. Mach and incidence have no default.
type Settings struct {
	LowMach, HighMach           float64
	LowIncidence, HighIncidence float64 // rad
	// MachPoints and IncidencePoints are the points of the grid, 2 to 400 each;
	// default 40 and 13.
	MachPoints, IncidencePoints int
	// Limits hold over the whole map; their points are not looked at, and limits on
	// the geometry are left out, since it does not change.
	Limits []problems.Limit
	// Tolerance of a boundary point, in Mach number and in degrees; default 1e-6.
	Tolerance float64
	// Flatness is how far a chord of a boundary may leave it, in cells of the grid;
	// default 0.02.
	Flatness float64
	// Boundaries is the model whose boundaries are traced, cheaper than that of the
	// grid and of the same quantities; nil takes the grid's.
	Boundaries Model
	// Jobs is how many conditions are computed side by side; it changes no result.
	// Default the number of processors.
	Jobs int
	// Observe is told how far the survey has come; nil tells nobody.
	Observe func(Event)
}

// Defaults of Settings.
const (
	DefaultMachPoints      = 40
	DefaultIncidencePoints = 13
	DefaultTolerance       = 1e-6
	DefaultFlatness        = 0.02
	MostPoints             = 400
	LeastMach              = 1.05
	MostMach               = 12.0
	MostIncidence          = 20.0 // deg
)

func (s Settings) withDefaults() Settings {
	if s.MachPoints == 0 {
		s.MachPoints = DefaultMachPoints
	}
	if s.IncidencePoints == 0 {
		s.IncidencePoints = DefaultIncidencePoints
	}
	if s.Tolerance == 0 {
		s.Tolerance = DefaultTolerance
	}
	if s.Flatness == 0 {
		s.Flatness = DefaultFlatness
	}
	if s.Jobs == 0 {
		s.Jobs = runtime.NumCPU()
	}
	return s
}

// Invalid is a setting out of its range.
type Invalid struct {
	What string
}

func (e *Invalid) Error() string { return e.What }

// faults gathers what is wrong with settings, each an *Invalid.
type faults []error

func (f *faults) require(ok bool, format string, args ...any) {
	if !ok {
		*f = append(*f, &Invalid{fmt.Sprintf(format, args...)})
	}
}

// Validate reports, all at once, every setting out of its range, each an *Invalid.
func (s Settings) Validate() error {
	s = s.withDefaults()
	var wrong faults
	wrong.require(min(s.LowMach, s.HighMach) >= LeastMach && max(s.LowMach, s.HighMach) <= MostMach, "Mach numbers %g to %g are not within %g to %g", s.LowMach, s.HighMach, LeastMach, MostMach)
	wrong.require(s.LowMach < s.HighMach, "the range of Mach numbers %g to %g has no length", s.LowMach, s.HighMach)
	low, high := s.LowIncidence/radian, s.HighIncidence/radian
	wrong.require(math.Max(math.Abs(low), math.Abs(high)) <= MostIncidence+1e-9, "incidences %.6g to %.6g deg are not within %g to %g deg", low, high, -MostIncidence, MostIncidence)
	wrong.require(low < high, "the range of incidences %.6g to %.6g deg has no length", low, high)
	wrong.require(s.MachPoints >= 2 && s.MachPoints <= MostPoints, "%d Mach numbers are not within 2 to %d", s.MachPoints, MostPoints)
	wrong.require(s.IncidencePoints >= 2 && s.IncidencePoints <= MostPoints, "%d incidences are not within 2 to %d", s.IncidencePoints, MostPoints)
	wrong.require(s.Tolerance >= 1e-10 && s.Tolerance <= 0.1, "boundary tolerance %g is not within 1e-10 to 0.1", s.Tolerance)
	wrong.require(s.Flatness >= 1e-4 && s.Flatness <= 1, "flatness %g is not within 1e-4 to 1", s.Flatness)
	wrong.require(s.Jobs >= 1, "%d jobs: at least one", s.Jobs)
	return errors.Join(wrong...)
}

// Survey is a finished map.
type Survey struct {
	Settings Settings // with defaults filled in
	// Samples holds the grid, by rising Mach number and then rising incidence.
	Samples []Sample
	Lines   []Line
	// Refinements counts the evaluations spent on boundaries, beside the grid's.
	Refinements int
}

// At is the sample of Mach number i and incidence j of the grid.
func (s *Survey) At(i, j int) *Sample { return &s.Samples[i*s.Settings.IncidencePoints+j] }

// survey is a map under way.
type survey struct {
	model       Model
	rough       Model // of boundaries
	quantities  []problems.Quantity
	settings    Settings
	step        Condition // of the grid
	limits      []margin  // one a side
	swallowed   margin
	starting    margin
	evaluations atomic.Int64
}

// Run surveys a model: the grid, then every boundary between its points.
func Run(ctx context.Context, model Model, settings Settings) (*Survey, error) {
	if err := settings.Validate(); err != nil {
		return nil, err
	}
	s := newSurvey(model, settings.withDefaults())
	samples, err := s.grid(ctx, "map", s.model)
	if err != nil {
		return nil, err
	}
	nodes := samples
	if settings.Boundaries != nil {
		if nodes, err = s.grid(ctx, "map of boundaries", s.rough); err != nil {
			return nil, err
		}
	}
	lines, err := s.trace(ctx, nodes)
	if err != nil {
		return nil, err
	}
	return &Survey{Settings: s.settings, Samples: samples, Lines: lines, Refinements: int(s.evaluations.Load())}, nil
}

// grid evaluates a model at every point of the grid.
func (s *survey) grid(ctx context.Context, phase string, model Model) ([]Sample, error) {
	samples := make([]Sample, s.settings.MachPoints*s.settings.IncidencePoints)
	return samples, s.each(ctx, phase, "condition", len(samples), func(i int) (err error) {
		node := place{float64(i / s.settings.IncidencePoints), float64(i % s.settings.IncidencePoints)}
		samples[i], err = s.sample(ctx, model, s.condition(node))
		return err
	})
}

func newSurvey(model Model, settings Settings) *survey {
	s := &survey{model: model, quantities: model.Quantities(), settings: settings}
	if s.rough = settings.Boundaries; s.rough == nil {
		s.rough = model
	}
	s.step = Condition{
		Mach:      (settings.HighMach - settings.LowMach) / float64(settings.MachPoints-1),
		Incidence: (settings.HighIncidence - settings.LowIncidence) / float64(settings.IncidencePoints-1),
	}
	s.limits = sides(s.quantities, settings.Limits)
	s.swallowed = marginOf(s.quantities, clearance, 0, math.Inf(1))
	s.starting = marginOf(s.quantities, overStart, math.Inf(-1), 1)
	return s
}

// condition is the place of the map in its own units; the ends are met exactly.
func (s *survey) condition(p place) Condition {
	c := Condition{s.settings.LowMach + p.x*s.step.Mach, s.settings.LowIncidence + p.y*s.step.Incidence}
	if p.x == float64(s.settings.MachPoints-1) {
		c.Mach = s.settings.HighMach
	}
	if p.y == float64(s.settings.IncidencePoints-1) {
		c.Incidence = s.settings.HighIncidence
	}
	if math.Abs(c.Incidence) < 1e-12*(s.settings.HighIncidence-s.settings.LowIncidence) {
		c.Incidence = 0
	}
	return c
}

// each shares tasks out among the workers and tells the observer.
func (s *survey) each(ctx context.Context, phase, unit string, n int, task func(i int) error) error {
	done := 0
	return each(ctx, s.settings.Jobs, n, func() {
		if done++; s.settings.Observe != nil {
			s.settings.Observe(Event{phase, unit, done, n})
		}
	}, task)
}
