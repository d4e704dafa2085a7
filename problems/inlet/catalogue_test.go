package inlet

import (
	"errors"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"

	"rampwright/problems"
	"rampwright/problems/shock"
)

// The names a brief, a limit, an aim or a script may use, in their order: they
// never change but by addition.
const (
	pointNames = `recovery shock_recovery kinetic_energy_efficiency compression_efficiency entropy_rise
		throat_mach throat_pressure_kPa throat_temperature_K throat_total_pressure_kPa pressure_ratio temperature_ratio
		lip_mach terminal_mach ramp_attachment_margin_deg lip_attachment_margin_deg cowl_attachment_margin_deg
		lip_reflection_margin_deg separation_margin lip_clearance lip_shock_miss capture mass_flow_kg_s
		spillage_drag cowl_drag self_start_limit internal_contraction_over_self_start
		internal_contraction_over_isentropic total_contraction_over_started standard_recovery
		dynamic_pressure_kPa total_temperature_K total_pressure_kPa unit_reynolds_1_m`
	geometryNames = `total_turning_deg lip_turning_deg cowl_angle_deg cowl_outer_angle_deg length_m
		length_ratio lip_x_m throat_height_m shortest_ramp_m shortest_ramp_ratio total_contraction internal_contraction`
)

func TestCatalogueNames(t *testing.T) {
	names := map[Scope][]string{}
	for _, entry := range Catalogue() {
		names[entry.Scope] = append(names[entry.Scope], entry.Name)
	}
	for scope, want := range map[Scope]string{PerPoint: pointNames, OfGeometry: geometryNames} {
		if got := names[scope]; !slices.Equal(got, strings.Fields(want)) {
			t.Errorf("names\n%v\nwant\n%v", got, strings.Fields(want))
		}
	}
}

func TestCatalogueLinesAreComplete(t *testing.T) {
	safe := regexp.MustCompile(`^[a-z][a-zA-Z0-9]*(_[a-zA-Z0-9]+)*$`)
	units := map[string]string{"_kPa": "kPa", "_K": "K", "_deg": "deg", "_m": "m", "_kg_s": "kg/s", "_1_m": "1/m"}
	for _, entry := range Catalogue() {
		if !safe.MatchString(entry.Name) {
			t.Errorf("%q is no key of a document", entry.Name)
		}
		if entry.Definition == "" || entry.Source == "" || entry.Applies == "" {
			t.Errorf("%s: definition %q, source %q, applies %q", entry.Name, entry.Definition, entry.Source, entry.Applies)
		}
		unit, longest := "", 0
		for suffix, name := range units {
			if strings.HasSuffix(entry.Name, suffix) && len(suffix) > longest {
				unit, longest = name, len(suffix)
			}
		}
		if entry.Unit != unit {
			t.Errorf("%s has unit %q, its name says %q", entry.Name, entry.Unit, unit)
		}
		if found, ok := Lookup(entry.Name); !ok || found.Name != entry.Name {
			t.Errorf("%s is not found by its name", entry.Name)
		}
	}
	if _, ok := Lookup("recovry"); ok {
		t.Error("a name that does not exist is found")
	}
}

// Every quantity is computed once more by a plain formula on the second route's
// waves, so that a reader wired to the wrong number is seen.
func TestEveryQuantityByAPlainFormula(t *testing.T) {
	turned := veyric().lipTurned(6.5)
	turned.Gas.Gamma, turned.TerminalShock, turned.DuctFactor = 1.33, true, 0.93
	low := veyric()
	low.RampAngle = []Setting{Fixed(5), Fixed(6)}
	low.ShockOnLip = Fixed(4.5)
	low.Points[0].Mach, low.Points[1].Mach = 4.2, 2.4
	low = low.lipTurned(4)
	for name, d := range map[string]Definition{"given cowl": veyric(), "terminal shock": turned, "two ramps, slow": low} {
		t.Run(name, func(t *testing.T) {
			e := evaluate(t, d)
			for i, point := range d.Points {
				e.holds(t, point.Name, plainPoint(t, d, i), pointNames)
			}
			e.holds(t, problems.Geometry, plainGeometry(t, d).quantities, geometryNames)
		})
	}
}

