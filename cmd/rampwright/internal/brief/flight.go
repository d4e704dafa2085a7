package brief

import (
	"errors"
	"fmt"
	"math"

	"rampwright/problems/atmosphere"
)

// reserved are the words an `at` gives a meaning of its own.
var reserved = []string{"mean", "worst", "every", "geometry"}

// readFlight reads the flight conditions.
func (r *reader) readFlight(root *node) {
	entries := r.entries(root, flight)
	unstated := 1.0 // weight of a point that states none
	for _, entry := range entries {
		if entry.has("weight") {
			unstated = 0
		}
	}
	for _, entry := range entries {
		c := Condition{Name: r.pointName(entry), Weight: unstated}
		r.readCondition(entry, &c)
		r.brief.Flight = append(r.brief.Flight, c)
		r.brief.Definition.Points = append(r.brief.Definition.Points, c.point())
	}
}

// pointName reads and checks the name of a point.
func (r *reader) pointName(entry *node) string {
	n := r.value(entry, known(flight, "name"))
	if n == nil {
		return ""
	}
	if !isPointName(n.text) {
		r.add(n, Problem{Message: "not a name for a point", Value: n.shown(), Allowed: "a letter a-z, then a-z, 0-9 and _, up to 60"})
		return n.text
	}
	if contains(reserved, n.text) {
		r.add(n, Problem{Message: n.text + " is a reserved word", Value: n.text, Hint: "give the point another name"})
	}
	for _, c := range r.brief.Flight {
		if c.Name == n.text {
			r.add(n, Problem{Message: "two points are named " + n.text, Value: n.text, Hint: "names are unique"})
		}
	}
	return n.text
}

func isPointName(text string) bool {
	for i, c := range []byte(text) {
		if !(c >= 'a' && c <= 'z' || i > 0 && (c >= '0' && c <= '9' || c == '_')) {
			return false
		}
	}
	return text != "" && len(text) <= 60
}

// readCondition reads one entry of flight into c, whose weight is the default.
func (r *reader) readCondition(entry *node, c *Condition) {
	path := "flight." + c.Name + "."
	c.Mach = r.number(entry, known(flight, "mach"), path+"mach")
	r.readState(entry, c)
	c.IncidenceDeg = r.number(entry, known(flight, "incidence_deg"), path+"incidence_deg")
	c.Traced = r.readThroat(entry, path)
	k := known(flight, "weight")
	n := r.value(entry, k)
	if n != nil {
		c.Weight, _ = r.decimalOf(n, k, k.Name)
	}
	r.record(path+k.Name, exactNumber(c.Weight), "", n)
}

// readThroat reports whether every wave of a point is traced: of an outline always,
// and of a design where the point asks for it.
func (r *reader) readThroat(entry *node, path string) bool {
	k := known(flight, "throat")
	n, text := r.value(entry, k), k.Default
	if r.outlined {
		text = traced
	}
	switch {
	case n == nil:
	case !contains(k.Choices, n.text):
		r.add(n, Problem{Message: "throat is neither chain nor traced", Value: n.shown(), Allowed: k.Allowed(), Hint: nearestHint(n.text, k.Choices)})
		return false
	case r.outlined && n.text == chain:
		r.add(n, Problem{Message: "an outline has no chain of straight shocks: every point of it is traced", Value: n.shown(), Allowed: traced, Hint: "leave throat out"})
		return false
	default:
		text = n.text
	}
	r.record(path+k.Name, text, "", n)
	return text == traced
}

// ways are the keys that each state the ambient air.
var ways = []string{"dynamic_pressure_kPa", "altitude_km", "geometric_altitude_km", "pressure_kPa"}

