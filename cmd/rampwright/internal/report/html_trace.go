package report

// traceSection tables what the traces say of the flight points that have one.
func (r *result) traceSection() chapter {
	s := chapter{ID: "waves", Head: "Wave by wave"}
	t := &htmlTable{Head: columnHeads(2, "flight point", "used for", "throat Mach", "p/p free stream", "pt/pt free stream", "distortion", "capture", "mass left open", "error of Mach")}
	var endings [][]cell
	for i := range r.Points {
		p := &r.Points[i]
		if p.Trace == nil {
			continue
		}
		at := func(key ...any) []any { return append([]any{"points", i, "trace"}, key...) }
		name := quoted(p.Name, "result", "points", i, "name")
		use := "comparison with the chain"
		if p.Traced {
			use = "every quantity of the stream"
		}
		t.Rows = append(t.Rows, []cell{
			name, words("%s", use),
			number(p.Trace.Throat.Mach, "result", at("throat", "mach")...), number(p.Trace.Throat.PressureRatio, "result", at("throat", "pressure_ratio")...),
			number(p.Trace.Throat.ShockRecovery, "result", at("throat", "shock_recovery")...), number(p.Trace.Throat.Distortion, "result", at("throat", "distortion")...),
			number(p.Trace.Capture, "result", at("capture")...), number(p.Trace.Closure.Mass, "result", at("closure", "mass")...),
			number(p.Trace.Error.Mach, "result", at("error", "mach")...),
		})
		if e := p.Trace.Ending; e != nil {
			endings = append(endings, []cell{
				name, words(" ends ahead of the throat: "), quoted(e.Reason, "result", at("ending", "reason")...), words(" at "), quoted(e.Site, "result", at("ending", "site")...),
				words(", x "), number(e.PlaceM[0], "result", at("ending", "place_m", 0)...), words(" m, y "), number(e.PlaceM[1], "result", at("ending", "place_m", 1)...), words(" m."),
			})
		}
	}
	s.table(t)
	s.list(endings)
	if len(t.Rows) > 0 {
		s.say(words("Every shock, fan and slip line followed through the contour; averages over the plane at the shoulder. A point the chain of straight shocks answers is traced as well where its lip shock misses the shoulder; its throat state leaves the reflections out."))
	}
	return s
}
