package report

import (
	"strings"
	"unicode/utf8"
)

const (
	narrowest = 80  // a narrower terminal gets lines for this one
	prose     = 100 // the longest line of running text
	indent    = "  "
	gap       = "  " // between columns
)

// page collects the lines of a text.
type page struct {
	strings.Builder
	width int
}

func newPage(width int) *page { return &page{width: max(width, narrowest)} }

// heading starts a section.
func (p *page) heading(text string) {
	p.WriteByte('\n')
	p.wrap("", text, "")
	p.WriteString(strings.Repeat("-", min(p.width, utf8.RuneCountInString(text))) + "\n")
}

// wrap writes text in lines of the page's width: first leads the first line,
// next every other.
func (p *page) wrap(first, text, next string) {
	line, lead := first, first
	for _, word := range strings.Fields(text) {
		switch room := min(p.width, prose); {
		case line == lead:
			line += word
		case utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) <= room:
			line += " " + word
		default:
			p.WriteString(strings.TrimRight(line, " ") + "\n")
			line, lead = next+word, next
		}
	}
	p.WriteString(strings.TrimRight(line, " ") + "\n")
}

// table is a block of aligned columns. The first column is text, the others are
// numbers, set to the right, unless marked left.
type table struct {
	columns []column
	rows    [][]string
	notes   []string // after the row of the same index, where it fits; may be short
}

type column struct {
	head string // may have several lines
	left bool
	// drop orders the columns a narrow page leaves out, the highest first; 0 is
	// always shown.
	drop int
}

// add appends a row.
func (t *table) add(cells ...string) { t.rows = append(t.rows, cells) }

// section starts a group of rows.
func (t *table) section(name string) {
	row := make([]string, len(t.columns))
	row[0] = "[" + name + "]"
	t.add(row...)
}

// annotate puts a note to the last row.
func (t *table) annotate(note string) {
	for len(t.notes) < len(t.rows)-1 {
		t.notes = append(t.notes, "")
	}
	t.notes = append(t.notes, note)
}

// headLines returns the lines of the head; its last line stands on the columns.
func (t *table) headLines() [][]string {
	height := 0
	for _, c := range t.columns {
		if c.head != "" {
			height = max(height, 1+strings.Count(c.head, "\n"))
		}
	}
	lines := make([][]string, height)
	for i := range lines {
		lines[i] = make([]string, len(t.columns))
	}
	for j, c := range t.columns {
		if c.head == "" {
			continue
		}
		parts := strings.Split(c.head, "\n")
		for i, part := range parts {
			lines[height-len(parts)+i][j] = part
		}
	}
	return lines
}

// widths returns the width of each column, and of the whole without indent.
func (t *table) widths() (widths []int, whole int) {
	widths = make([]int, len(t.columns))
	for j, c := range t.columns {
		for _, part := range strings.Split(c.head, "\n") {
			widths[j] = max(widths[j], utf8.RuneCountInString(part))
		}
		for _, row := range t.rows {
			widths[j] = max(widths[j], utf8.RuneCountInString(row[j]))
		}
		whole += widths[j]
	}
	return widths, whole + len(gap)*(len(t.columns)-1)
}

// fits reports whether the table fits the page as it is.
func (t *table) fits(p *page) bool {
	_, whole := t.widths()
	return len(indent)+whole <= p.width
}

// narrow leaves out columns until the table fits, or none may go.
func (t *table) narrow(p *page) {
	for !t.fits(p) {
		last := 0
		for j, c := range t.columns {
			if c.drop > t.columns[last].drop {
				last = j
			}
		}
		if t.columns[last].drop == 0 {
			return
		}
		t.columns = without(t.columns, last)
		for i := range t.rows {
			t.rows[i] = without(t.rows[i], last)
		}
	}
}

func without[T any](list []T, i int) []T {
	return append(append([]T(nil), list[:i]...), list[i+1:]...)
}

// table writes a table; a note that does not fit beside its row goes below it.
func (p *page) table(t *table) {
	t.narrow(p)
	widths, whole := t.widths()
	for _, heads := range t.headLines() {
		p.row(t, widths, heads)
	}
	for i, row := range t.rows {
		note := ""
		if i < len(t.notes) {
			note = t.notes[i]
		}
		if note != "" && len(indent)+whole+len(gap)+utf8.RuneCountInString(note) <= p.width {
			p.row(t, widths, row, note)
			continue
		}
		p.row(t, widths, row)
		if note != "" {
			p.wrap(indent+indent, note, indent+indent)
		}
	}
}

func (p *page) row(t *table, widths []int, cells []string, note ...string) {
	parts := make([]string, len(cells), len(cells)+1)
	for j, cell := range cells {
		pad := strings.Repeat(" ", widths[j]-utf8.RuneCountInString(cell))
		if j == 0 || t.columns[j].left {
			parts[j] = cell + pad
		} else {
			parts[j] = pad + cell
		}
	}
	p.WriteString(strings.TrimRight(indent+strings.Join(append(parts, note...), gap), " ") + "\n")
}

// grouped is a list of keys in the order they came, each with its items.
type grouped struct {
	keys  []string
	items map[string][]string
}

func (g *grouped) add(key, item string) {
	if g.items == nil {
		g.items = map[string][]string{}
	}
	if g.items[key] == nil {
		g.keys = append(g.keys, key)
	}
	g.items[key] = append(g.items[key], item)
}
