package brief

import (
	"math"

	"rampwright/problems"
	"rampwright/problems/analytic"
	"rampwright/problems/inlet"
)

// Brief is a validated brief: library values and where each came from. A value
// that reads back from ResolvedYAML is equal to the last bit.
type Brief struct {
	File       string // as given to Read
	Name       string // File without folder and ending
	Title      string
	Flight     []Condition // the first is the design point
	Definition inlet.Definition
	// Analytic is a published test problem posed in place of an inlet: Flight and
	// Definition are then empty.
	Analytic *analytic.Problem
	Aim      problems.Aim // no Parts when the brief states none
	// Limits are those the brief asks for, one a quantity and point, in the order
	// of the rows that count. One with neither side lifts the default there.
	Limits    []problems.Limit
	Defaults  bool // the default limits are on
	Tolerance Tolerance
	Effort    Effort

	outerDeg    float64    // outer cowl of an outline, as written
	words       vocabulary // what aims and limits may name
	aimHasPoint bool       // the aim takes an `at`: some quantity of it is tied to no point
	replaced    map[spot]sides
	values      []Value
	place       map[string]*node
	lines       []string
}

// Condition is one flight condition as resolved, in the units of the brief, from
// which Definition.Points is derived.
type Condition struct {
	Name         string
	Mach         float64
	IncidenceDeg float64
	PressureKPa  float64
	TemperatureK float64
	Weight       float64
	Traced       bool    // every wave: the throat is an average of the trace
	AltitudeKm   float64 // geopotential, NaN when pressure and temperature are stated
	Stated       string  // how the state was given: "dynamic_pressure_kPa 60"
}

// Throat is what the throat of the point is taken from: chain or traced.
func (c Condition) Throat() string {
	if c.Traced {
		return traced
	}
	return chain
}

// point converts to SI units and radians.
func (c Condition) point() inlet.Point {
	return inlet.Point{
		Name:        c.Name,
		Mach:        c.Mach,
		Incidence:   c.IncidenceDeg * (math.Pi / 180),
		Pressure:    c.PressureKPa * 1000,
		Temperature: c.TemperatureK,
		Traced:      c.Traced,
	}
}

// Effort is what a search may spend.
type Effort struct {
	Samples   int     `json:"samples"`
	Infill    int     `json:"infill"`
	Batch     int     `json:"batch,omitempty"` // evaluations a round; 0 leaves it to the search
	Seed      int64   `json:"seed"`
	Agreement float64 `json:"agreement"` // largest relative error of the surrogates at the optimum
}

// Value is one resolved value for tables.
type Value struct {
	Path   string // "inlet.width_m", "flight.cruise.mach"
	Text   string
	Unit   string
	Source string // "line 12", "--width-m", "default"
}

// Values lists every resolved value in the order of the sections.
func (b *Brief) Values() []Value { return append([]Value(nil), b.values...) }

// Source returns where the value at a path came from, "" for an unknown path.
func (b *Brief) Source(path string) string {
	for _, v := range b.values {
		if v.Path == path {
			return v.Source
		}
	}
	return ""
}

// Searched counts the values a search varies.
func (b *Brief) Searched() int {
	if b.Analytic != nil {
		return len(b.Analytic.Variables())
	}
	d := b.Definition
	return countSearched(d.RampAngle...) + countSearched(optional(d.CowlAngle)...) + countSearched(optional(d.LipTurning)...) +
		countSearched(d.CowlWedge, d.ShockOnLip, d.LipSetback)
}

func countSearched(settings ...inlet.Setting) int {
	n := 0
	for _, s := range settings {
		if s.Searched {
			n++
		}
	}
	return n
}

func optional(s *inlet.Setting) []inlet.Setting {
	if s == nil {
		return nil
	}
	return []inlet.Setting{*s}
}

// closureSearched reports whether the lip turning varies over the search box.
func closureSearched(d inlet.Definition) bool {
	return countSearched(d.RampAngle...)+countSearched(optional(d.CowlAngle)...)+countSearched(optional(d.LipTurning)...) > 0
}

// pointNames lists the points of the problem in order.
func (b *Brief) pointNames() []string {
	if b.Analytic != nil {
		return []string{analytic.Point}
	}
	names := make([]string, len(b.Flight))
	for i, c := range b.Flight {
		names[i] = c.Name
	}
	return names
}

// SearchedKeys returns the keys of the inlet whose value is searched, whole or
// in part: those a flow of one geometry needs by flag.
func (b *Brief) SearchedKeys() []Key {
	d := b.Definition
	var searched []Key
	for _, s := range []struct {
		name     string
		settings []inlet.Setting
	}{
		{"ramp_angle_deg", d.RampAngle},
		{"cowl_angle_deg", optional(d.CowlAngle)},
		{"lip_turning_deg", optional(d.LipTurning)},
		{"cowl_wedge_deg", []inlet.Setting{d.CowlWedge}},
		{"shock_on_lip_mach", []inlet.Setting{d.ShockOnLip}},
		{"lip_setback", []inlet.Setting{d.LipSetback}},
	} {
		if countSearched(s.settings...) > 0 {
			searched = append(searched, known(inletPart, s.name))
		}
	}
	return searched
}
