package inlet

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"rampwright/problems"
)

// lateCrossing has a strong first ramp and two slight ones, whose weak shocks
// cross each other when the flow slows down.
func lateCrossing() Definition {
	d := veyric().at(1.8, 0).lipTurned(1)
	d.RampAngle = []Setting{Fixed(13.6), Fixed(0.1), Fixed(0.1)}
	d.ShockOnLip = Fixed(2)
	return d
}

// Every status a flow or contour can end with, by an example.
func TestEveryStatusIsReached(t *testing.T) {
	change := func(d Definition, edit func(*Definition)) Definition { edit(&d); return d }
	turnings := func(degrees ...float64) func(*Definition) {
		return func(d *Definition) {
			d.RampAngle = nil
			for _, angle := range degrees {
				d.RampAngle = append(d.RampAngle, Fixed(angle))
			}
		}
	}
	setback := func(s float64) func(*Definition) { return func(d *Definition) { d.LipSetback = Fixed(s) } }
	slow := veyric().at(2, 0).lipTurned(1) // 22.85 deg at Mach 2 lies between sonic and largest turning
	for want, d := range map[string]Definition{
		"ramp 1 expands":                           veyric().at(6, -9),
		"ramp 1 detached":                          veyric().at(1.3, 0),
		"flow subsonic ahead of ramp 2":            change(slow, turnings(22.85, 1)),
		"flow subsonic behind the last ramp":       change(slow, turnings(22.85)),
		"shocks inside the lip":                    veyric().at(7, 0),
		"ramp shocks cross ahead of the lip":       lateCrossing(),
		"lip behind the focus wave":                change(change(veyric().at(6, 0).lipTurned(1), turnings(3, 3)), setback(0.05)),
		"lip shock detached":                       veyric().at(6, 0).lipTurned(40),
		"flow subsonic behind the lip shock":       change(veyric().at(6, 0), func(d *Definition) { *d = d.lipTurned(subsonicLip(t)) }),
		"cowl turns away from the flow at the lip": veyric().at(6, 0).lipTurned(-1),
	} {
		a := flowAt(t, d, first{}, 0)
		if err := a.status(); err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("status %v, want %s", err, want)
		}
	}
	for want, d := range map[string]Definition{
		"ramp shocks do not rise to the lip":       change(veyric().at(6, 10), turnings(-9.9)),
		"cowl turns away from the flow at the lip": veyric().lipTurned(-1),
		"ramp 3 has no length":                     change(veyric().lipTurned(20), setback(-6)),
		"duct closed at the shoulder":              change(veyric(), setback(3)),
		"lip shock detached":                       veyric().lipTurned(40),
		"ramp 1 detached":                          change(veyric(), turnings(50)),
	} {
		if err := flowAt(t, d, first{}, 0).shape.err; err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("contour: %v, want %s", err, want)
		}
	}
	vacuum := change(veyric().at(10, 0), func(d *Definition) { d.CowlWedge = Fixed(-60) })
	if err := flowAt(t, vacuum, first{}, 0).cowlErr; phrase(err) != "outer cowl expands past vacuum" {
		t.Errorf("outer cowl: %v", err)
	}
	if err := flowAt(t, veyric(), first{}, 0).status(); err != nil {
		t.Errorf("veyric at its design point: %v", err)
	}
}

// subsonicLip is a lip turning of veyric between sonic and largest, degrees.
func subsonicLip(t *testing.T) float64 {
	a := flowAt(t, veyric().at(6, 0), first{}, 0)
	largest := first{}.largestTurning(a.def.Gas, a.lipMach)
	return (sonicTurning(a.def.Gas, a.lipMach) + largest) / 2 / radian
}

// A shock that is detached leaves its own margin defined, negative, and takes
// everything behind it away with its reason; the free stream stays.
func TestDetachedRampLeavesMarginAndReason(t *testing.T) {
	d := veyric().at(1.6, 0)
	e := evaluate(t, d)
	if margin := e.value("only", "ramp_attachment_margin_deg/ramp 1"); !(margin > 0) {
		t.Errorf("margin of ramp 1 %v", margin)
	}
	margin := e.value("only", "ramp_attachment_margin_deg/ramp 2")
	for _, name := range []string{
		"recovery", "lip_mach", "throat_mach", "capture", "spillage_drag", "lip_attachment_margin_deg",
		"ramp_attachment_margin_deg/ramp 3", "self_start_limit", "separation_margin/ramp 2", "lip_clearance/ramp 1 shock",
	} {
		_, err := e.find("only", name)
		var detached *problems.Detached
		if !errors.As(err, &detached) || detached.Shock != "ramp 2" {
			t.Errorf("%s is missing because of %v", name, err)
		} else if math.Abs(detached.By/radian+margin) > 1e-9 || !(detached.By > 0) {
			t.Errorf("%s: beyond attachment by %v deg, margin %v deg", name, detached.By/radian, margin)
		}
	}
	for _, name := range []string{"standard_recovery", "dynamic_pressure_kPa", "total_pressure_kPa", "unit_reynolds_1_m"} {
		e.value("only", name)
	}
	// The contour belongs to the shock-on-lip Mach number and stays as well.
	e.value(problems.Geometry, "length_m")
}

