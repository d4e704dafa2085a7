package brief

import (
	"fmt"
	"math"
	"strconv"

	"rampwright/optimize"
	"rampwright/problems/analytic"
)

// Form says what a key holds.
type Form string

const (
	Number  Form = "number"                // one decimal number
	Whole   Form = "whole number"          // digits only
	Search  Form = "number or range"       // a number is fixed, {from, to} is searched
	Ramps   Form = "number, range or list" // Search, or a list with one Search per ramp
	Text    Form = "text"
	Truth   Form = "true or false"
	Choice  Form = "choice"
	Side    Form = "number or none"
	Points  Form = "point, every or list of points"
	Formula Form = "quantity or formula"
	Wall    Form = "list of [x, y] points" // in the order of the flow
	Part    Form = "section"
	Parts   Form = "list of sections"
)

// Key is one key of the brief.
type Key struct {
	Section   string // "" at the top
	Name      string
	Form      Form
	Unit      string
	Low, High float64 // allowed range of a number, both ends included; of a list, of its length
	OpenLow   bool    // Low itself is excluded
	Choices   []string
	Default   string // value when absent; "" when there is none
	Required  bool
	Unless    string // key of the same section in whose presence this one has no place
	Flag      bool   // may be set on the command line, with dashes
	Meaning   string
}

// Keys returns every key in the order of the documentation. The slice is a copy.
func Keys() []Key { return append([]Key(nil), keys...) }

// Sections hold the keys of the brief below the top; the names of flight and
// limits are those of one entry of their list.
const (
	top         = ""
	flight      = "flight"
	gasModel    = "gas"
	inletPart   = "inlet"
	outlinePart = "outline" // in inlet
	problemPart = "problem"
	aimPart     = "aim"
	limits      = "limits"
	tolerance   = "tolerance"
	effort      = "effort"
	span        = "range" // the {from, to} of a searched value
)

var unbounded = math.Inf(1)

