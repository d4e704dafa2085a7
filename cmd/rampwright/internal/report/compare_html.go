package report

import (
	"io"
	"math"

	"rampwright/cmd/rampwright/internal/chart"
)

// Page writes the comparison as one HTML page.
func (d *CompareDocument) Page() ([]byte, error) {
	s := &sheet{
		Title:  []cell{words("Designs side by side")},
		Answer: d.answerCells(),
		Facts:  []fact{{"program", quoted(d.Program, "compare", "program")}},
		Sections: []chapter{
			d.noteChapter(), d.resultChapter(), d.outlineChapter(), d.variableChapter(), d.marginChapter(),
		},
	}
	return s.write()
}

func (d *CompareDocument) answerCells() []cell {
	best := d.best()
	if best < 0 && !d.oneAim() {
		return []cell{words("The results pursue different aims: none of them can be called best.")}
	}
	if best < 0 {
		return []cell{words("No result holds every limit of its brief.")}
	}
	c := &d.Results[best]
	return []cell{
		words("Best of those that hold every limit: "), d.folderCell(best), words(" with "),
		quoted(c.Aim.Text, "compare", "results", best, "aim", "text"), words(" of "),
		number(c.Aim.Exact, "compare", "results", best, "aim", "exact"), words("."),
	}
}

func (d *CompareDocument) folderCell(i int) cell {
	return quoted(d.Results[i].Folder, "compare", "results", i, "folder")
}

func (d *CompareDocument) noteChapter() chapter {
	s := chapter{ID: "cautions", Head: "Cautions"}
	var items [][]cell
	for i, note := range d.Notes {
		items = append(items, []cell{quoted(note, "compare", "notes", i)})
	}
	s.list(items)
	return s
}

func (d *CompareDocument) resultChapter() chapter {
	s := chapter{ID: "results", Head: "Results"}
	t := &htmlTable{Head: heads("folder", "title", "status", "aim", "at")}
	t.Head = append(t.Head, columnHeads(0, "exact", "predicted", "seed")...)
	some := d.someConfidence()
	if some {
		t.Head = append(t.Head, cell{Text: "confidence asked, %", Number: true}, words("reached"))
	}
	for i := range d.Results {
		c := &d.Results[i]
		at := func(key ...any) []any { return append([]any{"results", i}, key...) }
		row := []cell{
			d.folderCell(i), quoted(c.Title, "compare", at("title")...), statusCell(c.Status, "compare", at("status")...),
			quoted(c.Aim.Text, "compare", at("aim", "text")...), quoted(c.Aim.Where, "compare", at("aim", "where")...),
			number(c.Aim.Exact, "compare", at("aim", "exact")...), number(c.Aim.Predicted, "compare", at("aim", "predicted")...),
			countCell(c.Seed, "compare", at("seed")...),
		}
		if some {
			row = append(row, d.confidenceCells(i)...)
		}
		t.Rows = append(t.Rows, row)
	}
	s.table(t)
	return s
}

// confidenceCells are the confidence asked of a result and whether it is reached.
func (d *CompareDocument) confidenceCells(i int) []cell {
	c := d.Results[i].Confidence
	if c == nil {
		return []cell{{Text: "none", Number: true}, {Text: none}}
	}
	reached := "no"
	if c.Met {
		reached = "yes"
	}
	return []cell{shareCell(c.Confidence, "compare", "results", i, "confidence", "confidence"), words("%s", reached)}
}

// outlineChapter lays the contours over each other.
func (d *CompareDocument) outlineChapter() chapter {
	s := chapter{ID: "geometry", Head: "Geometry"}
	c := chart.OutlineChart{Title: "Body and inner cowl, to one scale"}
	for i := range d.Results {
		if shape := d.Results[i].Inlet; shape != nil && shape.Lip != nil && shape.Shoulder != nil {
			c.Shapes = append(c.Shapes, shape.outline(d.Results[i].Folder))
		}
	}
	if len(c.Shapes) > 0 {
		s.figures(false, htmlFigure{Picture: drawn(func(w io.Writer) error { return chart.WriteOutlineChart(w, c) })})
	}
	return s
}

// outline is the contour with the beginning of the duct.
func (s *Shape) outline(name string) chart.Outline {
	vertex := func(p [2]Number) chart.Vertex { return chart.Vertex{X: float64(p[0]), Y: float64(p[1])} }
	o := chart.Outline{Name: name}
	for _, corner := range s.Corners {
		o.Body = append(o.Body, vertex(corner))
	}
	shoulder, lip := vertex(*s.Shoulder), vertex(*s.Lip)
	o.Body = append(o.Body, shoulder)
	// Body and cowl run on, parallel, for two throat heights behind the shoulder.
	angle, _ := s.Quantities.Get("cowl_angle_deg")
	throat, _ := s.Quantities.Get("throat_height_m")
	sin, cos := math.Sincos(float64(angle) * math.Pi / 180)
	behind := 2 * float64(throat)
	along := (shoulder.X-lip.X)*cos + (shoulder.Y-lip.Y)*sin + behind
	o.Body = append(o.Body, chart.Vertex{X: shoulder.X + behind*cos, Y: shoulder.Y + behind*sin})
	o.Cowl = []chart.Vertex{lip, {X: lip.X + along*cos, Y: lip.Y + along*sin}}
	return o
}

// mostAcross is how many results stand beside each other on a sheet of A4.
const mostAcross = 8

// sideTables adds tables of one row a name and one column a result, as many as
// the width takes.
func (d *CompareDocument) sideTables(s *chapter, head string, rows int, name func(row int) string, value func(row, result int) cell) {
	for first := 0; first < len(d.Results) && rows > 0; first += mostAcross {
		end := min(first+mostAcross, len(d.Results))
		t := &htmlTable{Head: heads(head)}
		for i := first; i < end; i++ {
			h := d.folderCell(i)
			h.Number = true
			t.Head = append(t.Head, h)
		}
		for k := range rows {
			row := heads(name(k))
			for i := first; i < end; i++ {
				row = append(row, value(k, i))
			}
			t.Rows = append(t.Rows, row)
		}
		s.table(t)
	}
}

func (d *CompareDocument) variableChapter() chapter {
	s := chapter{ID: "variables", Head: "Searched values"}
	names := d.variableNames()
	d.sideTables(&s, "searched value", len(names), func(k int) string { return names[k] }, func(k, i int) cell {
		value, ok := d.Results[i].Variables.Get(names[k])
		if !ok {
			return cell{Text: none, Number: true}
		}
		return number(value, "compare", "results", i, "variables", names[k])
	})
	return s
}

func (d *CompareDocument) marginChapter() chapter {
	s := chapter{ID: "margins", Head: "Margins"}
	keys := d.limitKeys()
	d.sideTables(&s, "limit", len(keys), func(k int) string { return keys[k].String() }, func(k, i int) cell {
		row := d.Results[i].least(keys[k])
		if row < 0 {
			return cell{Text: d.Results[i].without(keys[k]), Number: true}
		}
		if d.Results[i].Limits[row].Active {
			return cell{Text: "on the limit", Number: true}
		}
		return number(d.Results[i].Limits[row].Margin, "compare", "results", i, "limits", row, "margin")
	})
	if len(keys) > 0 {
		s.say(words("In the unit of the quantity, positive inside; of a group the least."))
	}
	return s
}
