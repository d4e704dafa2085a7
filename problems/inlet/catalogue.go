package inlet

import "math"

// Scope says where a quantity lives.
type Scope int

const (
	// PerPoint is a quantity of the flow at each flight point.
	PerPoint Scope = iota
	// OfGeometry is a quantity of the frozen contour.
	OfGeometry
)

// Entry is one line of the catalogue of quantities: the only names used in
// limits, aims, tables and results.
type Entry struct {
	Name       string
	Unit       string // "" for a ratio
	Scope      Scope
	Definition string
	Source     string
	Applies    string // where it has a value

	value   func(a *analysis) (float64, error)        // of a quantity that stands alone
	members func(ramps int) []string                  // of a group: least over several shocks or ramps
	member  func(a *analysis, i int) (float64, error) // of member i of a group
	linear  func(d *Design) float64                   // of a quantity linear in the settings, rad
}

// Group reports whether the quantity is the least over several shocks or ramps,
// each a response of its own.
func (e *Entry) Group() bool { return e.members != nil }

// Catalogue returns every quantity in its fixed order. The slice is a copy.
func Catalogue() []Entry { return append([]Entry(nil), catalogue...) }

// Lookup returns the entry of that name.
func Lookup(name string) (Entry, bool) {
	for _, entry := range catalogue {
		if entry.Name == name {
			return entry, true
		}
	}
	return Entry{}, false
}

const (
	attached   = "shocks attached; where traced, average over the throat plane"
	everywhere = "always"
	closes     = "contour closes"
	atCorner   = "flow ahead of the ramp supersonic; where traced, along the body just ahead of its corner"
	atLip      = "ramp shocks attached; where traced, just ahead of the lip, turning below 0 where the cowl turns away"
	kilo       = 1e-3 // Pa to kPa
)

