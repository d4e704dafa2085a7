package envelope

import (
	"context"
	"errors"
	"math"
	"runtime"

	"rampwright/problems"
)

// Mover is an inlet with one part that turns on a hinge. It is safe for concurrent
// use.
type Mover interface {
	// Quantities lists what At fills, in order: of the condition, then of the geometry.
	Quantities() []problems.Quantity
	// At fills dst for the part at an angle, rad; see Model.
	At(ctx context.Context, angle float64, at Condition, dst *problems.Evaluation) (Outcome, error)
}

// ScheduleSettings choose a schedule: the angle of the part at each Mach number that
// keeps every limit and, of those, has the best aim.
type ScheduleSettings struct {
	LowMach, HighMach float64
	Points            int     // Mach numbers, 2 to 400; default 21
	Incidence         float64 // rad
	// LowAngle and HighAngle are the hinge stops, rad.
	LowAngle, HighAngle float64
	// Limits hold at every Mach number; their points are not looked at.
	Limits []problems.Limit
	// Aim is what is driven up, or down where Highest is false; NaN where it is not
	// known.
	Aim     func(*problems.Evaluation) float64
	Highest bool
	// Angles is how many positions are tried between the stops before the best of
	// them is refined, 5 to 1000; default 41. Two ranges of angles that keep the limits
	// are told apart where a position tried lies between them.
	Angles    int
	Tolerance float64 // of an angle, rad; default 1e-5 deg
	Jobs      int     // default the number of processors
	Observe   func(Event)
}

// Defaults of ScheduleSettings.
const (
	DefaultSchedulePoints = 21
	DefaultAngles         = 41
	DefaultAngleTolerance = 1e-5 * radian
)

func (s ScheduleSettings) withDefaults() ScheduleSettings {
	if s.Points == 0 {
		s.Points = DefaultSchedulePoints
	}
	if s.Angles == 0 {
		s.Angles = DefaultAngles
	}
	if s.Tolerance == 0 {
		s.Tolerance = DefaultAngleTolerance
	}
	if s.Jobs == 0 {
		s.Jobs = runtime.NumCPU()
	}
	return s
}

// Validate reports, all at once, every setting out of its range, each an *Invalid.
func (s ScheduleSettings) Validate() error {
	s = s.withDefaults()
	var wrong faults
	wrong.require(min(s.LowMach, s.HighMach) >= LeastMach && max(s.LowMach, s.HighMach) <= MostMach, "Mach numbers %g to %g are not within %g to %g", s.LowMach, s.HighMach, LeastMach, MostMach)
	wrong.require(s.LowMach < s.HighMach, "the range of Mach numbers %g to %g has no length", s.LowMach, s.HighMach)
	wrong.require(math.Abs(s.Incidence/radian) <= MostIncidence, "incidence %.6g deg is not within %g deg", s.Incidence/radian, MostIncidence)
	wrong.require(s.LowAngle < s.HighAngle, "hinge stops %.6g to %.6g deg have no room between them", s.LowAngle/radian, s.HighAngle/radian)
	wrong.require(s.LowAngle > -math.Pi/4 && s.HighAngle < math.Pi/4, "hinge stops %.6g to %.6g deg are not within -45 to 45 deg", s.LowAngle/radian, s.HighAngle/radian)
	wrong.require(s.Points >= 2 && s.Points <= MostPoints, "%d Mach numbers are not within 2 to %d", s.Points, MostPoints)
	wrong.require(s.Angles >= 5 && s.Angles <= 1000, "%d positions are not within 5 to 1000", s.Angles)
	wrong.require(s.Tolerance >= 1e-9 && s.Tolerance <= 0.01, "angle tolerance %g rad is not within 1e-9 to 0.01", s.Tolerance)
	wrong.require(s.Jobs >= 1, "%d jobs: at least one", s.Jobs)
	wrong.require(s.Aim != nil, "a schedule needs an aim")
	return errors.Join(wrong...)
}

// Missed is a limit that does not hold.
type Missed struct {
	Limit    string
	Quantity string
	Margin   float64 // negative, in the unit of the quantity; NaN where it has no value
	Reason   error   // why it has none
}

// Position is the part at one angle.
type Position struct {
	Angle float64 // rad
	Outcome
	Aim    float64 // NaN where not known
	Missed []Missed
	Exact  *problems.Evaluation

	violation float64 // sum of scaled violations
}

// Kept reports whether every limit holds.
func (p *Position) Kept() bool { return len(p.Missed) == 0 && !math.IsNaN(p.Aim) }

// ScheduleRow is the best position at one Mach number: of those that keep every
// limit the one of best aim, or else the one that misses them least.
type ScheduleRow struct {
	Mach float64
	Best Position
	// Low and High bound the angles around the best that keep every limit, rad; NaN
	// where none does.
	Low, High float64
}

// Schedule is a finished schedule.
type Schedule struct {
	Settings    ScheduleSettings // with defaults filled in
	Rows        []ScheduleRow
	Evaluations int
}

