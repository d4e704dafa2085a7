package report

import "rampwright/problems"

// model is what was searched: the inlet, or the problem in its place.
func (s *Study) model() problems.Problem {
	if s.Problem != nil {
		return s.Problem
	}
	return s.Model
}

// points names the points of the quantities in their order: of an inlet the
// flight points, then the geometry.
func (s *Study) points() []string {
	var names []string
	last := ""
	for _, q := range s.model().Quantities() {
		if q.Point != last {
			names, last = append(names, q.Point), q.Point
		}
	}
	return names
}

// inletParts fills what only the design of an inlet has.
func (d *DesignDocument) inletParts(head Head) {
	d.Points, d.Assumptions = []Point{}, []string{
		"An analytic problem: a yardstick for fits and searches, of no physical meaning here.",
		"A surrogate's number is not a result until it is recomputed exactly.",
	}
	if d.study.Problem == nil {
		return
	}
	flow := NewFlow(head, d.study.Problem, d.study.Flow)
	d.Inlet, d.Points, d.Assumptions = &flow.Inlet, flow.Points, flow.Assumptions
	for i := range d.Points {
		p := &d.Points[i]
		p.Quantities, p.Members, p.Missing = nil, nil, nil
	}
}

// plainQuantities writes every quantity of a problem that is no inlet.
func (d *DesignDocument) plainQuantities(p *page) {
	p.heading("Quantities")
	t := &table{columns: []column{{head: "quantity"}, {head: "value"}}}
	for _, r := range d.readings {
		t.add(r.name, significant(r.value))
	}
	p.table(t)
	p.reasons(d.readings)
}
