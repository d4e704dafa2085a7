package report

import (
	"math"

	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// Study is a finished design with everything a document tells of it.
type Study struct {
	Problem   *inlet.Problem   // nil where the problem is no inlet
	Model     problems.Problem // the problem that is no inlet; else nil
	Aim       problems.Aim
	Agreement float64 // largest scaled error of the surrogates asked for; 0 means the default of optimize
	Result    *optimize.Result
	Exact     *optimize.ExactSearch // the yardstick; nil when it was not run
	Explained *optimize.Explanation // why nothing holds every limit; nil where something does
	Rounded   *optimize.Rounded     // nearest design in tenths of a degree; nil when not looked for
	Plays     []optimize.Play       // of the variables at a loss of PlayLoss; nil when not measured
	Flow      *inlet.Flow           // exact flow of Result.Best; nil where the problem is no inlet
	// Moved marks the quantities that a tolerance of the brief moves; nil where it
	// states none.
	Moved []bool
	// Widest is the widest range the brief may give a variable; nil where nothing
	// bounds it.
	Widest func(problems.Variable) (low, high float64)
	// Confidence sets Result.Best beside the design that knows no tolerances; nil
	// where none was asked for.
	Confidence *Confidence
}

// DesignDocument is a design with its evidence.
type DesignDocument struct {
	Format      int         `json:"format"`
	Program     string      `json:"program"`
	Title       string      `json:"title"`
	Seed        int64       `json:"seed"`
	BriefHash   string      `json:"brief_hash"`
	Status      string      `json:"status"`
	Why         string      `json:"why"` // how the search ended
	Best        Best        `json:"best"`
	Candidates  []Candidate `json:"candidates"` // the best first
	Fits        []Fit       `json:"fits"`
	ExactSearch ExactSearch `json:"exact_search"`
	Evaluations Evaluations `json:"evaluations"`
	Conflicts   []Conflict  `json:"conflicts"`
	Relaxation  []Loosened  `json:"relaxation"`
	Rounded     *Rounded    `json:"rounded"`
	Play        []Play      `json:"play"`
	Notes       []string    `json:"notes"`
	History     []Step      `json:"history"`              // after the samples, then after every round of infill
	Inlet       *Shape      `json:"inlet"`                // null where the problem is no inlet
	Points      []Point     `json:"points"`               // stations; quantities are in Best
	Confidence  *Confidence `json:"confidence,omitempty"` // where the brief asks for one
	Cautions    []Caution   `json:"cautions"`
	Assumptions []string    `json:"assumptions"`

	study    Study
	readings []reading
}

// Best is the design the search ended on. Objects by point hold the flight
// points in order, then the geometry.
type Best struct {
	Candidate
	Exact     Object[Object[Number]]         `json:"exact"`
	Members   Object[Object[Object[Number]]] `json:"members"`
	Missing   Object[Object[string]]         `json:"missing"`
	Predicted Object[Object[Number]]         `json:"predicted"` // of the quantities with a surrogate
	Error     Object[Object[Number]]         `json:"error"`     // predicted less exact
	Limits    []Limit                        `json:"limits"`
	Traced    []TracedPoint                  `json:"traced,omitempty"`
}

// Candidate is one design in short.
type Candidate struct {
	Variables Object[Number] `json:"variables"`
	Aim       Aim            `json:"aim"`
	Feasible  bool           `json:"feasible"`
	Violation Number         `json:"violation"` // sum of scaled violations
	Evidence  Evidence       `json:"evidence"`
}

// Evidence is how far a design can be believed.
type Evidence struct {
	RouteGap       Number         `json:"route_gap"`       // largest relative difference of the exact routes
	SurrogateError Number         `json:"surrogate_error"` // largest scaled error over aim and limits
	Missing        Object[string] `json:"missing,omitzero"`
}

// Aim is what the search drove, and what became of it.
type Aim struct {
	Text      string         `json:"text"`
	Where     string         `json:"where"`
	Highest   bool           `json:"highest"`
	Exact     Number         `json:"exact"`
	Predicted Number         `json:"predicted"`
	Missing   Object[string] `json:"missing,omitzero"`
}

// Limit is one limit on one response, judged on exact values.
type Limit struct {
	Quantity string  `json:"quantity"`
	Member   string  `json:"member"`
	At       string  `json:"at"`
	Low      Number  `json:"low"`
	High     Number  `json:"high"`
	Value    Number  `json:"value"`
	Margin   Number  `json:"margin"`
	Met      bool    `json:"met"`
	Active   bool    `json:"active"`
	Price    Number  `json:"price"`  // gain of the aim for each unit the limit is loosened
	Drives   *string `json:"drives"` // the variable the limit holds back most; null without a price
	// PriceRange is by how much the limit can be loosened, in its unit, before the
	// gain leaves the price, to first order, and PriceEnd what ends it; null without
	// a price.
	PriceRange Number         `json:"price_range"`
	PriceEnd   *string        `json:"price_end"`
	Kind       string         `json:"kind"`
	Missing    Object[string] `json:"missing,omitzero"`
}

// Fit is the surrogate of one quantity.
type Fit struct {
	Quantity    string `json:"quantity"`
	Member      string `json:"member"`
	At          string `json:"at"`
	Kind        string `json:"kind"` // empty where there is no surrogate
	Transform   string `json:"transform"`
	Description string `json:"description"`
	Samples     int    `json:"samples"`
	Q2          Number `json:"q2"`   // by leave-one-out
	RMSE        Number `json:"rmse"` // by leave-one-out, in the quantity's unit
	Error       string `json:"error,omitempty"`
}

// ExactSearch is the optimum found on the exact model alone.
type ExactSearch struct {
	Status      string         `json:"status"` // "found", "infeasible", "not_run"
	Aim         Number         `json:"aim"`
	Variables   Object[Number] `json:"variables"`
	Evaluations int            `json:"evaluations"`
	Ratio       Number         `json:"ratio"` // of the aims, at most 1 unless the design is better
	Missing     Object[string] `json:"missing,omitzero"`
}

// Evaluations counts model runs by purpose.
type Evaluations struct {
	Samples   int `json:"samples"`
	Infill    int `json:"infill"`
	Rounds    int `json:"rounds"` // of infill, each evaluated side by side
	Verify    int `json:"verify"`
	Surrogate int `json:"surrogate"`
}

// Step is one line of the history.
type Step struct {
	Evaluations int    `json:"evaluations"`
	Aim         Number `json:"aim"`
	Violation   Number `json:"violation"`
	Error       Number `json:"error"`
	Radius      Number `json:"radius"`
}

func newStep(s optimize.Step) Step {
	return Step{s.Evaluations, Number(s.Aim), Number(s.Violation), Number(s.Error), Number(s.Radius)}
}

// NewDesign describes a finished design.
func NewDesign(head Head, study Study) *DesignDocument {
	if study.Agreement == 0 {
		study.Agreement = optimize.Settings{}.WithDefaults(0).Agreement
	}
	result := study.Result
	d := &DesignDocument{
		Format: format, Program: head.Program, Title: head.Title, Seed: head.Seed, BriefHash: head.BriefHash,
		Status: result.Status.String(), Why: result.Why,
		Candidates: []Candidate{}, Fits: []Fit{}, History: []Step{}, Conflicts: study.conflicts(), Relaxation: study.relaxation(),
		Rounded: study.rounded(), Play: study.plays(), Notes: []string{},
		Evaluations: Evaluations(result.Counts),
		study:       study, readings: readings(study.model().Quantities(), result.Best.Exact),
	}
	d.inletParts(head)
	for i := range result.Candidates {
		d.Candidates = append(d.Candidates, study.candidate(&result.Candidates[i]))
	}
	for i := range result.Fits {
		d.Fits = append(d.Fits, study.fit(&result.Fits[i]))
	}
	if result.Sampled.Evaluations > 0 {
		d.History = append(d.History, newStep(result.Sampled))
	}
	for _, s := range result.History {
		d.History = append(d.History, newStep(s))
	}
	d.Best = study.best(d.readings)
	d.ExactSearch = study.exactSearch()
	d.Confidence = study.Confidence
	d.Cautions = study.cautions()
	if result.Best.Assessment.Feasible {
		d.Notes = study.notes()
	}
	return d
}

// JSON returns the document as indented JSON.
func (d *DesignDocument) JSON() []byte { return document(d) }

// variables names the values of x.
func (s *Study) variables(x []float64) Object[Number] {
	object := Object[Number]{}
	if x == nil {
		return object
	}
	for i, v := range s.model().Variables() {
		object = append(object, Field[Number]{v.Name, Number(x[i])})
	}
	return object
}

func (s *Study) candidate(c *optimize.Candidate) Candidate {
	candidate := Candidate{
		Variables: s.variables(c.X), Feasible: c.Assessment.Feasible, Violation: Number(c.Assessment.Violation),
		Aim: Aim{
			Text: s.Aim.Text, Where: s.Aim.Where, Highest: s.Aim.Highest,
			Exact: Number(c.AimExact), Predicted: Number(c.AimPredicted),
		},
		Evidence: Evidence{RouteGap: Number(c.RouteGap), SurrogateError: Number(c.SurrogateError)},
	}
	candidate.Aim.Missing = whyNull(
		nullable{"exact", c.AimExact, "a quantity of the aim has no value"},
		nullable{"predicted", c.AimPredicted, unforeseen})
	gap := "the problem has no second exact route"
	switch {
	case c.Repetition == optimize.Same:
		gap = "the problem has no second exact route; run again it gave the same values to the last bit"
	case c.Repetition == optimize.Differs:
		gap = "the problem has no second exact route; run again it gave other values"
	case math.IsInf(c.RouteGap, 1):
		gap = "only one of the exact routes has a value"
	}
	candidate.Evidence.Missing = whyNull(
		nullable{"route_gap", c.RouteGap, gap},
		nullable{"surrogate_error", c.SurrogateError, unforeseen})
	return candidate
}

const unforeseen = "no surrogate predicted this design"

// nullable is a number with the reason it is null if it is not finite.
type nullable struct {
	name   string
	value  float64
	reason string
}

// whyNull lists the reasons of those that are null, nil when none is.
func whyNull(list ...nullable) Object[string] {
	var object Object[string]
	for _, n := range list {
		if !finite(n.value) {
			object = append(object, Field[string]{n.name, n.reason})
		}
	}
	return object
}

func (s *Study) best(list []reading) Best {
	c := &s.Result.Best
	b := Best{
		Candidate: s.candidate(c), Limits: []Limit{},
		Exact: Object[Object[Number]]{}, Members: Object[Object[Object[Number]]]{}, Missing: Object[Object[string]]{},
		Predicted: Object[Object[Number]]{}, Error: Object[Object[Number]]{}, Traced: s.tracedPoints(),
	}
	predicted := s.predicted(list)
	for _, point := range s.points() {
		here := at(list, point)
		b.Exact = append(b.Exact, Field[Object[Number]]{point, values(here)})
		b.Members = append(b.Members, Field[Object[Object[Number]]]{point, members(here)})
		b.Missing = append(b.Missing, Field[Object[string]]{point, missing(here)})
		foreseen := at(predicted, point)
		if len(foreseen) == 0 {
			continue
		}
		errors := Object[Number]{}
		for _, p := range foreseen {
			errors = append(errors, Field[Number]{p.name, Number(p.value - find(list, p.name, point).value)})
		}
		b.Predicted = append(b.Predicted, Field[Object[Number]]{point, values(foreseen)})
		b.Error = append(b.Error, Field[Object[Number]]{point, errors})
	}
	for i := range c.Assessment.Checks {
		b.Limits = append(b.Limits, s.limit(&c.Assessment.Checks[i]))
	}
	return b
}

// predicted lists what the surrogates said of the best design: of a group, the
// least of the members that have one. It is empty for a design that no surrogate
// was asked about.
func (s *Study) predicted(exact []reading) []reading {
	if s.Result.Best.Predicted == nil {
		return nil
	}
	fitted := make([]bool, len(s.model().Quantities()))
	for i := range s.Result.Fits {
		fitted[s.Result.Fits[i].Quantity] = true
	}
	index, list := 0, []reading(nil)
	for _, r := range exact {
		width := max(1, len(r.group))
		p := reading{name: r.name, point: r.point, unit: r.unit, value: math.NaN()}
		asked := false
		for i := index; i < index+width; i++ {
			if v := s.Result.Best.Predicted[i]; fitted[i] && finite(v) {
				asked = true
				if math.IsNaN(p.value) || v < p.value {
					p.value = v
				}
			}
		}
		index += width
		if asked {
			list = append(list, p)
		}
	}
	return list
}

func (s *Study) limit(c *constraints.Check) Limit {
	l := Limit{
		Quantity: c.Quantity.Name, Member: c.Quantity.Member, At: c.Quantity.Point,
		Low: Number(c.Low), High: Number(c.High), Value: Number(c.Value), Margin: Number(c.Margin),
		Met: c.Met, Active: c.Active, Price: Number(c.Price), PriceRange: Number(c.PriceRange), Kind: c.Kind.String(),
	}
	if c.Price > 0 {
		l.Drives = &s.model().Variables()[c.Drives].Name
		if end := s.priceEnd(c); end != "" {
			l.PriceEnd = &end
		}
	}
	if c.Missing != nil {
		l.Missing = Object[string]{{"value", c.Missing.Error()}}
	}
	return l
}

func (s *Study) fit(f *optimize.Fit) Fit {
	q := s.model().Quantities()[f.Quantity]
	fit := Fit{
		Quantity: q.Name, Member: q.Member, At: q.Point, Samples: f.Samples,
		Q2: Number(math.NaN()), RMSE: Number(math.NaN()),
	}
	switch {
	case f.Err != nil:
		fit.Error = f.Err.Error()
	case f.Choice.Fitted == nil:
		fit.Error = "not applicable at any sample"
	default:
		fit.Kind, fit.Transform, fit.Description = f.Choice.Kind, f.Choice.Transform.String(), f.Choice.Describe()
		fit.Q2, fit.RMSE = Number(f.Choice.Quality.Q2), Number(f.Choice.Quality.RMSE)
	}
	return fit
}

func (s *Study) exactSearch() ExactSearch {
	none := Number(math.NaN())
	if s.Exact == nil {
		return ExactSearch{
			Status: "not_run", Aim: none, Variables: Object[Number]{}, Ratio: none,
			Missing: Object[string]{{"aim", notRun}, {"ratio", notRun}},
		}
	}
	e := ExactSearch{
		Status: "infeasible", Aim: Number(s.Exact.Aim), Variables: s.variables(s.Exact.X),
		Evaluations: s.Exact.Evaluations, Ratio: none,
	}
	if s.Exact.Feasible {
		e.Status = "found"
		e.Ratio = Number(s.ratio())
	}
	e.Missing = whyNull(
		nullable{"aim", float64(e.Aim), "the exact search found no value of the aim"},
		nullable{"ratio", float64(e.Ratio), "design and exact search do not both hold every limit with a positive aim"})
	return e
}

const notRun = "the exact search was not run"

// ratio is how much of the aim of the exact search the design reaches: at most 1
// unless it is better; NaN where the aims are not both positive or the design
// misses a limit.
func (s *Study) ratio() float64 {
	reached, best := s.Result.Best.AimExact, s.Exact.Aim
	switch {
	case !s.Result.Best.Assessment.Feasible || !(reached > 0) || !(best > 0):
		return math.NaN()
	case s.Aim.Highest:
		return reached / best
	default:
		return best / reached
	}
}
