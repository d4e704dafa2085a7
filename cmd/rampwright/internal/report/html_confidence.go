package report

import "slices"

// confidenceSection sets the design that knows no tolerances beside the one that
// holds each limit with the confidence of the brief, and tells what each margin
// costs.
func (r *result) confidenceSection() chapter {
	s := chapter{ID: "confidence", Head: "Confidence"}
	c := r.Confidence
	if c == nil {
		return s
	}
	asked := shareCell(c.Confidence, "result", "confidence", "confidence")
	why := quoted(c.Why, "result", "confidence", "why")
	if c.BackedOff == nil {
		s.warn(words("Each limit is asked to hold in "), asked, words(" %% of the inlets built and flown. No design was backed off for that: "), why, words("."))
		return s
	}
	if c.Met {
		s.say(words("Each limit is asked to hold in "), asked, words(" %% of the inlets built and flown, and does in the backed-off design."))
	} else {
		s.warn(words("Each limit is asked to hold in "), asked, words(" %% of the inlets built and flown. That is not reached: "), why, words("."))
	}
	s.table(r.bothDesignsTable())
	s.table(r.marginCostTable())
	s.list(r.confidenceWords())
	return s
}

// bothDesignsTable has the searched values, the aim and the joint share of both
// designs.
func (r *result) bothDesignsTable() *htmlTable {
	c := r.Confidence
	t := &htmlTable{Head: columnHeads(1, "searched value", "nominal", "backed off")}
	for _, v := range c.Nominal.Variables {
		row := []cell{{Text: v.Name}, number(v.Value, "result", "confidence", "nominal", "variables", v.Name), {Text: none, Number: true}}
		if backed, ok := c.BackedOff.Variables.Get(v.Name); ok {
			row[2] = number(backed, "result", "confidence", "backed_off", "variables", v.Name)
		}
		t.Rows = append(t.Rows, row)
	}
	t.Rows = append(t.Rows, []cell{
		words("aim"), number(c.Nominal.Aim, "result", "confidence", "nominal", "aim"), number(c.BackedOff.Aim, "result", "confidence", "backed_off", "aim"),
	}, []cell{
		words("all limits together hold, %%"), shareCell(c.Nominal.Joint.Share, "result", "confidence", "nominal", "pass_probability", "share"),
		shareCell(c.BackedOff.Joint.Share, "result", "confidence", "backed_off", "pass_probability", "share"),
	})
	return t
}

// marginCostTable has one row a limit that tolerances move; the column of draws
// without an answer is there where some have none.
func (r *result) marginCostTable() *htmlTable {
	names := []string{"limit", "at", "at least", "at most", "nominal holds, %", "backed off holds, %", "margin above the lower side", "margin below the upper side", "price", "cost"}
	holes := r.Confidence.unanswered()
	if holes {
		names = slices.Insert(names, 6, "draws without an answer")
	}
	t := &htmlTable{Caption: heads("How often each limit holds, and the margin the design was searched with"), Head: columnHeads(2, names...)}
	for i := range r.Confidence.Limits {
		l := &r.Confidence.Limits[i]
		at := func(key ...any) []any { return append([]any{"confidence", "limits", i}, key...) }
		value := func(v Number, applies bool, key string) cell {
			if !applies {
				return cell{Text: none, Number: true}
			}
			return number(v, "result", at(key)...)
		}
		row := []cell{
			quoted(l.Quantity, "result", at("quantity")...), quoted(l.At, "result", at("at")...),
			number(l.Low, "result", at("low")...), number(l.High, "result", at("high")...),
		}
		if l.Affected {
			row = append(row, shareCell(l.Nominal.Share, "result", at("nominal", "share")...), shareCell(l.BackedOff.Share, "result", at("backed_off", "share")...))
		} else {
			row = append(row, cell{Text: "not affected", Number: true}, cell{Text: "not affected", Number: true})
		}
		if holes {
			row = append(row, countCell(int64(l.Unanswered), "result", at("unanswered")...))
		}
		t.Rows = append(t.Rows, append(row,
			value(l.LowMargin, l.Affected && finite(float64(l.Low)), "low_margin"), value(l.HighMargin, l.Affected && finite(float64(l.High)), "high_margin"),
			value(l.Price, l.Price > 0, "price"), value(l.Cost, l.Cost > 0, "cost")))
	}
	return t
}

// confidenceWords say how the figures of both tables came about.
func (r *result) confidenceWords() [][]cell {
	c := r.Confidence
	at := func(key string) []any { return []any{"confidence", key} }
	margin := []cell{words("Margin, in the unit of the quantity: by how much the search of the design shown kept inside.")}
	if !c.movedOn() {
		margin = append(margin, words(" The design shown is the nominal one, searched without any."))
	}
	if c.Round > 0 { // unknown in a folder written before it was told
		margin = append(margin, words(" It is that of round "), countCell(int64(c.Round), "result", at("round")...), words(" of the search."))
	}
	if c.movedOn() && !c.Met {
		margin = append(margin, words(" What was asked for after it is not shown; these margins are not enough."))
	}
	list := [][]cell{
		{words("Holds: per cent of "), countCell(int64(c.Draws), "result", at("draws")...), words(" fresh draws of the exact model, which no search has seen; both designs are judged on the same.")},
		margin,
		{
			words("Draws: "), countCell(int64(c.DrawsARound), "result", at("draws_a_round")...), words(" at each of "), countCell(int64(c.Rounds), "result", at("rounds")...),
			words(" designs, the nominal one first; the margins they asked for aimed at "), shareCell(c.Aimed, "result", at("aimed")...), words(" %%. How the search ended: "), quoted(c.Why, "result", at("why")...), words("."),
		},
		{words("Price: what the aim gains for each unit of margin given back. Cost: price times margin, to first order.")},
	}
	if c.unanswered() {
		list = append(list, []cell{words("Draws without an answer: those in which the backed-off design gave the quantity no value. They count as not held, and a margin of the limit does not mend them.")})
	}
	return list
}
