package brief

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/inlet"
)

// sameValues fails unless two briefs hold the same values to the last bit.
func sameValues(t interface {
	Fatalf(string, ...any)
	Helper()
}, a, b *Brief) {
	t.Helper()
	for i := range a.Flight {
		p, q := a.Flight[i], b.Flight[i]
		p.AltitudeKm, p.Stated, q.AltitudeKm, q.Stated = 0, "", 0, ""
		if p != q {
			t.Fatalf("point %+v became %+v", p, q)
		}
	}
	if !reflect.DeepEqual(a.Definition, b.Definition) {
		t.Fatalf("definition %+v became %+v", a.Definition, b.Definition)
	}
	if a.Aim.Text != b.Aim.Text || a.Aim.Where != b.Aim.Where || a.Aim.Highest != b.Aim.Highest || a.Aim.Aggregate != b.Aim.Aggregate || len(a.Aim.Parts) != len(b.Aim.Parts) {
		t.Fatalf("aim %+v became %+v", a.Aim, b.Aim)
	}
	if len(a.Limits) != len(b.Limits) {
		t.Fatalf("%d limits became %d", len(a.Limits), len(b.Limits))
	}
	for i := range a.Limits {
		l, m := a.Limits[i], b.Limits[i]
		l.Source, m.Source = "", ""
		if l != m {
			t.Fatalf("limit %+v became %+v", l, m)
		}
	}
	if a.Title != b.Title || a.Defaults != b.Defaults || a.Effort != b.Effort || a.Tolerance != b.Tolerance {
		t.Fatalf("%+v became %+v", a, b)
	}
	if a.Hash() != b.Hash() {
		t.Fatalf("hash %s became %s", a.Hash(), b.Hash())
	}
}

