package report

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
)

// readTraces is what a script finds of walls and stream tubes in a flow document.
type readTraces struct {
	Inlet struct {
		Height float64 `json:"capture_height_m"`
		Width  float64 `json:"width_m"`
	}
	Points []struct {
		Name       string
		Mach       float64
		Incidence  float64             `json:"incidence_deg"`
		Pressure   float64             `json:"pressure_kPa"`
		Quantities map[string]*float64 `json:"quantities"`
		Trace      *struct {
			Throat struct {
				XM          float64 `json:"x_m"`
				HeightM     float64 `json:"height_m"`
				Recovery    float64 `json:"shock_recovery"`
				Mach        float64
				Pressure    float64 `json:"pressure_ratio"`
				Temperature float64 `json:"temperature_ratio"`
				Worst       float64 `json:"worst_total_pressure_ratio"`
				Best        float64 `json:"best_total_pressure_ratio"`
				Tubes       []readTube
			}
			Ending *struct{ Reason string }
			Shocks []struct {
				Name      string
				Clearance float64
				Inside    bool
			} `json:"lip_shocks"`
			Capture *float64
			Closure struct{ Momentum *float64 }
			Walls   []readWall
			Forces  []readForce
			Sums    []readForce `json:"force_sums"`
			Of      float64     `json:"force_reference_N"`
		}
	}
}

type readTube struct {
	From        [2]float64 `json:"from_m"`
	To          [2]float64 `json:"to_m"`
	Height      float64    `json:"height_m"`
	Mach        float64
	Angle       float64 `json:"flow_angle_deg"`
	Pressure    float64 `json:"pressure_ratio"`
	Temperature float64 `json:"temperature_ratio"`
	Total       float64 `json:"total_pressure_ratio"`
	Share       float64 `json:"mass_fraction"`
}

type readWall struct {
	Surface  string
	Segment  int
	From     [2]float64 `json:"from_m"`
	To       [2]float64 `json:"to_m"`
	Mach     float64
	Pressure float64 `json:"pressure_ratio"`
	KPa      float64 `json:"pressure_kPa"`
}

type readForce struct {
	Surface string
	Segment int
	From    [2]float64 `json:"from_m"`
	To      [2]float64 `json:"to_m"`
	Length  float64    `json:"length_m"`
	Least   float64    `json:"least_pressure_ratio"`
	Mean    float64    `json:"mean_pressure_ratio"`
	Most    float64    `json:"greatest_pressure_ratio"`
	X       float64    `json:"force_x"`
	Y       float64    `json:"force_y"`
	XN      float64    `json:"force_x_N"`
	YN      float64    `json:"force_y_N"`
}

// tracesOf reads the flow of the article whose shocks merge, fall inside the lip, and
// pass ahead of it.
func tracesOf(t *testing.T) readTraces {
	t.Helper()
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	var read readTraces
	if err := json.Unmarshal(NewFlow(head, problem, flow).JSON(), &read); err != nil {
		t.Fatal(err)
	}
	return read
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s is %v, want %v within %g", what, got, want, tolerance)
	}
}

// wallOf is the gauge force of a stretch of wall on it, over q0 Ac, from its pressure:
// the fluid lies above body and outer cowl, below the inner cowl.
func wallOf(w readWall, mach, height float64) (x, y float64) {
	push := (w.Pressure - 1) / (0.7 * mach * mach * height) // q0/p0 = g/2 M^2, g = 1.4
	x, y = push*(w.To[1]-w.From[1]), -push*(w.To[0]-w.From[0])
	if w.Surface == "cowl inside" {
		x, y = -x, -y
	}
	return x, y
}

