package brief

import (
	"math"
	"strings"
	"testing"

	"rampwright/problems"
)

func TestSearchesRefused(t *testing.T) {
	const floor = "quantity: throat_temperature_K, at_least: 780, at_most: 1000"
	const ramp = "ramp_angle_deg: {from: 3, to: 16}"
	const cowl = "cowl_angle_deg: {from: 2, to: 12}"
	const aim = "highest: recovery, at: cruise"
	for _, c := range []struct {
		name  string
		edits []string
		want  string // Problem.Error of the only refusal, "" for none
		hint  string
	}{
		{"sound", nil, "", ""},
		{"nothing searched", []string{ramp, "ramp_angle_deg: 8", cowl, "cowl_angle_deg: 8"}, "test.yaml:8:3: nothing to search: every value of the inlet is fixed", "flow"},
		{"no aim", []string{"aim: {highest: recovery, at: cruise}\n", ""}, "test.yaml:1:1: the brief has no aim", "highest"},
		{"no floor", []string{floor, "quantity: length_m, at_most: 2"}, "test.yaml:15:6: recovery alone is best with no compression at all: the aim needs a floor", "terminal_shock"},
		{"floor the free stream keeps", []string{floor, "quantity: throat_temperature_K, at_least: 100"}, "test.yaml:15:6: recovery alone is best with no compression at all: the aim needs a floor", ""},
		{"ceiling is no floor", []string{floor, "quantity: throat_temperature_K, at_most: 900"}, "test.yaml:15:6: recovery alone is best with no compression at all: the aim needs a floor", ""},
		{"Mach ceiling is a floor", []string{floor, "quantity: throat_mach, at_most: 3"}, "", ""},
		{"Mach ceiling above the stream", []string{floor, "quantity: lip_mach, at_most: 7"}, "test.yaml:15:6: recovery alone is best with no compression at all: the aim needs a floor", ""},
		{"contraction is a floor", []string{floor, "quantity: total_contraction, at_least: 3"}, "", ""},
		{"turning is a floor", []string{floor, "quantity: total_turning_deg, at_least: 20"}, "", ""},
		{"terminal shock", []string{floor, "quantity: length_m, at_most: 2", "terminal_shock: false", "terminal_shock: true"}, "", ""},
		{"lowest loss", []string{floor, "quantity: length_m, at_most: 2", aim, "lowest: entropy_rise"}, "test.yaml:15:6: entropy_rise alone is best with no compression at all: the aim needs a floor", ""},
		{"highest loss", []string{floor, "quantity: length_m, at_most: 2", aim, "highest: entropy_rise"}, "", ""},
		{"lowest recovery", []string{floor, "quantity: length_m, at_most: 2", aim, "lowest: recovery"}, "", ""},
		{"formula of a loss", []string{floor, "quantity: length_m, at_most: 2", aim, "highest: 2 * recovery - length_m"}, "test.yaml:15:6: recovery alone is best with no compression at all: the aim needs a floor", ""},
		{"another aim", []string{floor, "quantity: length_m, at_most: 2", aim, "highest: temperature_ratio"}, "", ""},
		{"lip turning 0 in the range", []string{cowl, "lip_turning_deg: {from: 0, to: 8}"}, "test.yaml:12:20: lip turning 0 lies in the searched range: the length of the inlet jumps there", "0.1"},
		{"lip turning above 0", []string{cowl, "lip_turning_deg: {from: 0.1, to: 8}"}, "", ""},
		{"aligned cowl", []string{cowl, "lip_turning_deg: 0"}, "", ""},
		{"cowl above every ramp", []string{cowl, "cowl_angle_deg: {from: 48, to: 50}"}, "test.yaml:12:19: no inlet of the search box has its inner cowl below the last ramp surface", ""},
		{"turning out of reach", []string{floor, floor + "}\n  - {quantity: total_turning_deg, at_least: 49"}, "test.yaml:18:5: no inlet of the search box keeps this limit on total_turning_deg", ""},
		{"lip turning out of reach", []string{floor, floor + "}\n  - {quantity: lip_turning_deg, at_most: -4"}, "test.yaml:18:5: no inlet of the search box keeps this limit on lip_turning_deg", ""},
		{"cowl out of reach", []string{floor, floor + "}\n  - {quantity: cowl_angle_deg, at_most: 1"}, "test.yaml:18:5: no inlet of the search box keeps this limit on cowl_angle_deg", ""},
		{"outer cowl out of reach", []string{floor, floor + "}\n  - {quantity: cowl_outer_angle_deg, at_most: 5, at_least: 4"}, "test.yaml:18:5: no inlet of the search box keeps this limit on cowl_outer_angle_deg", ""},
		{"cowl by lip turning out of reach", []string{cowl, "lip_turning_deg: {from: 1, to: 2}", floor, floor + "}\n  - {quantity: cowl_angle_deg, at_least: 48"}, "test.yaml:18:5: no inlet of the search box keeps this limit on cowl_angle_deg", ""},
		// Total temperature 223.2 (1 + 0.2 36) = 1830 K; 822 K at throat Mach 2.6 is
		// kept, 778 K at 2.6 is not.
		{"hotter than the total temperature", []string{"at_least: 780, at_most: 1000", "at_least: 1900"}, "test.yaml:17:5: no inlet of the search box keeps this limit on throat_temperature_K at cruise", ""},
		{"Mach number against temperature", []string{floor, floor + "}\n  - {quantity: throat_mach, at_least: 2.6"}, "test.yaml:17:5: no inlet of the search box keeps this limit on throat_temperature_K at cruise", "throat_mach at_least 2.6 (line 18)"},
		{"Mach number against ratio", []string{floor, "quantity: temperature_ratio, at_most: 2}\n  - {quantity: throat_mach, at_most: 3"}, "test.yaml:17:5: no inlet of the search box keeps this limit on temperature_ratio at cruise", "throat_mach at_most 3"},
		{"recovery above 1", []string{floor, floor + "}\n  - {quantity: shock_recovery, at_least: 1.01"}, "test.yaml:18:5: no inlet of the search box keeps this limit on shock_recovery at cruise", ""},
		{"recovery above the duct factor", []string{floor, floor + "}\n  - {quantity: recovery, at_least: 1.01"}, "test.yaml:18:5: no inlet of the search box keeps this limit on recovery at cruise", ""},
		{"faster than the stream", []string{floor, floor + "}\n  - {quantity: lip_mach, at_least: 6.5"}, "test.yaml:18:5: no inlet of the search box keeps this limit on lip_mach at cruise", ""},
		{"more than the total pressure", []string{floor, floor + "}\n  - {quantity: throat_total_pressure_kPa, at_least: 4000"}, "test.yaml:18:5: no inlet of the search box keeps this limit on throat_total_pressure_kPa at cruise", ""},
		{"another dynamic pressure", []string{floor, floor + "}\n  - {quantity: dynamic_pressure_kPa, at_least: 49, at_most: 49.9"}, "test.yaml:18:5: no inlet of the search box keeps this limit on dynamic_pressure_kPa at cruise", ""},
		{"this dynamic pressure", []string{floor, floor + "}\n  - {quantity: dynamic_pressure_kPa, at_least: 50"}, "", ""},
		{"another total temperature", []string{floor, floor + "}\n  - {quantity: total_temperature_K, at_most: 1000"}, "test.yaml:18:5: no inlet of the search box keeps this limit on total_temperature_K at cruise", ""},
		{"another total pressure", []string{floor, floor + "}\n  - {quantity: total_pressure_kPa, at_most: 1000"}, "test.yaml:18:5: no inlet of the search box keeps this limit on total_pressure_kPa at cruise", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			b := read(t, edited(t, c.edits...), nil)
			refused := CheckSearch(b)
			want := c.want
			if want != "" {
				want = "dir/" + want
			}
			if got := refused.Error(); got != want {
				t.Fatalf("got  %s\nwant %s", got, want)
			}
			if want != "" && !strings.Contains(refused[0].Hint, c.hint) {
				t.Errorf("hint %q lacks %q", refused[0].Hint, c.hint)
			}
		})
	}
}

