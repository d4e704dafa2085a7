package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
)

// stateLetters are the states on the map of letters; a capital keeps every limit.
var stateLetters = [envelope.States]byte{
	envelope.Attached: 'a', envelope.OverStart: 's', envelope.Swallowed: 'i',
	envelope.Unresolved: 'u', envelope.Ended: 'x', envelope.Pocket: 'p', envelope.Reflection: 'm', envelope.LipDetached: 'c', envelope.RampDetached: 'd',
}

// letter is that of a row.
func (row *EnvelopeRow) letter() byte {
	letter := stateLetters[row.sample.State]
	if len(row.Missed) == 0 {
		letter -= 'a' - 'A'
	}
	return letter
}

// Text returns the document for a terminal of that width.
func (d *EnvelopeDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.cautions(d.Cautions)
	p.heading("Operating map")
	p.wrap("", d.held(), "")
	p.WriteByte('\n')
	d.letters(p)
	d.limits(p)
	d.along(p)
	p.assumptions(d.Assumptions)
	return p.String()
}

// held says what the map was made with.
func (d *EnvelopeDocument) held() string {
	text := "Frozen geometry"
	for i, v := range d.Variables {
		lead := ", "
		if i == 0 {
			lead = ": "
		}
		text += fmt.Sprintf("%s%s %s", lead, v.Name, significant(float64(v.Value)))
	}
	return fmt.Sprintf("%s. Ambient air: %s. Limits of %s hold over the whole map.", text, d.Air.text(), d.LimitsOf)
}

// letterColumns bounds the width of the map of letters: on a finer grid every
// second, third.. Mach number is shown.
const letterColumns = 60

// letters draws the map with one letter a condition, incidence upward.
func (d *EnvelopeDocument) letters(p *page) {
	n, m := len(d.Grid.Mach), len(d.Grid.IncidenceDeg)
	every := (n + letterColumns - 1) / letterColumns
	p.WriteString(indent + "incidence, deg\n")
	labels := fixed(plainNumbers(d.Grid.IncidenceDeg), 2)
	for j := m - 1; j >= 0; j-- {
		var line strings.Builder
		for i := 0; i < n; i += every {
			line.WriteByte(d.Rows[i*m+j].letter())
		}
		fmt.Fprintf(p, "%10s  %s\n", labels[j], line.String())
	}
	d.machAxis(p, every)
	var legend []string
	for state, letter := range stateLetters {
		name := envelope.State(state).String()
		if count, ok := d.States.Get(name); ok {
			legend = append(legend, fmt.Sprintf("%c %s (%d)", letter, name, count))
		}
	}
	p.WriteByte('\n')
	p.wrap(indent, strings.Join(legend, ", ")+fmt.Sprintf("; capital letters keep every limit (%d of %d conditions).", d.Within, len(d.Rows)), indent)
	if n := d.traced(); n > 0 {
		p.wrap(indent, fmt.Sprintf("%d conditions are traced wave by wave, %s; flow states the error bound of one.", n, d.Traces.Map.text()), indent)
	}
	if every > 1 {
		p.wrap(indent, fmt.Sprintf("One Mach number in %d is shown.", every), indent)
	}
}

// traced counts the conditions that are traced.
func (d *EnvelopeDocument) traced() int {
	n := 0
	for i := range d.Rows {
		if d.Rows[i].Traced {
			n++
		}
	}
	return n
}

// text names the resolution of a trace.
func (s TraceSettings) text() string {
	return fmt.Sprintf("expansion wavelets of %s deg, threshold %s", plain(float64(s.WaveletDeg)), plain(float64(s.Threshold)))
}

// machAxis writes Mach numbers below the map where they have room.
func (d *EnvelopeDocument) machAxis(p *page, every int) {
	const lead, room = 12, 10
	shown := (len(d.Grid.Mach) + every - 1) / every
	marks, numbers := []byte(strings.Repeat(" ", lead+shown)), []byte(strings.Repeat(" ", lead+shown+room))
	for at := 0; at < shown; at += room {
		marks[lead+at] = '|'
		copy(numbers[lead+at:], fmt.Sprintf("%.3g", float64(d.Grid.Mach[at*every])))
	}
	p.WriteString(strings.TrimRight(string(marks), " ") + "\n")
	copy(numbers[lead-6:], "Mach")
	p.WriteString(strings.TrimRight(string(numbers), " ") + "\n")
}

func plainNumbers(list []Number) []float64 {
	out := make([]float64, len(list))
	for i, v := range list {
		out[i] = float64(v)
	}
	return out
}