// The forces of the document are the integrals of its wall pressures, in coefficients
// and newtons, and its sums theirs.
func TestForcesAreThoseOfTheWalls(t *testing.T) {
	read := tracesOf(t)
	tested := 0
	for _, p := range read.Points {
		if p.Trace == nil {
			continue
		}
		tested++
		next := 0
		sums := map[string][4]float64{}
		for _, f := range p.Trace.Forces {
			var x, y, length, load float64
			least, most := math.Inf(1), math.Inf(-1)
			for ; next < len(p.Trace.Walls) && p.Trace.Walls[next].Surface == f.Surface && p.Trace.Walls[next].Segment == f.Segment; next++ {
				w := p.Trace.Walls[next]
				dx, dy := wallOf(w, p.Mach, read.Inlet.Height)
				x, y = x+dx, y+dy
				size := math.Hypot(w.To[0]-w.From[0], w.To[1]-w.From[1])
				length, load = length+size, load+size*w.Pressure
				least, most = math.Min(least, w.Pressure), math.Max(most, w.Pressure)
				near(t, "pressure", w.KPa, w.Pressure*p.Pressure, 1e-12*w.KPa)
			}
			near(t, p.Name+" "+f.Surface+" x", f.X, x, 1e-12)
			near(t, p.Name+" "+f.Surface+" y", f.Y, y, 1e-12)
			near(t, "length", f.Length, length, 1e-12)
			near(t, "mean", f.Mean, load/length, 1e-12)
			if f.Least != least || f.Most != most {
				t.Errorf("%s %s %d: pressures %v .. %v, want %v .. %v", p.Name, f.Surface, f.Segment, f.Least, f.Most, least, most)
			}
			area := 0.7 * p.Mach * p.Mach * 1000 * p.Pressure * read.Inlet.Height * read.Inlet.Width // q0 Ac, N
			near(t, "newtons x", f.XN, f.X*area, 1e-9)
			near(t, "newtons y", f.YN, f.Y*area, 1e-9)
			near(t, "q0 Ac", p.Trace.Of, area, 1e-9)
			for _, name := range []string{f.Surface, allSurfaces} {
				s := sums[name]
				sums[name] = [4]float64{s[0] + f.X, s[1] + f.Y, s[2] + f.XN, s[3] + f.YN}
			}
		}
		if next != len(p.Trace.Walls) {
			t.Errorf("%s: %d of %d stretches of wall bear a force", p.Name, next, len(p.Trace.Walls))
		}
		if len(p.Trace.Sums) != len(sums) {
			t.Errorf("%s: %d sums, want %d", p.Name, len(p.Trace.Sums), len(sums))
		}
		for _, f := range p.Trace.Sums {
			if s := sums[f.Surface]; s != [4]float64{f.X, f.Y, f.XN, f.YN} {
				t.Errorf("%s: the sum over %s is %+v, want %v", p.Name, f.Surface, f, s)
			}
		}
	}
	if tested != 3 {
		t.Errorf("%d traced points", tested)
	}
}

