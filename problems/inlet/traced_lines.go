package inlet

import (
	"math"

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

// tracedSegments lists the shocks of a trace that are strong enough to draw, with
// the name of the corner or lip they start from.
func (a *analysis) tracedSegments() []Segment {
	var list []Segment
	for _, f := range a.trace.Fronts {
		if f.Kind != wave.Shock || a.rise(f) < drawnRise {
			continue
		}
		name := "shock"
		switch {
		case f.Source > 0 && f.Source <= len(a.shape.Corners):
			name = rampName(f.Source-1) + " shock"
		case f.Source == -1:
			name = lipShockName
		}
		list = append(list, Segment{name, f.From, f.To})
	}
	return list
}

// drawnRise is the least |p2/p1 - 1| of a shock worth drawing.
const drawnRise = 0.02

func (a *analysis) rise(f wave.Front) float64 {
	return math.Abs(a.trace.Regions[f.Below].Pressure/a.trace.Regions[f.Above].Pressure - 1)
}