// limits lists the Mach numbers at which each boundary passes the lowest, the
// middle and the highest incidence.
func (d *EnvelopeDocument) limits(p *page) {
	p.heading("Operating limits")
	if len(d.Boundary) == 0 {
		p.wrap("", "No boundary crosses the map.", "")
		return
	}
	grid := plainNumbers(d.Grid.IncidenceDeg)
	shown := []float64{grid[0], grid[len(grid)/2], grid[len(grid)-1]}
	shown = slices.Compact(shown)
	t := &table{columns: []column{{head: "boundary, crossed at Mach"}}}
	for _, v := range shown {
		t.columns = append(t.columns, column{head: plain(v) + " deg"})
	}
	t.columns = append(t.columns, column{head: "anywhere", drop: 1})
	seen := map[string]bool{}
	for _, line := range d.Boundary {
		if seen[line.Kind+line.Name] {
			continue
		}
		seen[line.Kind+line.Name] = true
		row := []string{line.Name}
		for _, v := range shown {
			row = append(row, machText(d.crossing(line.Kind, line.Name, v)))
		}
		low, high := d.machsOf(line.Kind, line.Name)
		t.add(append(row, fmt.Sprintf("%.2f .. %.2f", low, high))...)
	}
	p.table(t)
	note := fmt.Sprintf("Boundaries are roots to %g in Mach number, not read off the grid; one that enters and leaves between two neighbouring conditions is not seen.", float64(d.Tolerance.Mach))
	if d.traced() > 0 {
		note += " Where the inlet is traced they are those of " + d.Traces.Boundary.text() + "."
	}
	p.wrap(indent, note, indent)
}

// machsOf is the range of Mach numbers that the lines of a boundary run through.
func (d *EnvelopeDocument) machsOf(kind, name string) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, line := range d.Boundary {
		if line.Kind == kind && line.Name == name {
			for _, p := range line.Points {
				low, high = min(low, float64(p[0])), max(high, float64(p[0]))
			}
		}
	}
	return low, high
}

// mostCrossings is how many Mach numbers one cell of the table holds.
const mostCrossings = 2

func machText(list []float64) string {
	if len(list) == 0 {
		return none
	}
	var parts []string
	for _, v := range list[:min(len(list), mostCrossings)] {
		parts = append(parts, fmt.Sprintf("%.4f", v))
	}
	text := strings.Join(parts, " ")
	if len(list) > mostCrossings {
		text += " .."
	}
	return text
}

// alongColumns are the quantities along the middle incidence.
var alongColumns = []struct {
	name, head string
	drop       int
}{
	{"capture", "capture", 0}, {"recovery", "recovery", 0}, {"throat_mach", "throat\nMach", 0},
	{"throat_pressure_kPa", "throat\nkPa", 0}, {"throat_temperature_K", "throat\nK", 2},
	{"spillage_drag", "spillage\ndrag", 0}, {"internal_contraction_over_self_start", "over\nself-start", 1},
}

// alongRows is how many conditions that table has, less the last and those at flight
// points.
const alongRows = 11

// alongShown lists the Mach numbers of the table, by their place in the grid: one in
// so many, the last, and those of flight points.
func (d *EnvelopeDocument) alongShown() (shown []int, every int) {
	n := len(d.Grid.Mach)
	every = (n + alongRows - 1) / alongRows
	for i, mach := range d.Grid.Mach {
		flown := slices.ContainsFunc(d.study.Definition.Points, func(p inlet.Point) bool { return math.Abs(p.Mach-float64(mach)) < 1e-9 })
		if i%every == 0 || i == n-1 || flown {
			shown = append(shown, i)
		}
	}
	return shown, every
}

// along writes the state of the inlet along the middle incidence.
func (d *EnvelopeDocument) along(p *page) {
	m := len(d.Grid.IncidenceDeg)
	j := m / 2
	p.heading(fmt.Sprintf("At incidence %s deg", plain(float64(d.Grid.IncidenceDeg[j]))))
	t := &table{columns: []column{{head: "Mach"}, {head: "state"}}}
	for _, c := range alongColumns {
		t.columns = append(t.columns, column{head: c.head, drop: c.drop})
	}
	shown, every := d.alongShown()
	for _, i := range shown {
		row := &d.Rows[i*m+j]
		cells := []string{significant(float64(row.Mach)), string(row.letter())}
		for _, c := range alongColumns {
			cells = append(cells, significant(row.value(c.name)))
		}
		t.add(cells...)
		if row.Status != attachedStatus {
			t.annotate(row.Status)
		}
	}
	p.table(t)
	if every > 1 {
		p.wrap(indent, fmt.Sprintf("One Mach number in %d is shown, with the last and those of flight points; CSV and JSON have all.", every), indent)
	}
}

// CSV writes envelope.csv: one row a condition with every quantity, empty where
// it is missing.
func (d *EnvelopeDocument) CSV() []byte {
	header := []string{"mach", "incidence_deg", "state", "status", "traced"}
	for _, q := range d.Rows[0].Quantities {
		header = append(header, q.Name)
	}
	rows := [][]string{header}
	for _, row := range d.Rows {
		cells := []string{shortest(float64(row.Mach)), shortest(float64(row.IncidenceDeg)), row.State, row.Status, fmt.Sprint(row.Traced)}
		for _, q := range row.Quantities {
			cells = append(cells, shortest(float64(q.Value)))
		}
		rows = append(rows, cells)
	}
	return csvBytes(rows)
}

// BoundaryCSV writes boundary.csv: one row a point, lines told apart by number.
func (d *EnvelopeDocument) BoundaryCSV() []byte {
	rows := [][]string{{"line", "kind", "name", "mach", "incidence_deg"}}
	for i, line := range d.Boundary {
		for _, p := range line.Points {
			rows = append(rows, []string{fmt.Sprint(i + 1), line.Kind, line.Name, shortest(float64(p[0])), shortest(float64(p[1]))})
		}
	}
	return csvBytes(rows)
}
