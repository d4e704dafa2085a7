package report

import (
	"math"

	"rampwright/problems"
)

// reading is one quantity at one point. A group is its least member of those
// that have a value.
type reading struct {
	name   string
	point  string
	unit   string
	member string // the least member of a group
	value  float64
	reason error // why value is missing
	group  []memberReading
}

type memberReading struct {
	name   string
	value  float64
	reason error
}

// readings lists the quantities of an evaluation in the problem's order.
func readings(quantities []problems.Quantity, evaluation *problems.Evaluation) []reading {
	var list []reading
	for i, q := range quantities {
		value, reason := evaluation.Values[i], evaluation.Reasons[i]
		member := memberReading{q.Member, value, reason}
		if last := len(list) - 1; q.Member != "" && last >= 0 && list[last].name == q.Name && list[last].point == q.Point {
			list[last].join(member)
			continue
		}
		r := reading{name: q.Name, point: q.Point, unit: q.Unit, member: q.Member, value: value, reason: reason}
		if q.Member != "" {
			r.group = []memberReading{member}
		}
		list = append(list, r)
	}
	return list
}

// join adds a member to a group.
func (r *reading) join(m memberReading) {
	r.group = append(r.group, m)
	if m.value < r.value || math.IsNaN(r.value) && !math.IsNaN(m.value) {
		r.value, r.member, r.reason = m.value, m.name, nil
	}
}

// at returns the readings of one point.
func at(list []reading, point string) []reading {
	var here []reading
	for _, r := range list {
		if r.point == point {
			here = append(here, r)
		}
	}
	return here
}

// find returns one reading; a quantity the problem does not have is missing.
func find(list []reading, name, point string) reading {
	for _, r := range list {
		if r.name == name && r.point == point {
			return r
		}
	}
	return reading{name: name, point: point, value: math.NaN(), reason: errNoQuantity}
}

var errNoQuantity = &problems.Status{Phrase: "the problem has no such quantity"}

// values, members and missing are the three objects that show readings in JSON:
// each quantity, each member of a group, and why a value is null.
func values(list []reading) Object[Number] {
	object := Object[Number]{}
	for _, r := range list {
		object = append(object, Field[Number]{r.name, Number(r.value)})
	}
	return object
}

func members(list []reading) Object[Object[Number]] {
	object := Object[Object[Number]]{}
	for _, r := range list {
		if r.group == nil {
			continue
		}
		group := Object[Number]{}
		for _, m := range r.group {
			group = append(group, Field[Number]{m.name, Number(m.value)})
		}
		object = append(object, Field[Object[Number]]{r.name, group})
	}
	return object
}

// missing names a member of a group as quantity/member.
func missing(list []reading) Object[string] {
	object := Object[string]{}
	for _, r := range list {
		if math.IsNaN(r.value) {
			object = append(object, Field[string]{r.name, reasonText(r.reason)})
		}
		for _, m := range r.group {
			if math.IsNaN(m.value) {
				object = append(object, Field[string]{r.name + "/" + m.name, reasonText(m.reason)})
			}
		}
	}
	return object
}

func reasonText(reason error) string {
	if reason == nil {
		return "no value"
	}
	return reason.Error()
}
