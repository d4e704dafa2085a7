package report

// traceSection shows what the traces say of the flight points that have one.
func (r *result) traceSection() chapter {
	s := chapter{ID: "waves", Head: "Wave by wave"}
	s.traces("result", r.Points)
	return s
}

// traces tables the traces of a document's points, then the pressures on the walls.
func (s *chapter) traces(file string, points []Point) {
	t := &htmlTable{Head: columnHeads(2, "flight point", "used for", "throat Mach", "p/p free stream", "pt/pt free stream", "distortion", "capture", "error of Mach")}
	var notes [][]cell
	for i := range points {
		p := &points[i]
		if p.Trace == nil {
			continue
		}
		at := func(key ...any) []any { return append([]any{"points", i, "trace"}, key...) }
		name := quoted(p.Name, file, "points", i, "name")
		t.Rows = append(t.Rows, []cell{
			name, words("%s", p.traceUse()),
			number(p.Trace.Throat.Mach, file, at("throat", "mach")...), number(p.Trace.Throat.PressureRatio, file, at("throat", "pressure_ratio")...),
			number(p.Trace.Throat.ShockRecovery, file, at("throat", "shock_recovery")...), number(p.Trace.Throat.Distortion, file, at("throat", "distortion")...),
			number(p.Trace.Capture, file, at("capture")...),
			number(p.Trace.Error.Mach, file, at("error", "mach")...),
		})
		if e := p.Trace.Ending; e != nil {
			note := []cell{words("The trace of "), name, words(" ends ahead of the throat: "), quoted(e.Reason, file, at("ending", "reason")...)}
			if e.spent() {
				note = append(note, words(", up to x "))
			} else {
				note = append(note, words(" at "), quoted(e.Site, file, at("ending", "site")...), words(", x "))
			}
			notes = append(notes, append(note,
				number(e.PlaceM[0], file, at("ending", "place_m", 0)...), words(" m, y "), number(e.PlaceM[1], file, at("ending", "place_m", 1)...), words(" m.")))
		}
		if e := p.Trace.BehindThroat; e != nil {
			notes = append(notes, []cell{
				words("Behind the throat plane at "), name, words(" no regular supersonic flow goes on: "), quoted(e.Reason, file, at("behind_throat", "reason")...),
				words(" at "), quoted(e.Site, file, at("behind_throat", "site")...),
				words(", x "), number(e.PlaceM[0], file, at("behind_throat", "place_m", 0)...), words(" m, y "), number(e.PlaceM[1], file, at("behind_throat", "place_m", 1)...),
				words(" m, Mach "), number(e.Mach, file, at("behind_throat", "mach")...), words(", turning "), number(e.TurningDeg, file, at("behind_throat", "turning_deg")...), words(" deg."),
			})
		}
		for k, shock := range p.Trace.LipShocks {
			if shock.Inside {
				notes = append(notes, []cell{
					words("At "), name, words(" the "), quoted(shock.Name, file, at("lip_shocks", k, "name")...),
					words(" falls inside the lip: its clearance along x, at lip height, is "), number(shock.Clearance, file, at("lip_shocks", k, "clearance")...), words(" capture heights."),
				})
			}
		}
	}
	s.table(t)
	s.list(notes)
	if len(t.Rows) > 0 {
		s.say(words("Every shock, fan and slip line followed through the contour; averages over the throat plane. Where the lip shock of a point that keeps the chain of straight shocks misses the shoulder, its throat state leaves the reflections out and the trace stands beside it; throat: traced in the brief takes the throat from the trace."))
	}
	s.balances(file, points)
	s.walls(file, points)
}

// traceUse says what the trace of a point is for.
func (p *Point) traceUse() string {
	switch {
	case p.Traced:
		return "every quantity of the stream"
	case p.Status == attachedStatus:
		return "comparison with the chain"
	}
	return "no quantity: the status of the chain stands"
}

// balances tables what the stream tubes of the traced points leave open, and capture
// and spillage drag by two routes.
func (s *chapter) balances(file string, points []Point) {
	t := &htmlTable{
		Caption: []cell{words("What the traces leave open")},
		Head: columnHeads(1, "flight point", "captured mass", "captured momentum", "captured energy", "spilled mass", "spilled momentum", "spilled energy",
			"capture by mass", "capture by streamline", "spillage drag by streamline", "spillage drag by momentum"),
	}
	for i := range points {
		trace := points[i].Trace
		if trace == nil || trace.Walls == nil || !finite(float64(trace.Capture)) { // an older document has no balances, as it has no walls
			continue
		}
		at := func(key ...any) []any { return append([]any{"points", i, "trace"}, key...) }
		row := []cell{quoted(points[i].Name, file, "points", i, "name")}
		for _, tube := range []struct {
			key  string
			open Closure
		}{{"closure", trace.Closure}, {"spilled_closure", trace.SpilledClosure}} {
			row = append(row, number(tube.open.Mass, file, at(tube.key, "mass")...), number(tube.open.Momentum, file, at(tube.key, "momentum")...), number(tube.open.Energy, file, at(tube.key, "energy")...))
		}
		t.Rows = append(t.Rows, append(row,
			number(trace.Capture, file, at("capture")...), number(trace.CaptureByStreamline, file, at("capture_by_streamline")...),
			number(trace.Spillage, file, at("spillage_drag")...), number(trace.SpillageByMomentum, file, at("spillage_drag_by_momentum")...)))
	}
	if len(t.Rows) == 0 {
		return
	}
	s.table(t)
	s.say(words("Captured: the stream tube under the lip as far as the throat plane; spilled: the one over it. Mass and energy are over those of the free stream through the capture area, momentum and drag over q0 Ac."))
}
