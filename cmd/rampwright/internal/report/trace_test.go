package report

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/problems/contour"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// swallowed is the Mach 6 article set back, flown above shock-on-lip so that its
// shocks merge and pass outside, and faster so that they fall inside the lip.
func swallowed() inlet.Definition {
	d := supersonic()
	d.LipSetback = inlet.Fixed(0.04)
	d.Points = append(d.Points,
		inlet.Point{Name: "over", Mach: 6.4, Pressure: 1984, Temperature: 223.18},
		inlet.Point{Name: "beyond", Mach: 8, Pressure: 1984, Temperature: 223.18},
		inlet.Point{Name: "slow", Mach: 4.5, Pressure: 3600, Temperature: 219.4})
	return d
}

const traceKeys = "wavelet_deg threshold events capture capture_by_streamline spillage_drag spillage_drag_by_momentum lip_shock_miss throat throat.x_m throat.height_m throat.shock_recovery " +
	"throat.mach throat.pressure_ratio throat.temperature_ratio throat.worst_total_pressure_ratio throat.best_total_pressure_ratio " +
	"throat.distortion throat.tubes throat.tubes.from_m throat.tubes.to_m throat.tubes.height_m throat.tubes.mach throat.tubes.flow_angle_deg " +
	"throat.tubes.pressure_ratio throat.tubes.temperature_ratio throat.tubes.total_pressure_ratio throat.tubes.mass_fraction " +
	"closure closure.mass closure.momentum closure.energy spilled_closure spilled_closure.mass spilled_closure.momentum spilled_closure.energy error lip_shocks lip_shocks.name lip_shocks.clearance lip_shocks.inside " +
	"walls walls.surface walls.segment walls.from_m walls.to_m walls.mach walls.flow_angle_deg walls.pressure_ratio walls.pressure_kPa " +
	"forces forces.surface forces.segment forces.from_m forces.to_m forces.length_m forces.least_pressure_ratio forces.mean_pressure_ratio " +
	"forces.greatest_pressure_ratio forces.force_x forces.force_y forces.force_x_N forces.force_y_N " +
	"force_sums force_sums.surface force_sums.force_x force_sums.force_y force_sums.force_x_N force_sums.force_y_N force_reference_N"

const endingKeys = "ending ending.reason ending.site ending.place_m ending.mach ending.turning_deg"

// A traced point says so, with settings, averages and error bounds; a trace beside
// the chain is shown and does not touch the quantities; one that ends says where.
func TestTracesInTheFlow(t *testing.T) {
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	document := NewFlow(head, problem, flow)
	raw := document.JSON()
	var read struct {
		Points []struct {
			Name, Status string
			Traced       bool
			Quantities   map[string]*float64
			Trace        *struct {
				Ending *struct{ Reason, Site string }
				Throat struct {
					Mach *float64
				}
				Error map[string]*float64
			}
		}
	}
	if err := json.Unmarshal(raw, &read); err != nil {
		t.Fatal(err)
	}
	cruise, over, beyond, slow := read.Points[0], read.Points[1], read.Points[2], read.Points[3]
	if cruise.Traced || cruise.Trace != nil {
		t.Errorf("at shock-on-lip: %+v", cruise)
	}
	if !over.Traced || over.Status != "attached" || over.Trace == nil || over.Trace.Throat.Mach == nil ||
		*over.Trace.Throat.Mach != *over.Quantities["throat_mach"] || !(*over.Trace.Error["mach"] < 0.02) {
		t.Errorf("merged shocks outside the lip: %+v", over)
	}
	if !beyond.Traced || beyond.Trace == nil || beyond.Trace.Ending == nil || !strings.HasPrefix(beyond.Status, beyond.Trace.Ending.Reason) || beyond.Quantities["throat_mach"] != nil {
		t.Errorf("shocks inside the lip: %+v", beyond)
	}
	if slow.Traced || slow.Trace == nil || slow.Trace.Throat.Mach == nil || *slow.Trace.Throat.Mach == *slow.Quantities["throat_mach"] {
		t.Errorf("below shock-on-lip: %+v", slow)
	}
	for _, key := range under("points.trace", traceKeys) {
		if !slices.Contains(keyPaths(t, raw), key) {
			t.Errorf("no key %s", key)
		}
	}
	text := document.Text(100)
	for _, want := range []string{
		"over: traced (expansion wavelets of 0.5 deg, threshold", "Throat averages: Mach", "throat average",
		"beyond: traced", "The trace ends ahead of the throat: ", "capture heights ahead of the shoulder and reflects. Traced on", "ahead of the lip",
		"The flow at over is traced wave by wave",
	} {
		if !strings.Contains(strings.Join(strings.Fields(text), " "), want) {
			t.Errorf("the text does not say %q:\n%s", want, text)
		}
	}
}

