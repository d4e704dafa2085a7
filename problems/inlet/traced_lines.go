package inlet

import (
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/wave"
)

// tracedStations lists what is uniform along a traced stream, and the averages:
// the free stream, the flow along each ramp as far as it is that of the ramp's own
// shock, the flow just ahead of the lip, and the averages over the throat plane,
// ahead of and behind the terminal shock where there is one.
func (a *analysis) tracedStations() []Station {
	t, none := a.trace, math.NaN()
	var list []Station
	add := func(name string, s wave.State, temperature float64) *Station {
		list = append(list, Station{
			Name: name, Mach: s.Mach, FlowAngle: s.FlowAngle,
			WaveAngle: none, WaveAngleAbsolute: none, NormalMach: none,
			PressureRatio: s.Pressure, TemperatureRatio: temperature, TotalPressure: s.TotalPressure,
			Pressure: s.Pressure * a.point.Pressure, Temperature: temperature * a.point.Temperature,
		})
		return &list[len(list)-1]
	}
	add("free stream", t.Regions[0], 1)
	for i := range a.shape.Corners {
		f, ok := cornerShock(t, i+1)
		if !ok {
			break
		}
		ahead := t.Regions[f.Above]
		s := add(rampName(i), t.Regions[f.Below], t.TemperatureRatio(f.Below))
		s.WaveAngleAbsolute = math.Atan2(f.To.Y-f.From.Y, f.To.X-f.From.X)
		s.WaveAngle = s.WaveAngleAbsolute - ahead.FlowAngle
		s.NormalMach = ahead.Mach * math.Sin(s.WaveAngle)
	}
	if a.lipErr != nil {
		return list
	}
	add("ahead of the lip", t.Regions[t.LipRegion], t.TemperatureRatio(t.LipRegion))
	if a.throatErr != nil {
		return list
	}
	v := &a.view
	average := wave.State{Mach: v.mach, FlowAngle: t.Stations[0].FlowAngle, Pressure: v.pressure, TotalPressure: v.recovery}
	add("throat average", average, v.temperature)
	if a.def.TerminalShock {
		behind := average
		behind.Mach, behind.Pressure, behind.TotalPressure = a.throatMach, a.pressureRatio, a.shockRecovery
		s := add("behind terminal shock", behind, a.temperatureRatio)
		s.WaveAngle, s.WaveAngleAbsolute, s.NormalMach = math.Pi/2, s.FlowAngle+math.Pi/2, a.terminalMach
	}
	return list
}

// cornerShock is the shock that leaves a body corner, counted from 1.
func cornerShock(t *wave.Trace, corner int) (wave.Front, bool) {
	for _, f := range t.Fronts {
		if f.Source == corner && f.Kind == wave.Shock && f.Family > 0 {
			return f, true
		}
	}
	return wave.Front{}, false
}

// tracedSegments lists the shocks and expansions of a trace that are strong enough
// to draw, with the name of the corner or lip they start from.
func (a *analysis) tracedSegments(t *wave.Trace) []Segment {
	var list []Segment
	for _, f := range t.Fronts {
		if f.Kind == wave.Slip || rise(t, f) < drawnRise || contour.Distance(f.From, f.To) < drawnLength*a.shape.height {
			continue
		}
		list = append(list, Segment{a.sourceName(f), f.From, f.To, f.Kind == wave.Wavelet})
	}
	return list
}

// drawnRise is the least |ln(p2/p1)| of a wave worth drawing, drawnLength the least
// length, capture heights.
const (
	drawnRise   = 0.02
	drawnLength = 2e-3
)

func rise(t *wave.Trace, f wave.Front) float64 {
	return math.Abs(math.Log(t.Regions[f.Below].Pressure / t.Regions[f.Above].Pressure))
}

// drawnDuct is how much of the duct behind the shoulder of a design a drawing shows,
// throat heights.
const drawnDuct = 4

// goOn follows the stream of a point with a trace down the duct: where it ends there,
// and for the drawing of a traced point its waves.
func (a *analysis) goOn(point *PointFlow) {
	t := a.downTheDuct()
	if t == nil {
		return
	}
	if point.Traced {
		point.Shocks = a.tracedSegments(t)
	}
	if t.Ending != nil && !t.Ending.Reason.Spent() && !a.def.TerminalShock {
		point.Behind = t.Ending
	}
}

// downTheDuct traces the point once more to the end of what is drawn, in default
// wavelets; nil where that tells less than the trace of the quantities.
func (a *analysis) downTheDuct() *wave.Trace {
	g := a.shape.geometry(a.def)
	end := a.shape.Shoulder.X + drawnDuct*a.shape.Throat*math.Cos(a.shape.CowlInner)
	if o := a.def.Outline; o != nil {
		end = math.Min(o.Body[len(o.Body)-1].X, o.CowlInner[len(o.CowlInner)-1].X)
	}
	if !(end > g.Planes[0]) {
		return nil
	}
	throat := g.Planes[0]
	g.Planes = []float64{end}
	free := wave.FreeStream{Mach: a.point.Mach, Incidence: a.point.Incidence}
	t, err := wave.Run(a.def.Gas, free, g, wave.Settings{WithoutError: true})
	if err != nil || t.Ending != nil && t.Ending.Place.X < throat {
		return nil
	}
	return t
}

// sourceName names a shock that starts at a corner of a ramp, at the lip or on the
// outer cowl; "" for any other wave.
func (a *analysis) sourceName(f wave.Front) string {
	switch {
	case f.Kind != wave.Shock:
		return ""
	case f.Source > 0 && f.Source <= len(a.shape.Corners):
		return rampName(f.Source-1) + " shock"
	case f.Source == wave.SourceLip:
		return lipShockName
	case f.Source == wave.SourceOuterCowl:
		return "outer cowl shock"
	}
	return ""
}