// holds compares the quantities of one point with the plain values: NaN where
// the definition does not apply.
func (e evaluated) holds(t *testing.T, point string, plain map[string]float64, names string) {
	t.Helper()
	known := map[string]bool{}
	for _, q := range e.p.Quantities() {
		if q.Point != point {
			continue
		}
		full := q.Name
		if q.Member != "" {
			full += "/" + q.Member
		}
		known[q.Name] = true
		want, found := plain[full]
		if !found {
			t.Errorf("%s has no plain formula", full)
			continue
		}
		got, err := e.find(point, full)
		var elsewhere *problems.NotApplicable
		if math.IsNaN(want) {
			if !errors.As(err, &elsewhere) {
				t.Errorf("%s at %s applies: %v (%v)", full, point, got, err)
			}
			continue
		}
		if err != nil || math.Abs(got-want) > 1e-10*math.Max(1, math.Abs(want)) {
			t.Errorf("%s at %s is %v (%v), the plain formula says %v", full, point, got, err, want)
		}
	}
	for _, name := range strings.Fields(names) {
		if !known[name] {
			t.Errorf("%s is not a quantity at %s", name, point)
		}
	}
}

// plainShape is the contour by plain geometry, for incidence 0 and setback 0.
type plainShape struct {
	phi        []float64 // surface angle of each ramp
	x, y       []float64 // corners
	lipX       float64
	height     float64 // of the stream ahead of the lip
	kappa      float64
	lipWave    float64
	throat     float64
	quantities map[string]float64
}

func plainGeometry(t *testing.T, d Definition) plainShape {
	n, hc := len(d.RampAngle), d.CaptureHeight
	s := plainShape{phi: make([]float64, n), x: make([]float64, n), y: make([]float64, n)}
	total := 0.0
	for i, setting := range d.RampAngle {
		total += setting.Value * radian
		s.phi[i] = total
	}
	if d.LipTurning != nil {
		s.kappa = d.LipTurning.Value * radian
	} else {
		s.kappa = total - d.CowlAngle.Value*radian
	}
	waves := plainWaves(t, d, d.ShockOnLip.Value)
	s.lipX = hc / math.Tan(waves[0].WaveAngle)
	for i := 1; i < n; i++ {
		shockAngle := s.phi[i-1] + waves[i].WaveAngle
		// Sine rule in the triangle of corner i, corner i+1 and the focus.
		away := math.Hypot(s.lipX-s.x[i-1], hc-s.y[i-1])
		toFocus := math.Atan2(hc-s.y[i-1], s.lipX-s.x[i-1])
		length := away * math.Sin(shockAngle-toFocus) / math.Sin(waves[i].WaveAngle)
		s.x[i] = s.x[i-1] + length*math.Cos(s.phi[i-1])
		s.y[i] = s.y[i-1] + length*math.Sin(s.phi[i-1])
	}
	last := n - 1
	s.height = (hc-s.y[last])*math.Cos(total) - (s.lipX-s.x[last])*math.Sin(total)
	lip := plainWeak(t, d, waves[last].Mach2, s.kappa)
	s.lipWave = lip.WaveAngle
	reach := s.height / math.Sin(s.lipWave)
	s.throat = reach * math.Sin(s.lipWave-s.kappa)
	shoulderX := s.lipX + reach*math.Cos(total-s.lipWave)
	shoulderY := hc + reach*math.Sin(total-s.lipWave)
	s.quantities = map[string]float64{
		"total_turning_deg": total / radian, "lip_turning_deg": s.kappa / radian,
		"cowl_angle_deg":       (total - s.kappa) / radian,
		"cowl_outer_angle_deg": (total-s.kappa)/radian + d.CowlWedge.Value,
		"length_m":             shoulderX, "length_ratio": shoulderX / hc, "lip_x_m": s.lipX,
		"throat_height_m": s.throat, "total_contraction": hc / s.throat, "internal_contraction": s.height / s.throat,
	}
	for i := range n {
		endX, endY := shoulderX, shoulderY
		if i < last {
			endX, endY = s.x[i+1], s.y[i+1]
		}
		length := math.Hypot(endX-s.x[i], endY-s.y[i])
		s.quantities[fmt.Sprintf("shortest_ramp_m/ramp %d", i+1)] = length
		s.quantities[fmt.Sprintf("shortest_ramp_ratio/ramp %d", i+1)] = length / hc
	}
	return s
}

