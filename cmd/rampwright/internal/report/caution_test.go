package report

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

func raised(cautions []Caution, rule string) (Caution, bool) {
	i := slices.IndexFunc(cautions, func(c Caution) bool { return c.Rule == rule })
	if i < 0 {
		return Caution{}, false
	}
	return cautions[i], true
}

// flowCase is a fixed geometry, changed from a definition.
type flowCase struct {
	definition func() inlet.Definition
	change     func(*inlet.Definition)
	x          []float64
}

func (c flowCase) cautions(t *testing.T) []Caution {
	d := c.definition()
	if c.change != nil {
		c.change(&d)
	}
	problem, flow := flowOf(t, d, c.x...)
	return NewFlow(head, problem, flow).Cautions
}

// Each caution of a flow is raised by an example, with the number that raised it,
// and not by a like one.
func TestFlowCautions(t *testing.T) {
	gentle := []float64{8, 5, 5, 3}
	for rule, c := range map[string]struct {
		raises, quiet flowCase
		point, number string
	}{
		"terminal_mach": {
			flowCase{ramjet, nil, gentle},
			flowCase{ramjet, func(d *inlet.Definition) { d.Points = d.Points[1:2] }, gentle}, "dash", "Mach 2.2",
		},
		"not_attached": {flowCase{ramjet, nil, []float64{9, 9, 9, 4}}, flowCase{ramjet, nil, gentle}, "takeover", "ramp 3 detached"},
		"contraction_beyond_isentropic": {
			flowCase{ramjet, nil, []float64{8, 5, 5, 5}}, flowCase{ramjet, nil, []float64{8, 5, 5, 2}}, "takeover", "times the isentropic ceiling",
		},
		"contraction_above_self_start": {
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, flowCase{supersonic, nil, []float64{8, 7, 8.5, 18}}, "cruise", "1.4",
		},
		"pressure_rise": {
			flowCase{supersonic, nil, []float64{4, 4, 16, 2}}, flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, "cruise", "across the lip shock uses 1",
		},
		"static_temperature": {
			flowCase{supersonic, func(d *inlet.Definition) { d.Points[0].Temperature = 700 }, []float64{8, 7, 8.5, 8}},
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, "cruise", "K",
		},
		"lip_shock_miss": {
			flowCase{ramjet, nil, gentle},
			flowCase{ramjet, func(d *inlet.Definition) { d.Points = d.Points[3:]; d.Points[0].Mach = 3.18 }, gentle}, "takeover", "capture heights",
		},
		"separation_extrapolated": {
			flowCase{ramjet, nil, gentle},
			flowCase{ramjet, func(d *inlet.Definition) { d.Points = d.Points[3:] }, gentle}, "takeover", "Mach 1.3",
		},
		"shock_inside": {
			flowCase{supersonic, func(d *inlet.Definition) { d.Points[0].Mach = 6.5 }, []float64{8, 7, 8.5, 8}},
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, "cruise", "say nothing of that reflection",
		},
		"reflected_rise": {
			flowCase{supersonic, func(d *inlet.Definition) { d.Points[0].Mach = 6.5 }, []float64{8, 7, 8.5, 8}},
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, "cruise", "A shock that reflects on the inner cowl at cruise",
		},
		"steep_ramp": {
			flowCase{supersonic, nil, []float64{15.5, 3, 3, 8}}, flowCase{supersonic, nil, []float64{14.5, 3, 3, 8}}, "geometry", "amp 1 turns by 15.5",
		},
		"steep_cowl": {
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 12.5}}, flowCase{supersonic, nil, []float64{8, 7, 8.5, 11.5}}, "geometry", "16.5",
		},
		"shock_on_lip": {
			flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}},
			flowCase{supersonic, func(d *inlet.Definition) { d.LipSetback = inlet.Fixed(0.011) }, []float64{8, 7, 8.5, 8}}, "geometry", "Mach 6",
		},
		"outside_default_limits": {
			flowCase{supersonic, nil, []float64{12, 12, 10, 12}}, flowCase{supersonic, nil, []float64{8, 7, 8.5, 8}}, "", "total_turning_deg 34.000",
		},
	} {
		t.Run(rule, func(t *testing.T) {
			got, ok := raised(c.raises.cautions(t), rule)
			if !ok {
				t.Fatalf("not raised among %v", c.raises.cautions(t))
			}
			if got.Point != c.point || !strings.Contains(got.Text, c.number) {
				t.Errorf("raised as %+v, want point %s and %q", got, c.point, c.number)
			}
			if again, ok := raised(c.quiet.cautions(t), rule); ok {
				t.Errorf("raised without cause: %+v", again)
			}
		})
	}
}

