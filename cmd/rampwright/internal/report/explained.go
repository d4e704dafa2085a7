package report

import (
	"fmt"
	"strings"

	"rampwright/optimize"
)

// Conflict is a set of limits that cannot be met together, though every set with
// one member less can.
type Conflict struct {
	Members []SideOf `json:"members"`
}

// SideOf is one side of a limit.
type SideOf struct {
	Quantity string `json:"quantity"`
	At       string `json:"at"`
	Side     string `json:"side"` // "at_least" or "at_most"
	Bound    Number `json:"bound"`
}

// Loosened is the smallest relaxation of one side with every other limit held:
// null where loosening it alone is not enough.
type Loosened struct {
	SideOf
	Enough    Number         `json:"enough"`
	Variables Object[Number] `json:"variables,omitzero"`
}

func sideOf(s optimize.Side) SideOf {
	side := "at_least"
	if s.Upper {
		side = "at_most"
	}
	return SideOf{s.Limit.Quantity, s.Limit.Point, side, Number(s.Bound())}
}

func (s SideOf) String() string {
	at := ""
	if s.At != "geometry" {
		at = " at " + s.At
	}
	return s.Quantity + at + " " + s.words() + " " + plain(float64(s.Bound))
}

// words is the side as prose.
func (s SideOf) words() string { return strings.ReplaceAll(s.Side, "_", " ") }

func (s *Study) conflicts() []Conflict {
	list := []Conflict{}
	if s.Explained == nil {
		return list
	}
	for _, c := range s.Explained.Conflicts {
		var members []SideOf
		for _, m := range c.Members {
			members = append(members, sideOf(m))
		}
		list = append(list, Conflict{members})
	}
	return list
}

func (s *Study) relaxation() []Loosened {
	list := []Loosened{}
	if s.Explained == nil {
		return list
	}
	for _, r := range s.Explained.Relaxations {
		loosened := Loosened{SideOf: sideOf(r.Side), Enough: Number(r.Bound)}
		if r.X != nil {
			loosened.Variables = s.variables(r.X)
		}
		list = append(list, loosened)
	}
	return list
}

// explained writes why nothing holds every limit.
func (d *DesignDocument) explained(p *page) {
	e := d.study.Explained
	if e == nil {
		return
	}
	p.heading("Why no design holds every limit")
	for i, c := range d.Conflicts {
		lead := "Together these cannot be met, with any one of them left out the rest can:"
		if i > 0 {
			lead = "Nor can these:"
		}
		if len(c.Members) == 1 {
			lead = "This alone cannot be met in the search box:"
			if i > 0 {
				lead = "Nor can this:"
			}
		}
		p.wrap("", lead, "")
		for _, m := range c.Members {
			p.wrap("  - ", m.String(), "    ")
		}
	}
	p.WriteByte('\n')
	p.wrap("", "Smallest loosening of one of them with every other limit held:", "")
	t := &table{columns: []column{{head: "limit"}, {head: "asked"}, {head: "enough"}}}
	never := false
	for _, r := range d.Relaxation {
		never = never || !finite(float64(r.Enough))
		at := ""
		if r.At != "geometry" {
			at = " at " + r.At
		}
		t.add(r.Quantity+at+" "+r.words(), plain(float64(r.Bound)), significant(float64(r.Enough)))
	}
	p.table(t)
	if never {
		p.wrap(indent, none+": loosening it alone is not enough", indent)
	}
	p.WriteByte('\n')
	p.wrap("", fmt.Sprintf("Search behind this: evolution and local solution from %d starts for every question, on the exact model, over the box above. The design shown misses the limits least (sum of scaled violations %s).",
		e.Starts, significant(float64(d.Best.Violation))), "")
}