// drawBrief draws a brief without problems.
func drawBrief(t *rapid.T) string {
	var w strings.Builder
	pick := func(name string, choices ...string) string { return rapid.SampledFrom(choices).Draw(t, name) }
	number := func(name string, low, high float64) string {
		return exactNumber(rapid.Float64Range(low, high).Draw(t, name))
	}
	setting := func(name string, low, middle, high float64) string {
		if rapid.Bool().Draw(t, name+" searched") {
			return "{from: " + number(name, low, middle) + ", to: " + number(name, math.Nextafter(middle, high), high) + "}"
		}
		return number(name, low, high)
	}
	fmt.Fprintf(&w, "brief: 1\ntitle: %s\nflight:\n", quote(rapid.StringMatching(`[a-z"'\\:#{é€ 0-9-]{0,20}x`).Draw(t, "title")))
	names := rapid.SliceOfNDistinct(rapid.SampledFrom([]string{"a", "null", "yes", "true", "no_1", "cruise"}), 1, 4, rapid.ID[string]).Draw(t, "names")
	for i, name := range names {
		state := pick("way", "altitude_km: "+number("h", 0, 80), "geometric_altitude_km: "+number("z", 0, 80),
			"dynamic_pressure_kPa: "+number("q", 1, 100), "pressure_kPa: "+number("p", 0.01, 100)+", temperature_K: "+number("t", 100, 400))
		fmt.Fprintf(&w, "  - {name: %q, mach: %s, %s", name, number("mach", 1.5, 10), state)
		if rapid.Bool().Draw(t, "more") {
			fmt.Fprintf(&w, ", incidence_deg: %s, throat: %s, weight: %s", number("incidence", -10, 10), pick("throat", "chain", "traced"), number("weight", 0.5, 10))
		} else if i == 0 {
			w.WriteString(", weight: 1")
		}
		w.WriteString("}\n")
	}
	fmt.Fprintf(&w, "gas: {ratio_of_specific_heats: %s}\ninlet:\n  capture_height_m: %s\n  width_m: %s\n", number("g", 1.05, 1.6), number("hc", 0.01, 1), number("w", 0.01, 1))
	ramps := rapid.IntRange(1, 8).Draw(t, "ramps")
	angles := make([]string, ramps)
	for i := range angles {
		angles[i] = setting("ramp", 2, 8, 15)
	}
	fmt.Fprintf(&w, "  ramps: %d\n  ramp_angle_deg: %s\n  %s\n", ramps, pick("angles", "["+strings.Join(angles, ", ")+"]", angles[0]),
		pick("cowl", "cowl_angle_deg: "+setting("cowl", -5, 0, 2), "lip_turning_deg: "+setting("lip", 0.5, 3, 8)))
	for _, line := range []string{
		"cowl_wedge_deg: " + setting("wedge", 0, 3, 8), "cowl_length: " + number("length", 0, 1), "shock_on_lip_mach: " + setting("sol", 2, 4, 8),
		"lip_setback: " + setting("setback", 0, 0.1, 0.2), "terminal_shock: true", "duct_factor: " + number("duct", 0.5, 1),
	} {
		if rapid.Bool().Draw(t, line) {
			w.WriteString("  " + line + "\n")
		}
	}
	where := pick("where", append([]string{"mean", "worst"}, names...)...)
	w.WriteString(pick("aim", "", "aim: {lowest: length_m}\n", "aim: {highest: recovery}\n",
		fmt.Sprintf("aim: {highest: recovery, at: %q}\n", where),
		fmt.Sprintf("aim: {highest: 'recovery  - 0.1 * max(length_m, capture@%s)', at: %q}\n", names[0], where)))
	if rows := rapid.IntRange(0, 4).Draw(t, "rows"); rows > 0 {
		w.WriteString("limits:\n")
		for range rows {
			at := pick("at", "", ", at: every", fmt.Sprintf(", at: [%q]", names[0]))
			row := pick("quantity", "capture"+at, "length_m", "throat_mach"+at, "separation_margin"+at)
			name, rest, _ := strings.Cut(row, ",")
			side := pick("side", "at_least: "+number("low", -5, 0), "at_most: "+number("high", 1, 5), "at_most: none", "at_least: -1, at_most: 1e300")
			fmt.Fprintf(&w, "  - {quantity: %s, %s%s}\n", name, side, strings.TrimRight(","+rest, ","))
		}
	}
	w.WriteString(pick("defaults", "", "defaults: false\n"))
	w.WriteString(pick("tolerance", "", "tolerance: {mach: "+number("sigma", 0, 0.12)+"}\n",
		"tolerance: {cowl_angle_deg: "+number("cowl off", 0.01, 2)+", lip_setback: "+number("lip off", 0, 0.1)+", confidence: "+number("confidence", 0.5, 0.999)+"}\n"))
	w.WriteString(pick("effort", "", "effort: {batch: 8}\n", "effort: {seed: 9007199254740991, agreement: "+number("agreement", 1e-8, 0.1)+"}\n"))
	return w.String()
}

func TestResolvedBriefReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := drawBrief(t)
		b, err := Read("a.yaml", []byte(text), nil)
		if err != nil {
			t.Fatalf("%s\n%v", text, err)
		}
		resolved := b.ResolvedYAML()
		again, err := Read("b.yaml", resolved, nil)
		if err != nil {
			t.Fatalf("%s\n%v", resolved, err)
		}
		sameValues(t, b, again)
		third, err := Read("c.yaml", again.ResolvedYAML(), nil)
		if err != nil || !bytes.Equal(again.ResolvedYAML(), third.ResolvedYAML()) {
			t.Fatalf("the resolved brief is not its own resolved brief: %v\n%s\n%s", err, again.ResolvedYAML(), third.ResolvedYAML())
		}
		if got := len(again.Resolve(nil, nil)) > len(again.Limits); got {
			t.Fatal("more limits in force than asked for")
		}
		_, _ = CheckSearch(b), b.Notes(nil)
	})
}