// A lip shock that misses the shoulder is a caution of the chain, which names what
// to ask for; where that was asked the trace is what the reader is told of.
func TestLipShockMissAsksForTheTrace(t *testing.T) {
	gentle := []float64{8, 5, 5, 3}
	missed, ok := raised(flowCase{ramjet, nil, gentle}.cautions(t), "lip_shock_miss")
	if !ok || missed.Point != "takeover" || !strings.Contains(missed.Text, "throat: traced") || !strings.Contains(missed.Text, "Also: cruise 0.0") {
		t.Fatalf("%+v", missed)
	}
	asked := flowCase{ramjet, func(d *inlet.Definition) {
		for i := range d.Points {
			d.Points[i].Traced = d.Points[i].Name != "climb"
		}
	}, gentle}.cautions(t)
	if left, ok := raised(asked, "lip_shock_miss"); !ok || left.Point != "climb" || strings.Contains(left.Text, "Also") {
		t.Errorf("with all but climb traced: %+v", left)
	}
	if traced, ok := raised(asked, "traced"); !ok || !strings.Contains(traced.Text, "cruise") {
		t.Errorf("nothing said of the traces: %+v", traced)
	}
}

// One caution a rule names every point that raises it.
func TestCautionNamesEveryPoint(t *testing.T) {
	problem, flow := flowOf(t, ramjet(), 8, 5, 5, 3)
	c := NewFlow(head, problem, flow).Cautions[0]
	if c.Rule != "terminal_mach" || !strings.Contains(c.Text, "Also: cruise Mach 2.") || !strings.Contains(c.Text, "climb Mach 1.7") {
		t.Errorf("first caution: %+v", c)
	}
}

// altered is the finished design with a changed result.
func altered(t *testing.T, change func(s *Study, r *optimize.Result)) Study {
	s := study(t)
	result, search := *s.Result, *s.Exact
	result.Best.Assessment.Checks = slices.Clone(result.Best.Assessment.Checks)
	result.Best.X = slices.Clone(result.Best.X)
	result.Fits, result.Rows = slices.Clone(result.Fits), slices.Clone(result.Rows)
	s.Result, s.Exact = &result, &search
	change(&s, &result)
	return s
}

