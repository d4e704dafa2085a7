package inlet

import (
	"context"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/shock"
)

func flowOf(t fatal, d Definition) (*Problem, *Flow) {
	t.Helper()
	p := problemOf(t, d)
	flow, err := p.Flow(context.Background(), nil)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return p, flow
}

// The stations march from free stream to throat: each carries the wave that
// leads into it, and the last agrees with the quantities.
func TestStationsTellTheSameFlowAsTheQuantities(t *testing.T) {
	var whole share
	rapid.Check(t, func(t *rapid.T) {
		d := flownInOrder(t, anyDefinition(t))
		p, flow := flowOf(t, d)
		e := evaluated{t, p, flow.Evaluation}
		for i, f := range flow.Points {
			if !whole.count(f.Err == nil && !f.Traced) {
				continue
			}
			first, last := f.Stations[0], f.Stations[len(f.Stations)-1]
			if first.Name != "free stream" || last.Name != "throat" || f.Status() != "attached" {
				t.Fatalf("from %s to %s, status %s", first.Name, last.Name, f.Status())
			}
			within(t, "throat Mach number", last.Mach, e.value(f.Point.Name, "throat_mach"), 1e-14*last.Mach)
			within(t, "pressure ratio", last.PressureRatio/e.value(f.Point.Name, "pressure_ratio"), 1, 1e-13)
			within(t, "temperature ratio", last.TemperatureRatio/e.value(f.Point.Name, "temperature_ratio"), 1, 1e-13)
			within(t, "shock recovery", last.TotalPressure/e.value(f.Point.Name, "shock_recovery"), 1, 1e-13)
			within(t, "flow angle", last.FlowAngle, flow.Design.Cowl, 1e-14)
			within(t, "free-stream angle", first.FlowAngle, -d.Points[i].Incidence, 0)
			for k := 1; k < len(f.Stations); k++ {
				before, here := f.Stations[k-1], f.Stations[k]
				within(t, "pressure", here.Pressure, here.PressureRatio*d.Points[i].Pressure, 1e-12*here.Pressure)
				within(t, "temperature", here.Temperature, here.TemperatureRatio*d.Points[i].Temperature, 1e-12*here.Temperature)
				if math.IsNaN(here.WaveAngle) {
					continue
				}
				within(t, "normal Mach number", here.NormalMach, before.Mach*math.Sin(here.WaveAngle), 1e-12*here.NormalMach)
				wave := shock.Oblique{
					Mach: before.Mach, Turning: math.Abs(here.FlowAngle - before.FlowAngle), WaveAngle: here.WaveAngle, Mach2: here.Mach,
					Jump: shock.Jump{
						Pressure:    here.PressureRatio / before.PressureRatio,
						Temperature: here.TemperatureRatio / before.TemperatureRatio,
						Density:     here.PressureRatio / before.PressureRatio * before.TemperatureRatio / here.TemperatureRatio,
					},
				}
				within(t, "residual across the wave into "+here.Name, shock.Residual(d.Gas, wave), 0, 1e-11)
				within(t, "absolute wave angle", math.Abs(here.WaveAngleAbsolute-before.FlowAngle), here.WaveAngle, 1e-12)
			}
		}
	})
	whole.atLeast(t, 0.8)
}

// At shock-on-lip every ramp shock is drawn to the lip, the lip shock to the
// shoulder, and the streamline from shock 1 to the lip in one point.
func TestDrawingLinesEndWhereTheShocksDo(t *testing.T) {
	_, flow := flowOf(t, veyric())
	c, height := flow.Contour, 0.16
	shocks := flow.Points[0].Shocks
	if len(shocks) != 4 || shocks[3].Name != "lip shock" {
		t.Fatalf("shocks %+v", shocks)
	}
	for i, s := range shocks[:3] {
		within(t, s.Name+" start", contour.Distance(s.From, c.Corners[i]), 0, 0)
		within(t, s.Name+" end", contour.Distance(s.To, c.Lip)/height, 0, 1e-9)
	}
	within(t, "lip shock start", contour.Distance(shocks[3].From, c.Lip), 0, 0)
	within(t, "lip shock end", contour.Distance(shocks[3].To, c.Shoulder)/height, 0, 1e-9)

	takeover := flow.Points[1]
	line := takeover.Streamline
	if len(line) != 5 {
		t.Fatalf("streamline %v", line)
	}
	within(t, "streamline ends at the lip", contour.Distance(line[4], c.Lip), 0, 0)
	within(t, "streamline starts at the captured height", line[0].Y/height, evaluate(t, veyric()).value("takeover", "capture"), 1e-12)
	for i, s := range takeover.Shocks[:3] {
		shockLine := contour.Line{Through: s.From, Angle: math.Atan2(s.To.Y-s.From.Y, s.To.X-s.From.X)}
		within(t, "streamline on "+s.Name, shockLine.Height(line[i+1])/height, 0, 1e-9)
	}
}

// A flow that ends early lists the stations it reached.
func TestBrokenFlowListsWhatIsKnown(t *testing.T) {
	_, flow := flowOf(t, veyric().at(1.6, 0))
	f := flow.Points[0]
	if len(f.Stations) != 2 || f.Stations[1].Name != "ramp 1" || len(f.Streamline) != 0 || !strings.HasPrefix(f.Status(), "ramp 2 detached") {
		t.Errorf("status %q, stations %+v, streamline %v", f.Status(), f.Stations, f.Streamline)
	}
}

// Set back behind the focus the lip allows a little more Mach number: the lip
// shock then lies flatter and meets the throat wall behind the shoulder, by
// throat (cot(beta_k' - kappa) - cot(beta_k - kappa)).
func TestLipShockMissesTheShoulderDownstream(t *testing.T) {
	d := veyric().at(4.05, 0).lipTurned(7)
	d.RampAngle = []Setting{Fixed(12)}
	d.ShockOnLip, d.LipSetback = Fixed(4), Fixed(0.05)
	a := flowAt(t, d, first{}, 0)
	if a.status() != nil {
		t.Fatal(a.status())
	}
	kappa := a.design.LipTurning
	want := a.shape.Throat * (1/math.Tan(a.lip.WaveAngle-kappa) - 1/math.Tan(a.shape.lipWave-kappa)) / d.CaptureHeight
	if !(want > 1e-4) {
		t.Fatalf("the lip shock meets the shoulder: %v", want)
	}
	within(t, "miss", a.miss, want, 1e-12)
}

// The angles of the geometry are linear in the variables, exactly as told.
func TestLinearForms(t *testing.T) {
	d := veyric()
	cowl := Between(2, 12)
	d.CowlAngle = &cowl
	d.RampAngle = []Setting{Between(3, 16), Fixed(7), Between(3, 16)}
	d.CowlWedge, d.ShockOnLip = Between(2, 5), Between(5, 7)
	p := problemOf(t, d)
	told := 0
	for i, q := range p.Quantities() {
		a, b, ok := p.LinearForm(i)
		if !ok {
			continue
		}
		told++
		rapid.Check(t, func(t *rapid.T) {
			x, sum := make([]float64, len(a)), b
			for j, v := range p.Variables() {
				x[j] = rapid.Float64Range(v.Low, v.High).Draw(t, v.Name)
				sum += a[j] * x[j]
			}
			dst := problems.NewEvaluation(len(p.Quantities()))
			p.EvaluateExplicit(x, dst)
			within(t, q.Name, dst.Values[i], sum, 1e-12)
		})
	}
	if told != 4 {
		t.Errorf("%d quantities are linear, want the four angles of the geometry", told)
	}
}