func TestHashSeesEveryValue(t *testing.T) {
	seen := map[string]string{read(t, sound, nil).Hash(): "nothing"}
	for _, edit := range [][2]string{
		{"A test inlet", "Another"}, {"cruise, mach: 6", "cruise, mach: 6.1"}, {"altitude_km: 22.8", "altitude_km: 22.9"}, {"weight: 1}", "weight: 2}"},
		{"takeover", "climb"}, {"altitude_km: 22.8", "altitude_km: 22.8, incidence_deg: 1"},
		{"altitude_km: 22.8", "altitude_km: 22.8, throat: traced"}, {"weight: 1}", "weight: 1, throat: traced}"},
		{"heats: 1.4", "heats: 1.39"}, {"0.16", "0.17"}, {"0.20", "0.21"}, {"ramps: 3", "ramps: 4"}, {"from: 3, to: 16", "from: 3, to: 17"},
		{"{from: 2, to: 12}", "5"}, {"cowl_angle_deg", "lip_turning_deg"}, {"cowl_wedge_deg: 4", "cowl_wedge_deg: 5"},
		{"terminal_shock: false", "terminal_shock: true"}, {"terminal_shock: false", "duct_factor: 0.9"}, {"terminal_shock: false", "lip_setback: 0.1"},
		{"terminal_shock: false", "cowl_length: 0.1"}, {"terminal_shock: false", "shock_on_lip_mach: 5"},
		{"highest", "lowest"}, {"highest: recovery", "highest: shock_recovery"}, {"at: cruise", "at: worst"}, {"at_least: 780", "at_least: 781"},
		{"at_most: 1000", "at_most: none"}, {"at: every", "at: takeover"}, {"defaults: true", "defaults: false"}, {"0.03", "0.04"}, {"samples: 60", "samples: 61"}, {"seed: 1", "seed: 2"},
		{"infill: 40", "infill: 40, batch: 1"}, {"infill: 40", "infill: 40, batch: 4"},
	} {
		hash := read(t, edited(t, edit[0], edit[1]), nil).Hash()
		if before, ok := seen[hash]; ok {
			t.Errorf("%v hashes like %s", edit, before)
		}
		if len(hash) != 64 {
			t.Errorf("hash %q", hash)
		}
		seen[hash] = strings.Join(edit[:], " -> ")
	}
	// A brief of before the key keeps its hash.
	if text := read(t, sound, nil).canonicalJSON(); bytes.Contains(text, []byte("batch")) {
		t.Errorf("a batch nobody asked for is hashed: %s", text)
	}
	same := edited(t, "A test inlet", "A test inlet # a comment", "width_m: 0.20", "width_m: 0.2", "altitude_km: 22.8", "altitude_km: 22.8, throat: chain")
	if seen[read(t, same, nil).Hash()] != "nothing" {
		t.Error("comment or spelling of a number changes the hash")
	}
}

func TestScenarios(t *testing.T) {
	if got, want := Scenarios(), []string{"halcyre-45", "ondrel-3", "veyric-6"}; !reflect.DeepEqual(got, want) {
		t.Fatalf("scenarios %v, want %v", got, want)
	}
	for _, name := range Scenarios() {
		data, _, ok := Scenario(name)
		if !ok {
			t.Fatalf("no scenario %s", name)
		}
		copied, err := os.ReadFile("../../../../testdata/briefs/" + name + ".yaml")
		if err != nil || !bytes.Equal(data, copied) {
			t.Errorf("testdata/briefs/%s.yaml differs from the starter: %v", name, err)
		}
		b, err := Read(name+".yaml", data, nil)
		if err != nil {
			t.Fatalf("%s:\n%v", name, err)
		}
		if refused := CheckSearch(b); len(refused) > 0 {
			t.Errorf("%s:\n%s", name, refused.Format())
		}
		again := read(t, string(b.ResolvedYAML()), nil)
		sameValues(t, b, again)
	}
	if _, near, ok := Scenario("veyric6"); ok || near != "veyric-6" {
		t.Errorf("veyric6: %v, nearest %q", ok, near)
	}
}

