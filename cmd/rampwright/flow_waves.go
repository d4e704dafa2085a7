package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"os"
	"path/filepath"

	"rampwright/cmd/rampwright/internal/handoff"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems/contour"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// wavesFolder is the folder for the traces of a flow, which must not exist; "" writes
// none.
type wavesFolder string

// check refuses a folder that cannot be made, or would lie where the drawing goes.
func (w wavesFolder) check(drawing string) error {
	if w == "" {
		return nil
	}
	dir := filepath.Clean(string(w))
	for _, name := range []string{dir, partOf(dir)} {
		if drawing != "" && filepath.Clean(drawing) == name {
			return &usageError{"--svg and --waves both write " + name, "choose another name for one"}
		}
		if _, err := os.Lstat(name); err == nil {
			return &usageError{name + " exists and is not overwritten", "choose another name, or remove it first"}
		} else if !errors.Is(err, fs.ErrNotExist) {
			return &usageError{"cannot write there: " + err.Error(), "choose another name"}
		}
	}
	if info, err := os.Stat(filepath.Dir(dir)); err != nil || !info.IsDir() {
		return &usageError{"there is no folder " + filepath.Dir(dir) + " to make it in", "make that first, or choose another name"}
	}
	if err := tryToWrite(filepath.Dir(dir)); err != nil {
		return &unwritable{dir, "choose another folder with --waves", err}
	}
	return nil
}

// partOf is where a folder is made before it moves to its place.
func partOf(dir string) string { return dir + ".part" }

// trace adds the traces that the flow itself did not need.
func (w wavesFolder) trace(frozen *inlet.Frozen, flow *inlet.Flow) error {
	if w == "" {
		return nil
	}
	if flow.ContourErr != nil {
		return &usageError{"nothing to trace: the contour does not close: " + flow.ContourErr.Error(), ""}
	}
	for i := range flow.Points {
		p := &flow.Points[i]
		if p.Trace != nil {
			continue
		}
		trace, err := frozen.Trace(p.Point, inlet.VerifyTrace())
		if err != nil {
			return fmt.Errorf("%s cannot be traced: %w", p.Point.Name, err)
		}
		p.Trace = trace
	}
	return nil
}

// write writes the folder, whole or not at all, and says where a trace ends early.
func (w wavesFolder) write(a *app, flow *inlet.Flow, document *report.FlowDocument) error {
	if w == "" {
		return nil
	}
	files, err := waveFiles(flow, document)
	if err != nil {
		return err
	}
	dir := filepath.Clean(string(w))
	if err := writeNewFolder(dir, files); err != nil {
		return &unwritable{dir, "choose another folder with --waves", err}
	}
	a.say("written: %s\n", dir)
	for i := range flow.Points {
		p := &flow.Points[i]
		if p.Trace.Ending != nil {
			a.say("%s: the trace ends ahead of the throat: %v\n", p.Point.Name, p.Trace.Ending)
		}
		if p.Trace.OutsideEnding != nil {
			a.say("%s: the flow over the cowl is not followed to its end: %v\n", p.Point.Name, p.Trace.OutsideEnding)
		}
	}
	return nil
}

// writeNewFolder makes a folder with its files beside its place and moves it there; a
// failure leaves nothing.
func writeNewFolder(dir string, files []file) error {
	part := partOf(dir)
	if err := os.Mkdir(part, 0o777); err != nil {
		return err
	}
	for _, f := range files {
		if err := os.WriteFile(filepath.Join(part, f.name), f.data, 0o666); err != nil {
			return errors.Join(err, os.RemoveAll(part))
		}
	}
	if err := os.Rename(part, dir); err != nil {
		return errors.Join(err, os.RemoveAll(part))
	}
	return nil
}

// waveFiles are the files of the folder: the document, and what its traces hold.
func waveFiles(flow *inlet.Flow, document *report.FlowDocument) ([]file, error) {
	var fronts []handoff.Front
	var streamline []handoff.Vertex
	for i := range flow.Points {
		p := &flow.Points[i]
		for k := range p.Trace.Fronts {
			fronts = append(fronts, handedFront(p, len(flow.Contour.Corners), &p.Trace.Fronts[k]))
		}
		for _, at := range p.Trace.Captured.Streamline {
			streamline = append(streamline, handoff.Vertex{Point: p.Point.Name, X: at.X, Y: at.Y})
		}
	}
	walls, forces, tubes := handedWalls(document.Points)
	files := []file{{"flow.json", document.JSON()}}
	for _, table := range []struct {
		name  string
		write func(io.Writer) error
	}{
		{"fronts.csv", func(w io.Writer) error { return handoff.WriteFronts(w, fronts) }},
		{"walls.csv", func(w io.Writer) error { return handoff.WriteWalls(w, walls) }},
		{"forces.csv", func(w io.Writer) error { return handoff.WriteForces(w, forces) }},
		{"tubes.csv", func(w io.Writer) error { return handoff.WriteTubes(w, tubes) }},
		{"streamline.csv", func(w io.Writer) error { return handoff.WriteStreamline(w, streamline) }},
	} {
		var out bytes.Buffer
		if err := table.write(&out); err != nil {
			return nil, err
		}
		files = append(files, file{table.name, out.Bytes()})
	}
	return files, nil
}