// Mass, momentum and averages of the throat follow from its tubes by hand:
//
//	dm = p M sqrt(1 + (g-1)/2 M^2) cos(theta) dy,  pt/pt0 and T/T0 from p and M
//
// and the captured stream balances: along the free stream, what leaves through the
// plane less what enters is the force of the walls on it and of the lip streamline.
func TestTubesAverageToTheThroat(t *testing.T) {
	read := tracesOf(t)
	tested := 0
	for _, p := range read.Points {
		if p.Trace == nil || p.Trace.Ending != nil {
			continue
		}
		tested++
		throat := p.Trace.Throat
		total := func(mach float64) float64 { return 1 + 0.2*mach*mach }
		var mass, mach, recovery, temperature, pressure, height, out float64
		sin, cos := math.Sincos(p.Incidence * math.Pi / 180)
		at := throat.Tubes[0].From[1]
		for _, u := range throat.Tubes {
			if u.From[0] != throat.XM || u.From[1] != at {
				t.Errorf("%s: a tube starts at %v, not at %v", p.Name, u.From, at)
			}
			at = u.To[1]
			turn := u.Angle * math.Pi / 180
			mass += u.Pressure * u.Mach * math.Sqrt(total(u.Mach)) * math.Cos(turn) * u.Height
			mach += u.Share * u.Mach
			recovery += u.Share * u.Total
			temperature += u.Share * u.Temperature
			pressure += u.Height * u.Pressure
			height += u.Height
			near(t, "temperature of a tube", u.Temperature, total(p.Mach)/total(u.Mach), 1e-12)
			near(t, "total pressure of a tube", u.Total, u.Pressure*math.Pow(total(u.Mach)/total(p.Mach), 3.5), 1e-10)
			flux := 1.4 * u.Pressure * u.Mach * u.Mach * math.Cos(turn)
			out += u.Height * (flux*(math.Cos(turn)*cos-math.Sin(turn)*sin) + (u.Pressure-1)*cos)
		}
		for _, u := range throat.Tubes {
			share := u.Pressure * u.Mach * math.Sqrt(total(u.Mach)) * math.Cos(u.Angle*math.Pi/180) * u.Height / mass
			near(t, "mass fraction", u.Share, share, 1e-12)
		}
		near(t, p.Name+" Mach", mach, throat.Mach, 1e-12)
		near(t, p.Name+" recovery", recovery, throat.Recovery, 1e-12)
		near(t, p.Name+" temperature", temperature, throat.Temperature, 1e-12)
		near(t, p.Name+" pressure", pressure/height, throat.Pressure, 1e-12*throat.Pressure)
		near(t, p.Name+" height", height, throat.HeightM, 1e-12)

		q := 0.7 * p.Mach * p.Mach * read.Inlet.Height // q0 hc over p0
		free := p.Mach * math.Sqrt(total(p.Mach)) * read.Inlet.Height
		near(t, p.Name+" capture", mass/free, *p.Trace.Capture, 2e-8) // the tubes stand two ties behind the shoulder
		var wall float64
		for _, w := range p.Trace.Walls {
			if w.Surface != "cowl outside" {
				x, y := wallOf(w, p.Mach, read.Inlet.Height)
				wall += x*cos - y*sin
			}
		}
		open := out/q - 2**p.Trace.Capture + wall - *p.Quantities["spillage_drag"]
		near(t, p.Name+" momentum left open", open, 0, *p.Trace.Closure.Momentum+3e-8)
	}
	if tested != 2 {
		t.Errorf("%d traced points", tested)
	}
}

// The shocks at the lip are those of the limit on their clearance, inside where it is
// negative.
func TestShocksAtTheLip(t *testing.T) {
	inside := 0
	for _, p := range tracesOf(t).Points {
		if p.Trace == nil {
			continue
		}
		least := math.Inf(1)
		for _, s := range p.Trace.Shocks {
			least = math.Min(least, s.Clearance)
			if s.Inside != (s.Clearance < 0) || !strings.HasPrefix(s.Name, "ramp ") {
				t.Errorf("%s: %+v", p.Name, s)
			}
			if s.Inside {
				inside++
			}
		}
		near(t, p.Name+" least clearance", least, *p.Quantities["lip_clearance"], 1e-9)
	}
	if inside == 0 {
		t.Error("no shock falls inside the lip")
	}
}

// Neighbouring stretches of one segment differ in state.
func TestStretchesOfWallDiffer(t *testing.T) {
	for _, p := range tracesOf(t).Points {
		if p.Trace == nil {
			continue
		}
		for i, w := range p.Trace.Walls[1:] {
			if v := p.Trace.Walls[i]; v.Surface == w.Surface && v.Segment == w.Segment && v.Mach == w.Mach && v.Pressure == w.Pressure {
				t.Errorf("%s: stretches %d and %d are one", p.Name, i, i+1)
			}
		}
	}
}

// The text tables every traced point by segment, within 80 columns, and names the
// shock that falls inside the lip.
func TestWallsInTheText(t *testing.T) {
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	document := NewFlow(head, problem, flow)
	for _, width := range []int{80, 100} {
		_, text, found := strings.Cut(document.Text(width), "Pressure along the walls\n")
		text, _, _ = strings.Cut(text, "\nQuantities\n")
		if !found {
			t.Fatal("no table of walls")
		}
		for _, line := range strings.Split(text, "\n") {
			if len(line) > width {
				t.Errorf("wider than %d: %q", width, line)
			}
		}
		for _, want := range []string{"[over]", "[beyond]", "[slow]", "body 3", "cowl inside 1", "cowl outside 1", "q0 Ac: ", " N at over,", "beyond: the ramp "} {
			if !strings.Contains(text, want) {
				t.Errorf("no %q in\n%s", want, text)
			}
		}
		if strings.Contains(text, "[cruise]") || strings.Contains(text, "over: the ramp") {
			t.Errorf("more than there is:\n%s", text)
		}
	}
}
