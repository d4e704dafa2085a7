package report

import (
	"encoding/json"
	"fmt"
	"slices"
)

// ladderTables has one row a number of ramps, and the angles of each.
func ladderTables(c *chapter, s *studyPage) error {
	var d LadderDocument
	if err := json.Unmarshal(s.Document, &d); err != nil {
		return err
	}
	t := &htmlTable{Head: columnHeads(0, "ramps", "status", "aim", "predicted", "gain", "equal-strength limit")}
	t.Head[1].Number = false
	angles := designTable("ramps")
	var reasons [][]cell
	for i := range d.Rows {
		row := &d.Rows[i]
		at := func(key ...any) []any { return append([]any{"rows", i}, key...) }
		ramps := countCell(int64(row.Ramps), s.Name, at("ramps")...)
		t.Rows = append(t.Rows, []cell{
			ramps, statusCell(row.Status, s.Name, at("status")...),
			number(row.Aim.Exact, s.Name, at("aim", "exact")...), number(row.Aim.Predicted, s.Name, at("aim", "predicted")...),
			number(row.Gain, s.Name, at("gain")...), number(row.EqualStrength, s.Name, at("equal_strength")...),
		})
		angles.add(ramps, s.Name, row.Variables, at("variables")...)
		if row.Reason != "" {
			reasons = append(reasons, []cell{words("Number of ramps "), ramps, words(": "), s.text(row.Reason, at("reason")...)})
		}
	}
	c.table(t)
	c.list(reasons)
	c.table(angles.table("Searched values"))
	return nil
}

// tradeTables has one row a point of the curve, and the design behind each.
func tradeTables(c *chapter, s *studyPage) error {
	var d TradeDocument
	if err := json.Unmarshal(s.Document, &d); err != nil {
		return err
	}
	t := &htmlTable{Head: columnHeads(1, "point")}
	designs := designTable("point")
	for i := range d.Curve {
		row := &d.Curve[i]
		at := func(key ...any) []any { return append([]any{"curve", i}, key...) }
		name := cell{Text: fmt.Sprintf("point %d", i+1), Place: true}
		cells := []cell{name}
		for k, v := range row.Values {
			if i == 0 {
				t.Head = append(t.Head, cell{Text: v.Name, Number: true})
			}
			cells = append(cells, number(v.Value, s.Name, at("values", d.Curve[i].Values[k].Name)...))
		}
		var stands []cell
		if row.Knee {
			stands = append(stands, words("knee of the curve"))
		}
		for k, text := range row.Active {
			stands = append(stands, s.text(text, at("active", k)...))
		}
		cells = append(cells, number(row.Rate, s.Name, at("rate")...), statusCell(row.Status, s.Name, at("status")...), joined(stands, "; "))
		t.Rows = append(t.Rows, cells)
		designs.add(name, s.Name, row.Variables, at("variables")...)
	}
	t.Head = append(t.Head, cell{Text: "rate", Number: true}, words("status"), words("stands on"))
	c.table(t)
	if len(t.Rows) > 1 {
		c.say(words("The rate is what the first quantity gains for each unit of the second given up between a point and the next."))
	}
	c.table(designs.table("Searched values"))
	return nil
}

// fitsTables has the choice at every number of samples, and every kind at the
// largest.
func fitsTables(c *chapter, s *studyPage) error {
	var d FitsDocument
	if err := json.Unmarshal(s.Document, &d); err != nil {
		return err
	}
	most := 0
	for _, row := range d.Rows {
		most = max(most, row.Samples)
	}
	heads := columnHeads(3, "quantity", "at", "kind", "samples", "designs", "median error", "root mean square", "largest", "Q2", "coverage of intervals")
	choice := &htmlTable{Caption: []cell{words("The choice, medians over the designs")}, Head: heads}
	kinds := &htmlTable{Caption: []cell{words("Every kind at the largest number of samples")}, Head: heads}
	for i := range d.Rows {
		row := &d.Rows[i]
		at := func(key string) []any { return []any{"rows", i, key} }
		name := s.text(row.Quantity, at("quantity")...)
		cells := []cell{
			name, s.text(row.At, at("at")...), s.text(row.Kind, at("kind")...),
			countCell(int64(row.Samples), s.Name, at("samples")...), countCell(int64(row.Designs), s.Name, at("designs")...),
			number(row.MedianAbsError, s.Name, at("median_abs_error")...), number(row.RMSE, s.Name, at("rmse")...),
			number(row.MaxAbsError, s.Name, at("max_abs_error")...), number(row.Q2, s.Name, at("q2")...), number(row.Coverage, s.Name, at("coverage")...),
		}
		switch {
		case row.Chosen:
			choice.Rows = append(choice.Rows, cells)
		case row.Samples == most:
			kinds.Rows = append(kinds.Rows, cells)
		}
	}
	for _, t := range []*htmlTable{choice, kinds} {
		rows := len(t.Rows)
		t.Rows = t.Rows[:min(rows, mostRows)]
		c.table(t)
		c.cutOff(s, rows)
	}
	return nil
}

