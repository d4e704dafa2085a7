package report

import (
	"fmt"
	"math"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// TradeStudy is a finished trade curve between two quantities.
type TradeStudy struct {
	Definition inlet.Definition
	Between    [2]Traded
	Points     []TradePoint // from the best of the first quantity to the best of the second
	Asked      int          // points
	Dropped    int          // points another one dominates
	Cut        bool         // time ran out or the user stopped it: some points are missing
	// Hypervolume is the area the curve dominates within the reference, the worst
	// of each quantity over the curve; Rectangle that between the best and the
	// worst of both.
	Hypervolume float64
	Rectangle   float64
	Reference   [2]float64
	// Infeasible is the first search where it ended without a design to trade: with
	// the design of least violation, or one that only the exact search found.
	Infeasible *Study
}

// Traded is one of the two quantities.
type Traded struct {
	Name    string `json:"quantity"`
	At      string `json:"at"`
	Unit    string `json:"unit"`
	Highest bool   `json:"highest"` // is better
}

// Label names the quantity with its point.
func (q Traded) Label() string { return aimPhrase(q.Name, q.At) }

// TradePoint is one design of the curve.
type TradePoint struct {
	Study  *Study
	Values [2]float64
	Knee   bool
}

// TradeDocument is a trade curve as a document.
type TradeDocument struct {
	Format    int        `json:"format"`
	Program   string     `json:"program"`
	Title     string     `json:"title"`
	Seed      int64      `json:"seed"`
	BriefHash string     `json:"brief_hash"`
	Status    string     `json:"status"` // "done", "stopped"; without a curve that of the first search
	Between   [2]Traded  `json:"between"`
	Curve     []TradeRow `json:"curve"`
	Dominated int        `json:"dominated"` // points dropped because another one is better in both
	// Hypervolume is the area dominated within the reference, in the product of
	// the units; the share is that of the rectangle between best and worst.
	Hypervolume      Number         `json:"hypervolume"`
	HypervolumeShare Number         `json:"hypervolume_share"`
	Reference        Object[Number] `json:"reference"`
	KneeRule         string         `json:"knee_rule"`
	Why              string         `json:"why"` // why the curve is empty; else ""
	Conflicts        []Conflict     `json:"conflicts"`
	Relaxation       []Loosened     `json:"relaxation"`
	Cautions         []RowCaution   `json:"cautions"`
	Assumptions      []string       `json:"assumptions"`
	Missing          Object[string] `json:"missing,omitzero"`

	study TradeStudy
}

// TradeRow is one point of the curve.
type TradeRow struct {
	Values    Object[Number]         `json:"values"` // of the two quantities, exact
	Status    string                 `json:"status"`
	Knee      bool                   `json:"knee"`
	Variables Object[Number]         `json:"variables"`
	Exact     Object[Object[Number]] `json:"exact"`
	Predicted Number                 `json:"predicted"` // of the quantity the search of this point drove
	// Rate is what the first quantity gains for each unit of the second given up
	// between the next point and this one.
	Rate        Number         `json:"rate"`
	Active      []string       `json:"active"` // limits on other quantities the design stands on
	Evidence    Evidence       `json:"evidence"`
	Evaluations Evaluations    `json:"evaluations"`
	Missing     Object[string] `json:"missing,omitzero"`
}

// kneeRule says what a knee is.
const kneeRule = "the point farthest from the chord between the ends of the curve on its better side, both quantities scaled to 0..1 over the curve, where that is at least 0.05"

// NewTrade describes a finished curve.
func NewTrade(head Head, study TradeStudy) *TradeDocument {
	d := &TradeDocument{
		Format: format, Program: head.Program, Title: head.Title, Seed: head.Seed, BriefHash: head.BriefHash,
		Status: "done", Between: study.Between, Curve: []TradeRow{}, Dominated: study.Dropped,
		Hypervolume: Number(math.NaN()), HypervolumeShare: Number(math.NaN()), Reference: Object[Number]{},
		KneeRule: kneeRule, Conflicts: []Conflict{}, Relaxation: []Loosened{},
		Assumptions: assumptions(study.Definition), study: study,
	}
	for i := range study.Points {
		d.Curve = append(d.Curve, study.row(i))
	}
	if study.Cut {
		d.Status = "stopped"
	}
	d.measure()
	if s := study.Infeasible; s != nil {
		if d.Status, d.Why = s.Result.Status.String(), s.Result.Why; !s.Result.Best.Assessment.Feasible {
			d.Why = s.whyInfeasible()
		}
		d.Conflicts, d.Relaxation = s.conflicts(), s.relaxation()
	}
	d.Cautions = rowCautions(d.studies())
	return d
}

// JSON returns the document as indented JSON.
func (d *TradeDocument) JSON() []byte { return document(d) }

// measure fills the figures of the whole curve.
func (d *TradeDocument) measure() {
	if len(d.Curve) > 0 {
		d.Hypervolume = Number(d.study.Hypervolume)
		d.Reference = d.study.values(d.study.Reference)
	}
	if d.study.Rectangle > 0 {
		d.HypervolumeShare = Number(d.study.Hypervolume / d.study.Rectangle)
	}
	d.Missing = whyNull(
		nullable{"hypervolume", float64(d.Hypervolume), "the curve is empty"},
		nullable{"hypervolume_share", float64(d.HypervolumeShare), "the curve has less than two points"})
}

// values names the two quantities; with the point where the names are the same.
func (s *TradeStudy) values(v [2]float64) Object[Number] {
	var object Object[Number]
	for i := range s.Between {
		object = append(object, Field[Number]{s.key(i), Number(v[i])})
	}
	return object
}

// key is the name of a quantity among the two.
func (s *TradeStudy) key(i int) string {
	q := s.Between[i]
	if q.Name == s.Between[1-i].Name {
		return q.Name + "@" + q.At
	}
	return q.Name
}

func (s *TradeStudy) row(i int) TradeRow {
	p := &s.Points[i]
	best := &p.Study.Result.Best
	candidate := p.Study.candidate(best)
	row := TradeRow{
		Values: s.values(p.Values), Status: p.Study.Result.Status.String(), Knee: p.Knee,
		Variables: candidate.Variables, Exact: Object[Object[Number]]{}, Predicted: candidate.Aim.Predicted, Rate: Number(math.NaN()),
		Active: []string{}, Evidence: candidate.Evidence, Evaluations: Evaluations(p.Study.Result.Counts),
	}
	list := readings(p.Study.model().Quantities(), best.Exact)
	for _, point := range p.Study.points() {
		row.Exact = append(row.Exact, Field[Object[Number]]{point, values(at(list, point))})
	}
	for i := range best.Assessment.Checks {
		if c := &best.Assessment.Checks[i]; c.Active && !s.trades(c.Quantity) {
			row.Active = append(row.Active, fmt.Sprintf("%s %s", responseName(c.Quantity), bounds(c.Low, c.High)))
		}
	}
	if i+1 < len(s.Points) {
		next := s.Points[i+1].Values
		row.Rate = Number(math.Abs((p.Values[0] - next[0]) / (p.Values[1] - next[1])))
	}
	row.Missing = whyNull(
		nullable{"predicted", float64(row.Predicted), unforeseen},
		nullable{"rate", float64(row.Rate), "the last point"})
	return row
}

// trades reports whether a quantity is one of the two.
func (s *TradeStudy) trades(q problems.Quantity) bool {
	for _, t := range s.Between {
		if t.Name == q.Name && t.At == q.Point {
			return true
		}
	}
	return false
}

// studies lists the points by name.
func (d *TradeDocument) studies() []namedStudy {
	var list []namedStudy
	for i, p := range d.study.Points {
		list = append(list, namedStudy{fmt.Sprintf("point %d", i+1), p.Study})
	}
	if s := d.study.Infeasible; s != nil {
		list = append(list, namedStudy{"nearest design", s})
	}
	return list
}
