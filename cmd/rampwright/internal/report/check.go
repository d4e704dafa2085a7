package report

import (
	"fmt"
	"math"
	"strings"

	"rampwright/problems"
)

// CheckedBrief is a brief as resolved, for the engineer to read back.
type CheckedBrief struct {
	Head      Head
	Aim       string // "highest recovery at cruise"
	Effort    string // "60 samples, 40 infill, seed 1, agreement 0.001", and a batch where one is asked for
	Points    []CheckedPoint
	Variables []problems.Variable
	Limits    []problems.Limit
	Values    []CheckedValue
	Notes     []string // what the writer may not have seen
	Refused   []string // why a search would be refused; none when it may run
}

// CheckedPoint is one flight state as resolved.
type CheckedPoint struct {
	Name            string  `json:"name"`
	Mach            float64 `json:"mach"`
	IncidenceDeg    float64 `json:"incidence_deg"`
	Weight          float64 `json:"weight"`
	PressureKPa     float64 `json:"pressure_kPa"`
	TemperatureK    float64 `json:"temperature_K"`
	AltitudeKm      Number  `json:"altitude_km"` // geopotential; null where the state was given
	DynamicPressure float64 `json:"dynamic_pressure_kPa"`
	Stated          string  `json:"stated"`
	Throat          string  `json:"throat"` // chain or traced
	ThroatBecause   string  `json:"throat_because"`
}

// CheckedValue is one value of the brief and where it came from.
type CheckedValue struct {
	Path   string `json:"path"`
	Value  string `json:"value"`
	Unit   string `json:"unit,omitempty"`
	Source string `json:"source"`
}

// CheckDocument is a checked brief as a document.
type CheckDocument struct {
	Format    int              `json:"format"`
	Program   string           `json:"program"`
	Title     string           `json:"title"`
	BriefHash string           `json:"brief_hash"`
	Aim       string           `json:"aim"`
	Effort    string           `json:"effort"`
	Points    []CheckedPoint   `json:"points"`
	Searched  []checkedRange   `json:"searched"`
	Limits    []checkedLimit   `json:"limits"`
	Values    []CheckedValue   `json:"values"`
	Notes     []string         `json:"notes"`
	Refused   []string         `json:"refused"`
	limits    []problems.Limit // as given, for the text
}

type checkedRange struct {
	Name string  `json:"name"`
	Unit string  `json:"unit,omitempty"`
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

type checkedLimit struct {
	Quantity string `json:"quantity"`
	At       string `json:"at"`
	Low      Number `json:"low"`
	High     Number `json:"high"`
	Kind     string `json:"kind"`
	Source   string `json:"source"`
}

// NewCheck makes the document of a checked brief.
func NewCheck(b CheckedBrief) *CheckDocument {
	d := &CheckDocument{
		Format: format, Program: b.Head.Program, Title: b.Head.Title, BriefHash: b.Head.BriefHash,
		Aim: b.Aim, Effort: b.Effort, Points: append([]CheckedPoint{}, b.Points...), Values: b.Values,
		Searched: []checkedRange{}, Limits: []checkedLimit{},
		Notes: append([]string{}, b.Notes...), Refused: append([]string{}, b.Refused...), limits: b.Limits,
	}
	for _, v := range b.Variables {
		d.Searched = append(d.Searched, checkedRange{v.Name, v.Unit, v.Low, v.High})
	}
	for _, l := range b.Limits {
		d.Limits = append(d.Limits, checkedLimit{
			l.Quantity, l.Point, oneSided(l.Low), oneSided(l.High), l.Kind.String(), l.Source,
		})
	}
	return d
}

// oneSided writes an absent side as null.
func oneSided(bound float64) Number {
	if math.IsInf(bound, 0) {
		return Number(math.NaN())
	}
	return Number(bound)
}

// JSON returns the document as JSON.
func (d *CheckDocument) JSON() []byte { return document(d) }

// Text returns the document for a terminal of that width.
func (d *CheckDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	for _, refusal := range d.Refused {
		p.WriteByte('\n')
		p.wrap("Refused: ", refusal, indent)
	}
	d.flightTable(p)
	p.heading("Search")
	p.wrap("", fmt.Sprintf("Aim: %s. Effort: %s.", d.Aim, d.Effort), "")
	p.WriteByte('\n')
	t := &table{columns: []column{{head: "searched"}, {head: "from"}, {head: "to"}}}
	for _, v := range d.Searched {
		t.add(v.Name, plain(v.Low), plain(v.High))
	}
	if len(d.Searched) == 0 {
		p.wrap(indent, "nothing is searched: rampwright flow computes this geometry", indent)
	} else {
		p.table(t)
	}
	d.limitTable(p)
	p.heading("Values")
	t = &table{columns: []column{{head: "value"}, {head: "", left: true}, {head: "from", left: true}}}
	for _, v := range d.Values {
		text := v.Value
		if v.Unit != "" {
			text += " " + v.Unit
		}
		t.add(v.Path, text, v.Source)
	}
	p.table(t)
	if len(d.Notes) > 0 {
		p.heading("Notes")
		for _, note := range d.Notes {
			p.wrap("  - ", note, "    ")
		}
	}
	return p.String()
}

// flightTable writes the flight states of an inlet.
func (d *CheckDocument) flightTable(p *page) {
	if len(d.Points) == 0 {
		return // an analytic problem has none
	}
	p.heading("Flight")
	t := &table{columns: []column{
		{head: "point"}, {head: "Mach"}, {head: "incidence\ndeg"}, {head: "weight"}, {head: "p\nkPa"}, {head: "T\nK"},
		{head: "altitude\nkm"}, {head: "q\nkPa"}, {head: "stated as", left: true, drop: 1},
	}}
	for _, c := range d.Points {
		t.add(c.Name, plain(c.Mach), plain(c.IncidenceDeg), plain(c.Weight), significant(c.PressureKPa), significant(c.TemperatureK),
			significant(float64(c.AltitudeKm)), significant(c.DynamicPressure), c.Stated)
	}
	p.table(t)
	d.throats(p)
}

// throats says which points are traced, and why, those alike in one sentence.
func (d *CheckDocument) throats(p *page) {
	type kind struct{ throat, because string }
	points := map[kind][]string{}
	var order []kind
	for _, c := range d.Points {
		k := kind{c.Throat, c.ThroatBecause}
		if points[k] == nil {
			order = append(order, k)
		}
		points[k] = append(points[k], c.Name)
	}
	for _, k := range order {
		p.wrap(indent, fmt.Sprintf("throat at %s: %s (%s)", strings.Join(points[k], ", "), k.throat, k.because), indent+indent)
	}
}

// limitTable writes the limits in force, those that differ in their point only
// on one row.
func (d *CheckDocument) limitTable(p *page) {
	p.heading("Limits")
	type row struct {
		quantity, bound, source string
	}
	points := map[row]string{}
	var order []row
	for _, l := range d.limits {
		r := row{l.Quantity, bounds(l.Low, l.High), l.Source}
		if at, seen := points[r]; seen {
			points[r] = at + ", " + l.Point
			continue
		}
		points[r] = l.Point
		order = append(order, r)
	}
	t := &table{columns: []column{{head: "limit"}, {head: "bound"}, {head: "from", left: true}, {head: "at", left: true}}}
	for _, r := range order {
		t.add(r.quantity, r.bound, r.source, points[r])
	}
	p.table(t)
}
