package report

import (
	"strings"

	"rampwright/problems"
)

// aimCells is the aim as a phrase.
func (r *result) aimCells() []cell {
	a := &r.Best.Aim
	text, where := quoted(a.Text, "result", "best", "aim", "text"), quoted(a.Where, "result", "best", "aim", "where")
	switch a.Where {
	case "", problems.Geometry:
		return []cell{text}
	case "mean":
		return []cell{words("weighted mean of "), text, words(" over the flight points")}
	case "worst":
		return []cell{words("worst "), text, words(" of the flight points")}
	}
	return []cell{text, words(" at "), where}
}

// answerCells is the result in one sentence.
func (r *result) answerCells() []cell {
	extreme := "lowest "
	if r.Best.Aim.Highest {
		extreme = "highest "
	}
	value := number(r.Best.Aim.Exact, "result", "best", "aim", "exact")
	sentence := func(before string, between string, after string) []cell {
		return append(append([]cell{words("%s", before)}, r.aimCells()...), words("%s", between), value, words("%s", after))
	}
	switch {
	case r.Status == "verified":
		return sentence("The "+extreme, " found under all limits is ", "; two exact routes agree on every quantity"+withinBounds(r.Best.Traced)+", and the surrogates foresaw aim and limits.")
	case r.Status == "not_verified" && r.Confidence.missed():
		return append(sentence("A design with ", " of ", " holds every limit as it stands, but the confidence of "),
			shareCell(r.Confidence.Confidence, "result", "confidence", "confidence"), words(" %% is not reached: see the cautions."))
	case r.Status == "not_verified":
		return sentence("A design with ", " of ", " holds every limit, but its evidence has a gap: see the cautions.")
	case r.Status == "infeasible":
		return sentence("No design found holds every limit; the one below misses them least, with ", " of ", ".")
	case !r.Best.Feasible:
		return sentence("The search ended before a design held every limit; the one below misses them least, with ", " of ", ".")
	}
	return sentence("The search was ended early; the "+extreme, " so far under all limits is ", ".")
}

// facts fill the title block.
func (r *result) facts() []fact {
	list := []fact{
		{"program", quoted(r.Program, "result", "program")},
		{"date", quoted(r.run.Started, "run", "started")},
		{"seed", countCell(r.Seed, "result", "seed")},
	}
	if e := r.Best.Evidence; finite(float64(e.RouteGap)) {
		list = append(list, fact{"gap of the two exact routes", number(e.RouteGap, "result", "best", "evidence", "route_gap")})
	}
	if e := r.Best.Evidence; finite(float64(e.SurrogateError)) {
		list = append(list, fact{"surrogate error here", number(e.SurrogateError, "result", "best", "evidence", "surrogate_error")})
	}
	if finite(float64(r.ExactSearch.Ratio)) {
		list = append(list, fact{"share of the exact optimum", number(r.ExactSearch.Ratio, "result", "exact_search", "ratio")})
	}
	return append(list, fact{"brief", quoted(r.BriefHash, "result", "brief_hash")})
}

func (r *result) cautionSection() chapter {
	s := chapter{ID: "cautions", Head: "Cautions"}
	var items [][]cell
	for i, c := range r.Cautions {
		items = append(items, []cell{quoted(c.Text, "result", "cautions", i)})
	}
	if items == nil {
		s.say(words("This result raises none of its own; those every result carries stand at the end."))
	}
	s.list(items)
	return s
}

// designSection tells the searched values, what is near, and what else was found.
func (r *result) designSection() chapter {
	s := chapter{ID: "design", Head: "The design"}
	t := &htmlTable{Head: columnHeads(1, "searched value", "design", "searched from", "to", "free to move from", "to", "in tenths of a degree")}
	for _, v := range r.Best.Variables {
		row := []cell{{Text: v.Name}, number(v.Value, "result", "best", "variables", v.Name)}
		t.Rows = append(t.Rows, append(row, r.aroundVariable(v.Name)...))
	}
	s.table(t)
	r.roundedWords(&s)
	r.yardstickWords(&s)
	var notes [][]cell
	for i, note := range r.Notes {
		notes = append(notes, []cell{quoted(note, "result", "notes", i)})
	}
	s.list(notes)
	r.candidateTable(&s)
	return s
}