// designs tables the searched values of several designs that need not have the
// same ones.
type designs struct {
	head string
	rows []designRow
}

type designRow struct {
	name   cell
	from   string
	path   []any
	values Object[Number]
}

func designTable(head string) *designs { return &designs{head: head} }

// add adds a design whose values stand at a place of a document.
func (t *designs) add(name cell, from string, values Object[Number], path ...any) {
	if len(values) > 0 {
		t.rows = append(t.rows, designRow{name, from, path, values})
	}
}

// names are those of all values, in the order of the design that has most.
func (t *designs) names() []string {
	rows := slices.Clone(t.rows)
	slices.SortStableFunc(rows, func(a, b designRow) int { return len(b.values) - len(a.values) })
	var names []string
	for _, r := range rows {
		for _, v := range r.values {
			if !slices.Contains(names, v.Name) {
				names = append(names, v.Name)
			}
		}
	}
	return names
}

// table has one row a design and one column a value.
func (t *designs) table(caption string) *htmlTable {
	names := t.names()
	out := &htmlTable{Caption: heads(caption), Head: columnHeads(1, append([]string{t.head}, names...)...)}
	if len(t.rows) > 0 {
		out.Head[0].Number = t.rows[0].name.Number
	}
	for _, r := range t.rows {
		row := []cell{r.name}
		for _, name := range names {
			if v, ok := r.values.Get(name); ok {
				row = append(row, number(v, r.from, append(r.path[:len(r.path):len(r.path)], name)...))
			} else {
				row = append(row, cell{Text: none, Number: true})
			}
		}
		out.Rows = append(out.Rows, row)
	}
	return out
}

// joined sets pieces side by side in one cell.
func joined(pieces []cell, between string) cell {
	var out cell
	for i, p := range pieces {
		if i > 0 {
			out.Parts = append(out.Parts, words("%s", between))
		}
		out.Parts = append(out.Parts, p)
	}
	return out
}

// flowTables shows the flight points of a flow, their stations left to the document,
// and what their traces say.
func flowTables(c *chapter, s *studyPage) error {
	err := plainTables(plainList{"points", []string{"name", "mach", "incidence_deg", "pressure_kPa", "temperature_K", "status"}})(c, s)
	if err != nil {
		return err
	}
	var points []Point
	if raw, ok := s.fields.Get("points"); ok {
		if err := json.Unmarshal(raw, &points); err != nil {
			return err
		}
	}
	c.traces(s.Name, points)
	return nil
}

// envelopeTables counts the conditions of a map by state, and tells between which Mach
// numbers each boundary runs.
func envelopeTables(c *chapter, s *studyPage) error {
	if err := plainTables(plainList{of: "states"})(c, s); err != nil {
		return err
	}
	var lines []EnvelopeLine
	if raw, ok := s.fields.Get("boundary"); ok {
		if err := json.Unmarshal(raw, &lines); err != nil {
			return err
		}
	}
	t := &htmlTable{Caption: heads("Boundaries"), Head: columnHeads(1, "boundary", "lowest Mach number", "at incidence, deg", "highest Mach number", "at incidence, deg")}
	for i := range lines[:min(len(lines), mostRows)] {
		line := &lines[i]
		row := []cell{s.text(line.Name, "boundary", i, "name")}
		for _, at := range line.ends() {
			for k := range 2 {
				if at < 0 {
					row = append(row, cell{Text: none, Number: true})
					continue
				}
				row = append(row, number(line.Points[at][k], s.Name, "boundary", i, "points", at, k))
			}
		}
		t.Rows = append(t.Rows, row)
	}
	c.table(t)
	c.cutOff(s, len(lines))
	return nil
}

// ends are the points of least and greatest Mach number, -1 where there is none.
func (l *EnvelopeLine) ends() (at [2]int) {
	at = [2]int{-1, -1}
	for i, p := range l.Points {
		if at[0] < 0 || p[0] < l.Points[at[0]][0] {
			at[0] = i
		}
		if at[1] < 0 || p[0] > l.Points[at[1]][0] {
			at[1] = i
		}
	}
	return at
}

// scheduleTables names the part that moves, and has one row a Mach number.
func scheduleTables(c *chapter, s *studyPage) error {
	if s.Moved != "" {
		c.say(words("What moves: "), s.text(s.Moved, "moved"), words("; as designed "), number(s.DesignDeg, s.Name, "design_deg"), words(" deg."))
	}
	columns := []string{"mach", "angle_deg", "limits_kept", "at_stop", "low_deg", "high_deg", "aim", "status"}
	return plainTables(plainList{"rows", columns})(c, s)
}