// catalogue is one line a quantity: name, unit, scope, definition, source, where
// it applies, and how it is read from an analysis.
var catalogue = []Entry{
	single(throat(func(a *analysis) float64 { return a.shockRecovery * a.def.DuctFactor })).as("recovery", "", PerPoint,
		"total pressure behind the last shock times the duct factor, over that of the free stream", "product of NACA Report 1135 shock ratios", attached),
	single(throat(func(a *analysis) float64 { return a.shockRecovery })).as("shock_recovery", "", PerPoint,
		"product of the total-pressure ratios of ramp shocks, lip shock and terminal shock", "NACA Report 1135", attached),
	single(throat((*analysis).kineticEnergyEfficiency)).as("kinetic_energy_efficiency", "", PerPoint,
		"1 - 2/((g-1) M0^2) (pi^(-(g-1)/g) - 1), pi the shock recovery", "Van Wie in Curran & Murthy 2000; Heiser & Pratt 1994 (from memory)", attached),
	single((*analysis).compressionEfficiency).as("compression_efficiency", "", PerPoint,
		"(psi - pi^(-(g-1)/g)) / (psi - 1), psi the static temperature ratio", "Heiser & Pratt 1994 (from memory)", attached+"; psi above 1"),
	single(throat(func(a *analysis) float64 { return -math.Log(a.shockRecovery) })).as("entropy_rise", "", PerPoint,
		"(s3 - s0)/R = -ln(shock recovery)", "second law for a perfect gas", attached),
	single(throat(func(a *analysis) float64 { return a.throatMach })).as("throat_mach", "", PerPoint,
		"Mach number in the throat, behind the terminal shock if there is one", "oblique and normal shock relations, NACA Report 1135", attached),
	single(throat(func(a *analysis) float64 { return a.pressureRatio * a.point.Pressure * kilo })).as("throat_pressure_kPa", "kPa", PerPoint,
		"static pressure in the throat, behind the terminal shock if there is one", "NACA Report 1135", attached),
	single(throat(func(a *analysis) float64 { return a.temperatureRatio * a.point.Temperature })).as("throat_temperature_K", "K", PerPoint,
		"static temperature in the throat, behind the terminal shock if there is one", "NACA Report 1135", attached),
	single(throat(func(a *analysis) float64 { return a.shockRecovery * a.totalPressure() * kilo })).as("throat_total_pressure_kPa", "kPa", PerPoint,
		"free-stream total pressure times shock recovery; no duct factor", "NACA Report 1135", attached),
	single(throat(func(a *analysis) float64 { return a.pressureRatio })).as("pressure_ratio", "", PerPoint,
		"throat static pressure over free-stream static pressure", "NACA Report 1135", attached),
	single(throat(func(a *analysis) float64 { return a.temperatureRatio })).as("temperature_ratio", "", PerPoint,
		"throat static temperature over free-stream static temperature", "NACA Report 1135", attached),
	single((*analysis).lipMachNumber).as("lip_mach", "", PerPoint,
		"Mach number behind the last ramp shock, ahead of the lip shock", "NACA Report 1135", "ramp shocks attached; where traced, just ahead of the lip"),
	single((*analysis).terminalMachNumber).as("terminal_mach", "", PerPoint,
		"Mach number ahead of the terminal normal shock", "NACA Report 1135", "terminal_shock is true"),
	group(everyRamp, (*analysis).rampMargin).as("ramp_attachment_margin_deg", "deg", PerPoint,
		"largest attached turning less the turning of each ramp", "NACA Report 1135", atCorner),
	single((*analysis).lipMargin).as("lip_attachment_margin_deg", "deg", PerPoint,
		"largest attached turning at the lip Mach number less the lip turning", "NACA Report 1135", atLip),
	single(func(a *analysis) (float64, error) { return a.cowlMargin / radian, nil }).as("cowl_attachment_margin_deg", "deg", PerPoint,
		"largest attached turning of the free stream less the turning of the outer cowl", "NACA Report 1135", everywhere),
	single(func(a *analysis) (float64, error) { return (a.reflection - a.lipTurning) / radian, a.lipErr }).as("lip_reflection_margin_deg", "deg", PerPoint,
		"largest turning of regular reflection (detachment or mechanical equilibrium, the lower) less the lip turning", "Ben-Dor, Shock Wave Reflection Phenomena (from memory)", atLip),
	group(cornersAndLip, (*analysis).separationMargin).as("separation_margin", "", PerPoint,
		"1 - (p2/p1) / limit at the corners of ramps 2.. and at the lip shock", "Korkegi 1975, turbulent (from memory)", "shocks attached; where traced, at the Mach number along the body, and an expansion at the lip counts by its p2/p1"),
	group(everyRampShock, (*analysis).lipClearance).as("lip_clearance", "", PerPoint,
		"distance along x from each ramp shock at lip height to the lip, over capture height; negative inside the lip", "geometry of straight shocks", "ramp shocks attached; where traced, of the shocks that reach the lip, a merged one as its neighbour nearer to it"),
	single((*analysis).lipShockMiss).as("lip_shock_miss", "", PerPoint,
		"distance along ramp and throat wall from the shoulder to the foot of the lip shock, over capture height", "geometry of straight shocks", "shocks attached, lip turning above 0; where traced, to where the lip shock first meets the body"),
	single(captured(func(a *analysis) float64 { return a.capture })).as("capture", "", PerPoint,
		"captured stream area normal to the free stream over capture area", "lip streamline followed through the shocks", "ramp shocks attached, in order, outside the lip; or the lip reached by a trace"),
	single(captured((*analysis).massFlow)).as("mass_flow_kg_s", "kg/s", PerPoint,
		"captured mass flow", "conservation of mass", "capture known"),
	single(captured(func(a *analysis) float64 { return a.spillage })).as("spillage_drag", "", PerPoint,
		"additive drag on the captured stream tube, coefficient on q0 Ac", "Sibulkin, NACA Report 1187", "capture known"),
	single(func(a *analysis) (float64, error) { return a.cowlDrag, a.cowlErr }).as("cowl_drag", "", PerPoint,
		"pressure drag of the outer cowl wedge in the free stream, coefficient on q0 Ac", "wedge flow, NACA Report 1135", "outer cowl shock attached"),
	single(func(a *analysis) (float64, error) { return a.selfStartLimit(), a.lipErr }).as("self_start_limit", "", PerPoint,
		"largest internal contraction that starts by itself: (A/A*) times the normal-shock recovery at the lip Mach number", "Kantrowitz & Donaldson, NACA ACR L5D20", "lip Mach number above 1"),
	single(contraction((*analysis).selfStartLimit)).as("internal_contraction_over_self_start", "", PerPoint,
		"internal contraction over the self-start limit", "Kantrowitz & Donaldson, NACA ACR L5D20", "lip Mach number above 1"),
	single(contraction((*analysis).isentropicCeiling)).as("internal_contraction_over_isentropic", "", PerPoint,
		"internal contraction over the isentropic ceiling A/A* at the lip Mach number", "NACA Report 1135", "lip Mach number above 1"),
	single((*analysis).contractionOverStarted).as("total_contraction_over_started", "", PerPoint,
		"captured area over throat area, times 0.05 - 0.52/M0 + 3.65/M0^2", "empirical: Van Wie et al. (from memory)", "capture known, free-stream Mach number 2.5 to 10"),
	single(free(func(a *analysis) float64 { return StandardRecovery(a.point.Mach) })).as("standard_recovery", "", PerPoint,
		"1 to Mach 1; 1 - 0.075 (M-1)^1.35 to Mach 5; 800/(M^4 + 935) above", "MIL-E-5007D", everywhere),
	single(free(func(a *analysis) float64 { return a.def.Gas.DynamicPressure(a.point.Pressure, a.point.Mach) * kilo })).as("dynamic_pressure_kPa", "kPa", PerPoint,
		"free-stream dynamic pressure, g/2 p M^2", "definition", everywhere),
	single(free(func(a *analysis) float64 { return a.point.Temperature * a.def.Gas.TotalTemperatureRatio(a.point.Mach) })).as("total_temperature_K", "K", PerPoint,
		"free-stream total temperature", "NACA Report 1135", everywhere),
	single(free(func(a *analysis) float64 { return a.totalPressure() * kilo })).as("total_pressure_kPa", "kPa", PerPoint,
		"free-stream total pressure", "NACA Report 1135", everywhere),
	single(free((*analysis).unitReynolds)).as("unit_reynolds_1_m", "1/m", PerPoint,
		"free-stream density times speed over viscosity (Sutherland)", "U.S. Standard Atmosphere 1976", everywhere),
	angle((*Design).TotalTurning).as("total_turning_deg", "deg", OfGeometry,
		"sum of the ramp turnings", "definition", everywhere),
	angle(func(d *Design) float64 { return d.LipTurning }).as("lip_turning_deg", "deg", OfGeometry,
		"turning of the flow at the lip: last ramp surface angle less inner cowl angle", "definition", everywhere),
	angle(func(d *Design) float64 { return d.Cowl }).as("cowl_angle_deg", "deg", OfGeometry,
		"angle of the inner cowl surface to the x axis", "definition", everywhere),
	angle((*Design).Outer).as("cowl_outer_angle_deg", "deg", OfGeometry,
		"angle of the outer cowl surface to the x axis", "definition", everywhere),
	single(closed(func(c *closure) float64 { return c.Shoulder.X })).as("length_m", "m", OfGeometry,
		"x of the shoulder", "shock focus and cancelled lip shock", closes),
	single(closed(func(c *closure) float64 { return c.Shoulder.X / c.height })).as("length_ratio", "", OfGeometry,
		"x of the shoulder over capture height", "shock focus and cancelled lip shock", closes),
	single(closed(func(c *closure) float64 { return c.Lip.X })).as("lip_x_m", "m", OfGeometry,
		"x of the cowl lip", "shock focus and setback", closes),
	single(closed(func(c *closure) float64 { return c.Throat })).as("throat_height_m", "m", OfGeometry,
		"distance from the shoulder to the inner cowl surface; of an outline, the vertical height of its throat plane", "cancelled lip shock", closes),
	group(everyRamp, (*analysis).rampLength).as("shortest_ramp_m", "m", OfGeometry,
		"length of each ramp surface", "shock focus", closes),
	group(everyRamp, func(a *analysis, i int) (float64, error) {
		length, err := a.rampLength(i)
		return length / a.shape.height, err
	}).as("shortest_ramp_ratio", "", OfGeometry,
		"length of each ramp surface over capture height", "shock focus", closes),
	single(closed(func(c *closure) float64 { return c.height / c.Throat })).as("total_contraction", "", OfGeometry,
		"capture height over throat height", "definition", closes),
	single(closed((*closure).internalContraction)).as("internal_contraction", "", OfGeometry,
		"height of the stream entering the duct over throat height", "continuity through the lip shock", closes),
}
