package brief

import (
	"errors"
	"math"
	"strings"
	"testing"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// read reads a brief that must be sound.
func read(t testing.TB, text string, overrides Overrides) *Brief {
	t.Helper()
	b, err := Read("dir/test.yaml", []byte(text), overrides)
	if err != nil {
		t.Fatalf("unwanted problems:\n%v", err)
	}
	return b
}

// edited is the sound brief with pairs of texts replaced.
func edited(t testing.TB, pairs ...string) string {
	t.Helper()
	text := sound
	for i := 0; i < len(pairs); i += 2 {
		if !strings.Contains(text, pairs[i]) {
			t.Fatalf("the brief has no %q", pairs[i])
		}
		text = strings.Replace(text, pairs[i], pairs[i+1], 1)
	}
	return text
}

func TestValuesOfTheSoundBrief(t *testing.T) {
	b := read(t, sound, nil)
	d := b.Definition
	if b.Name != "test" || b.Title != "A test inlet" || !b.Defaults {
		t.Errorf("name %q, title %q, defaults %v", b.Name, b.Title, b.Defaults)
	}
	if d.CaptureHeight != 0.16 || d.Width != 0.2 || d.CowlWedge != inlet.Fixed(4) || d.CowlLength != 0.25 || d.DuctFactor != 1 || d.TerminalShock {
		t.Errorf("definition %+v", d)
	}
	if len(d.RampAngle) != 3 || d.RampAngle[2] != inlet.Between(3, 16) || *d.CowlAngle != inlet.Between(2, 12) || d.LipTurning != nil {
		t.Errorf("angles %+v, cowl %+v", d.RampAngle, d.CowlAngle)
	}
	if d.ShockOnLip != inlet.Fixed(6) || d.LipSetback != inlet.Fixed(0) {
		t.Errorf("shock on lip %+v, setback %+v", d.ShockOnLip, d.LipSetback)
	}
	if b.Effort != (Effort{Samples: 60, Infill: 40, Seed: 1, Agreement: 1e-3}) || b.Tolerance != (Tolerance{RampAngleDeg: 0.1, Mach: 0.03, IncidenceDeg: 0.5, Confidence: 0.95}) || !b.Tolerance.Any() {
		t.Errorf("effort %+v, tolerance %+v", b.Effort, b.Tolerance)
	}
	if b.Flight[0].Weight != 1 || b.Flight[1].Weight != 0 {
		t.Errorf("weights %v, %v: want 1 as stated, 0 because another states one", b.Flight[0].Weight, b.Flight[1].Weight)
	}
	if b.Searched() != 4 {
		t.Errorf("%d searched values, want 4", b.Searched())
	}
}

// Without a confidence tolerances do not bear on a design; the searchable settings
// take a number or a range.
func TestToleranceAndSearchableSettings(t *testing.T) {
	b := read(t, edited(t, ", confidence: 0.95", ", cowl_angle_deg: 0.05, lip_setback: 0.002", "cowl_wedge_deg: 4",
		"cowl_wedge_deg: 4\n  lip_setback: {from: 0, to: 0.1}"), Overrides{"shock_on_lip_mach": "6..6.5"})
	if b.Tolerance != (Tolerance{0.1, 0.05, 0.002, 0.03, 0.5, 0}) || b.Tolerance.Deviations() != (inlet.Tolerances{RampAngle: 0.1, CowlAngle: 0.05, LipSetback: 0.002, Mach: 0.03, Incidence: 0.5}) {
		t.Errorf("tolerance %+v", b.Tolerance)
	}
	if d := b.Definition; d.LipSetback != inlet.Between(0, 0.1) || d.ShockOnLip != inlet.Between(6, 6.5) || b.Searched() != 6 {
		t.Errorf("setback %+v, shock on lip %+v, %d searched", d.LipSetback, d.ShockOnLip, b.Searched())
	}
	if again := read(t, string(b.ResolvedYAML()), nil); again.Tolerance != b.Tolerance {
		t.Errorf("read back: %+v", again.Tolerance)
	}
	if none := read(t, edited(t, "tolerance: {ramp_angle_deg: 0.1, mach: 0.03, incidence_deg: 0.5, confidence: 0.95}\n", ""), nil); none.Tolerance.Any() || none.Tolerance.Confidence != 0 {
		t.Errorf("without the section: %+v", none.Tolerance)
	}
}

// TestFlightStates checks the four ways to state the air against one another
// and against the published table: 24 km geometric is 2971.7 Pa, 220.56 K
// (U.S. Standard Atmosphere 1976).
func TestFlightStates(t *testing.T) {
	b := read(t, edited(t, "altitude_km: 22.8", "geometric_altitude_km: 24"), nil)
	p := b.Definition.Points[1]
	if math.Abs(p.Pressure-2971.7) > 0.05 || math.Abs(p.Temperature-220.56) > 0.005 {
		t.Errorf("24 km geometric: %v Pa, %v K", p.Pressure, p.Temperature)
	}
	q := 0.7 * p.Pressure / 1000 * 4.5 * 4.5
	b = read(t, edited(t, "altitude_km: 22.8", "dynamic_pressure_kPa: "+exactNumber(q)), nil)
	if got := b.Definition.Points[1]; math.Abs(got.Pressure/p.Pressure-1) > 1e-14 || math.Abs(got.Temperature/p.Temperature-1) > 1e-12 {
		t.Errorf("by dynamic pressure %v Pa, %v K, want %v Pa, %v K", got.Pressure, got.Temperature, p.Pressure, p.Temperature)
	}
	b = read(t, edited(t, "altitude_km: 22.8", "altitude_km: "+exactNumber(b.Flight[1].AltitudeKm)), nil)
	if got := b.Definition.Points[1]; math.Abs(got.Pressure/p.Pressure-1) > 1e-12 {
		t.Errorf("by altitude %v Pa, want %v Pa", got.Pressure, p.Pressure)
	}
	b = read(t, edited(t, "altitude_km: 22.8", "pressure_kPa: 3, temperature_K: 220, incidence_deg: -2"), nil)
	if got := b.Definition.Points[1]; got.Pressure != 3000 || got.Temperature != 220 || got.Incidence != -2*math.Pi/180 || !math.IsNaN(b.Flight[1].AltitudeKm) {
		t.Errorf("by pressure and temperature %+v", got)
	}
}

func TestSourcesOfValues(t *testing.T) {
	b := read(t, sound, Overrides{"width_m": "0.3", "cowl_length": "0.5"})
	for path, want := range map[string]string{
		"inlet.width_m": "--width-m", "inlet.cowl_length": "--cowl-length", "inlet.lip_setback": "default",
		"inlet.capture_height_m": "line 8", "flight.cruise.mach": "line 4", "flight.cruise.pressure_kPa": "from line 4",
		"flight.takeover.weight": "default", "effort.seed": "line 21", "inlet.shock_on_lip_mach": "default", "no.such": "",
	} {
		if got := b.Source(path); got != want {
			t.Errorf("source of %s is %q, want %q", path, got, want)
		}
	}
	values := b.Values()
	values[0].Text = "changed"
	if b.Values()[0].Text == "changed" {
		t.Error("Values hands out its own slice")
	}
	seen := map[string]bool{}
	for _, v := range values {
		if seen[v.Path] {
			t.Errorf("%s is listed twice", v.Path)
		}
		seen[v.Path] = true
	}
}

func TestByteOrderMarkAndLineEndings(t *testing.T) {
	plain := read(t, sound, nil)
	windows := read(t, "\ufeff"+strings.ReplaceAll(sound, "\n", "\r\n"), nil)
	if plain.Hash() != windows.Hash() {
		t.Error("byte order mark and CRLF change the brief")
	}
	_, err := Read("b.yaml", []byte("\ufeff"+strings.ReplaceAll(edited(t, "ramps: 3", "ramps: 99"), "\n", "\r\n")), nil)
	var ps Problems
	if !errors.As(err, &ps) || ps[0].Line != 10 || ps[0].Column != 10 || ps[0].SourceLine != "  ramps: 99" {
		t.Errorf("%+v", ps)
	}
}

func TestAllProblemsInOneReadingByPosition(t *testing.T) {
	text := edited(t, "mach: 6,", "mach: 66,", "width_m: 0.20", "width: 0.20", "highest: recovery", "highest: recovry",
		"at: every", "at: nowhere", "title: A test inlet\n", "")
	_, err := Read("b.yaml", []byte(text), Overrides{"seed": "x", "flight": "1", "samples": ""})
	var ps Problems
	if !errors.As(err, &ps) {
		t.Fatal(err)
	}
	want := []string{
		"--flight: no value of a brief can be set by this flag",
		"--samples: the flag has an empty value",
		"--seed: seed is not a whole number",
		"b.yaml:1:1: title is missing",
		"b.yaml:3:26: mach is out of range",
		"b.yaml:7:3: width_m is missing in inlet",
		"b.yaml:8:3: unknown key width in inlet",
		"b.yaml:14:16: unknown quantity recovry",
		"b.yaml:17:61: no flight point is named nowhere",
	}
	if got := ps.Error(); got != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", got, strings.Join(want, "\n"))
	}
}