// A quantity whose definition does not cover the point says so.
func TestNotApplicable(t *testing.T) {
	aligned := veyric().at(6, 0).lipTurned(0)
	for name, d := range map[string]Definition{
		"terminal_mach":                  veyric().at(6, 0),
		"lip_shock_miss":                 aligned,
		"total_contraction_over_started": veyric().at(2.5, 0),
	} {
		_, err := evaluate(t, d).find("only", name)
		var elsewhere *problems.NotApplicable
		if !errors.As(err, &elsewhere) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// An aligned cowl has no lip shock, and its shoulder is the foot of the normal
// from the lip to the last ramp.
func TestAlignedCowl(t *testing.T) {
	d := veyric().at(6, 0).lipTurned(0)
	a := flowAt(t, d, first{}, 0)
	if a.status() != nil {
		t.Fatal(a.status())
	}
	within(t, "throat Mach number over lip Mach number", a.throatMach/a.lipMach, 1, 1e-14)
	last := a.shape.lastRamp()
	within(t, "shoulder above the last ramp", last.Height(a.shape.Shoulder), 0, 1e-15)
	within(t, "shoulder against the foot of the lip", last.Along(a.shape.Shoulder), last.Along(a.shape.Lip), 1e-15)
	within(t, "throat", a.shape.Throat, last.Height(a.shape.Lip), 1e-15)
	within(t, "internal contraction", a.shape.internalContraction(), 1, 1e-13)
}

func TestDefinitionsNoFlowExistsFor(t *testing.T) {
	for name, spoil := range map[string]func(*Definition){
		"no ramp":             func(d *Definition) { d.RampAngle = nil },
		"nine ramps":          func(d *Definition) { d.RampAngle = make([]Setting, 9) },
		"no point":            func(d *Definition) { d.Points = nil },
		"no cowl":             func(d *Definition) { d.CowlAngle = nil },
		"two cowls":           func(d *Definition) { d.LipTurning = d.CowlAngle },
		"no height":           func(d *Definition) { d.CaptureHeight = 0 },
		"no width":            func(d *Definition) { d.Width = math.NaN() },
		"gas":                 func(d *Definition) { d.Gas.Gamma = 1 },
		"subsonic point":      func(d *Definition) { d.Points[0].Mach = 1 },
		"point in vacuum":     func(d *Definition) { d.Points[0].Pressure = 0 },
		"point at zero K":     func(d *Definition) { d.Points[0].Temperature = 0 },
		"point not a number":  func(d *Definition) { d.Points[0].Mach = math.NaN() },
		"gas constant absent": func(d *Definition) { d.Gas.R = 0 },
	} {
		d := veyric()
		spoil(&d)
		_, err := New(d)
		var invalid *Invalid
		if !errors.As(err, &invalid) || invalid.What == "" {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Searched settings become variables in their order, and x goes back to them.
func TestVariablesFillTheOpenPlaces(t *testing.T) {
	d := veyric()
	lip := Between(1, 9)
	d.CowlAngle, d.LipTurning = nil, &lip
	d.RampAngle[1] = Between(3, 16)
	d.CowlWedge, d.ShockOnLip, d.LipSetback = Between(2, 5), Between(5, 7), Between(0, 0.1)
	p := problemOf(t, d)
	var names []string
	for _, v := range p.Variables() {
		names = append(names, v.Name)
	}
	want := "ramp_2_angle_deg lip_turning_deg cowl_wedge_deg shock_on_lip_mach lip_setback"
	if got := strings.Join(names, " "); got != want {
		t.Fatalf("variables %s, want %s", got, want)
	}
	x := []float64{7.5, 4, 3, 5.5, 0.02}
	open := problems.NewEvaluation(len(p.Quantities()))
	if err := p.Evaluate(context.Background(), x, open); err != nil {
		t.Fatal(err)
	}
	fixed := veyric().lipTurned(4)
	fixed.RampAngle[1] = Fixed(7.5)
	fixed.CowlWedge, fixed.ShockOnLip, fixed.LipSetback = Fixed(3), Fixed(5.5), Fixed(0.02)
	closed := evaluate(t, fixed)
	for i, q := range p.Quantities() {
		if math.Float64bits(open.Values[i]) != math.Float64bits(closed.dst.Values[i]) {
			t.Errorf("%s at %s: %v searched, %v fixed", q.Name, q.Point, open.Values[i], closed.dst.Values[i])
		}
	}
}

func TestCancelledEvaluation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	p := problemOf(t, veyric())
	dst := problems.NewEvaluation(len(p.Quantities()))
	for _, run := range []func(context.Context, []float64, *problems.Evaluation) error{p.Evaluate, p.Verify} {
		if err := run(ctx, nil, dst); !errors.Is(err, context.Canceled) {
			t.Errorf("cancelled evaluation: %v", err)
		}
	}
}
