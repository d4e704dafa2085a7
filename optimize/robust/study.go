package robust

import (
	"context"
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/surrogate/doe"
)

// span is the half width of the box the offsets fill, in deviations.
const span = problems.TruncatedAt

// Task is one design whose tolerances are studied.
type Task struct {
	Problem problems.Perturbable
	X       []float64 // the design, one value a variable
	Limits  []problems.Limit
	// Fitted lists quantities that get a surrogate besides the limited ones.
	Fitted []int
}

// Study is what tolerances do to one design.
type Study struct {
	Settings  Settings // with the defaults filled in
	Scatter   []problems.Scatter
	Responses []Response
	Nominal   []float64 // by quantity: the design as drawn; +Inf where it does not apply
	Draws     *Draws
	// Exact describes each response over the exact draws, Sensitivity by input.
	Exact       []Summary
	Sensitivity [][]Index
	// Fitted describes over the same draws the responses that have surrogates for
	// every member the draws move; Mean is NaN for the others.
	Fitted []Summary
	Fits   []Fit

	Limits         []Probability // by the exact model
	Joint          Probability
	Margins        []Summary     // of each limit, by the exact model
	NominalMargins []float64     // as drawn
	FittedLimits   []Probability // by the surrogates, which have an answer everywhere
	FittedJoint    Probability
	FittedMargins  []Summary
	// Reliability is the nearest way to break each limit, on the surrogates; nil for
	// a limit nothing moves, or where none was found.
	Reliability []*Reliability
	Evaluations int // exact, of all purposes
}

// Run studies the tolerances of a design. The error reports a task or setting
// that makes no sense, a model that could not be run, or a context that ended.
func Run(ctx context.Context, task Task, settings Settings) (*Study, error) {
	b := &built{problem: task.Problem, x: task.X, scatter: task.Problem.Scatter()}
	quantities := task.Problem.Quantities()
	b.width = len(quantities)
	if len(b.scatter) == 0 {
		return nil, ErrNothingScatters
	}
	settings = settings.WithDefaults(len(b.scatter))
	if err := settings.Validate(len(b.scatter)); err != nil {
		return nil, err
	}
	b.observe = settings.Observe
	limits, err := limitedBy(quantities, task.Limits)
	if err != nil {
		return nil, err
	}
	s := &Study{Settings: settings, Scatter: b.scatter, Responses: Responses(quantities)}
	if err := s.draw(ctx, b); err != nil {
		return nil, err
	}
	s.Limits, s.Joint = passes(limits, s.Draws.Values, s.Nominal)
	s.Margins = margins(limits, s.Draws.Values, s.Nominal)
	for i := range limits {
		s.NominalMargins = append(s.NominalMargins, limits[i].margin(s.Nominal))
	}
	if err := s.analyse(ctx, b); err != nil {
		return nil, err
	}
	return s, s.fit(ctx, b, needed(limits, task.Fitted), limits)
}

// draw evaluates the design as drawn and the exact draws.
func (s *Study) draw(ctx context.Context, b *built) error {
	asDrawn, err := b.evaluate(ctx, "", [][]float64{make([]float64, len(b.scatter))}, 1)
	if err != nil {
		return err
	}
	s.Nominal = asDrawn.Values[0]
	deviates := drawn(s.Settings.Draws, len(b.scatter), doe.Stream(s.Settings.Seed, drawsStream))
	s.Draws, err = b.evaluate(ctx, "draws", deviates, s.Settings.Jobs)
	s.Evaluations += 1 + len(deviates)
	return err
}

// drawsStream names the stream of the exact draws.
const drawsStream = "tolerance draws"

// analyse describes every response over the exact draws, with its sensitivity.
func (s *Study) analyse(ctx context.Context, b *built) error {
	r, err := b.replace(ctx, s.Draws, s.Settings.Replaced, s.Settings.Jobs)
	if err != nil {
		return err
	}
	s.Evaluations += s.Settings.Replaced * len(b.scatter)
	s.Exact = make([]Summary, len(s.Responses))
	s.Sensitivity = make([][]Index, len(s.Responses))
	share(s.Settings.Jobs, len(s.Responses), nil, func() func(i int) {
		return func(i int) {
			response := &s.Responses[i]
			s.Exact[i] = summarise(response.column(s.Draws.Values), response.Value(s.Nominal))
			s.Sensitivity[i] = r.indices(response)
		}
	})
	return nil
}

// fit fits the surrogates and describes the same draws by them.
func (s *Study) fit(ctx context.Context, b *built, quantities []int, limits []limited) error {
	samples, err := b.sampled(ctx, s.Settings)
	if err != nil {
		return err
	}
	s.Evaluations += s.Settings.Samples
	if s.Fits, err = b.fit(ctx, samples, quantities, s.Nominal, s.Settings); err != nil {
		return err
	}
	rows := predict(s.Fits, s.Draws.Deviates, quantities, s.Nominal, s.Settings.Jobs)
	s.FittedLimits, s.FittedJoint = passes(limits, rows, s.Nominal)
	s.FittedMargins = margins(limits, rows, s.Nominal)
	s.Reliability = make([]*Reliability, len(limits))
	for i := range limits {
		s.Reliability[i] = reliability(&limits[i], s.Fits, len(b.scatter))
	}
	s.Fitted = make([]Summary, len(s.Responses))
	for i := range s.Responses {
		response := &s.Responses[i]
		s.Fitted[i] = summarise(response.column(rows), response.Value(s.Nominal))
	}
	return nil
}

// needed lists the quantities that get surrogates, ascending.
func needed(limits []limited, more []int) []int {
	list := slices.Clone(more)
	for i := range limits {
		for k := range limits[i].rows {
			list = append(list, limits[i].rows[k].Index)
		}
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// Share returns how often a test of the values holds over the draws.
func (s *Study) Share(holds func(values []float64) bool) Probability {
	n := 0
	for _, row := range s.Draws.Values {
		if holds(row) {
			n++
		}
	}
	return NewProbability(n, len(s.Draws.Values))
}

// HasFit reports whether every member of a response that the draws move has a
// surrogate.
func (s *Study) HasFit(response int) bool { return !math.IsNaN(s.Fitted[response].Mean) }