func TestOverrides(t *testing.T) {
	b := read(t, sound, Overrides{"ramp_angle_deg": "8.08,7.22,8.44", "cowl_angle_deg": "8"})
	want := []inlet.Setting{inlet.Fixed(8.08), inlet.Fixed(7.22), inlet.Fixed(8.44)}
	for i, s := range want {
		if b.Definition.RampAngle[i] != s {
			t.Errorf("ramp %d: %+v, want %+v", i+1, b.Definition.RampAngle[i], s)
		}
	}
	if b.Searched() != 0 {
		t.Errorf("%d values searched, want none", b.Searched())
	}
	b = read(t, sound, Overrides{"ramps": "2", "lip_turning_deg": "0.5..8", "ramp_angle_deg": "4, 5 .. 6"})
	if *b.Definition.LipTurning != inlet.Between(0.5, 8) || b.Definition.CowlAngle != nil {
		t.Errorf("a flag for the lip turning must take the place of the cowl angle: %+v", b.Definition)
	}
	if b.Definition.RampAngle[1] != inlet.Between(5, 6) {
		t.Errorf("ramp 2 is %+v, want 5 to 6", b.Definition.RampAngle[1])
	}
	b = read(t, edited(t, "effort: {samples: 60, infill: 40, seed: 1, agreement: 1e-3}\n", ""), Overrides{"seed": "7", "batch": "4", "defaults": "false"})
	if b.Effort != (Effort{Samples: 60, Infill: 40, Batch: 4, Seed: 7, Agreement: 1e-3}) || b.Defaults {
		t.Errorf("effort %+v, defaults %v", b.Effort, b.Defaults)
	}
}