// An outline shows every corner of its walls, in text and JSON, and no setting that
// shocks would have placed.
func TestOutlineInTheFlow(t *testing.T) {
	d := supersonic()
	d.RampAngle, d.CowlAngle, d.CaptureHeight = nil, nil, 0.36
	d.Outline = &inlet.Outline{
		Body:      []contour.Point{{}, {X: 0.62, Y: 0.0978}, {X: 1.17, Y: 0.2722}, {X: 1.6, Y: 0.31}},
		CowlInner: []contour.Point{{X: 1.085, Y: 0.36}, {X: 1.2, Y: 0.38}, {X: 1.6, Y: 0.4}}, OuterAngle: 0.24, ThroatX: 1.2,
	}
	d.Points[0].Mach = 5
	problem, flow := flowOf(t, d)
	document := NewFlow(head, problem, flow)
	text := document.Text(100)
	for _, want := range []string{"corner 2", "shoulder", "body end", "cowl lip", "cowl corner 2", "cowl end"} {
		if !strings.Contains(text, "\n  "+want+" ") {
			t.Errorf("no %s in\n%s", want, text)
		}
	}
	var read struct {
		Inlet struct {
			Outline struct {
				Body [][2]float64 `json:"body_m"`
			}
			ShockOnLip *float64          `json:"shock_on_lip_mach"`
			Missing    map[string]string `json:"missing"`
			Angles     []float64         `json:"ramp_angle_deg"`
		}
	}
	if err := json.Unmarshal(document.JSON(), &read); err != nil {
		t.Fatal(err)
	}
	if len(read.Inlet.Outline.Body) != 4 || read.Inlet.ShockOnLip != nil || read.Inlet.Missing["shock_on_lip_mach"] == "" || len(read.Inlet.Angles) != 2 {
		t.Errorf("%+v", read.Inlet)
	}
	for _, c := range document.Cautions {
		if c.Rule == "shock_on_lip" {
			t.Errorf("a caution on a setback that is not there: %s", c.Text)
		}
	}
}

// A stream that ends behind the throat plane raises a caution, is told wave by wave,
// and leaves the averages as they are.
func TestEndBehindTheThroatIsTold(t *testing.T) {
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	slow := &flow.Points[len(flow.Points)-1]
	slow.Behind = nil
	before := NewFlow(head, problem, flow)
	slow.Behind = &wave.Ending{Reason: wave.MachReflection, Site: "cowl inside", Place: contour.Point{X: 0.7, Y: 0.17}, State: wave.State{Mach: 1.349}, Turning: 0.2}
	after := NewFlow(head, problem, flow)
	for _, words := range []string{"Behind the throat plane at slow no regular supersonic flow goes on", "goes on: Mach reflection at cowl inside, x 0.7"} {
		text := strings.Join(strings.Fields(after.Text(100)), " ")
		if !strings.Contains(text, words) || strings.Contains(strings.Join(strings.Fields(before.Text(100)), " "), words) {
			t.Errorf("%q is not told there, or told elsewhere", words)
		}
	}
	was, is := before.Points[len(flow.Points)-1], after.Points[len(flow.Points)-1]
	if is.Trace.BehindThroat == nil || is.Trace.BehindThroat.Mach != 1.349 || was.Trace.BehindThroat != nil || is.Trace.Throat.Mach != was.Trace.Throat.Mach {
		t.Errorf("behind the throat: %+v, then %+v", was.Trace.BehindThroat, is.Trace.BehindThroat)
	}
}

// Both stream tubes close, and both routes to capture and spillage drag agree, in
// what a script reads; what was not reached is null with its reason.
func TestBalancesOfATrace(t *testing.T) {
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	document := NewFlow(head, problem, flow)
	var read struct {
		Points []struct {
			Name  string
			Trace *struct {
				Capture      *float64
				ByStreamline *float64            `json:"capture_by_streamline"`
				Spillage     *float64            `json:"spillage_drag"`
				ByMomentum   *float64            `json:"spillage_drag_by_momentum"`
				Captured     map[string]*float64 `json:"closure"`
				Spilled      map[string]*float64 `json:"spilled_closure"`
				Missing      map[string]string
			}
		}
	}
	if err := json.Unmarshal(document.JSON(), &read); err != nil {
		t.Fatal(err)
	}
	text := document.Text(100)
	_, narrow, _ := strings.Cut(document.Text(80), "differ from the balances of mass and momentum.\n")
	for _, want := range []string{" captured ", " spilled ", " mass  momentum ", " capture ", " spillage\n"} { // what is left is still told apart
		if narrow, _, _ := strings.Cut(narrow, "  over "); !strings.Contains(narrow, want) {
			t.Errorf("a narrow page lacks the head %q:\n%s", want, narrow)
		}
	}
	seen := 0
	for _, p := range read.Points {
		trace := p.Trace
		if trace == nil || trace.Capture == nil {
			continue
		}
		if d := *trace.Capture - *trace.ByStreamline; math.Abs(d) > 1e-9 {
			t.Errorf("%s: captures differ by %g", p.Name, d)
		}
		if d := *trace.Spillage - *trace.ByMomentum; math.Abs(d) > 1e-4 {
			t.Errorf("%s: spillage drags differ by %g", p.Name, d)
		}
		for name, tube := range map[string]map[string]*float64{"closure": trace.Captured, "spilled_closure": trace.Spilled} {
			for law, open := range tube {
				switch {
				case open == nil && trace.Missing[name] == "":
					t.Errorf("%s: %s %s is null without a reason", p.Name, name, law)
				case open != nil && math.Abs(*open) > map[string]float64{"mass": 1e-12, "energy": 1e-12, "momentum": 1e-3}[law]:
					t.Errorf("%s: %s of %s leaves %g open", p.Name, law, name, *open)
				case open != nil:
					seen++
				}
			}
		}
	}
	if seen < 12 || !strings.Contains(text, "What the traces leave open") {
		t.Errorf("%d balances; text:\n%s", seen, text)
	}
}