// roundedWords tell of the design in tenths of a degree, which keeps the margins of a
// confidence as well.
func (r *result) roundedWords(s *chapter) {
	if r.Rounded == nil {
		return
	}
	margins, short := "", ""
	if c := r.Confidence; c.movedOn() {
		margins = " with the margin told under Confidence"
		if !c.Met {
			short = " Those margins do not reach the confidence."
		}
	}
	if r.Rounded.Variables == nil {
		s.say(words("In tenths of a degree no design near this one keeps every limit%s.%s", margins, short))
		return
	}
	s.say(words("In tenths of a degree every limit is kept%s as well, with an aim of ", margins), number(r.Rounded.Aim, "result", "rounded", "aim"), words(".%s", short))
}

// aroundVariable are the cells of a variable behind its value: range, play,
// rounded.
func (r *result) aroundVariable(name string) []cell {
	blank := cell{Text: none, Number: true}
	cells := []cell{blank, blank, blank, blank, blank}
	if r.review != nil {
		for i, v := range r.review.Variables {
			if v.Name == name {
				cells[0], cells[1] = number(v.Low, "review", "variables", i, "low"), number(v.High, "review", "variables", i, "high")
			}
		}
	}
	for i, p := range r.Play {
		if p.Variable == name {
			cells[2], cells[3] = number(p.Low, "result", "play", i, "low"), number(p.High, "result", "play", i, "high")
		}
	}
	if r.Rounded != nil {
		if v, ok := r.Rounded.Variables.Get(name); ok {
			cells[4] = number(v, "result", "rounded", "variables", name)
		}
	}
	return cells
}

func (r *result) yardstickWords(s *chapter) {
	switch e := &r.ExactSearch; e.Status {
	case "found":
		sentence := []cell{words("Yardstick: a search on the exact model alone, run afterwards and never used, found "), number(e.Aim, "result", "exact_search", "aim")}
		if finite(float64(e.Ratio)) {
			sentence = append(sentence, words("; this design reaches "), number(e.Ratio, "result", "exact_search", "ratio"), words(" of it"))
		}
		s.say(append(sentence, words("."))...)
	case "not_run":
		s.say(words("Yardstick: the search on the exact model alone was not run."))
	default:
		s.say(words("Yardstick: a search on the exact model alone, run afterwards, found no design that holds every limit."))
	}
}

// candidateTable lists the distinct runners-up.
func (r *result) candidateTable(s *chapter) {
	if len(r.Candidates) < 2 {
		return
	}
	t := &htmlTable{Caption: heads("Beside the distinct designs that came next"), Head: heads("searched value")}
	for i := range r.Candidates {
		name := "design"
		if i > 0 {
			name = "runner-up " + string(rune('A'+i-1))
		}
		t.Head = append(t.Head, cell{Text: name, Number: true})
	}
	add := func(name string, value func(i int) cell) {
		row := heads(name)
		for i := range r.Candidates {
			row = append(row, value(i))
		}
		t.Rows = append(t.Rows, row)
	}
	for _, v := range r.Best.Variables {
		add(v.Name, func(i int) cell {
			value, _ := r.Candidates[i].Variables.Get(v.Name)
			return number(value, "result", "candidates", i, "variables", v.Name)
		})
	}
	add("aim", func(i int) cell { return number(r.Candidates[i].Aim.Exact, "result", "candidates", i, "aim", "exact") })
	add("sum of violations", func(i int) cell { return number(r.Candidates[i].Violation, "result", "candidates", i, "violation") })
	s.table(t)
}