func TestOverrideProblemsNameTheirFlag(t *testing.T) {
	for _, c := range []struct {
		overrides Overrides
		text      string
		want      string
		hint      string
	}{
		{Overrides{"ramp_angle_deg": "8,7"}, sound, "--ramp-angle-deg: ramp_angle_deg lists 2 angles for 3 ramps", ""},
		{Overrides{"ramp_angle_deg": "8,,7"}, sound, "--ramp-angle-deg: the flag has an empty value", ""},
		{Overrides{"ramp_angle_deg": "8,7,99"}, sound, "--ramp-angle-deg: ramp_angle_deg of ramp 3 is out of range", ""},
		{Overrides{"width": "1"}, sound, "--width: no value of a brief can be set by this flag", ""},
		{Overrides{"widht_m": "1"}, sound, "--widht-m: no value of a brief can be set by this flag", "did you mean width_m?"},
		{Overrides{"cowl_angle_deg": "3..2"}, sound, "--cowl-angle-deg: cowl_angle_deg: from must be below to", ""},
		{Overrides{"cowl_angle_deg": "3..x"}, sound, "--cowl-angle-deg: cowl_angle_deg to is not a plain decimal number", ""},
		{Overrides{"cowl_angle_deg": "3", "lip_turning_deg": "3"}, sound, "--lip-turning-deg: both cowl_angle_deg and lip_turning_deg are given", ""},
		{Overrides{"width_m": "1"}, "inlet: 3\n", "b.yaml:1:8: inlet must be a section", ""},
		{Overrides{"width_m": "x"}, "- 3\n", "b.yaml:1:1: the brief must be a section, not a list", ""},
	} {
		_, err := Read("b.yaml", []byte(c.text), c.overrides)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v: got %v, want %s", c.overrides, err, c.want)
			continue
		}
		if ps := (Problems)(nil); errors.As(err, &ps) && !strings.Contains(ps[0].Hint, c.hint) {
			t.Errorf("%v: hint %q, want %q", c.overrides, ps[0].Hint, c.hint)
		}
	}
}

