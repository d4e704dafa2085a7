package report

import (
	"bytes"
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// open names the objects whose keys depend on the problem.
var open = []string{"quantities", "members", "missing", "exact", "predicted", "error", "variables"}

// keyPaths lists the paths of all keys in the order they first appear. Entries of
// arrays share one path, keys of open objects are not listed.
func keyPaths(t *testing.T, raw []byte) []string {
	t.Helper()
	decoder := json.NewDecoder(bytes.NewReader(raw))
	var paths []string
	var value func(path string, listed bool)
	value = func(path string, listed bool) {
		token, err := decoder.Token()
		if err != nil {
			t.Fatal(err)
		}
		switch token {
		case json.Delim('{'):
			for decoder.More() {
				key, err := decoder.Token()
				if err != nil {
					t.Fatal(err)
				}
				next := strings.TrimPrefix(path+"."+key.(string), ".")
				if listed && !slices.Contains(paths, next) {
					paths = append(paths, next)
				}
				inner := listed && !slices.Contains(open, key.(string))
				value(next, inner)
			}
			_, _ = decoder.Token()
		case json.Delim('['):
			for decoder.More() {
				value(path, listed)
			}
			_, _ = decoder.Token()
		}
	}
	value("", true)
	return paths
}

// stationKeys, shapeKeys and the lists below are what scripts rely on: adding a
// key is free, another change raises the format.
const (
	stationKeys = "name mach flow_angle_deg wave_angle_deg wave_angle_absolute_deg normal_mach static_pressure_ratio " +
		"static_temperature_ratio total_pressure_ratio pressure_kPa temperature_K"
	shapeKeys = "ramp_angle_deg cowl_wedge_deg cowl_length_m shock_on_lip_mach lip_setback duct_factor terminal_shock " +
		"capture_height_m width_m corners_m lip_m shoulder_m total_turning_deg lip_turning_deg cowl_angle_deg " +
		"cowl_outer_angle_deg length_m length_ratio lip_x_m throat_height_m shortest_ramp_m shortest_ramp_ratio " +
		"total_contraction internal_contraction members missing"
	candidateKeys = "variables aim aim.text aim.where aim.highest aim.exact aim.predicted feasible violation evidence " +
		"evidence.route_gap evidence.surrogate_error"
)

func under(parent, keys string) []string {
	list := strings.Fields(keys)
	for i := range list {
		list[i] = parent + "." + list[i]
	}
	return list
}

func TestFlowKeys(t *testing.T) {
	problem, flow := flowOf(t, ramjet(), 8, 5, 5, 3)
	want := slices.Concat(
		strings.Fields("format program title brief_hash inlet"), under("inlet", shapeKeys),
		[]string{"points"}, under("points", "name mach incidence_deg pressure_kPa temperature_K status traced quantities members missing stations"),
		under("points.stations", stationKeys), []string{"points.trace"}, under("points.trace", traceKeys), under("points.trace", endingKeys),
		strings.Fields("points.trace.missing cautions assumptions"))
	got := keyPaths(t, NewFlow(head, problem, flow).JSON())
	if !slices.Equal(got, want) {
		t.Errorf("keys\n%s\nwant\n%s", strings.Join(got, " "), strings.Join(want, " "))
	}
}

func TestDesignKeys(t *testing.T) {
	want := slices.Concat(
		strings.Fields("format program title seed brief_hash status why best"), under("best", candidateKeys),
		under("best", "exact members missing predicted error limits"),
		under("best.limits", "quantity member at low high value margin met active price drives price_range price_end kind"),
		[]string{"candidates"}, under("candidates", candidateKeys),
		[]string{"fits"}, under("fits", "quantity member at kind transform description samples q2 rmse"),
		[]string{"exact_search"}, under("exact_search", "status aim variables evaluations ratio"),
		[]string{"evaluations"}, under("evaluations", "samples infill rounds verify surrogate"),
		strings.Fields("conflicts relaxation rounded play notes history"), under("history", "evaluations aim violation error radius"),
		[]string{"inlet"}, under("inlet", shapeKeys),
		[]string{"points"}, under("points", "name mach incidence_deg pressure_kPa temperature_K status traced stations"),
		under("points.stations", stationKeys),
		strings.Fields("cautions assumptions"))
	got := keyPaths(t, NewDesign(head, study(t)).JSON())
	// Keys that appear only where a value is missing.
	got = slices.DeleteFunc(got, func(path string) bool {
		return slices.Contains([]string{"candidates.aim.missing", "candidates.evidence.missing"}, path)
	})
	if !slices.Equal(got, want) {
		t.Errorf("keys\n%s\nwant\n%s", strings.Join(got, " "), strings.Join(want, " "))
	}
}

// Numbers read back bit by bit, in the order of the catalogue.
func TestQuantitiesReadBack(t *testing.T) {
	s := study(t)
	var read struct {
		Format int
		Status string
		Best   struct {
			Variables map[string]float64
			Exact     map[string]map[string]*float64
			Members   map[string]map[string]map[string]*float64
		}
	}
	raw := NewDesign(head, s).JSON()
	if err := json.Unmarshal(raw, &read); err != nil {
		t.Fatal(err)
	}
	if read.Format != 1 || read.Status != s.Result.Status.String() {
		t.Errorf("format %d, status %s", read.Format, read.Status)
	}
	for i, v := range s.Problem.Variables() {
		if read.Best.Variables[v.Name] != s.Result.Best.X[i] {
			t.Errorf("%s reads back as %v", v.Name, read.Best.Variables[v.Name])
		}
	}
	place := 0
	for i, q := range s.Problem.Quantities() {
		got, want := read.Best.Exact[q.Point][q.Name], s.Result.Best.Exact.Values[i]
		if q.Member != "" {
			got = read.Best.Members[q.Point][q.Name][q.Member]
		}
		if (got == nil) != math.IsNaN(want) || got != nil && *got != want {
			t.Errorf("%v reads back as %v, want %v", q, got, want)
		}
		at := bytes.Index(raw[place:], []byte(`"`+q.Name+`":`))
		if q.Point == "cruise" && q.Member == "" {
			if at < 0 {
				t.Fatalf("%s is out of order", q.Name)
			}
			place += at
		}
	}
}

// The least member stands for a group.
func TestGroupShowsItsLeastMember(t *testing.T) {
	problem, flow := flowOf(t, supersonic(), 8, 7, 8.5, 8)
	d := NewFlow(head, problem, flow)
	for _, name := range []string{"ramp_attachment_margin_deg", "separation_margin"} {
		shown, _ := d.Points[0].Quantities.Get(name)
		group, ok := d.Points[0].Members.Get(name)
		if !ok || len(group) != 3 {
			t.Fatalf("%s has members %v", name, group)
		}
		least := Number(math.Inf(1))
		for _, m := range group {
			least = min(least, m.Value)
		}
		if shown != least {
			t.Errorf("%s shows %v, least member %v", name, shown, least)
		}
	}
}

// Every null of a flow has its reason beside, and only nulls have one.
func TestNullsHaveReasons(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		angle := rapid.Float64Range(1, 22)
		definition := ramjet()
		if rapid.Bool().Draw(t, "supersonic throat") {
			definition = supersonic()
			definition.CowlAngle, definition.LipTurning = nil, setting(inlet.Between(0.5, 25))
		}
		problem, err := inlet.New(definition)
		if err != nil {
			t.Fatal(err)
		}
		flow, err := problem.Flow(t.Context(), []float64{
			angle.Draw(t, "ramp 1"), angle.Draw(t, "ramp 2"), angle.Draw(t, "ramp 3"), rapid.Float64Range(0.5, 25).Draw(t, "lip"),
		})
		if err != nil {
			t.Fatal(err)
		}
		d := NewFlow(head, problem, flow)
		if !json.Valid(d.JSON()) {
			t.Fatalf("not JSON: %s", d.JSON())
		}
		check := func(where string, quantities Object[Number], members Object[Object[Number]], missing Object[string]) {
			for _, q := range quantities {
				if reason, told := missing.Get(q.Name); told == finite(float64(q.Value)) || told && reason == "" {
					t.Errorf("%s: %s is %v, reason %q", where, q.Name, q.Value, reason)
				}
			}
			for _, group := range members {
				for _, m := range group.Value {
					if _, told := missing.Get(group.Name + "/" + m.Name); told == finite(float64(m.Value)) {
						t.Errorf("%s: %s of %s is %v, reason told: %v", where, m.Name, group.Name, m.Value, told)
					}
				}
			}
		}
		for _, p := range d.Points {
			check(p.Name, p.Quantities, p.Members, p.Missing)
		}
		check(problems.Geometry, d.Inlet.Quantities, d.Inlet.Members, d.Inlet.Missing)
		for _, width := range []int{80, 140} {
			checkWidth(t, d.Text(width), width)
		}
	})
}

