package report

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"

	"rampwright/optimize"
	"rampwright/problems/inlet"
)

type reporter interface {
	Helper()
	Errorf(format string, args ...any)
}

func checkWidth(t reporter, text string, width int) {
	t.Helper()
	for i, line := range strings.Split(text, "\n") {
		if n := utf8.RuneCountInString(line); n > width {
			t.Errorf("line %d has %d columns of %d: %q", i+1, n, width, line)
		}
		if strings.TrimRight(line, " ") != line {
			t.Errorf("line %d ends in blanks: %q", i+1, line)
		}
	}
}

func texts(t *testing.T, width int) map[string]string {
	problem, flow := flowOf(t, ramjet(), 8, 5, 5, 3)
	broken, detached := flowOf(t, ramjet(), 9, 9, 9, 4)
	crowded := ramjet()
	for i := range 5 {
		point := crowded.Points[0]
		point.Name = fmt.Sprintf("a_flight_point_with_a_long_name_%d", i)
		crowded.Points = append(crowded.Points, point)
	}
	many, flows := flowOf(t, crowded, 8, 5, 5, 3)
	return map[string]string{
		"design":    NewDesign(head, study(t)).Text(width),
		"flow":      NewFlow(head, problem, flow).Text(width),
		"detached":  NewFlow(head, broken, detached).Text(width),
		"crowded":   NewFlow(head, many, flows).Text(width),
		"catalogue": Catalogue(width),
	}
}

func TestLinesFit(t *testing.T) {
	for _, width := range []int{80, 100, 140} {
		for name, text := range texts(t, width) {
			t.Run(fmt.Sprint(name, width), func(t *testing.T) { checkWidth(t, text, width) })
		}
	}
	if NewDesign(head, study(t)).Text(20) != NewDesign(head, study(t)).Text(80) {
		t.Error("a terminal narrower than the least is not treated as the least")
	}
}

// section returns the lines of a section of a text.
func section(text, heading string) []string {
	_, rest, _ := strings.Cut("\n"+text, "\n"+heading+"\n"+strings.Repeat("-", len(heading))+"\n")
	rest, _, _ = strings.Cut(rest, "\n---")
	return strings.Split(rest, "\n")
}

// ends returns the columns at which the last n words of a line end.
func ends(line string, n int) []int {
	places := regexp.MustCompile(`\S+`).FindAllStringIndex(line, -1)
	var list []int
	for _, place := range places[max(0, len(places)-n):] {
		list = append(list, place[1])
	}
	return list
}

// Numbers of a column end at one place, from the free stream to the throat.
func TestStationsAlign(t *testing.T) {
	for _, width := range []int{80, 140} {
		tables, columns := 0, 0
		var want []int
		for _, line := range section(texts(t, width)["flow"], "Stations") {
			switch {
			case strings.HasPrefix(line, "  station "):
				columns = len(strings.Fields(line)) - 1
				want = ends(line, columns)
				tables++
			case strings.HasPrefix(line, "  ") && want != nil:
				if got := ends(line, columns); !slices.Equal(got, want) {
					t.Errorf("width %d: columns end at %v, head at %v: %q", width, got, want, line)
				}
			case line == "":
				want = nil
			}
		}
		if tables != 4 || columns < 7 {
			t.Errorf("width %d: %d tables, %d columns", width, tables, columns)
		}
	}
}

// A wide page shows columns that a narrow one leaves out.
func TestWidthShowsMore(t *testing.T) {
	stations := func(width int) string { return strings.Join(section(texts(t, width)["flow"], "Stations"), "\n") }
	narrow, wide := stations(80), stations(140)
	for _, head := range []string{"p/p0", "T/T0", "wave to x"} {
		if strings.Contains(narrow, head) || !strings.Contains(wide, head) {
			t.Errorf("%s: narrow %v, wide %v", head, strings.Contains(narrow, head), strings.Contains(wide, head))
		}
	}
}

// Text holds no number of more than six digits, and no count that hangs on the
// way a search went.
func TestFewDigits(t *testing.T) {
	number := regexp.MustCompile(`[0-9]+\.?[0-9]*`)
	for name, text := range texts(t, 140) {
		for _, found := range number.FindAllString(text, -1) {
			if len(strings.TrimLeft(strings.Replace(found, ".", "", 1), "0")) > fixedDigits {
				t.Errorf("%s shows %s", name, found)
			}
		}
	}
	text := NewDesign(head, study(t)).Text(80)
	if count := study(t).Result.Counts.Surrogate; strings.Contains(text, strconv.Itoa(count)) {
		t.Errorf("the text counts %d surrogate calls", count)
	}
}