func TestLastRowThatNamesAPointCounts(t *testing.T) {
	b := read(t, edited(t, "  - {quantity: ramp_attachment_margin_deg, at_least: 2, at: every}", `  - {quantity: capture, at_least: 0.5, at: every}
  - {quantity: lip_mach, at_most: 4, at: [takeover, cruise]}
  - {quantity: capture, at_most: none, at: cruise}
  - {quantity: length_ratio, at_most: 5}
  - {quantity: capture, at_least: 0.6, at: takeover}`), nil)
	none := math.Inf(1)
	want := []problems.Limit{
		{Quantity: "throat_temperature_K", Point: "cruise", Low: 780, High: 1000, Source: "line 17"},
		{Quantity: "lip_mach", Point: "takeover", Low: -none, High: 4, Source: "line 19"},
		{Quantity: "lip_mach", Point: "cruise", Low: -none, High: 4, Source: "line 19"},
		{Quantity: "capture", Point: "cruise", Low: -none, High: none, Source: "line 20"},
		{Quantity: "length_ratio", Point: "geometry", Low: -none, High: 5, Source: "line 21"},
		{Quantity: "capture", Point: "takeover", Low: 0.6, High: none, Source: "line 22"},
	}
	checkLimits(t, b.Limits, want)

	standard := []problems.Limit{
		{Quantity: "capture", Point: "cruise", Low: 0.9, High: none, Kind: problems.Default},
		{Quantity: "throat_mach", Point: "cruise", Low: 1.5, High: none, Kind: problems.Default},
		{Quantity: "length_ratio", Point: "geometry", Low: 1, High: none, Kind: problems.Default},
	}
	hard := []problems.Limit{{Quantity: "lip_mach", Point: "cruise", Low: 1, High: none, Kind: problems.Hard}}
	resolved := append(append([]problems.Limit(nil), hard[0], standard[1]), want[0], want[1], want[2], want[4], want[5])
	checkLimits(t, b.Resolve(hard, standard), resolved)

	b.Defaults = false
	checkLimits(t, b.Resolve(hard, standard), append(resolved[:1:1], resolved[2:]...))
}

func checkLimits(t *testing.T, got, want []problems.Limit) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("got %d limits, want %d:\n%+v", len(got), len(want), got)
	}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("limit %d: got %+v, want %+v", i, got[i], want[i])
		}
	}
}