var keys = []Key{
	{Name: "brief", Form: Whole, Low: 1, High: 1, Required: true, Meaning: "version of the format"},
	{Name: "title", Form: Text, Required: true, Meaning: "what is designed, one line"},
	{Name: flight, Form: Parts, Low: 1, High: 50, Required: true, Unless: problemPart, Meaning: "the conditions met; the first is the design point"},
	{Name: gasModel, Form: Part, Unless: problemPart, Meaning: "the working fluid"},
	{Name: inletPart, Form: Part, Required: true, Unless: problemPart, Meaning: "the inlet: what is fixed and what is searched"},
	{Name: problemPart, Form: Part, Meaning: "a published test problem in place of an inlet: its own variables, aim and limits"},
	{Name: aimPart, Form: Part, Meaning: "what the search drives; flow needs none"},
	{Name: limits, Form: Parts, Low: 1, High: 500, Meaning: "what the inlet must keep"},
	{Name: "defaults", Form: Truth, Default: "true", Flag: true, Meaning: "the default limits; false keeps only the hard ones"},
	{Name: tolerance, Form: Part, Unless: problemPart, Meaning: "scatter of the built inlet, standard deviations truncated at 4"},
	{Name: effort, Form: Part, Meaning: "how much the search may spend"},

	{Section: flight, Name: "name", Form: Text, Required: true, Meaning: "name of the point: a-z, then a-z, 0-9 and _"},
	{Section: flight, Name: "mach", Form: Number, Low: 1.5, High: 10, Required: true, Meaning: "free-stream Mach number"},
	{Section: flight, Name: "dynamic_pressure_kPa", Form: Number, Unit: "kPa", Low: 0.01, High: 1000, Meaning: "free-stream dynamic pressure; the state is that of the standard atmosphere at the altitude of the pressure it gives"},
	{Section: flight, Name: "altitude_km", Form: Number, Unit: "km", Low: 0, High: 80, Meaning: "geopotential altitude in the standard atmosphere"},
	{Section: flight, Name: "geometric_altitude_km", Form: Number, Unit: "km", Low: 0, High: 81, Meaning: "geometric altitude in the standard atmosphere"},
	{Section: flight, Name: "pressure_kPa", Form: Number, Unit: "kPa", Low: 0.0001, High: 1000, Meaning: "free-stream static pressure, with temperature_K"},
	{Section: flight, Name: "temperature_K", Form: Number, Unit: "K", Low: 40, High: 1000, Meaning: "free-stream static temperature, with pressure_kPa"},
	{Section: flight, Name: "incidence_deg", Form: Number, Unit: "deg", Low: -10, High: 10, Default: "0", Meaning: "incidence; positive turns the free stream toward the ramp"},
	{Section: flight, Name: "throat", Form: Choice, Choices: []string{chain, traced}, Default: chain, Meaning: "what the throat is: chain, the state just behind the straight lip shock (all the same traced where ramp shocks cross ahead of the lip or fall inside it); traced, the average behind every wave in the duct, for a point flown off shock-on-lip, whose lip shock misses the shoulder and reflects. An outline is always traced"},
	{Section: flight, Name: "weight", Form: Number, Low: 0, High: 1e6, Default: "1 if no point states one, else 0", Meaning: "weight of the point in the mean of an aim"},

	{Section: gasModel, Name: "model", Form: Choice, Choices: []string{perfect}, Default: perfect, Meaning: "model of the gas"},
	{Section: gasModel, Name: "ratio_of_specific_heats", Form: Number, Low: 1, OpenLow: true, High: 5. / 3, Default: "1.4", Flag: true, Meaning: "ratio of specific heats of the perfect gas"},

	{Section: inletPart, Name: "capture_height_m", Form: Number, Unit: "m", Low: 0.001, High: 20, Required: true, Unless: outlinePart, Flag: true, Meaning: "height of the lip above the leading edge of the first ramp"},
	{Section: inletPart, Name: "width_m", Form: Number, Unit: "m", Low: 0.001, High: 50, Required: true, Flag: true, Meaning: "span of the planar inlet"},
	{Section: inletPart, Name: "ramps", Form: Whole, Low: 1, High: 8, Required: true, Unless: outlinePart, Flag: true, Meaning: "number of ramps"},
	{Section: inletPart, Name: "ramp_angle_deg", Form: Ramps, Unit: "deg", Low: 0.1, High: 40, Required: true, Unless: outlinePart, Flag: true, Meaning: "turning of each ramp from the one before"},
	{Section: inletPart, Name: "cowl_angle_deg", Form: Search, Unit: "deg", Low: -20, High: 60, Unless: outlinePart, Flag: true, Meaning: "angle of the inner cowl surface to the x axis; or lip_turning_deg"},
	{Section: inletPart, Name: "lip_turning_deg", Form: Search, Unit: "deg", Low: 0, High: 40, Unless: outlinePart, Flag: true, Meaning: "turning at the lip, last ramp surface less inner cowl surface; 0 is an aligned cowl; or cowl_angle_deg"},
	{Section: inletPart, Name: "cowl_wedge_deg", Form: Search, Unit: "deg", Low: 0, High: 30, Default: "4", Unless: outlinePart, Flag: true, Meaning: "outer less inner cowl angle"},
	{Section: inletPart, Name: "cowl_length", Form: Number, Low: 0, High: 10, Default: "0.25", Flag: true, Meaning: "outer cowl along x, fraction of capture height, for cowl drag"},
	{Section: inletPart, Name: "shock_on_lip_mach", Form: Search, Low: 1.5, High: 12, Default: "the Mach number of the design point", Unless: outlinePart, Flag: true, Meaning: "Mach number at which every ramp shock meets the lip"},
	{Section: inletPart, Name: "lip_setback", Form: Search, Low: 0, High: 0.5, Default: "0", Unless: outlinePart, Flag: true, Meaning: "lip behind the focus of the ramp shocks, fraction of capture height"},
	{Section: inletPart, Name: "terminal_shock", Form: Truth, Default: "false", Flag: true, Meaning: "a normal shock stands in the throat"},
	{Section: inletPart, Name: "duct_factor", Form: Number, Low: 0, OpenLow: true, High: 1, Default: "1", Flag: true, Meaning: "total-pressure factor behind the last shock"},

	{Section: inletPart, Name: outlinePart, Form: Part, Meaning: "the walls of an existing inlet, in place of ramps and cowl: flow traces it, nothing is searched"},

	{Section: outlinePart, Name: "body_m", Form: Wall, Unit: "m", Low: -1000, High: 1000, Required: true, Meaning: "corners of the body from the leading edge [0, 0] downstream"},
	{Section: outlinePart, Name: "cowl_inner_m", Form: Wall, Unit: "m", Low: -1000, High: 1000, Required: true, Meaning: "corners of the inner cowl from the lip downstream; the y of the lip is the capture height"},
	{Section: outlinePart, Name: "cowl_outer_angle_deg", Form: Number, Unit: "deg", Low: -20, High: 60, Required: true, Meaning: "angle of the outer cowl surface to the x axis"},
	{Section: outlinePart, Name: "throat_x_m", Form: Number, Unit: "m", Low: 0, OpenLow: true, High: 1000, Required: true, Meaning: "x of the vertical plane, behind the lip, on which the throat is averaged"},

	{Section: problemPart, Name: "analytic", Form: Choice, Choices: analytic.Names(), Required: true, Meaning: "name of the problem"},

	{Section: aimPart, Name: "highest", Form: Formula, Meaning: "what is driven up; or lowest"},
	{Section: aimPart, Name: "lowest", Form: Formula, Meaning: "what is driven down; or highest"},
	{Section: aimPart, Name: "at", Form: Text, Default: "the first point", Meaning: "a point, mean (over the weights above 0) or worst (over every point)"},

	{Section: limits, Name: "quantity", Form: Text, Required: true, Meaning: "name of a quantity; the row replaces its default limit at the points named"},
	{Section: limits, Name: "at_least", Form: Side, Low: -unbounded, High: unbounded, Meaning: "lower side; none states that there is none"},
	{Section: limits, Name: "at_most", Form: Side, Low: -unbounded, High: unbounded, Meaning: "upper side; none states that there is none"},
	{Section: limits, Name: "at", Form: Points, Default: "the first point", Meaning: "where it holds; the last row that names a point counts there"},

	{Section: tolerance, Name: "ramp_angle_deg", Form: Number, Unit: "deg", Low: 0, High: 2, Default: "0", Meaning: "standard deviation of each ramp angle"},
	{Section: tolerance, Name: "cowl_angle_deg", Form: Number, Unit: "deg", Low: 0, High: 2, Default: "0", Meaning: "standard deviation of the cowl angle, inner and outer surface together"},
	{Section: tolerance, Name: "lip_setback", Form: Number, Low: 0, High: 0.1, Default: "0", Meaning: "standard deviation of the place of the lip along x, fraction of capture height"},
	{Section: tolerance, Name: "mach", Form: Number, Low: 0, High: 1, Default: "0", Meaning: "standard deviation of the flight Mach number, common to all points"},
	{Section: tolerance, Name: "incidence_deg", Form: Number, Unit: "deg", Low: 0, High: 5, Default: "0", Meaning: "standard deviation of the incidence, common to all points"},
	{Section: tolerance, Name: "confidence", Form: Number, Low: 0.5, High: 0.999, Flag: true, Meaning: "least probability with which design holds each limit; without it tolerances do not bear on the design"},

	{Section: effort, Name: "samples", Form: Whole, Low: 2, High: 100000, Default: "15 per searched value", Flag: true, Meaning: "exact evaluations of the first design of experiments"},
	{Section: effort, Name: "infill", Form: Whole, Low: 1, High: 100000, Default: "10 per searched value", Flag: true, Meaning: "exact evaluations chosen by the search"},
	{Section: effort, Name: "batch", Form: Whole, Low: 1, High: optimize.MostBatch, Default: "one or two, as the search needs", Flag: true, Meaning: "evaluations the search chooses together, round by round, for a slow model that runs so many side by side"},
	{Section: effort, Name: "seed", Form: Whole, Low: 1, High: 1<<53 - 1, Default: "1", Flag: true, Meaning: "seed of every random stream"},
	{Section: effort, Name: "agreement", Form: Number, Low: 1e-9, High: 0.1, Default: "1e-3", Flag: true, Meaning: "largest error of the surrogates at the optimum, relative"},

	{Section: span, Name: "from", Form: Number, Required: true, Low: -unbounded, High: unbounded, Meaning: "low end of a searched value"},
	{Section: span, Name: "to", Form: Number, Required: true, Low: -unbounded, High: unbounded, Meaning: "high end of a searched value"},
}

