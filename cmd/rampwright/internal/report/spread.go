package report

import (
	"math"
	"slices"
	"strings"

	"rampwright/problems/inlet"
)

// SpreadStudy is what tolerances do to one design, as plain data.
type SpreadStudy struct {
	Problem    *inlet.Problem
	Flow       *inlet.Flow // the design as drawn
	X          []float64   // of its variables
	Inputs     []SpreadInput
	Draws      int
	Quantities []SpreadQuantity
	// Judged lists the quantities of the aim and of the limits, as name@point.
	Judged      []string
	Limits      []SpreadLimit // without those of the model that hold in every draw
	Quiet       int           // limits of the model left out
	Joint       SpreadShare
	JointFitted SpreadShare
	Inside      []SpreadPoint // share of draws with a shock inside the lip, by flight point
	Reasons     []SpreadReason
	Sensitivity []SpreadIndex
	Fits        []SpreadFit
	Evaluations SpreadCosts
}

// SpreadInput is one uncertain input.
type SpreadInput struct {
	Name      string `json:"name"`
	Unit      string `json:"unit"`
	Deviation Number `json:"standard_deviation"`
}

// Routes of a spread.
const (
	SpreadExact     = "exact"
	SpreadSurrogate = "surrogate"
)

// SpreadQuantity is one quantity over the draws, by one route.
type SpreadQuantity struct {
	Quantity       string         `json:"quantity"`
	At             string         `json:"at"`
	Unit           string         `json:"unit"`
	Route          string         `json:"route"`
	Nominal        Number         `json:"nominal"` // as drawn
	Mean           Number         `json:"mean"`
	Deviation      Number         `json:"standard_deviation"`
	P05            Number         `json:"p05"`
	P50            Number         `json:"p50"`
	P95            Number         `json:"p95"`
	MeanError      Number         `json:"mean_error"` // standard error from the number of draws
	DeviationError Number         `json:"standard_deviation_error"`
	Affected       bool           `json:"affected"` // some tolerance moves it
	Unanswered     int            `json:"unanswered"`
	NotApplicable  int            `json:"not_applicable"`
	Missing        Object[string] `json:"missing,omitzero"`
}

// SpreadLimit is how often one limit holds.
type SpreadLimit struct {
	Quantity    string         `json:"quantity"`
	At          string         `json:"at"`
	Low         Number         `json:"low"`
	High        Number         `json:"high"`
	Kind        string         `json:"kind"`
	Nominal     Number         `json:"nominal_margin"`
	Active      bool           `json:"active"` // met without margin as drawn
	Affected    bool           `json:"affected"`
	Probability Number         `json:"probability"`
	Error       Number         `json:"probability_error"`
	Surrogate   Number         `json:"surrogate_probability"`
	Unanswered  int            `json:"unanswered"`
	Reliability Number         `json:"reliability_index"`
	Margin      SpreadBand     `json:"margin"`
	Fitted      SpreadBand     `json:"surrogate_margin"`
	Missing     Object[string] `json:"missing,omitzero"`

	low, high float64
}

// Bounds sets the sides of the limit, infinite where absent.
func (l *SpreadLimit) Bounds(low, high float64) {
	l.low, l.high = low, high
	l.Low, l.High = oneSided(low), oneSided(high)
}

// SpreadBand is a distribution in short.
type SpreadBand struct {
	P05       Number `json:"p05"`
	P50       Number `json:"p50"`
	P95       Number `json:"p95"`
	Deviation Number `json:"standard_deviation"`
}

// SpreadShare is a share of the draws with its standard error.
type SpreadShare struct {
	Share Number `json:"share"`
	Error Number `json:"error"`
}

// SpreadPoint is the share of the draws at a flight point in which a ramp shock
// falls inside the lip: run straight, and by the trace, in which shocks that cross
// merge on the way. Of a given outline both are by the trace.
type SpreadPoint struct {
	At string `json:"at"`
	SpreadShare
	Traced Number `json:"traced_share"`
}

// SpreadReason counts draws without an answer.
type SpreadReason struct {
	At     string `json:"at"`
	Reason string `json:"reason"`
	Draws  int    `json:"draws"`
}

// SpreadIndex is the sensitivity of a quantity to an input.
type SpreadIndex struct {
	Quantity        string `json:"quantity"`
	At              string `json:"at"`
	Input           string `json:"input"`
	FirstOrder      Number `json:"first_order"`
	Total           Number `json:"total"`
	FirstOrderError Number `json:"first_order_error"`
	TotalError      Number `json:"total_error"`
}

// SpreadFit is a surrogate in the space of the offsets.
type SpreadFit struct {
	Quantity string `json:"quantity"`
	Member   string `json:"member"`
	At       string `json:"at"`
	Kind     string `json:"kind"`
	Samples  int    `json:"samples"`
	Q2       Number `json:"q2"`
	RMSE     Number `json:"rmse"`
	Error    string `json:"error,omitempty"`
}

// SpreadCosts are the exact evaluations by purpose.
type SpreadCosts struct {
	Draws       int `json:"draws"`
	Sensitivity int `json:"sensitivity"`
	Samples     int `json:"samples"`
}