// TestScenarioValues pins what makes each starter what it is.
func TestScenarioValues(t *testing.T) {
	starter := func(name string) *Brief {
		data, _, _ := Scenario(name)
		return read(t, string(data), nil)
	}
	v := starter("veyric-6")
	if p := v.Definition.Points[0]; p.Mach != 6 || p.Pressure != 1984 || p.Temperature != 223.18 || v.Effort.Samples != 60 || v.Effort.Infill != 40 {
		t.Errorf("veyric-6: %+v, %+v", p, v.Effort)
	}
	o := starter("ondrel-3")
	if d := o.Definition; !d.TerminalShock || d.DuctFactor != 0.95 || *d.LipTurning != inlet.Between(0.5, 8) || len(o.Aim.Parts) != 4 || o.Aim.Parts[0].Weight != 0.5 {
		t.Errorf("ondrel-3: %+v, %+v", d, o.Aim)
	}
	for point, want := range map[string]float64{"cruise": math.Inf(1), "takeover": math.Inf(1), "climb": 1, "dash": math.Inf(1)} {
		if l, ok := o.limit("internal_contraction_over_self_start", point); !ok || l.High != want {
			t.Errorf("ondrel-3: self-start limit at %s is %+v", point, l)
		}
	}
	h := starter("halcyre-45")
	if d := h.Definition; d.ShockOnLip != inlet.Between(4.5, 5) || h.Searched() != 5 {
		t.Errorf("halcyre-45: %+v", d)
	}
	for point, traced := range map[*Condition]bool{
		&o.Flight[0]: true, &o.Flight[1]: true, &o.Flight[2]: true, &o.Flight[3]: false,
		&h.Flight[0]: false, &h.Flight[1]: true, &h.Flight[2]: true, &h.Flight[3]: false,
	} {
		if point.Traced != traced {
			t.Errorf("%s at Mach %v: traced %t", point.Name, point.Mach, point.Traced)
		}
	}
	for _, c := range h.Flight {
		if q := 0.7 * c.PressureKPa * c.Mach * c.Mach; math.Abs(q-60) > 1e-12*60 {
			t.Errorf("halcyre-45 at %s: %v kPa dynamic pressure", c.Name, q)
		}
	}
}

func BenchmarkRead(b *testing.B) {
	data, _, _ := Scenario("ondrel-3")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Read("ondrel-3.yaml", data, nil); err != nil {
			b.Fatal(err)
		}
	}
}

func FuzzBrief(f *testing.F) {
	f.Add([]byte(sound), "")
	for _, name := range Scenarios() {
		data, _, _ := Scenario(name)
		f.Add(data, "8,7..9")
	}
	for _, c := range brokenBriefs {
		if len(c.new) < 1000 {
			f.Add([]byte(strings.Replace(sound, c.old, c.new, 1)), "1")
		}
	}
	f.Fuzz(func(t *testing.T, data []byte, flag string) {
		var overrides Overrides
		if flag != "" {
			overrides = Overrides{"ramp_angle_deg": flag}
		}
		b, err := Read("f.yaml", data, overrides)
		if err != nil {
			checkPlaces(t, data, err)
			return
		}
		_, _ = CheckSearch(b).Format(), b.Notes(nil).Format()
		again, err := Read("g.yaml", b.ResolvedYAML(), nil)
		if err != nil {
			t.Fatalf("resolved brief:\n%s\n%v", b.ResolvedYAML(), err)
		}
		sameValues(t, b, again)
	})
}

// checkPlaces fails unless every problem has a message and a place in the file.
func checkPlaces(t *testing.T, data []byte, err error) {
	t.Helper()
	var ps Problems
	if !errors.As(err, &ps) || len(ps) == 0 {
		t.Fatalf("error %#v", err)
	}
	lines := bytes.Count(data, []byte("\n")) + 1
	for _, p := range ps {
		if p.Message == "" || p.Flag == "" && (p.Line < 1 || p.Line > lines || p.Column < 1) {
			t.Fatalf("problem without a place: %+v", p)
		}
	}
	_ = ps.Format()
}