func TestDesignTextTellsTheResult(t *testing.T) {
	s := study(t)
	if s.Result.Status != optimize.Verified {
		t.Fatalf("the example ends %v", s.Result.Status)
	}
	d := NewDesign(head, s)
	text := d.Text(140)
	for _, want := range []string{
		"Verified: the highest recovery at cruise found under all limits is " + significant(s.Result.Best.AimExact),
		"ramp_1_angle_deg", "of it.", "on the limit: ", " recovery per m", "limits of the model itself hold as well",
		"Gaussian process", "What these numbers rest on",
	} {
		if !strings.Contains(strings.Join(strings.Fields(text), " "), strings.TrimSpace(want)) {
			t.Errorf("the text lacks %q", want)
		}
	}
	if cautions, answer := strings.Index(text, "Cautions\n"), strings.Index(text, "Result\n"); cautions < 0 || answer < cautions {
		t.Errorf("cautions at %d, result at %d", cautions, answer)
	}
	// The limits it stands on come first, with what loosening them gains.
	first := strings.Join(strings.Fields(strings.Join(section(text, "Limits")[2:5], " ")), " ")
	if !strings.Contains(first, "on the limit: ") || !strings.Contains(first, " for the next ") || !strings.Contains(first, "; holds ") {
		t.Errorf("the first limit is %q", first)
	}
}

func TestAnswers(t *testing.T) {
	for status, want := range map[optimize.Status]string{
		optimize.Verified: "Verified: ", optimize.NotVerified: "Not verified: ", optimize.Infeasible: "Infeasible: ",
		optimize.Stopped: "Stopped by the time limit: ", optimize.Interrupted: "Interrupted: ",
	} {
		s := study(t)
		result := *s.Result
		result.Status = status
		s.Result = &result
		if got := NewDesign(head, s).answer(); !strings.HasPrefix(got, want) {
			t.Errorf("%v is told as %q", status, got)
		}
	}
	d := NewDesign(head, study(t))
	for where, want := range map[string]string{
		"cruise": "recovery at cruise", "mean": "weighted mean of recovery over the flight points",
		"worst": "worst recovery of the flight points", "": "recovery",
	} {
		d.Best.Aim.Where = where
		if got := d.aimName(); got != want {
			t.Errorf("aim at %q is %q", where, got)
		}
	}
}

// Every quantity of the catalogue is explained, and stands in a group.
func TestCatalogueIsWhole(t *testing.T) {
	text, raw := Catalogue(80), string(CatalogueJSON("rampwright 0"))
	starts := 0
	for _, e := range inlet.Catalogue() {
		if !strings.Contains(text, "\n  "+e.Name+"  [") || !strings.Contains(raw, `"name": "`+e.Name+`"`) {
			t.Errorf("%s is not listed", e.Name)
		}
		if _, ok := quantityGroups[e.Name]; ok {
			starts++
		}
	}
	if starts != len(quantityGroups) {
		t.Errorf("%d of %d groups start at a quantity of the catalogue", starts, len(quantityGroups))
	}
}

func TestSignificant(t *testing.T) {
	for v, want := range map[float64]string{
		0.655909: "0.65591", 780.0000027: "780.00", 0.99999999: "1.0000", 9.99999: "10.000", 3818633: "3.8186e6",
		0.0074599: "0.00746", 0.000123456: "1.235e-4", -4.5e-17: "0", -0.59377: "-0.59377", 1: "1.0000", 123456: "123456",
	} {
		if got := significant(v); got != want {
			t.Errorf("%v is %s, want %s", v, got, want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(-1e9, 1e9).Draw(t, "v")
		tolerance := max(5.1e-5*abs(v), 5.1e-6) // five digits, at most five decimals
		if abs(v) < 1e-3 {
			tolerance = max(5.1e-4*abs(v), noise)
		}
		if back, err := strconv.ParseFloat(significant(v), 64); err != nil || abs(back-v) > tolerance {
			t.Errorf("%v is shown as %s", v, significant(v))
		}
	})
}

func abs(v float64) float64 { return max(v, -v) }

// Whatever its cells, a table's columns stand below each other; a note that does
// not fit goes on its own line.
func TestTableAligns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		cell := rapid.StringMatching(`[a-z0-9.é]{1,9}`)
		table := &table{columns: []column{{head: "name"}, {head: "x\ndeg"}, {head: "y"}}}
		rows := rapid.IntRange(1, 6).Draw(t, "rows")
		for range rows {
			table.add(cell.Draw(t, "a"), cell.Draw(t, "b"), cell.Draw(t, "c"))
		}
		p := newPage(80)
		p.table(table)
		lines := strings.Split(strings.TrimSuffix(p.String(), "\n"), "\n")
		if len(lines) != rows+2 {
			t.Fatalf("%d lines of %d rows", len(lines), rows)
		}
		width := utf8.RuneCountInString(lines[1])
		for _, line := range lines[1:] {
			if utf8.RuneCountInString(line) != width {
				t.Errorf("ragged:\n%s", p.String())
			}
		}
	})
	table := &table{columns: []column{{}, {}}}
	table.add("first", "1")
	table.add("second", "2")
	table.annotate(strings.Repeat("long ", 20))
	p := newPage(80)
	p.table(table)
	if got := strings.Count(p.String(), "\n"); got != 4 {
		t.Errorf("%d lines:\n%s", got, p.String())
	}
}