func TestDesignCautions(t *testing.T) {
	same := func(*Study, *optimize.Result) {}
	unlimited := func(s *Study, r *optimize.Result) {
		for i := range r.Best.Assessment.Checks {
			r.Best.Assessment.Checks[i].Active = false
		}
	}
	defaults := func(s *Study, r *optimize.Result) {
		r.Rows, _ = constraints.Rows(s.Problem.Quantities(), inlet.DefaultLimits(s.Problem.Definition()))
	}
	for rule, c := range map[string]struct {
		raises, quiet func(*Study, *optimize.Result)
		words         string
	}{
		"infeasible": {func(s *Study, r *optimize.Result) {
			r.Status = optimize.Infeasible
			check := &r.Best.Assessment.Checks[slices.IndexFunc(r.Rows, func(row constraints.Row) bool { return row.Quantity.Name == "length_m" })]
			check.Met, check.Value = false, 0.7
		}, same, "length_m is 0.70000, asked <= 0.62"},
		"time_limit":    {func(s *Study, r *optimize.Result) { r.Status = optimize.Stopped }, same, "ended early by the time limit"},
		"unfinished":    {func(s *Study, r *optimize.Result) { r.Status = optimize.Interrupted }, same, "interrupted"},
		"routes_differ": {func(s *Study, r *optimize.Result) { r.Best.RouteGap = 1e-6 }, same, "differ by 1e-06"},
		"no_route":      {func(s *Study, r *optimize.Result) { r.Best.RouteGap = math.Inf(1) }, same, "Only one of the two exact routes"},
		"surrogate_error": {func(s *Study, r *optimize.Result) {
			r.Status, r.Best.SurrogateError = optimize.NotVerified, 0.02
		}, same, "0.02 of scale, more than the agreement 0.001"},
		"yardstick":         {func(s *Study, r *optimize.Result) { s.Exact.Aim *= 1.01 }, same, "0.9901"},
		"no_margin":         {same, unlimited, "limits are met without margin: throat_temperature_K at cruise, "},
		"defaults_loosened": {same, defaults, "internal_contraction_over_self_start (<= 1.45 instead of <= 1) at cruise"},
		"defaults_lifted": {func(s *Study, r *optimize.Result) {
			r.Rows = slices.DeleteFunc(r.Rows, func(row constraints.Row) bool { return row.Quantity.Name == "separation_margin" })
		}, same, "switched off: separation_margin at cruise."},
		"on_bound": {func(s *Study, r *optimize.Result) { r.Best.X[1] = 3 }, same, "ramp_2_angle_deg stands at its smallest angle, 3 deg: the search asks to delete this ramp"},
		"no_surrogate": {func(s *Study, r *optimize.Result) { r.Fits[0].Err = errors.New("too few samples") }, same,
			"recovery at cruise (too few samples)"},
		"weak_surrogate": {func(s *Study, r *optimize.Result) { r.Fits[0].Choice.Quality.Q2 = 0.5 }, same, "recovery at cruise (Q2 0.500)"},
	} {
		t.Run(rule, func(t *testing.T) {
			rule := strings.NewReplacer("no_route", "routes_differ", "time_limit", "unfinished").Replace(rule)
			got, ok := raised(NewDesign(head, altered(t, c.raises)).Cautions, rule)
			if !ok || !strings.Contains(got.Text, c.words) {
				t.Errorf("raised %v: %+v, want %q", ok, got, c.words)
			}
			if again, ok := raised(NewDesign(head, altered(t, c.quiet)).Cautions, rule); ok {
				t.Errorf("raised without cause: %+v", again)
			}
		})
	}
}

// Other variables at an end of their range ask for a wider one.
func TestBoundOfOtherVariables(t *testing.T) {
	s := altered(t, func(s *Study, r *optimize.Result) { r.Best.X[3] = 12 - 1e-9; r.Best.X[0] = 16 })
	var got []string
	for _, c := range s.boundCautions() {
		got = append(got, c.Text)
	}
	want := []string{
		"ramp_1_angle_deg ends on the upper end of its range, 16: a wider range may hold a better design.",
		"cowl_angle_deg ends on the upper end of its range, 12: a wider range may hold a better design.",
	}
	if !slices.Equal(got, want) {
		t.Errorf("got %q", got)
	}
}

// An end that no brief can move asks for nothing; a ramp at its smallest angle can be
// deleted all the same.
func TestBoundThatNoBriefCanMove(t *testing.T) {
	s := altered(t, func(s *Study, r *optimize.Result) { r.Best.X[3], r.Best.X[0], r.Best.X[1] = 12, 16, 3 })
	s.Widest = func(v problems.Variable) (float64, float64) {
		if v.Name == "ramp_1_angle_deg" {
			return 3, 40
		}
		return 3, 12
	}
	var got []string
	for _, c := range s.boundCautions() {
		got = append(got, strings.Fields(c.Text)[0])
	}
	if want := []string{"ramp_1_angle_deg", "ramp_2_angle_deg"}; !slices.Equal(got, want) {
		t.Errorf("cautions of %v, want %v", got, want)
	}
}