func TestOpenContourIsNull(t *testing.T) {
	problem, flow := flowOf(t, supersonic(), 16, 16, 16, 2)
	if flow.ContourErr == nil {
		t.Fatal("the example closes")
	}
	d := NewFlow(head, problem, flow)
	for _, name := range []string{"corners_m", "lip_m", "shoulder_m", "length_m"} {
		if reason, _ := d.Inlet.Missing.Get(name); reason != flow.ContourErr.Error() {
			t.Errorf("%s is missing for %q", name, reason)
		}
		if !bytes.Contains(d.JSON(), []byte(`"`+name+`": null`)) {
			t.Errorf("%s is not null", name)
		}
	}
	if !strings.Contains(strings.Join(strings.Fields(d.Text(80)), " "), "The contour does not close: "+flow.ContourErr.Error()) {
		t.Error("the text does not say why the contour is open")
	}
}

func TestUnknownNumbersHaveReasons(t *testing.T) {
	s := study(t)
	result := *s.Result
	result.Best.Predicted, result.Best.AimPredicted = nil, math.NaN()
	result.Best.SurrogateError, result.Best.RouteGap = math.Inf(1), math.NaN()
	s.Result, s.Exact = &result, nil
	d := NewDesign(head, s)
	for name, object := range map[string]Object[string]{
		"predicted": d.Best.Aim.Missing, "surrogate_error": d.Best.Evidence.Missing, "route_gap": d.Best.Evidence.Missing,
		"ratio": d.ExactSearch.Missing,
	} {
		if reason, _ := object.Get(name); reason == "" {
			t.Errorf("%s has no reason", name)
		}
	}
	if len(d.Best.Predicted) != 0 || d.ExactSearch.Status != "not_run" {
		t.Errorf("predicted %v, exact search %s", d.Best.Predicted, d.ExactSearch.Status)
	}
	if strings.Contains(d.Text(80), "Surrogate against exact") {
		t.Error("a comparison without a prediction")
	}
}