func TestRefusalNamesTheFlag(t *testing.T) {
	b := read(t, sound, Overrides{"lip_turning_deg": "0..8"})
	if got := CheckSearch(b).Error(); got != "--lip-turning-deg: lip turning 0 lies in the searched range: the length of the inlet jumps there" {
		t.Error(got)
	}
}

func TestNotes(t *testing.T) {
	standard := []problems.Limit{
		{Quantity: "throat_mach", Point: "cruise", Low: 1.5, High: math.Inf(1), Kind: problems.Default},
		{Quantity: "total_turning_deg", Point: problems.Geometry, Low: math.Inf(-1), High: 30, Kind: problems.Default},
		{Quantity: "separation_margin", Point: "cruise", Low: 0.05, High: math.Inf(1), Kind: problems.Default},
	}
	const row = "quantity: throat_temperature_K, at_least: 780, at_most: 1000"
	const cut = "dir/test.yaml:12:19: part of the search box has its inner cowl above the last ramp surface: the search keeps the lip turning at 0.1 deg or more"
	const plain = "cowl_angle_deg: {from: 2, to: 8}"
	for _, c := range []struct {
		name  string
		edits []string
		want  []string
	}{
		{"box cut", nil, []string{cut}},
		{"box whole", []string{"cowl_angle_deg: {from: 2, to: 12}", plain}, nil},
		{"nothing of it searched", []string{"ramp_angle_deg: {from: 3, to: 16}", "ramp_angle_deg: 5", "cowl_angle_deg: {from: 2, to: 12}", "cowl_angle_deg: 15"}, nil},
		{"defaults off", []string{"cowl_angle_deg: {from: 2, to: 12}", plain, "defaults: true", "defaults: false", row, row + "}\n  - {quantity: throat_mach, at_most: 5"},
			[]string{"dir/test.yaml:20:11: the default limits are off: only those of the model itself and of the brief are kept"}},
		// The standard atmosphere at 1.984 kPa has 223.2 K; 223.2 8.2/(1 + 0.2 M^2)
		// is 889.3 K at Mach 2.3 and 1017 K at Mach 2.
		{"temperature capped", []string{"cowl_angle_deg: {from: 2, to: 12}", plain, row, row + "}\n  - {quantity: throat_mach, at_least: 2.3"},
			[]string{"dir/test.yaml:17:5: throat_mach at_least 2.3 (line 18) already caps throat_temperature_K at cruise at 889.3: at_most 1000 never acts"}},
		{"temperature kept", []string{"cowl_angle_deg: {from: 2, to: 12}", plain, row, row + "}\n  - {quantity: throat_mach, at_least: none, at_most: 2"},
			[]string{"dir/test.yaml:17:5: throat_mach at_most 2 (line 18) already keeps throat_temperature_K at cruise above 1017: at_least 780 never acts"}},
		{"default dropped", []string{"cowl_angle_deg: {from: 2, to: 12}", plain, row, row + "}\n  - {quantity: throat_mach, at_most: 5}\n  - {quantity: total_turning_deg, at_least: 12}\n  - {quantity: separation_margin, at_least: none"},
			[]string{"dir/test.yaml:18:5: this row replaces the default throat_mach at_least 1.5 at cruise", "dir/test.yaml:19:5: this row replaces the default total_turning_deg at_most 30"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			notes := read(t, edited(t, c.edits...), nil).Notes(standard)
			if got, want := notes.Error(), strings.Join(c.want, "\n"); got != want {
				t.Errorf("got\n%s\nwant\n%s", got, want)
			}
		})
	}
}