// Limits without margin are told apart by whether a tolerance of the brief moves them;
// without tolerances nothing is said of built inlets but what scatter would do.
func TestNoMarginCountsOnStatedTolerances(t *testing.T) {
	var on []int
	s := altered(t, func(s *Study, r *optimize.Result) {
		for _, c := range r.Best.Assessment.Checks {
			if c.Active && !slices.Contains(on, c.Index) {
				on = append(on, c.Index)
			}
		}
	})
	if len(on) < 2 {
		t.Fatalf("the design stands on %d limits", len(on))
	}
	names := make([]string, len(on))
	for i, index := range on {
		names[i] = responseName(s.Problem.Quantities()[index])
	}
	moved := func(which ...int) []bool {
		list := make([]bool, len(s.Problem.Quantities()))
		for _, i := range which {
			list[i] = true
		}
		return list
	}
	for _, c := range []struct {
		moved []bool
		want  string
	}{
		{nil, "The brief states no tolerance: whatever scatter moves one of them will violate it in about half of all built inlets."},
		{moved(on...), "Each is violated in about half of all built inlets, at least one of them in more."},
		{moved(), "No stated tolerance moves them."},
		{moved(on[0]), names[0] + " is violated in about half of all built inlets; no stated tolerance moves " + strings.Join(names[1:], ", ") + "."},
		{moved(on[:len(on)-1]...), "Each but " + names[len(on)-1] + ", which no stated tolerance moves, is violated"},
	} {
		s.Moved = c.moved
		got := s.noMargin()
		if len(got) != 1 || !strings.Contains(got[0].Text, c.want) || !strings.HasPrefix(got[0].Text, fmt.Sprintf("%d limits are met without margin: ", len(on))) {
			t.Errorf("moved %v: %+v, want %q", c.moved != nil, got, c.want)
		}
	}
	s.Moved = moved(on[0])
	best := &s.Result.Best.Assessment
	best.Checks = slices.DeleteFunc(best.Checks, func(c constraints.Check) bool { return c.Active && c.Index != on[0] })
	if got := s.noMargin(); got[0].Text != "A limit is met without margin: "+names[0]+". It is violated in about half of all built inlets." {
		t.Errorf("%+v", got)
	}
}