// readState reads the ambient air, stated in exactly one way.
func (r *reader) readState(entry *node, c *Condition) {
	c.AltitudeKm, c.PressureKPa, c.TemperatureK = math.NaN(), math.NaN(), math.NaN()
	var stated []string
	for _, way := range ways {
		if entry.has(way) {
			stated = append(stated, way)
		}
	}
	switch {
	case len(stated) == 0:
		r.add(entry, Problem{Message: "the ambient air is not stated", Allowed: "exactly one of " + join(ways[:3]) + ", or pressure_kPa with temperature_K"})
		return
	case len(stated) > 1:
		r.add(entry.key(stated[1]), Problem{Message: "the ambient air is stated in more than one way: " + join(stated), Allowed: "exactly one of " + join(ways[:3]) + ", or pressure_kPa with temperature_K"})
		return
	case entry.has("temperature_K") && stated[0] != "pressure_kPa":
		r.add(entry.key("temperature_K"), Problem{Message: "temperature_K goes with pressure_kPa, not with " + stated[0], Hint: "the standard atmosphere gives the temperature"})
		return
	case stated[0] == "pressure_kPa" && !entry.has("temperature_K"):
		r.add(entry.key("pressure_kPa"), Problem{Message: "pressure_kPa needs temperature_K", Allowed: known(flight, "temperature_K").Allowed()})
	}
	k := known(flight, stated[0])
	n := r.value(entry, k)
	if n == nil {
		return
	}
	v, ok := r.decimalOf(n, k, k.Name)
	if !ok {
		return
	}
	c.Stated = k.Name + " " + exactNumber(v)
	path := "flight." + c.Name + "."
	r.record(path+k.Name, exactNumber(v), k.Unit, n)
	if k.Name == "pressure_kPa" {
		c.PressureKPa = v
		c.TemperatureK = r.number(entry, known(flight, "temperature_K"), path+"temperature_K")
		return
	}
	r.standardAir(n, k, v, c)
}

// standardAir turns the value v stated under key k into pressure and
// temperature of the standard atmosphere.
func (r *reader) standardAir(n *node, k Key, v float64, c *Condition) {
	var h float64 // geopotential altitude, m
	switch k.Name {
	case "altitude_km":
		h = v * 1000
	case "geometric_altitude_km":
		h = atmosphere.Geopotential(v * 1000)
	default:
		h = r.altitudeOf(n, v, c)
	}
	if math.IsNaN(h) {
		return
	}
	state, err := atmosphere.At(h)
	if err != nil {
		r.add(n, Problem{Message: err.Error(), Value: n.text})
		return
	}
	if math.IsNaN(c.PressureKPa) {
		c.PressureKPa = state.Pressure / 1000
	}
	c.TemperatureK = state.Temperature
	c.AltitudeKm = h / 1000
	path := "flight." + c.Name + "."
	r.derive(path+"pressure_kPa", c.PressureKPa, "kPa", n)
	r.derive(path+"temperature_K", c.TemperatureK, "K", n)
	if k.Name != "altitude_km" {
		r.derive(path+"altitude_km", c.AltitudeKm, "km", n)
	}
}

// pressureOf returns the static pressure at which Mach number m gives dynamic
// pressure q, in the unit of q: p = 2 q/(g M^2), the definition.
func pressureOf(q, m, g float64) float64 { return 2 * q / (g * m * m) }

// altitudeOf sets the pressure at which the Mach number gives dynamic pressure
// q, kPa, and returns the geopotential altitude of that pressure, m. It is NaN
// when Mach number or gas is wrong, which has been said, and when the altitude
// is not one a brief may state: then the dynamic pressures possible at this
// Mach number are reported.
func (r *reader) altitudeOf(n *node, q float64, c *Condition) float64 {
	c.PressureKPa = pressureOf(q, c.Mach, r.brief.Definition.Gas.Gamma)
	if math.IsNaN(c.PressureKPa) {
		return math.NaN()
	}
	k := known(flight, "altitude_km")
	h, err := atmosphere.AltitudeOf(c.PressureKPa * 1000)
	if err == nil && k.holds(h/1000) {
		return h
	}
	lowest, lowErr := atmosphere.At(k.Low * 1000)
	highest, highErr := atmosphere.At(k.High * 1000)
	if err := errors.Join(lowErr, highErr); err != nil {
		panic("brief: the table of keys leaves the standard atmosphere: " + err.Error())
	}
	perPascal := q / c.PressureKPa / 1000 // dynamic pressure, kPa, per static pressure, Pa
	r.add(n, Problem{
		Message: "no altitude of the standard atmosphere gives this dynamic pressure at Mach " + shortNumber(c.Mach),
		Value:   n.text,
		Allowed: fmt.Sprintf("about %.4g to %.4g kPa at this Mach number", perPascal*highest.Pressure, perPascal*lowest.Pressure),
		Hint:    fmt.Sprintf("it needs %.4g kPa static; altitudes are %s", c.PressureKPa, k.Allowed()),
	})
	return math.NaN()
}

// derive records a value that follows from a stated one.
func (r *reader) derive(path string, v float64, unit string, from *node) {
	r.brief.values = append(r.brief.values, Value{Path: path, Text: exactNumber(v), Unit: unit, Source: "from " + from.origin()})
}