// Plan finds the schedule of a moving part. Each Mach number stands for itself: the
// schedule may jump where another range of angles becomes the better one.
func Plan(ctx context.Context, mover Mover, settings ScheduleSettings) (*Schedule, error) {
	if err := settings.Validate(); err != nil {
		return nil, err
	}
	settings = settings.withDefaults()
	p := &planner{mover: mover, quantities: mover.Quantities(), settings: settings, limits: sides(mover.Quantities(), settings.Limits)}
	rows := make([]ScheduleRow, settings.Points)
	spent := make([]int, settings.Points)
	done := 0
	err := each(ctx, settings.Jobs, settings.Points, func() {
		if done++; settings.Observe != nil {
			settings.Observe(Event{"schedule", "Mach number", done, settings.Points})
		}
	}, func(i int) (err error) {
		mach := settings.LowMach + float64(i)/float64(settings.Points-1)*(settings.HighMach-settings.LowMach)
		s := &search{planner: p, ctx: ctx, at: Condition{mach, settings.Incidence}}
		rows[i], err = s.run()
		spent[i] = s.spent
		return err
	})
	if err != nil {
		return nil, err
	}
	schedule := &Schedule{Settings: settings, Rows: rows}
	for _, n := range spent {
		schedule.Evaluations += n
	}
	return schedule, nil
}

// planner is what the searches at all Mach numbers share.
type planner struct {
	mover      Mover
	quantities []problems.Quantity
	settings   ScheduleSettings
	limits     []margin
}

// search looks for the best position at one Mach number.
type search struct {
	*planner
	ctx   context.Context
	at    Condition
	spent int
}

// run tries positions between the stops, refines the best of them between its
// neighbours, and finds how far it may move.
func (s *search) run() (ScheduleRow, error) {
	n := s.settings.Angles
	tried := make([]Position, n)
	best := 0
	for i := range tried {
		var err error
		if tried[i], err = s.position(s.angle(i)); err != nil {
			return ScheduleRow{}, err
		}
		if s.better(&tried[i], &tried[best]) {
			best = i
		}
	}
	row := ScheduleRow{Mach: s.at.Mach, Low: math.NaN(), High: math.NaN()}
	refined, err := s.refine(tried[best], s.angle(max(0, best-1)), s.angle(min(n-1, best+1)))
	if err != nil {
		return row, err
	}
	row.Best = refined
	if !refined.Kept() {
		return row, nil
	}
	if row.Low, err = s.reach(&refined, tried, best, -1); err != nil {
		return row, err
	}
	row.High, err = s.reach(&refined, tried, best, 1)
	return row, err
}

// angle is the i-th position tried; the stops are met exactly.
func (s *search) angle(i int) float64 {
	if i == s.settings.Angles-1 {
		return s.settings.HighAngle
	}
	return s.settings.LowAngle + float64(i)/float64(s.settings.Angles-1)*(s.settings.HighAngle-s.settings.LowAngle)
}

// unknownViolation is what a limit without a value counts for, scaled: more than any
// plausible miss.
const unknownViolation = 10

// position computes the part at one angle.
func (s *search) position(angle float64) (Position, error) {
	s.spent++
	p := Position{Angle: angle, Exact: problems.NewEvaluation(len(s.quantities))}
	var err error
	if p.Outcome, err = s.mover.At(s.ctx, angle, s.at, p.Exact); err != nil {
		return p, err
	}
	p.Aim = s.settings.Aim(p.Exact)
	for i := range s.limits {
		m := &s.limits[i]
		if !m.missed(p.Exact) {
			continue
		}
		miss := Missed{Limit: m.name(), Quantity: m.quantity, Margin: m.value(p.Exact)}
		if math.IsNaN(miss.Margin) {
			miss.Reason = m.reason(p.Exact)
			p.violation += unknownViolation
		} else {
			p.violation += -miss.Margin / m.scale()
		}
		p.Missed = append(p.Missed, miss)
	}
	if math.IsNaN(p.Aim) {
		p.violation += unknownViolation
	}
	return p, nil
}

// better orders positions: one that keeps every limit before one that does not, then
// by aim or by violation.
func (s *search) better(p, q *Position) bool {
	switch {
	case p.Kept() != q.Kept():
		return p.Kept()
	case !p.Kept():
		return p.violation < q.violation
	case s.settings.Highest:
		return p.Aim > q.Aim
	}
	return p.Aim < q.Aim
}

// refine narrows the interval around a best position by the golden section (Kiefer,
// Proc. Am. Math. Soc. 4, 1953; from memory) in the order of positions, which has one
// peak where the aim rises toward a limit and falls beyond it.
func (s *search) refine(best Position, low, high float64) (Position, error) {
	const section = 0.6180339887498949 // (sqrt(5) - 1)/2
	probe := func(angle float64) (Position, error) {
		p, err := s.position(angle)
		if err == nil && s.better(&p, &best) {
			best = p
		}
		return p, err
	}
	left, err := probe(high - section*(high-low))
	if err != nil {
		return best, err
	}
	right, err := probe(low + section*(high-low))
	for err == nil && high-low > s.settings.Tolerance {
		if s.better(&right, &left) {
			low, left = left.Angle, right
			right, err = probe(low + section*(high-low))
		} else {
			high, right = right.Angle, left
			left, err = probe(high - section*(high-low))
		}
	}
	return best, err
}

// reach is how far the best position may move to one side with every limit kept: by
// the positions tried as long as they keep them, then by bisection.
func (s *search) reach(best *Position, tried []Position, from, side int) (float64, error) {
	kept := best.Angle
	for i := from; i >= 0 && i < len(tried); i += side {
		p := &tried[i]
		if float64(side)*(p.Angle-kept) <= 0 {
			continue
		}
		if p.Kept() {
			kept = p.Angle
			continue
		}
		lost := p.Angle
		for math.Abs(lost-kept) > s.settings.Tolerance {
			middle, err := s.position((kept + lost) / 2)
			if err != nil {
				return kept, err
			}
			if middle.Kept() {
				kept = middle.Angle
			} else {
				lost = middle.Angle
			}
		}
		break
	}
	return kept, nil
}