// The error of a prediction is predicted less exact.
func TestErrorIsPredictedLessExact(t *testing.T) {
	d := NewDesign(head, study(t))
	count := 0
	for _, point := range d.Best.Error {
		predicted, _ := d.Best.Predicted.Get(point.Name)
		exact, _ := d.Best.Exact.Get(point.Name)
		for _, e := range point.Value {
			p, _ := predicted.Get(e.Name)
			x, _ := exact.Get(e.Name)
			if e.Value != p-x {
				t.Errorf("%s: error %v of %v predicted, %v exact", e.Name, e.Value, p, x)
			}
			count++
		}
	}
	if count < 5 {
		t.Errorf("%d errors listed", count)
	}
}

// The yardstick is a share of what could be reached, whichever way the aim goes.
func TestRatio(t *testing.T) {
	for _, c := range []struct {
		highest       bool
		reached, best float64
		want          float64
	}{{true, 1.5, 2, 0.75}, {false, 4, 3, 0.75}, {true, -1, 2, math.NaN()}, {false, 0, 2, math.NaN()}} {
		s := study(t)
		result, search := *s.Result, *s.Exact
		result.Best.AimExact, search.Aim = c.reached, c.best
		s.Result, s.Exact, s.Aim.Highest = &result, &search, c.highest
		if got := s.ratio(); got != c.want && !(math.IsNaN(got) && math.IsNaN(c.want)) {
			t.Errorf("%+v gives %v", c, got)
		}
	}
}

func TestSameBytesTwice(t *testing.T) {
	s := study(t)
	first, second := NewDesign(head, s), NewDesign(head, s)
	if !bytes.Equal(first.JSON(), second.JSON()) || first.Text(80) != second.Text(80) {
		t.Error("two documents of one study differ")
	}
	problem, flow := flowOf(t, ramjet(), 8, 5, 5, 3)
	if !bytes.Equal(NewFlow(head, problem, flow).JSON(), NewFlow(head, problem, flow).JSON()) {
		t.Error("two documents of one flow differ")
	}
}

func TestNumberReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64().Draw(t, "v")
		raw, err := json.Marshal(Number(v))
		if err != nil {
			t.Fatal(err)
		}
		var back float64
		if err := json.Unmarshal(raw, &back); err != nil || back != v {
			t.Errorf("%v became %s, read %v, %v", v, raw, back, err)
		}
	})
	for v, want := range map[float64]string{math.Inf(1): "null", math.Inf(-1): "null", math.Copysign(0, -1): "0"} {
		if raw, _ := json.Marshal(Number(v)); string(raw) != want {
			t.Errorf("%v became %s", v, raw)
		}
	}
	if raw, _ := json.Marshal(Number(math.NaN())); string(raw) != "null" {
		t.Errorf("NaN became %s", raw)
	}
}

func TestObjectKeepsOrderAndText(t *testing.T) {
	raw := document(Object[any]{{"z", 1}, {"a<b", Object[string]{{"m", "x > y & \"q\""}}}, {"b", Object[Number]{}}})
	want := "{\n  \"z\": 1,\n  \"a<b\": {\n    \"m\": \"x > y & \\\"q\\\"\"\n  },\n  \"b\": {}\n}\n"
	if string(raw) != want {
		t.Errorf("got %s", raw)
	}
}

func BenchmarkDesignDocument(b *testing.B) {
	s := study(b)
	for b.Loop() {
		d := NewDesign(head, s)
		if len(d.JSON()) == 0 || d.Text(80) == "" {
			b.Fatal("empty document")
		}
	}
}