func TestAims(t *testing.T) {
	three := edited(t, "altitude_km: 22.8}", "altitude_km: 22.8, weight: 3}\n  - {name: climb, mach: 5, altitude_km: 24}")
	for _, c := range []struct {
		aim   string
		where string
		parts string // point:weight:reads ..
	}{
		{"highest: recovery, at: cruise", "cruise", "cruise:1:recovery@cruise"},
		{"highest: recovery", "cruise", "cruise:1:recovery@cruise"},
		{"highest: recovery, at: takeover", "takeover", "takeover:1:recovery@takeover"},
		{"lowest: length_m", "geometry", "geometry:1:length_m@geometry"},
		{"highest: recovery, at: mean", "mean", "cruise:1:recovery@cruise takeover:3:recovery@takeover"},
		{"lowest: cowl_drag, at: worst", "worst", "cruise:1:cowl_drag@cruise takeover:1:cowl_drag@takeover climb:1:cowl_drag@climb"},
		{"highest: recovery - 0.1*length_m, at: takeover", "takeover", "takeover:1:recovery@takeover,length_m@geometry"},
		{"highest: recovery@climb + recovery@cruise", "cruise", "cruise:1:recovery@climb,recovery@cruise"},
		{"highest: recovery@climb / recovery, at: takeover", "takeover", "takeover:1:recovery@climb,recovery@takeover"},
	} {
		b := read(t, strings.Replace(three, "highest: recovery, at: cruise", c.aim, 1), nil)
		var parts []string
		for _, p := range b.Aim.Parts {
			var reads []string
			for _, r := range p.Reads {
				reads = append(reads, r.Quantity+"@"+r.Point)
			}
			parts = append(parts, p.Point+":"+exactNumber(p.Weight)+":"+strings.Join(reads, ","))
		}
		if got := strings.Join(parts, " "); got != c.parts || b.Aim.Where != c.where {
			t.Errorf("%s: at %s, parts %s\nwant at %s, parts %s", c.aim, b.Aim.Where, got, c.where, c.parts)
		}
		if b.Aim.Highest != strings.HasPrefix(c.aim, "highest") {
			t.Errorf("%s: direction", c.aim)
		}
		if again := read(t, string(b.ResolvedYAML()), nil); again.Hash() != b.Hash() {
			t.Errorf("%s: resolved as\n%s", c.aim, b.ResolvedYAML())
		}
	}
	b := read(t, edited(t, "highest: recovery, at: cruise", "highest: recovery, at: mean", ", weight: 1", ""), nil)
	if len(b.Aim.Parts) != 2 || b.Aim.Aggregate != problems.Mean {
		t.Errorf("without weights every point counts 1 in the mean: %+v", b.Aim)
	}
	_, err := Read("b.yaml", []byte(edited(t, "highest: recovery, at: cruise", "highest: recovery, at: mean", "weight: 1", "weight: 0")), nil)
	if err == nil || err.Error() != "b.yaml:15:30: a mean needs a point with a weight above 0" {
		t.Errorf("mean of nothing: %v", err)
	}
}

func TestColumnsCountCharacters(t *testing.T) {
	_, err := Read("b.yaml", []byte(edited(t, "gas: {model: perfect, ", `gas: {"é€𝄞": 1, model: nothing, `)), nil)
	var ps Problems
	if !errors.As(err, &ps) || len(ps) != 2 || ps[0].Column != 7 || ps[1].Column != 24 {
		t.Errorf("%v", err)
	}
}

func TestSearchedKeys(t *testing.T) {
	names := func(b *Brief) string {
		var flags []string
		for _, k := range b.SearchedKeys() {
			flags = append(flags, k.FlagName())
		}
		return strings.Join(flags, " ")
	}
	if got := names(read(t, sound, nil)); got != "--ramp-angle-deg --cowl-angle-deg" {
		t.Error(got)
	}
	b := read(t, sound, Overrides{"ramp_angle_deg": "3", "lip_turning_deg": "1..2", "cowl_wedge_deg": "1..2", "shock_on_lip_mach": "6..7", "lip_setback": "0..0.1"})
	if got := names(b); got != "--lip-turning-deg --cowl-wedge-deg --shock-on-lip-mach --lip-setback" || b.Searched() != 4 {
		t.Error(got, b.Searched())
	}
}
