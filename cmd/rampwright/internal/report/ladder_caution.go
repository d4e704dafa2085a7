package report

import (
	"strings"
)

// RowCaution is a caution of one or more rows of a table of designs.
type RowCaution struct {
	Rows []string `json:"rows"`
	Text string   `json:"text"` // as the last of the rows says it
	Rule string   `json:"rule"`

	first, last int // of the rows, by place
}

// namedStudy is a design with its name among others.
type namedStudy struct {
	name  string
	study *Study
}

// rowCautions gathers what several designs raise, one caution a rule, in the
// order in which the designs raise them first.
func rowCautions(studies []namedStudy) []RowCaution {
	list := []RowCaution{}
	for i, s := range studies {
		for _, c := range s.study.cautions() {
			list = addCaution(list, i, s.name, c)
		}
	}
	return list
}

func addCaution(list []RowCaution, place int, row string, c Caution) []RowCaution {
	for i := range list {
		switch known := &list[i]; {
		case known.Rule != c.Rule:
			continue
		case known.last == place: // the rule has several sentences for one row
			known.Text += " " + c.Text
		default:
			known.Rows, known.Text, known.last = append(known.Rows, row), c.Text, place
		}
		return list
	}
	return append(list, RowCaution{[]string{row}, c.Text, c.Rule, place, place})
}

// rowCautions writes the cautions, each with the rows that raise it; the
// sentence is that of the last of them.
func (p *page) rowCautions(list []RowCaution, all int) {
	if len(list) == 0 {
		return
	}
	p.heading("Cautions")
	for _, c := range list {
		who, n := strings.Join(c.Rows, ", "), len(c.Rows)
		switch {
		case n == 1:
		case n == all:
			who = "every row, here " + c.Rows[n-1]
		case n > 2 && c.last-c.first == n-1:
			who = c.Rows[0] + " to " + c.Rows[n-1] + ", here the last"
		default:
			who += ", here the last"
		}
		p.wrap("  - ", who+": "+c.Text, "    ")
	}
}
