package handoff

import (
	"io"
	"slices"
	"strconv"
)

// Front is one straight front of a traced flow: a shock, one wavelet of an expansion
// fan or a slip line, in metres. NaN marks the wave angle of a slip line.
type Front struct {
	Point        string // flight point
	Kind         string // "shock", "expansion" or "slip line"
	Family       string // "up" or "down", as it runs downstream; empty for a slip line
	Source       string // what it stems from, also by reflection; empty for a crossing or a corner of the cowl
	Stream       string // "captured" or "outside"
	Merged       bool   // carries the jump of fronts too weak to follow, at the angle that closes mass
	From, To     [2]float64
	Angle        float64 // of the front to the x axis, deg
	WaveAngle    float64 // of the front to the flow ahead of it, deg
	Below, Above Side
}

// Side is the flow on one side of a front; ratios are to the free stream, angles in
// degrees to the x axis.
type Side struct {
	Region           int // the same number is the same region of that flight point; 0 the free stream
	Mach             float64
	FlowAngleDeg     float64
	PressureRatio    float64
	TemperatureRatio float64
	TotalPressure    float64
}

// WriteFronts writes fronts.csv: one row a front in the order given. Above is to the
// left of the way from its first to its last place, below to the right; the flow ahead
// of a front that runs up is above it, of one that runs down below. Decimals are the
// shortest that read back exactly. It returns *Incomplete for a front of no flight
// point or kind and *NotFinite for a number that is none; then nothing is written.
func WriteFronts(w io.Writer, fronts []Front) error {
	t := newTable("fronts", slices.Concat(
		[]string{"point", "kind", "family", "source", "stream", "merged", "region_below", "region_above",
			"x_from_m", "y_from_m", "x_to_m", "y_to_m", "angle_deg"},
		sideColumns("below"), sideColumns("above"), []string{"wave_angle_deg"})...)
	for _, f := range fronts {
		if err := t.named([]string{f.Point, f.Kind}); err != nil {
			return err
		}
		names := []string{
			f.Point, f.Kind, f.Family, f.Source, f.Stream, yesNo(f.Merged), strconv.Itoa(f.Below.Region), strconv.Itoa(f.Above.Region),
		}
		values := slices.Concat(f.From[:], f.To[:], []float64{f.Angle}, f.Below.values(), f.Above.values(), []float64{f.WaveAngle})
		if err := t.add(names, values, len(values)-1); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}

func sideColumns(side string) []string {
	return []string{
		"mach_" + side, "flow_angle_" + side + "_deg", "pressure_ratio_" + side, "temperature_ratio_" + side, "total_pressure_ratio_" + side,
	}
}

func (s Side) values() []float64 {
	return []float64{s.Mach, s.FlowAngleDeg, s.PressureRatio, s.TemperatureRatio, s.TotalPressure}
}

// Wall is a stretch of wall in one state of the flow.
type Wall struct {
	Point, Surface string
	Segment        int
	From, To       [2]float64
	Mach           float64
	FlowAngleDeg   float64
	PressureRatio  float64
	PressureKPa    float64
}

// WriteWalls writes walls.csv: one row a stretch of wall in the order given. Errors
// are those of WriteFronts.
func WriteWalls(w io.Writer, walls []Wall) error {
	t := newTable("walls", "point", "surface", "segment", "x_from_m", "y_from_m", "x_to_m", "y_to_m",
		"mach", "flow_angle_deg", "pressure_ratio", "pressure_kPa")
	for _, p := range walls {
		values := []float64{p.From[0], p.From[1], p.To[0], p.To[1], p.Mach, p.FlowAngleDeg, p.PressureRatio, p.PressureKPa}
		if err := t.full([]string{p.Point, p.Surface, strconv.Itoa(p.Segment)}, values); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}

// Force is the gauge force on one segment of wall, over q0 Ac and in newtons, x
// downstream and y toward the cowl, with the pressures behind it.
type Force struct {
	Point, Surface string
	Segment        int
	From, To       [2]float64
	LengthM        float64
	LeastPressure  float64
	MeanPressure   float64
	MostPressure   float64
	X, Y, XN, YN   float64
}

// WriteForces writes forces.csv: one row a segment in the order given. Errors are
// those of WriteFronts.
func WriteForces(w io.Writer, forces []Force) error {
	t := newTable("forces", "point", "surface", "segment", "x_from_m", "y_from_m", "x_to_m", "y_to_m", "length_m",
		"least_pressure_ratio", "mean_pressure_ratio", "greatest_pressure_ratio", "force_x", "force_y", "force_x_N", "force_y_N")
	for _, p := range forces {
		values := []float64{
			p.From[0], p.From[1], p.To[0], p.To[1], p.LengthM, p.LeastPressure, p.MeanPressure, p.MostPressure, p.X, p.Y, p.XN, p.YN,
		}
		if err := t.full([]string{p.Point, p.Surface, strconv.Itoa(p.Segment)}, values); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}

// Tube is a uniform part of the throat plane, from its end next to the body.
type Tube struct {
	Point            string
	From, To         [2]float64
	HeightM          float64
	Mach             float64
	FlowAngleDeg     float64
	PressureRatio    float64
	TemperatureRatio float64
	TotalPressure    float64
	MassFraction     float64
}

// WriteTubes writes tubes.csv: one row a stream tube in the order given. Errors are
// those of WriteFronts.
func WriteTubes(w io.Writer, tubes []Tube) error {
	t := newTable("tubes", "point", "x_from_m", "y_from_m", "x_to_m", "y_to_m", "height_m",
		"mach", "flow_angle_deg", "pressure_ratio", "temperature_ratio", "total_pressure_ratio", "mass_fraction")
	for _, p := range tubes {
		values := []float64{
			p.From[0], p.From[1], p.To[0], p.To[1], p.HeightM, p.Mach, p.FlowAngleDeg, p.PressureRatio, p.TemperatureRatio, p.TotalPressure, p.MassFraction,
		}
		if err := t.full([]string{p.Point}, values); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}

// Vertex is a corner of the streamline that meets the lip.
type Vertex struct {
	Point string
	X, Y  float64 // m
}

// WriteStreamline writes streamline.csv: one row a corner in the order given. Errors
// are those of WriteFronts.
func WriteStreamline(w io.Writer, corners []Vertex) error {
	t := newTable("streamline", "point", "x_m", "y_m")
	for _, p := range corners {
		if err := t.full([]string{p.Point}, []float64{p.X, p.Y}); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}

// full appends a row that has everything.
func (t *table) full(names []string, values []float64) error {
	if err := t.named(names); err != nil {
		return err
	}
	return t.add(names, values, len(values))
}

// named refuses a row without one of its first names.
func (t *table) named(names []string) error {
	for i, name := range names {
		if name == "" {
			return &Incomplete{t.name, len(t.rows), t.rows[0][i]}
		}
	}
	return nil
}

func yesNo(v bool) string {
	if v {
		return "yes"
	}
	return "no"
}
