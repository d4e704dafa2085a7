package report

import (
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/inlet"
)

// FlowDocument is the exact flow of one frozen inlet at every flight point.
type FlowDocument struct {
	Format      int       `json:"format"`
	Program     string    `json:"program"`
	Title       string    `json:"title"`
	BriefHash   string    `json:"brief_hash"`
	Inlet       Shape     `json:"inlet"`
	Points      []Point   `json:"points"`
	Cautions    []Caution `json:"cautions"`
	Assumptions []string  `json:"assumptions"`

	readings []reading
}

// NewFlow describes the flow of a problem's inlet.
func NewFlow(head Head, problem *inlet.Problem, flow *inlet.Flow) *FlowDocument {
	d := &FlowDocument{
		Format: format, Program: head.Program, Title: head.Title, BriefHash: head.BriefHash,
		readings:    readings(problem.Quantities(), flow.Evaluation),
		Assumptions: assumptions(problem.Definition()),
	}
	d.Inlet = newShape(problem.Definition(), flow, at(d.readings, problems.Geometry))
	for i := range flow.Points {
		point := newPoint(&flow.Points[i], captureArea(problem.Definition(), flow))
		here := at(d.readings, point.Name)
		point.Quantities, point.Members, point.Missing = values(here), members(here), missing(here)
		d.Points = append(d.Points, point)
	}
	d.Cautions = flowCautions(problem, flow)
	return d
}

// JSON returns the document as indented JSON.
func (d *FlowDocument) JSON() []byte { return document(d) }

// Shape is the frozen geometry: its settings, its contour and the quantities of
// the geometry, which in JSON stand in one object.
type Shape struct {
	RampAngleDeg []Number
	CowlWedgeDeg Number
	CowlLengthM  Number // outer cowl along x
	ShockOnLip   Number // Mach number
	LipSetback   Number // fraction of capture height
	DuctFactor   Number
	Terminal     bool
	HeightM      Number
	WidthM       Number
	// The contour; nil where it does not close.
	Corners    [][2]Number
	Outline    *Outline // of an existing inlet
	Lip        *[2]Number
	Shoulder   *[2]Number
	Quantities Object[Number]
	Members    Object[Object[Number]]
	Missing    Object[string]
}

func newShape(d inlet.Definition, flow *inlet.Flow, geometry []reading) Shape {
	design := &flow.Design
	s := Shape{
		CowlWedgeDeg: Number(degrees(design.Wedge)), CowlLengthM: Number(flow.CowlLength),
		ShockOnLip: Number(design.ShockOnLip), LipSetback: Number(design.Setback),
		DuctFactor: Number(d.DuctFactor), Terminal: d.TerminalShock,
		HeightM: Number(d.CaptureHeight), WidthM: Number(d.Width),
		Quantities: values(geometry), Members: members(geometry), Missing: missing(geometry),
	}
	for _, turning := range design.Turning[:design.Ramps] {
		s.RampAngleDeg = append(s.RampAngleDeg, Number(degrees(turning)))
	}
	if o := flow.Outline; o != nil {
		s.takeOutline(o, flow)
	}
	if flow.ContourErr != nil {
		for _, name := range []string{"corners_m", "lip_m", "shoulder_m"} {
			s.Missing = append(s.Missing, Field[string]{name, flow.ContourErr.Error()})
		}
		return s
	}
	for _, corner := range flow.Contour.Corners {
		s.Corners = append(s.Corners, pair(corner))
	}
	lip, shoulder := pair(flow.Contour.Lip), pair(flow.Contour.Shoulder)
	s.Lip, s.Shoulder = &lip, &shoulder
	return s
}

func pair(p contour.Point) [2]Number { return [2]Number{Number(p.X), Number(p.Y)} }