const perfect = "perfect"

// What the throat of a flight point is taken from.
const (
	chain  = "chain"
	traced = "traced"
)

// Samples and infill asked for when the brief states none, a searched value:
// common practice.
const (
	samplesPerSearched = 15
	infillPerSearched  = 10
)

// find returns the key of that section and name.
func find(section, name string) (Key, bool) {
	for _, k := range keys {
		if k.Section == section && k.Name == name {
			return k, true
		}
	}
	return Key{}, false
}

// known returns a key the code names itself.
func known(section, name string) Key {
	k, ok := find(section, name)
	if !ok {
		panic("brief: no key " + section + "." + name) // a misspelt name in this package
	}
	return k
}

// namesOf lists the keys of a section in order.
func namesOf(section string) []string {
	var names []string
	for _, k := range keys {
		if k.Section == section {
			names = append(names, k.Name)
		}
	}
	return names
}

// Path is the key's place as shown in tables: "inlet.width_m".
func (k Key) Path() string {
	switch k.Section {
	case top:
		return k.Name
	case outlinePart:
		return inletPart + "." + outlinePart + "." + k.Name
	}
	return k.Section + "." + k.Name
}

// FlagName is the command-line flag that sets the key: "--width-m".
func (k Key) FlagName() string { return flagName(k.Name) }