func plainWeak(t *testing.T, d Definition, mach, turning float64) shock.Oblique {
	t.Helper()
	wave, err := shock.WeakBracketed(d.Gas, mach, turning)
	if err != nil {
		t.Fatal(err)
	}
	return wave
}

func plainWaves(t *testing.T, d Definition, mach float64) []shock.Oblique {
	t.Helper()
	var waves []shock.Oblique
	for _, setting := range d.RampAngle {
		wave := plainWeak(t, d, mach, setting.Value*radian)
		waves = append(waves, wave)
		mach = wave.Mach2
	}
	return waves
}

// plainPoint computes every quantity at one flight point of incidence 0.
func plainPoint(t *testing.T, d Definition, i int) map[string]float64 {
	p, s := d.Points[i], plainGeometry(t, d)
	g, gamma, n, hc := d.Gas, d.Gas.Gamma, len(d.RampAngle), d.CaptureHeight
	q := gamma / 2 * p.Pressure * p.Mach * p.Mach
	totalOverStatic := 1 + (gamma-1)/2*p.Mach*p.Mach
	totalPressure := p.Pressure * math.Pow(totalOverStatic, gamma/(gamma-1))
	sound := math.Sqrt(gamma * g.R * p.Temperature)
	density := p.Pressure / g.R / p.Temperature
	values := map[string]float64{
		"dynamic_pressure_kPa": q / 1000, "total_pressure_kPa": totalPressure / 1000,
		"total_temperature_K": p.Temperature * totalOverStatic,
		"unit_reynolds_1_m":   density * p.Mach * sound / (1.458e-6 * math.Pow(p.Temperature, 1.5) / (p.Temperature + 110.4)),
		"standard_recovery":   plainStandardRecovery(p.Mach),
	}

	// Ramps.
	waves := plainWaves(t, d, p.Mach)
	pressure, temperature, recovery, wall := 1.0, 1.0, 1.0, 0.0
	for k, wave := range waves {
		largest, _ := shock.LargestTurningSearched(g, wave.Mach)
		values[fmt.Sprintf("ramp_attachment_margin_deg/ramp %d", k+1)] = (largest - d.RampAngle[k].Value*radian) / radian
		angle := wave.WaveAngle
		if k > 0 {
			angle += s.phi[k-1]
			values[fmt.Sprintf("separation_margin/ramp %d", k+1)] = 1 - wave.Jump.Pressure/plainSeparation(wave.Mach)
		}
		values[fmt.Sprintf("lip_clearance/ramp %d shock", k+1)] = (s.lipX - s.x[k] - (hc-s.y[k])/math.Tan(angle)) / hc
		pressure *= wave.Jump.Pressure
		temperature *= wave.Jump.Temperature
		recovery *= wave.Jump.TotalPressure
		end := hc - s.height*math.Cos(s.phi[n-1]) // y at the foot of the normal from the lip to ramp n
		if k+1 < n {
			end = s.y[k+1]
		}
		wall += p.Pressure * (pressure - 1) * (end - s.y[k])
	}

	// Captured stream: mass and momentum through the normal ahead of the lip.
	lipMach := waves[n-1].Mach2
	speed := lipMach * sound * math.Sqrt(temperature)
	mass := density * pressure / temperature * speed * s.height // per metre of width
	values["lip_mach"] = lipMach
	values["mass_flow_kg_s"] = mass * d.Width
	values["capture"] = mass / (density * p.Mach * sound * hc)
	exit := (mass*speed + p.Pressure*(pressure-1)*s.height) * math.Cos(s.phi[n-1])
	values["spillage_drag"] = (exit + wall - mass*p.Mach*sound) / (q * hc)

	// Lip and throat.
	lip := plainWeak(t, d, lipMach, s.kappa)
	largest, _ := shock.LargestTurningSearched(g, lipMach)
	values["lip_attachment_margin_deg"] = (largest - s.kappa) / radian
	values["lip_reflection_margin_deg"] = (shock.RegularReflectionBracketed(g, lipMach) - s.kappa) / radian
	values["separation_margin/lip shock"] = 1 - lip.Jump.Pressure/plainSeparation(lipMach)
	values["lip_shock_miss"] = math.Abs(s.height/math.Tan(lip.WaveAngle)-s.height/math.Tan(s.lipWave)) / hc
	pressure *= lip.Jump.Pressure
	temperature *= lip.Jump.Temperature
	recovery *= lip.Jump.TotalPressure
	mach := lip.Mach2
	values["terminal_mach"] = math.NaN()
	if d.TerminalShock {
		values["terminal_mach"] = mach
		behind, jump := shock.NormalByPrandtl(g, mach)
		pressure, temperature, recovery, mach = pressure*jump.Pressure, temperature*jump.Temperature, recovery*jump.TotalPressure, behind
	}
	values["throat_mach"] = mach
	values["pressure_ratio"], values["temperature_ratio"] = pressure, temperature
	values["throat_pressure_kPa"] = pressure * p.Pressure / 1000
	values["throat_temperature_K"] = temperature * p.Temperature
	values["shock_recovery"], values["recovery"] = recovery, recovery*d.DuctFactor
	values["throat_total_pressure_kPa"] = recovery * totalPressure / 1000
	values["entropy_rise"] = math.Log(temperature)*gamma/(gamma-1) - math.Log(pressure)

	// Temperature after an isentropic expansion from the throat to p0, over T0.
	expanded := temperature * math.Pow(pressure, -(gamma-1)/gamma)
	values["kinetic_energy_efficiency"] = (totalOverStatic - expanded) / (totalOverStatic - 1)
	values["compression_efficiency"] = (temperature - expanded) / (temperature - 1)

	// Starting.
	area := math.Pow((2+(gamma-1)*lipMach*lipMach)/(gamma+1), (gamma+1)/(2*(gamma-1))) / lipMach
	_, normal := shock.NormalByPrandtl(g, lipMach)
	values["self_start_limit"] = area * normal.TotalPressure
	values["internal_contraction_over_self_start"] = s.height / s.throat / (area * normal.TotalPressure)
	values["internal_contraction_over_isentropic"] = s.height / s.throat / area
	values["total_contraction_over_started"] = math.NaN()
	if p.Mach > 2.5 && p.Mach < 10 {
		values["total_contraction_over_started"] = values["capture"] * hc / s.throat * (0.05 - 0.52/p.Mach + 3.65/math.Pow(p.Mach, 2))
	}

	// Outer cowl.
	outer := s.phi[n-1] - s.kappa + d.CowlWedge.Value*radian
	largest, _ = shock.LargestTurningSearched(g, p.Mach)
	values["cowl_attachment_margin_deg"] = (largest - outer) / radian
	wedge := plainWeak(t, d, p.Mach, outer)
	values["cowl_drag"] = p.Pressure * (wedge.Jump.Pressure - 1) * d.CowlLength * hc * math.Tan(outer) / (q * hc)
	return values
}

func plainStandardRecovery(mach float64) float64 {
	if mach > 5 {
		return 800 / (mach*mach*mach*mach + 935)
	}
	return 1 - 0.075*math.Pow(mach-1, 1.35)
}

func plainSeparation(mach float64) float64 {
	if mach > 4.324 {
		return 0.17 * math.Pow(mach, 2.5)
	}
	return 1 + 0.3*mach*mach
}