// What a limit is missed by is said where its digits do not show it, and always where
// the reader is to tighten by it.
func TestAMissBelowTheDigitsIsNamed(t *testing.T) {
	check := func(value float64) constraints.Assessment {
		row := constraints.Row{Quantity: problems.Quantity{Name: "throat_mach", Point: "takeover"}, Low: 1.3, High: math.Inf(1)}
		return constraints.Assessment{Checks: []constraints.Check{{Row: row, Value: value, Margin: value - 1.3}}}
	}
	for _, c := range []struct {
		value      float64
		difference bool
		want       string
	}{
		{1.3 - 3e-6, false, "throat_mach at takeover is 1.3000, asked >= 1.3 (missed by 3e-6)"},
		{1.25, false, "throat_mach at takeover is 1.2500, asked >= 1.3"},
		{1.25, true, "throat_mach at takeover is 1.2500, asked >= 1.3 (missed by 0.05)"},
	} {
		if got := unmet(check(c.value), c.difference); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

// Of an inlet with a terminal shock, its Mach number is the first caution even
// where nothing is feasible.
func TestTerminalMachComesFirst(t *testing.T) {
	problem, flow := flowOf(t, ramjet(), 8, 5, 5, 3)
	x := []float64{8, 5, 5, 3}
	rows, err := constraints.Rows(problem.Quantities(), []problems.Limit{asked("length_m", "geometry", math.Inf(-1), 0.1)})
	if err != nil {
		t.Fatal(err)
	}
	best := optimize.Candidate{X: x, Exact: flow.Evaluation, SurrogateError: math.Inf(1), Assessment: constraints.Assess(rows, flow.Evaluation)}
	result := &optimize.Result{Status: optimize.Infeasible, Best: best, Candidates: []optimize.Candidate{best}, Rows: rows}
	d := NewDesign(head, Study{Problem: problem, Aim: recovery, Result: result, Flow: flow})
	var rules []string
	for _, c := range d.Cautions {
		rules = append(rules, c.Rule)
	}
	if len(rules) < 3 || rules[0] != "terminal_mach" || rules[1] != "infeasible" {
		t.Errorf("cautions %v", rules)
	}
	lifted, _ := raised(d.Cautions, "defaults_lifted")
	if !strings.Contains(lifted.Text, "only those of the model itself and of the brief hold") {
		t.Errorf("defaults: %s", lifted.Text)
	}
	text := strings.Join(section(d.Text(80), "Limits"), "\n")
	if !strings.Contains(text, "not met") {
		t.Errorf("limits:\n%s", text)
	}
	checkWidth(t, d.Text(80), 80)
}

// A lifted default names its points, in few words where it is every one.
func TestLiftedDefaultsNamePoints(t *testing.T) {
	definition := ramjet()
	problem, flow := flowOf(t, definition, 8, 5, 5, 3)
	limits := slices.DeleteFunc(inlet.DefaultLimits(definition), func(l problems.Limit) bool {
		return l.Quantity == "separation_margin" || l.Quantity == "terminal_mach" && l.Point != "dash" || l.Quantity == "total_turning_deg"
	})
	rows, err := constraints.Rows(problem.Quantities(), limits)
	if err != nil {
		t.Fatal(err)
	}
	s := Study{Problem: problem, Flow: flow, Result: &optimize.Result{Rows: rows}}
	got := s.liftedDefaults()
	want := "Default limits are switched off: separation_margin at every point, terminal_mach at cruise and takeover and climb, total_turning_deg."
	if len(got) != 1 || got[0].Text != want {
		t.Errorf("got %+v", got)
	}
}

// The price is told in the words of aim and unit, with the variable it holds.
func TestPriceInWords(t *testing.T) {
	d := NewDesign(head, study(t))
	check := constraints.Check{Row: constraints.Row{Quantity: problems.Quantity{Unit: "m"}}, Active: true, Met: true, Applies: true, Price: 0.2581}
	if got := d.how(&check); got != "on the limit: 0.258 recovery per m; holds ramp_1_angle_deg" {
		t.Errorf("got %q", got)
	}
	check.Quantity.Unit, d.Best.Aim.Text = "", "recovery * capture"
	if got := d.how(&check); got != "on the limit: 0.258 of the aim per unit; holds ramp_1_angle_deg" {
		t.Errorf("got %q", got)
	}
	beside := &d.study.Result.Best.Assessment.Checks[0].Quantity
	at := memberName(*beside) + " at " + beside.Point
	for _, c := range []struct {
		reach float64
		end   constraints.PriceEnd
		want  string
	}{
		{0.00314, constraints.PriceEnd{Kind: constraints.LimitMet}, " for the next 0.0031, then " + at},
		{0.00314, constraints.PriceEnd{Kind: constraints.LimitReleased}, " for the next 0.0031, then " + at + " lets go"},
		{118.8, constraints.PriceEnd{Kind: constraints.PriceFalls}, " for the next 120, then less"},
		{2.23e-5, constraints.PriceEnd{Kind: constraints.PriceRises}, " for the next 0.000022, then more"},
		{3e7, constraints.PriceEnd{Kind: constraints.UpperEndMet}, " for the next 3.0e7, then the upper end of ramp_1_angle_deg"},
		{1, constraints.PriceEnd{Kind: constraints.LowerEndMet}, " for the next 1, then the lower end of ramp_1_angle_deg"},
		{1, constraints.PriceEnd{Kind: constraints.BoundReleased}, " for the next 1, then ramp_1_angle_deg leaves its end"},
		{0, constraints.PriceEnd{Kind: constraints.LimitMet}, " together with " + at + ", alone nothing"},
	} {
		check.PriceRange, check.PriceEnd = c.reach, c.end
		if got, want := d.how(&check), "on the limit: 0.258 of the aim per unit"+c.want+"; holds ramp_1_angle_deg"; got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
	check.Price = 0
	if got := d.how(&check); got != "on the limit" {
		t.Errorf("got %q", got)
	}
}

func TestAssumptionsNameTheGas(t *testing.T) {
	d := supersonic()
	d.Gas.Gamma = 1.33
	if got := fmt.Sprint(assumptions(d)); !strings.Contains(got, "ratio of specific heats 1.33") || !strings.Contains(got, "Export-control") {
		t.Error(got)
	}
}