// SpreadDocument is a spread as a document.
type SpreadDocument struct {
	Format          int              `json:"format"`
	Program         string           `json:"program"`
	Title           string           `json:"title"`
	Seed            int64            `json:"seed"`
	BriefHash       string           `json:"brief_hash"`
	Variables       Object[Number]   `json:"variables"`
	Inputs          []SpreadInput    `json:"inputs"`
	TruncatedAt     int              `json:"truncated_at"` // standard deviations
	Quantities      []SpreadQuantity `json:"quantities"`
	PassProbability Number           `json:"pass_probability"` // of all limits at once
	PassError       Number           `json:"pass_probability_error"`
	SurrogatePass   Number           `json:"surrogate_pass_probability"`
	PerLimit        []SpreadLimit    `json:"per_limit"`
	ShockInsideLip  []SpreadPoint    `json:"shock_inside_the_lip"`
	Unanswered      []SpreadReason   `json:"unanswered"`
	Sensitivity     []SpreadIndex    `json:"sensitivity"`
	SensitivityBy   string           `json:"sensitivity_method"`
	Fits            []SpreadFit      `json:"fits"`
	Evaluations     SpreadCosts      `json:"evaluations"`
	GeometryAsBuilt string           `json:"geometry_as_built"`
	Cautions        []Caution        `json:"cautions"`
	Assumptions     []string         `json:"assumptions"`

	study SpreadStudy
}

// asBuilt says what a draw changes.
const asBuilt = "A draw changes the built geometry and is never focused again: ramp lengths but the last, lip and throat wall stay as drawn, every ramp turns with the corner it starts at, and the last ramp ends where it meets the throat wall. Mach number and incidence are off by the same at every flight point. Where shocks cross or fall inside the lip a draw is traced wave by wave, coarsely: throat averages within 1 %."

// outlineAsBuilt says the same of a given outline.
const outlineAsBuilt = "The walls stay as given; Mach number and incidence are off by the same at every flight point. Every draw is traced wave by wave, coarsely: throat averages within 1 %."

// asBuilt says how the inlet of the study is built, and where its draws are traced.
func (s *SpreadStudy) asBuilt() string {
	definition := s.Problem.Definition()
	var traced []string
	for _, p := range definition.Points {
		if p.Traced {
			traced = append(traced, p.Name)
		}
	}
	switch {
	case definition.Outline != nil:
		return outlineAsBuilt
	case traced != nil:
		return asBuilt + " So is every draw at " + strings.Join(traced, ", ") + ", as the brief asks."
	}
	return asBuilt
}

// sensitivityMethod names the estimators.
const sensitivityMethod = "first order by Saltelli et al. (2010), total by Jansen (1999), on exact draws"

// NewSpread describes a finished spread.
func NewSpread(head Head, study SpreadStudy, truncatedAt int) *SpreadDocument {
	variables := Object[Number]{}
	for i, v := range study.Problem.Variables() {
		variables = append(variables, Field[Number]{v.Name, Number(study.X[i])})
	}
	d := &SpreadDocument{
		Format: format, Program: head.Program, Title: head.Title, Seed: head.Seed, BriefHash: head.BriefHash,
		Variables: variables, Inputs: study.Inputs, TruncatedAt: truncatedAt, Quantities: study.Quantities,
		PassProbability: study.Joint.Share, PassError: study.Joint.Error, SurrogatePass: study.JointFitted.Share,
		PerLimit: study.Limits, ShockInsideLip: study.Inside, Unanswered: append([]SpreadReason{}, study.Reasons...),
		Sensitivity: append([]SpreadIndex{}, study.Sensitivity...), SensitivityBy: sensitivityMethod,
		Fits: append([]SpreadFit{}, study.Fits...), Evaluations: study.Evaluations,
		GeometryAsBuilt: study.asBuilt(), Assumptions: assumptions(study.Problem.Definition()), study: study,
	}
	for i := range d.Quantities {
		q := &d.Quantities[i]
		q.Missing = whyNull(
			nullable{"nominal", float64(q.Nominal), "no value as drawn"},
			nullable{"mean", float64(q.Mean), "less than two draws have a value"})
	}
	for i := range d.PerLimit {
		l := &d.PerLimit[i]
		l.Missing = whyNull(
			nullable{"nominal_margin", float64(l.Nominal), "no value as drawn, or none that applies"},
			nullable{"surrogate_probability", float64(l.Surrogate), "no surrogate"},
			nullable{"reliability_index", float64(l.Reliability), "nothing moves it, or no way to break it was found on the surrogates"})
	}
	d.Cautions = study.cautions()
	return d
}

// JSON returns the document as indented JSON.
func (d *SpreadDocument) JSON() []byte { return document(d) }

// outline reports whether the inlet is a given outline, of which every draw is traced.
func (s *SpreadStudy) outline() bool { return s.Problem.Definition().Outline != nil }

// judged reports whether a quantity belongs to the aim or to a limit.
func (s *SpreadStudy) judged(quantity, at string) bool {
	return slices.Contains(s.Judged, quantity+"@"+at)
}

// worstInside is the flight point at which most draws have a shock inside the lip.
func (s *SpreadStudy) worstInside() SpreadPoint {
	worst := SpreadPoint{}
	for _, p := range s.Inside {
		if p.Share > worst.Share {
			worst = p
		}
	}
	return worst
}

// sharePercent writes a share as a percentage with a tenth.
func sharePercent(share Number) string {
	if !finite(float64(share)) {
		return none
	}
	tenths := math.Round(1000 * float64(share))
	// What is not all or nothing is not rounded to it.
	switch {
	case tenths == 1000 && share < 1:
		return "> 99.9"
	case tenths == 0 && share > 0:
		return "< 0.1"
	}
	return fixed([]float64{tenths / 10}, 1)[0]
}
