package handoff

import (
	"io"
	"math"
)

// Station is the uniform state at one place of the inlet with the wave that
// leads into it. Ratios are to the free stream, angles are in degrees, and NaN
// marks a value the station does not have: the free stream is led into by no
// wave.
type Station struct {
	Name                   string
	Mach                   float64
	FlowAngleDeg           float64 // to the x axis, positive toward the cowl
	WaveAngleDeg           float64 // to the flow ahead of the wave
	WaveAngleAbsoluteDeg   float64 // to the x axis
	NormalMach             float64 // of the flow ahead, normal to the wave
	StaticPressureRatio    float64
	StaticTemperatureRatio float64
	TotalPressureRatio     float64
	PressureKPa            float64
	TemperatureK           float64
}

// FlightPoint is the flow through the inlet at one condition: its stations in
// stream order, as far as the flow is known.
type FlightPoint struct {
	Name         string
	Mach         float64
	IncidenceDeg float64
	Status       string // "attached", or the reason why the stations end
	Stations     []Station
}

// WriteStations writes stations.csv: one row a station, flight points in the
// order given. A flight point without a station still has one row, with its
// status and an empty station. The columns of a station are named as in the
// JSON output. Decimals are the shortest that read back exactly; a missing
// value is an empty field. It returns *Incomplete for a point or station
// without a name and *NotFinite for an infinity or a condition that is no
// number; then nothing is written.
func WriteStations(w io.Writer, points []FlightPoint) error {
	t := newTable("stations", "point", "status", "station", "point_mach", "incidence_deg",
		"mach", "flow_angle_deg", "wave_angle_deg", "wave_angle_absolute_deg", "normal_mach",
		"static_pressure_ratio", "static_temperature_ratio", "total_pressure_ratio",
		"pressure_kPa", "temperature_K")
	for _, p := range points {
		if p.Name == "" {
			return &Incomplete{t.name, len(t.rows), "point"}
		}
		if len(p.Stations) == 0 {
			if err := p.addRow(t, unknownStation); err != nil {
				return err
			}
		}
		for _, s := range p.Stations {
			if s.Name == "" {
				return &Incomplete{t.name, len(t.rows), "station"}
			}
			if err := p.addRow(t, s); err != nil {
				return err
			}
		}
	}
	return t.writeTo(w)
}

// unknownStation stands where a flight point has no station at all.
var unknownStation = func() Station {
	none := math.NaN()
	return Station{"", none, none, none, none, none, none, none, none, none, none}
}()

func (p FlightPoint) addRow(t *table, s Station) error {
	const condition = 2 // values that are never missing
	return t.add([]string{p.Name, p.Status, s.Name}, []float64{
		p.Mach, p.IncidenceDeg,
		s.Mach, s.FlowAngleDeg, s.WaveAngleDeg, s.WaveAngleAbsoluteDeg, s.NormalMach,
		s.StaticPressureRatio, s.StaticTemperatureRatio, s.TotalPressureRatio,
		s.PressureKPa, s.TemperatureK,
	}, condition)
}