// conflictSection says which limits cannot be met together, and what would do.
func (r *result) conflictSection() chapter {
	s := chapter{ID: "conflicts", Head: "Why no design holds every limit"}
	for i, c := range r.Conflicts {
		sentence := "These cannot be met together; with any one of them left out the others can:"
		if i > 0 {
			sentence = "Nor can these:"
		}
		s.say(words("%s", sentence))
		var items [][]cell
		for k, m := range c.Members {
			items = append(items, m.cells("result", "conflicts", i, "members", k))
		}
		s.list(items)
	}
	t := &htmlTable{Caption: heads("Smallest loosening of one limit with every other held"), Head: columnHeads(3, "limit", "at", "side", "asked", "enough")}
	for i, l := range r.Relaxation {
		at := func(key string) []any { return []any{"relaxation", i, key} }
		enough := number(l.Enough, "result", at("enough")...)
		if !finite(float64(l.Enough)) {
			enough = cell{Text: "not enough alone", Number: true}
		}
		t.Rows = append(t.Rows, []cell{
			quoted(l.Quantity, "result", at("quantity")...), quoted(l.At, "result", at("at")...),
			words("%s", l.words()), number(l.Bound, "result", at("bound")...), enough,
		})
	}
	s.table(t)
	return s
}

// cells writes one side of a limit.
func (s SideOf) cells(file string, path ...any) []cell {
	at := func(key string) []any { return append(path[:len(path):len(path)], key) }
	list := []cell{quoted(s.Quantity, file, at("quantity")...)}
	if s.At != problems.Geometry {
		list = append(list, words(" at "), quoted(s.At, file, at("at")...))
	}
	return append(list, words(" %s ", s.words()), number(s.Bound, file, at("bound")...))
}

func (r *result) assumptionSection() chapter {
	s := chapter{ID: "assumptions", Head: "What every result carries"}
	var items [][]cell
	for i, text := range r.Assumptions {
		items = append(items, []cell{quoted(text, "result", "assumptions", i)})
	}
	s.list(items)
	return s
}

func (r *result) provenanceSection() chapter {
	s := chapter{ID: "provenance", Head: "Provenance"}
	t := &htmlTable{Head: heads("what", "value")}
	add := func(name string, value cell) { t.Rows = append(t.Rows, []cell{words("%s", name), value}) }
	add("program", quoted(r.Program, "result", "program"))
	add("brief, SHA of its canonical form", quoted(r.BriefHash, "result", "brief_hash"))
	add("seed", countCell(r.Seed, "result", "seed"))
	add("how the search ended", quoted(r.Why, "result", "why"))
	for _, c := range []struct {
		name, key string
		n         int
	}{
		{"exact evaluations of the first design of experiments", "samples", r.Evaluations.Samples},
		{"exact evaluations chosen by the search", "infill", r.Evaluations.Infill},
		{"rounds of the search, each evaluated side by side", "rounds", r.Evaluations.Rounds},
		{"evaluations by the second exact route", "verify", r.Evaluations.Verify},
		{"evaluations of surrogates", "surrogate", r.Evaluations.Surrogate},
	} {
		add(c.name, countCell(int64(c.n), "result", "evaluations", c.key))
	}
	add("exact evaluations of the yardstick", countCell(int64(r.ExactSearch.Evaluations), "result", "exact_search", "evaluations"))
	add("started, UTC", quoted(r.run.Started, "run", "started"))
	add("duration, s", number(Number(r.run.Seconds), "run", "seconds"))
	add("platform", quoted(r.run.Platform, "run", "platform"))
	add("jobs", countCell(int64(r.run.Jobs), "run", "jobs"))
	for _, f := range r.run.ModelCalls {
		add("model calls of this run, route "+f.Name, countCell(f.Value, "run", "model_calls", f.Name))
	}
	for _, f := range r.run.LedgerAnswer {
		add("answered from the ledger, route "+f.Name, countCell(f.Value, "run", "answered_from_ledger", f.Name))
	}
	s.table(t)
	return s
}

// withUnit is a name with its unit, unless the name ends in it.
func withUnit(name, unit string) string {
	if unit == "" || strings.HasSuffix(name, "_"+unit) {
		return name
	}
	return name + ", " + unit
}