// MarshalJSON implements json.Marshaler.
func (s Shape) MarshalJSON() ([]byte, error) {
	object := Object[any]{
		{"ramp_angle_deg", s.RampAngleDeg}, {"cowl_wedge_deg", s.CowlWedgeDeg}, {"cowl_length_m", s.CowlLengthM},
		{"shock_on_lip_mach", s.ShockOnLip}, {"lip_setback", s.LipSetback}, {"duct_factor", s.DuctFactor},
		{"terminal_shock", s.Terminal}, {"capture_height_m", s.HeightM}, {"width_m", s.WidthM},
		{"corners_m", s.Corners}, {"lip_m", s.Lip}, {"shoulder_m", s.Shoulder},
	}
	if s.Outline != nil {
		object = append(object, Field[any]{"outline", s.Outline})
	}
	for _, q := range s.Quantities {
		object = append(object, Field[any]{q.Name, q.Value})
	}
	return append(object, Field[any]{"members", s.Members}, Field[any]{"missing", s.Missing}).MarshalJSON()
}

// Point is the flow at one flight point. Quantities, members and missing are
// absent where another part of the document holds them.
type Point struct {
	Name         string                 `json:"name"`
	Mach         Number                 `json:"mach"`
	IncidenceDeg Number                 `json:"incidence_deg"`
	PressureKPa  Number                 `json:"pressure_kPa"`
	TemperatureK Number                 `json:"temperature_K"`
	Status       string                 `json:"status"` // "attached" or the reason
	Traced       bool                   `json:"traced"` // quantities of the captured stream are those of the trace
	Quantities   Object[Number]         `json:"quantities,omitzero"`
	Members      Object[Object[Number]] `json:"members,omitzero"`
	Missing      Object[string]         `json:"missing,omitzero"`
	Stations     []Station              `json:"stations"`
	Trace        *Trace                 `json:"trace,omitempty"`
}

// Station is a uniform state and the wave that leads into it; ratios are to the
// free stream.
type Station struct {
	Name                   string `json:"name"`
	Mach                   Number `json:"mach"`
	FlowAngleDeg           Number `json:"flow_angle_deg"`
	WaveAngleDeg           Number `json:"wave_angle_deg"`
	WaveAngleAbsoluteDeg   Number `json:"wave_angle_absolute_deg"`
	NormalMach             Number `json:"normal_mach"`
	StaticPressureRatio    Number `json:"static_pressure_ratio"`
	StaticTemperatureRatio Number `json:"static_temperature_ratio"`
	TotalPressureRatio     Number `json:"total_pressure_ratio"`
	PressureKPa            Number `json:"pressure_kPa"`
	TemperatureK           Number `json:"temperature_K"`
}

// newPoint describes the flow at a point of an inlet of that capture area, m2.
func newPoint(flow *inlet.PointFlow, area float64) Point {
	p := Point{
		Name: flow.Point.Name, Mach: Number(flow.Point.Mach), IncidenceDeg: Number(degrees(flow.Point.Incidence)),
		PressureKPa: Number(flow.Point.Pressure / pascals), TemperatureK: Number(flow.Point.Temperature),
		Status: flow.Status(), Traced: flow.Traced, Stations: []Station{}, Trace: newTrace(flow),
	}
	if p.Trace != nil {
		p.Trace.addWalls(flow, area)
	}
	for _, s := range flow.Stations {
		p.Stations = append(p.Stations, Station{
			Name: s.Name, Mach: Number(s.Mach), FlowAngleDeg: Number(degrees(s.FlowAngle)),
			WaveAngleDeg: Number(degrees(s.WaveAngle)), WaveAngleAbsoluteDeg: Number(degrees(s.WaveAngleAbsolute)),
			NormalMach: Number(s.NormalMach), StaticPressureRatio: Number(s.PressureRatio),
			StaticTemperatureRatio: Number(s.TemperatureRatio), TotalPressureRatio: Number(s.TotalPressure),
			PressureKPa: Number(s.Pressure / pascals), TemperatureK: Number(s.Temperature),
		})
	}
	return p
}

// captureArea is the height of the lip above the leading edge times the width.
func captureArea(d inlet.Definition, flow *inlet.Flow) float64 {
	return (flow.Contour.Lip.Y - flow.Contour.Corners[0].Y) * d.Width
}

const pascals = 1e3 // in a kilopascal

// degrees undoes the conversion of inlet, by the same factor, so that a value of
// the brief mostly comes back as it was.
func degrees(radians float64) float64 { return radians / (math.Pi / 180) }