// Allowed states the values the key takes: "0.1 to 40 deg".
func (k Key) Allowed() string {
	switch k.Form {
	case Number, Whole, Search, Ramps:
		return k.allowedNumbers()
	case Choice:
		return join(k.Choices)
	case Side:
		return "a decimal number or none"
	case Wall:
		return fmt.Sprintf("%d to %d points [x, y], x rising", leastPoints, mostPoints)
	case Parts:
		return "list of up to " + shortNumber(k.High) + " sections"
	default:
		return string(k.Form)
	}
}

func (k Key) allowedNumbers() string {
	if math.IsInf(k.Low, -1) {
		return "any decimal number"
	}
	text := shortNumber(k.Low) + " to " + shortNumber(k.High)
	switch {
	case k.Low == k.High:
		text = shortNumber(k.Low)
	case k.OpenLow:
		text = "above " + shortNumber(k.Low) + ", to " + shortNumber(k.High)
	}
	if k.Form == Whole && k.Low < k.High {
		text = fmt.Sprintf("whole number, %s", text)
	}
	if k.Unit != "" {
		text += " " + k.Unit
	}
	return text
}

// holds reports whether v lies in the key's range.
func (k Key) holds(v float64) bool {
	return v <= k.High && (v > k.Low || v == k.Low && !k.OpenLow)
}

// fallback is the default of a key whose Default is a number.
func (k Key) fallback() float64 {
	v, err := strconv.ParseFloat(k.Default, 64)
	if err != nil {
		panic("brief: the default of " + k.Path() + " is no number") // a wrong table in this package
	}
	return v
}
