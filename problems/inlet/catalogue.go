package inlet

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
	Group      bool // least over several shocks or ramps
	Definition string
	Source     string
	Applies    string // where it has a value
}

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
	attached   = "shocks attached"
	everywhere = "always"
)

var catalogue = []Entry{
	{"recovery", "", PerPoint, false, "total pressure behind the last shock times the duct factor, over that of the free stream", "product of NACA Report 1135 shock ratios", attached},
	{"shock_recovery", "", PerPoint, false, "product of the total-pressure ratios of ramp shocks, lip shock and terminal shock", "NACA Report 1135", attached},
	{"kinetic_energy_efficiency", "", PerPoint, false, "1 - 2/((g-1) M0^2) (pi^(-(g-1)/g) - 1), pi the shock recovery", "Van Wie in Curran & Murthy 2000; Heiser & Pratt 1994 (from memory)", attached},
	{"compression_efficiency", "", PerPoint, false, "(psi - pi^(-(g-1)/g)) / (psi - 1), psi the static temperature ratio", "Heiser & Pratt 1994 (from memory)", attached + ", psi above 1"},
	{"entropy_rise", "", PerPoint, false, "(s3 - s0)/R = -ln(shock recovery)", "second law for a perfect gas", attached},
	{"throat_mach", "", PerPoint, false, "Mach number in the throat, behind the terminal shock if there is one", "oblique and normal shock relations, NACA Report 1135", attached},
	{"throat_pressure_kPa", "kPa", PerPoint, false, "static pressure in the throat, behind the terminal shock if there is one", "NACA Report 1135", attached},
	{"throat_temperature_K", "K", PerPoint, false, "static temperature in the throat, behind the terminal shock if there is one", "NACA Report 1135", attached},
	{"throat_total_pressure_kPa", "kPa", PerPoint, false, "free-stream total pressure times shock recovery; no duct factor", "NACA Report 1135", attached},
	{"pressure_ratio", "", PerPoint, false, "throat static pressure over free-stream static pressure", "NACA Report 1135", attached},
	{"temperature_ratio", "", PerPoint, false, "throat static temperature over free-stream static temperature", "NACA Report 1135", attached},
	{"lip_mach", "", PerPoint, false, "Mach number behind the last ramp shock, ahead of the lip shock", "NACA Report 1135", "ramp shocks attached"},
	{"terminal_mach", "", PerPoint, false, "Mach number ahead of the terminal normal shock", "NACA Report 1135", "terminal_shock is true"},
	{"ramp_attachment_margin_deg", "deg", PerPoint, true, "largest attached turning less the turning of each ramp", "NACA Report 1135", "flow ahead of the ramp supersonic"},
	{"lip_attachment_margin_deg", "deg", PerPoint, false, "largest attached turning at the lip Mach number less the lip turning", "NACA Report 1135", "ramp shocks attached"},
	{"cowl_attachment_margin_deg", "deg", PerPoint, false, "largest attached turning of the free stream less the turning of the outer cowl", "NACA Report 1135", everywhere},
	{"lip_reflection_margin_deg", "deg", PerPoint, false, "largest turning of regular reflection (detachment or mechanical equilibrium, the lower) less the lip turning", "Ben-Dor, Shock Wave Reflection Phenomena (from memory)", "ramp shocks attached"},
	{"separation_margin", "", PerPoint, true, "1 - (p2/p1) / limit at the corners of ramps 2.. and at the lip shock", "Korkegi 1975, turbulent (from memory)", attached},
	{"lip_clearance", "", PerPoint, true, "distance along x from each ramp shock at lip height to the lip, over capture height; negative inside the lip", "geometry of straight shocks", "ramp shocks attached"},
	{"lip_shock_miss", "", PerPoint, false, "distance along ramp and throat wall from the shoulder to the foot of the lip shock, over capture height", "geometry of straight shocks", attached + ", lip turning above 0"},
	{"capture", "", PerPoint, false, "captured stream area normal to the free stream over capture area", "lip streamline traced through the ramp shocks", "ramp shocks attached, in order, outside the lip"},
	{"mass_flow_kg_s", "kg/s", PerPoint, false, "captured mass flow", "conservation of mass", "capture known"},
	{"spillage_drag", "", PerPoint, false, "additive drag on the captured stream tube, coefficient on q0 Ac", "Sibulkin, NACA Report 1187", "capture known"},
	{"cowl_drag", "", PerPoint, false, "pressure drag of the outer cowl wedge in the free stream, coefficient on q0 Ac", "wedge flow, NACA Report 1135", "outer cowl shock attached"},
	{"self_start_limit", "", PerPoint, false, "largest internal contraction that starts by itself: (A/A*) times the normal-shock recovery at the lip Mach number", "Kantrowitz & Donaldson, NACA ACR L5D20", "lip Mach number above 1"},
	{"internal_contraction_over_self_start", "", PerPoint, false, "internal contraction over the self-start limit", "Kantrowitz & Donaldson, NACA ACR L5D20", "lip Mach number above 1"},
	{"internal_contraction_over_isentropic", "", PerPoint, false, "internal contraction over the isentropic ceiling A/A* at the lip Mach number", "NACA Report 1135", "lip Mach number above 1"},
	{"total_contraction_over_started", "", PerPoint, false, "captured area over throat area, times 0.05 - 0.52/M0 + 3.65/M0^2", "empirical: Van Wie et al. (from memory)", "capture known, free-stream Mach number 2.5 to 10"},
	{"standard_recovery", "", PerPoint, false, "1 to Mach 1; 1 - 0.075 (M-1)^1.35 to Mach 5; 800/(M^4 + 935) above", "MIL-E-5007D", everywhere},
	{"dynamic_pressure_kPa", "kPa", PerPoint, false, "free-stream dynamic pressure, g/2 p M^2", "definition", everywhere},
	{"total_temperature_K", "K", PerPoint, false, "free-stream total temperature", "NACA Report 1135", everywhere},
	{"total_pressure_kPa", "kPa", PerPoint, false, "free-stream total pressure", "NACA Report 1135", everywhere},
	{"unit_reynolds_1_m", "1/m", PerPoint, false, "free-stream density times speed over viscosity (Sutherland)", "U.S. Standard Atmosphere 1976", everywhere},

	{"total_turning_deg", "deg", OfGeometry, false, "sum of the ramp turnings", "definition", everywhere},
	{"lip_turning_deg", "deg", OfGeometry, false, "turning of the flow at the lip: last ramp surface angle less inner cowl angle", "definition", everywhere},
	{"cowl_angle_deg", "deg", OfGeometry, false, "angle of the inner cowl surface to the x axis", "definition", everywhere},
	{"cowl_outer_angle_deg", "deg", OfGeometry, false, "angle of the outer cowl surface to the x axis", "definition", everywhere},
	{"length_m", "m", OfGeometry, false, "x of the shoulder", "shock focus and cancelled lip shock", "geometry closes"},
	{"length_ratio", "", OfGeometry, false, "x of the shoulder over capture height", "shock focus and cancelled lip shock", "geometry closes"},
	{"lip_x_m", "m", OfGeometry, false, "x of the cowl lip", "shock focus and setback", "geometry closes"},
	{"throat_height_m", "m", OfGeometry, false, "distance from the shoulder to the inner cowl surface", "cancelled lip shock", "geometry closes"},
	{"shortest_ramp_m", "m", OfGeometry, true, "length of each ramp surface", "shock focus", "geometry closes"},
	{"shortest_ramp_ratio", "", OfGeometry, true, "length of each ramp surface over capture height", "shock focus", "geometry closes"},
	{"total_contraction", "", OfGeometry, false, "capture height over throat height", "definition", "geometry closes"},
	{"internal_contraction", "", OfGeometry, false, "height of the stream entering the duct over throat height", "continuity through the lip shock", "geometry closes"},
}
