package report

import (
	"fmt"
	"math"
	"sort"

	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// EnvelopeStudy is a finished map of one frozen inlet.
type EnvelopeStudy struct {
	Definition inlet.Definition
	Variables  []problems.Variable // searched by the brief, held at X
	X          []float64
	LimitsOf   string // the flight point whose limits hold over the map
	Air        envelope.Air
	Quantities []problems.Quantity
	Map        wave.Settings // of its traces
	Boundaries wave.Settings // of those the boundaries are taken from
	Survey     *envelope.Survey
}

// EnvelopeDocument is a map as a document.
type EnvelopeDocument struct {
	Format    int            `json:"format"`
	Program   string         `json:"program"`
	Title     string         `json:"title"`
	BriefHash string         `json:"brief_hash"`
	Variables Object[Number] `json:"variables"`
	Air       EnvelopeAir    `json:"air"`
	LimitsOf  string         `json:"limits_of"`
	Grid      EnvelopeGrid   `json:"grid"`
	Traces    EnvelopeTraces `json:"traces"`
	// States counts the rows by state, Within those that keep every limit.
	States      Object[int]    `json:"states"`
	Within      int            `json:"within_every_limit"`
	Rows        []EnvelopeRow  `json:"rows"`
	Boundary    []EnvelopeLine `json:"boundary"`
	Tolerance   EnvelopeTrust  `json:"boundary_tolerance"`
	Cautions    []Caution      `json:"cautions"`
	Assumptions []string       `json:"assumptions"`

	study EnvelopeStudy
}

// EnvelopeAir says what of the ambient air is held as the Mach number changes.
type EnvelopeAir struct {
	Held               string         `json:"held"` // "pressure and temperature" or "dynamic pressure"
	PressureKPa        Number         `json:"pressure_kPa"`
	TemperatureK       Number         `json:"temperature_K"`
	DynamicPressureKPa Number         `json:"dynamic_pressure_kPa"`
	Missing            Object[string] `json:"missing,omitzero"`
}

// EnvelopeTraces are the resolutions of the traces, where the inlet is traced.
type EnvelopeTraces struct {
	Map      TraceSettings `json:"map"`
	Boundary TraceSettings `json:"boundary"`
}

// EnvelopeGrid lists the conditions of the rows.
type EnvelopeGrid struct {
	Mach         []Number `json:"mach"`
	IncidenceDeg []Number `json:"incidence_deg"`
}

// EnvelopeRow is the inlet at one condition, by rising Mach number and then
// rising incidence. Status is "attached" or the reason; State names it among few.
type EnvelopeRow struct {
	Mach         Number         `json:"mach"`
	IncidenceDeg Number         `json:"incidence_deg"`
	Status       string         `json:"status"`
	State        string         `json:"state"`
	Traced       bool           `json:"traced"` // wave by wave, not by the chain of straight shocks
	Missed       []string       `json:"limits_missed"`
	Quantities   Object[Number] `json:"quantities"`
	Missing      Object[string] `json:"missing"`

	readings []reading
	sample   *envelope.Sample
}

// EnvelopeLine is one stretch of a boundary; its points lie on the side where the
// margin holds.
type EnvelopeLine struct {
	Kind     string      `json:"kind"`
	Name     string      `json:"name"`
	Quantity string      `json:"quantity"` // empty where the end of the stream was bisected
	Margin   Number      `json:"margin"`   // greatest left at a point, in the unit of the quantity
	Closed   bool        `json:"closed"`
	Points   [][2]Number `json:"points"` // Mach number, incidence in degrees
}

// EnvelopeTrust says how far boundary points may be off, and what they cost.
type EnvelopeTrust struct {
	Mach         Number `json:"mach"`
	IncidenceDeg Number `json:"incidence_deg"`
	Evaluations  int    `json:"evaluations"`
}

// NewEnvelope describes a finished map.
func NewEnvelope(head Head, study EnvelopeStudy) *EnvelopeDocument {
	s := study.Survey
	d := &EnvelopeDocument{
		Format: format, Program: head.Program, Title: head.Title, BriefHash: head.BriefHash,
		Variables: Object[Number]{}, Air: newEnvelopeAir(study.Air), LimitsOf: study.LimitsOf,
		Traces: EnvelopeTraces{traceSettings(study.Map), traceSettings(study.Boundaries)},
		Rows:   []EnvelopeRow{}, Boundary: []EnvelopeLine{},
		Tolerance:   EnvelopeTrust{Number(s.Settings.Tolerance), Number(s.Settings.Tolerance), s.Refinements},
		Assumptions: assumptions(study.Definition), study: study,
	}
	for i, v := range study.Variables {
		d.Variables = append(d.Variables, Field[Number]{v.Name, Number(study.X[i])})
	}
	for i := range s.Settings.MachPoints {
		d.Grid.Mach = append(d.Grid.Mach, Number(s.At(i, 0).Mach))
	}
	for j := range s.Settings.IncidencePoints {
		d.Grid.IncidenceDeg = append(d.Grid.IncidenceDeg, Number(gridDegrees(s.At(0, j).Incidence)))
	}
	counts := [envelope.States]int{}
	for i := range s.Samples {
		d.Rows = append(d.Rows, newEnvelopeRow(study.Quantities, &s.Samples[i]))
		counts[s.Samples[i].State]++
		if len(s.Samples[i].Missed) == 0 {
			d.Within++
		}
	}
	for state, n := range counts {
		if n > 0 {
			d.States = append(d.States, Field[int]{envelope.State(state).String(), n})
		}
	}
	for _, line := range s.Lines {
		d.Boundary = append(d.Boundary, newEnvelopeLine(line))
	}
	d.Cautions = d.raise()
	return d
}

// JSON returns the document as indented JSON.
func (d *EnvelopeDocument) JSON() []byte { return document(d) }

func newEnvelopeAir(a envelope.Air) EnvelopeAir {
	none := Number(math.NaN())
	if a.Hold == envelope.HeldDynamicPressure {
		return EnvelopeAir{
			Held: "dynamic pressure", PressureKPa: none, TemperatureK: none, DynamicPressureKPa: Number(a.DynamicPressure / pascals),
			Missing: Object[string]{{"pressure_kPa", airFollows}, {"temperature_K", airFollows}},
		}
	}
	return EnvelopeAir{
		Held: "pressure and temperature", PressureKPa: Number(a.Pressure / pascals), TemperatureK: Number(a.Temperature), DynamicPressureKPa: none,
		Missing: Object[string]{{"dynamic_pressure_kPa", "it changes with the Mach number"}},
	}
}

const airFollows = "it changes with the Mach number: standard atmosphere at the dynamic pressure held"

// text says what is held.
func (a *EnvelopeAir) text() string {
	if finite(float64(a.DynamicPressureKPa)) {
		return fmt.Sprintf("dynamic pressure held at %s kPa, standard atmosphere", significant(float64(a.DynamicPressureKPa)))
	}
	return fmt.Sprintf("pressure and temperature held at %s kPa, %s K", significant(float64(a.PressureKPa)), significant(float64(a.TemperatureK)))
}

func newEnvelopeRow(quantities []problems.Quantity, x *envelope.Sample) EnvelopeRow {
	row := EnvelopeRow{
		Mach: Number(x.Mach), IncidenceDeg: Number(gridDegrees(x.Incidence)), Status: attachedStatus, State: x.State.String(), Traced: x.Traced, Missed: x.Missed,
		readings: readings(quantities, x.Exact), sample: x,
	}
	if x.Status != nil {
		row.Status = x.Status.Error()
	}
	if row.Missed == nil {
		row.Missed = []string{}
	}
	row.Quantities = values(row.readings)
	row.Missing = Object[string]{}
	for _, r := range row.readings {
		if math.IsNaN(r.value) {
			row.Missing = append(row.Missing, Field[string]{r.name, reasonText(r.reason)})
		}
	}
	return row
}

// value is a quantity of the row, NaN where missing.
func (row *EnvelopeRow) value(name string) float64 {
	for _, r := range row.readings {
		if r.name == name {
			return r.value
		}
	}
	return math.NaN()
}

func newEnvelopeLine(line envelope.Line) EnvelopeLine {
	out := EnvelopeLine{
		Kind: string(line.Kind), Name: line.Name, Quantity: line.Quantity, Margin: Number(line.Margin),
		Closed: line.Closed, Points: [][2]Number{},
	}
	for _, p := range line.Points {
		out.Points = append(out.Points, [2]Number{Number(p.Mach), Number(degrees(p.Incidence))})
	}
	return out
}

// gridDegrees is an angle of the grid, which was asked for in round degrees.
func gridDegrees(radians float64) float64 {
	deg := degrees(radians)
	if round := math.Round(deg*1e9) / 1e9; math.Abs(deg-round) < 1e-12*max(1, math.Abs(deg)) {
		return round
	}
	return deg
}

// crossing lists the Mach numbers at which the lines of a boundary pass an
// incidence, rising. Between two points of a line it is interpolated.
func (d *EnvelopeDocument) crossing(kind, name string, incidence float64) []float64 {
	var list []float64
	for _, line := range d.Boundary {
		if line.Kind != kind || line.Name != name {
			continue
		}
		for i, p := range line.Points {
			y := float64(p[1]) - incidence
			if math.Abs(y) < 1e-7 {
				list = append(list, float64(p[0]))
				continue
			}
			if i == 0 {
				continue
			}
			q := line.Points[i-1]
			before := float64(q[1]) - incidence
			if before*y < 0 && math.Abs(before) >= 1e-7 {
				list = append(list, float64(q[0])+before/(before-y)*(float64(p[0])-float64(q[0])))
			}
		}
	}
	sort.Float64s(list)
	var apart []float64
	for _, v := range list {
		if n := len(apart); n == 0 || v-apart[n-1] > 1e-4 {
			apart = append(apart, v)
		}
	}
	return apart
}