// handedFront is a front of a point for the hand-over; the body has so many ramps.
func handedFront(p *inlet.PointFlow, ramps int, f *wave.Front) handoff.Front {
	t := p.Trace
	h := handoff.Front{
		Point: p.Point.Name, Kind: f.Kind.String(), Source: frontSource(f, ramps), Stream: "outside", Merged: f.Merged,
		From: places(f.From), To: places(f.To), Angle: math.Atan2(f.To.Y-f.From.Y, f.To.X-f.From.X) * degree,
		Below: handedSide(t, f.Below), Above: handedSide(t, f.Above), WaveAngle: math.NaN(),
	}
	if f.Duct {
		h.Stream = "captured"
	}
	switch f.Family {
	case +1:
		h.Family, h.WaveAngle = "up", h.Angle-h.Above.FlowAngleDeg
	case -1:
		h.Family, h.WaveAngle = "down", h.Below.FlowAngleDeg-h.Angle
	}
	return h
}

func handedSide(t *wave.Trace, region int) handoff.Side {
	s := &t.Regions[region]
	return handoff.Side{
		Region: region, Mach: s.Mach, FlowAngleDeg: s.FlowAngle * degree, PressureRatio: s.Pressure,
		TemperatureRatio: t.TemperatureRatio(region), TotalPressure: s.TotalPressure,
	}
}

// frontSource names what a front stems from; a reflected one has the name of the shock
// that came in.
func frontSource(f *wave.Front, ramps int) string {
	switch {
	case f.Source == wave.SourceLip:
		return "lip"
	case f.Source == wave.SourceOuterCowl:
		return "outer cowl"
	case f.Source == ramps+1:
		return "shoulder"
	case f.Source > 0:
		return cornerName(f.Source - 1)
	}
	return ""
}

func places(p contour.Point) [2]float64 { return [2]float64{p.X, p.Y} }

// handedWalls are walls, forces and stream tubes as the document has them.
func handedWalls(points []report.Point) (walls []handoff.Wall, forces []handoff.Force, tubes []handoff.Tube) {
	both := func(p [2]report.Number) [2]float64 { return [2]float64{float64(p[0]), float64(p[1])} }
	for _, p := range points {
		for _, w := range p.Trace.Walls {
			walls = append(walls, handoff.Wall{
				Point: p.Name, Surface: w.Surface, Segment: w.Segment, From: both(w.FromM), To: both(w.ToM), Mach: float64(w.Mach),
				FlowAngleDeg: float64(w.FlowAngleDeg), PressureRatio: float64(w.PressureRatio), PressureKPa: float64(w.PressureKPa),
			})
		}
		for _, f := range p.Trace.Forces {
			forces = append(forces, handoff.Force{
				Point: p.Name, Surface: f.Surface, Segment: f.Segment, From: both(f.FromM), To: both(f.ToM), LengthM: float64(f.LengthM),
				LeastPressure: float64(f.LeastPressure), MeanPressure: float64(f.MeanPressure), MostPressure: float64(f.MostPressure),
				X: float64(f.X), Y: float64(f.Y), XN: float64(f.XN), YN: float64(f.YN),
			})
		}
		for _, u := range p.Trace.Throat.Tubes {
			tubes = append(tubes, handoff.Tube{
				Point: p.Name, From: both(u.FromM), To: both(u.ToM), HeightM: float64(u.HeightM), Mach: float64(u.Mach),
				FlowAngleDeg: float64(u.FlowAngleDeg), PressureRatio: float64(u.PressureRatio), TemperatureRatio: float64(u.TemperatureRatio),
				TotalPressure: float64(u.TotalPressureRatio), MassFraction: float64(u.MassFraction),
			})
		}
	}
	return walls, forces, tubes
}
