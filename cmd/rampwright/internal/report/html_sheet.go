package report

import (
	"fmt"
	"html/template"
	"math"
	"strings"
)

// sheet is a page as plain data: chapters of blocks.
type sheet struct {
	Title    []cell
	Status   *cell
	Stamp    string // the status as one word, for the style
	Answer   []cell
	Facts    []fact // the title block
	Sections []chapter
}

// fact is one entry of the title block.
type fact struct {
	Name  string
	Value cell
}

type chapter struct {
	ID     string
	Head   string
	Blocks []block
}

// block is exactly one of its parts.
type block struct {
	Paragraph []cell
	Warning   []cell
	List      [][]cell
	Table     *htmlTable
	Figures   []htmlFigure
	Small     bool // figures stand side by side
}

// htmlTable has one heading a column; the first cell of a row names it.
type htmlTable struct {
	Caption []cell
	Head    []cell
	Rows    [][]cell
}

type htmlFigure struct {
	Picture template.HTML
	Caption []cell
}

// cell is a piece of text. One taken from a document says from where, as
// "file:/path/of/keys", and a number carries its exact value.
type cell struct {
	Text   string
	From   string
	Value  string
	Share  bool          // a share, shown in per cent
	Number bool          // it stands in a column of numbers
	Bar    template.HTML // in place of text
	Parts  []cell        // in place of text
	Place  bool          // the text counts the rows of its table
}

// words is text of the page's own.
func words(format string, args ...any) cell { return cell{Text: fmt.Sprintf(format, args...)} }

// quoted is text taken from a document.
func quoted(text, from string, path ...any) cell { return cell{Text: text, From: place(from, path)} }

// statusCell is a status of a document as people read it.
func statusCell(status, from string, path ...any) cell {
	return quoted(statusWords(status), from, path...)
}

// statusWords sets the words of a status apart.
func statusWords(status string) string { return strings.ReplaceAll(status, "_", " ") }

// number is a number taken from a document, with the digits of text.
func number(v Number, from string, path ...any) cell {
	return cell{Text: significant(float64(v)), From: place(from, path), Value: shortest(float64(v)), Number: true}
}

// shareCell is a share taken from a document, shown in per cent without the sign.
func shareCell(v Number, from string, path ...any) cell {
	return cell{Text: sharePercent(v), From: place(from, path), Value: shortest(float64(v)), Share: true, Number: true}
}

// countCell is a whole number taken from a document.
func countCell(v int64, from string, path ...any) cell {
	text := fmt.Sprint(v)
	return cell{Text: text, From: place(from, path), Value: text, Number: true}
}

// place joins a file and the keys of a value in it, as a JSON pointer (RFC 6901).
func place(file string, path []any) string {
	var b strings.Builder
	b.WriteString(file + ":")
	for _, key := range path {
		b.WriteString("/" + strings.NewReplacer("~", "~0", "/", "~1").Replace(fmt.Sprint(key)))
	}
	return b.String()
}

// heads are plain column heads.
func heads(names ...string) []cell {
	list := make([]cell, len(names))
	for i, name := range names {
		list[i] = words("%s", name)
	}
	return list
}

// columnHeads are heads of a table whose first left columns hold words and the others
// numbers.
func columnHeads(left int, names ...string) []cell {
	list := heads(names...)
	for i := left; i < len(list); i++ {
		list[i].Number = true
	}
	return list
}

func (s *chapter) say(cells ...cell) { s.Blocks = append(s.Blocks, block{Paragraph: cells}) }

// warn adds a sentence that a reader must not miss.
func (s *chapter) warn(cells ...cell) { s.Blocks = append(s.Blocks, block{Warning: cells}) }

func (s *chapter) list(items [][]cell) {
	if len(items) > 0 {
		s.Blocks = append(s.Blocks, block{List: items})
	}
}

func (s *chapter) table(t *htmlTable) {
	if len(t.Rows) > 0 {
		s.Blocks = append(s.Blocks, block{Table: t})
	}
}

// figures adds pictures; one that cannot be drawn says why in its place.
func (s *chapter) figures(small bool, figures ...htmlFigure) {
	if len(figures) > 0 {
		s.Blocks = append(s.Blocks, block{Figures: figures, Small: small})
	}
}

// share is the margin of a limit over its scale, as the search scales it: the
// larger bound, at least 1.
func (l *Limit) share() float64 {
	scale := 1.0
	for _, bound := range []Number{l.Low, l.High} {
		if finite(float64(bound)) {
			scale = math.Max(scale, math.Abs(float64(bound)))
		}
	}
	return float64(l.Margin) / scale
}
