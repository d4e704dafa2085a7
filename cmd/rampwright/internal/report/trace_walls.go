package report

import (
	"rampwright/problems/contour"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// TraceWall is a stretch of wall under one state of the flow; ratios are to the free
// stream.
type TraceWall struct {
	Surface       string    `json:"surface"`
	Segment       int       `json:"segment"` // of the surface, from 1
	FromM         [2]Number `json:"from_m"`
	ToM           [2]Number `json:"to_m"`
	Mach          Number    `json:"mach"`
	FlowAngleDeg  Number    `json:"flow_angle_deg"`
	PressureRatio Number    `json:"pressure_ratio"`
	PressureKPa   Number    `json:"pressure_kPa"`
}

// WallForce sums up one straight segment of wall: its pressures over that of the free
// stream, the mean over its length, and the force of the gauge pressure p - p0 on it,
// x downstream and y toward the cowl, over q0 Ac and in newtons.
type WallForce struct {
	Surface       string    `json:"surface"`
	Segment       int       `json:"segment"`
	FromM         [2]Number `json:"from_m"`
	ToM           [2]Number `json:"to_m"`
	LengthM       Number    `json:"length_m"`
	LeastPressure Number    `json:"least_pressure_ratio"`
	MeanPressure  Number    `json:"mean_pressure_ratio"`
	MostPressure  Number    `json:"greatest_pressure_ratio"`
	Force
}

// Force is a gauge force on a wall, over q0 Ac and in newtons.
type Force struct {
	X  Number `json:"force_x"`
	Y  Number `json:"force_y"`
	XN Number `json:"force_x_N"`
	YN Number `json:"force_y_N"`
}

// ForceSum is the force on a whole surface, or on all of them.
type ForceSum struct {
	Surface string `json:"surface"`
	Force
}

// LipShock is a shock of the body where it reaches the lip: its distance from the
// lip along x at lip height, over capture height, negative where it falls inside.
type LipShock struct {
	Name      string `json:"name"`
	Clearance Number `json:"clearance"`
	Inside    bool   `json:"inside"`
}

// Tube is a uniform part of the throat plane, body to cowl. Recovery, Mach number and
// temperature of the throat are sums of mass_fraction times those of the tubes, its
// pressure that of height_m times pressure_ratio over the height.
type Tube struct {
	FromM              [2]Number `json:"from_m"`
	ToM                [2]Number `json:"to_m"`
	HeightM            Number    `json:"height_m"`
	Mach               Number    `json:"mach"`
	FlowAngleDeg       Number    `json:"flow_angle_deg"`
	PressureRatio      Number    `json:"pressure_ratio"`
	TemperatureRatio   Number    `json:"temperature_ratio"`
	TotalPressureRatio Number    `json:"total_pressure_ratio"`
	MassFraction       Number    `json:"mass_fraction"`
}

// allSurfaces names the sum over every surface.
const allSurfaces = "all"

// addWalls lists walls, forces, shocks at the lip and stream tubes of the trace of a
// point; area is Ac, m2.
func (t *Trace) addWalls(flow *inlet.PointFlow, area float64) {
	from := flow.Trace
	reference := from.Gas.DynamicPressure(flow.Point.Pressure, from.Free.Mach) * area
	t.Walls = newWalls(from, flow.Point.Pressure/pascals)
	t.Forces = newForces(from, t.Walls, reference)
	t.ForceSums, t.ForceReference = sumForces(t.Forces), Number(reference)
	t.LipShocks = newLipShocks(from)
	t.Throat.Tubes = []Tube{}
	if plane := &from.Stations[0]; plane.Err == nil {
		t.Throat.Tubes = newTubes(from, plane)
	}
}

// newWalls lists the wall pressures of a trace in a free stream of that pressure,
// kPa; neighbours of one segment in the same state are one stretch.
func newWalls(t *wave.Trace, pressureKPa float64) []TraceWall {
	list := []TraceWall{}
	for i, w := range t.Walls {
		s := &t.Regions[w.Region]
		if i > 0 {
			before := &t.Walls[i-1]
			if before.Surface == w.Surface && before.Segment == w.Segment && t.Regions[before.Region] == *s {
				list[len(list)-1].ToM = pair(w.To)
				continue
			}
		}
		list = append(list, TraceWall{
			w.Surface.String(), w.Segment, pair(w.From), pair(w.To), Number(s.Mach), Number(degrees(s.FlowAngle)),
			Number(s.Pressure), Number(s.Pressure * pressureKPa),
		})
	}
	return list
}

// newForces sums up the walls by segment. reference is q0 Ac, N.
func newForces(t *wave.Trace, walls []TraceWall, reference float64) []WallForce {
	list := []WallForce{}
	next := 0
	for _, f := range t.Forces {
		force := WallForce{
			Surface: f.Surface.String(), Segment: f.Segment, FromM: pair(f.From), ToM: pair(f.To),
			LengthM: Number(contour.Distance(f.From, f.To)), Force: newForce(f.X, f.Y, reference),
		}
		var length, load Number
		for first := next; next < len(walls) && walls[next].Surface == force.Surface && walls[next].Segment == force.Segment; next++ {
			w := &walls[next]
			p := w.PressureRatio
			if next == first {
				force.LeastPressure, force.MostPressure = p, p
			}
			force.LeastPressure, force.MostPressure = min(force.LeastPressure, p), max(force.MostPressure, p)
			length, load = length+w.length(), load+w.length()*p
		}
		force.MeanPressure = load / length
		list = append(list, force)
	}
	return list
}

func newForce(x, y, reference float64) Force {
	return Force{Number(x), Number(y), Number(x * reference), Number(y * reference)}
}

func (w *TraceWall) length() Number { return Number(contour.Distance(point(w.FromM), point(w.ToM))) }

func point(p [2]Number) contour.Point { return contour.Point{X: float64(p[0]), Y: float64(p[1])} }

// sumForces adds the forces up by surface, then over all.
func sumForces(list []WallForce) []ForceSum {
	sums := []ForceSum{}
	all := ForceSum{Surface: allSurfaces}
	for _, f := range list {
		if len(sums) == 0 || sums[len(sums)-1].Surface != f.Surface {
			sums = append(sums, ForceSum{Surface: f.Surface})
		}
		sums[len(sums)-1].add(f.Force)
		all.add(f.Force)
	}
	return append(sums, all)
}

func (f *Force) add(other Force) {
	f.X, f.Y, f.XN, f.YN = f.X+other.X, f.Y+other.Y, f.XN+other.XN, f.YN+other.YN
}

func newLipShocks(t *wave.Trace) []LipShock {
	list := []LipShock{}
	for _, s := range t.LipShocks {
		list = append(list, LipShock{lipShockName(s), Number(s.Clearance), s.Inside})
	}
	return list
}

// newTubes lists the stream tubes of a plane that was reached.
func newTubes(t *wave.Trace, plane *wave.Station) []Tube {
	list := []Tube{}
	for _, p := range plane.Profile {
		s := &t.Regions[p.Region]
		at := func(y float64) [2]Number { return [2]Number{Number(plane.X), Number(y)} }
		list = append(list, Tube{
			at(p.Low), at(p.High), Number(p.High - p.Low), Number(s.Mach), Number(degrees(s.FlowAngle)),
			Number(s.Pressure), Number(t.TemperatureRatio(p.Region)), Number(s.TotalPressure), Number(p.Share),
		})
	}
	return list
}
