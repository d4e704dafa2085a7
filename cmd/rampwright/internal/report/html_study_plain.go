package report

import (
	"bytes"
	"encoding/json"
	"slices"
	"strings"
)

// plainList names what of a document becomes a table: a list of objects, with the
// columns named, or every plain value of its first row; an object, with a row for
// each of its numbers; or everything, the numbers of the document itself.
type plainList struct {
	of      string
	columns []string
}

const everything = ""

// mostRows bounds a table of a study on the page; its file has them all.
const mostRows = 60

// plainTables shows the parts of a document named, as far as it has them.
func plainTables(lists ...plainList) func(*chapter, *studyPage) error {
	return func(c *chapter, s *studyPage) error {
		for _, l := range lists {
			raw, ok := s.fields.Get(l.of)
			var rows []Object[json.RawMessage]
			var numbers Object[json.RawMessage]
			switch {
			case l.of == everything:
				c.table(s.numbers(s.fields))
			case !ok:
			case json.Unmarshal(raw, &rows) == nil:
				c.table(s.rows(l, rows))
				c.cutOff(s, len(rows))
			case json.Unmarshal(raw, &numbers) == nil:
				c.table(s.numbers(numbers, l.of))
			}
		}
		return nil
	}
}

// rows tables a list of objects.
func (s *studyPage) rows(l plainList, rows []Object[json.RawMessage]) *htmlTable {
	t := &htmlTable{Caption: heads(captionOf(l.of))}
	if len(rows) == 0 {
		return t
	}
	var keys []string
	for _, column := range rows[0] {
		value, plain := s.plain(column.Value)
		if plain && (l.columns == nil || slices.Contains(l.columns, column.Name)) {
			keys = append(keys, column.Name)
			t.Head = append(t.Head, cell{Text: inWords(column.Name), Number: value.Number})
		}
	}
	if len(t.Head) == 0 {
		return t
	}
	for i, row := range rows[:min(len(rows), mostRows)] {
		var cells []cell
		for _, key := range keys {
			raw, _ := row.Get(key)
			value, _ := s.plain(raw, l.of, i, key)
			if value.Value != "" && wholeColumn(rows, key) {
				value.Text = value.Value
			}
			cells = append(cells, value)
		}
		t.Rows = append(t.Rows, cells)
	}
	return t
}

// wholeColumn reports whether every number of a column is written without
// decimals: a count.
func wholeColumn(rows []Object[json.RawMessage], name string) bool {
	for _, row := range rows {
		if raw, _ := row.Get(name); !whole(raw) {
			return false
		}
	}
	return true
}

func whole(number json.RawMessage) bool { return !bytes.ContainsAny(number, ".eE") }

// numbers tables the numbers of an object that stands at a place of the document.
func (s *studyPage) numbers(of Object[json.RawMessage], path ...any) *htmlTable {
	t := &htmlTable{Head: columnHeads(1, "", "")}
	if len(path) > 0 {
		t.Caption = heads(captionOf(path[0].(string)))
	}
	for _, f := range of {
		value, ok := s.plain(f.Value, append(path[:len(path):len(path)], f.Name)...)
		if ok && value.Value != "" && !slices.Contains(bookkeeping, f.Name) {
			if whole(f.Value) {
				value.Text = value.Value
			}
			t.Rows = append(t.Rows, []cell{words("%s", inWords(f.Name)), value})
		}
	}
	return t
}

// bookkeeping are numbers that say nothing of the inlet.
var bookkeeping = []string{"format", "seed"}

// plain is the cell of a value that is no list or object.
func (s *studyPage) plain(raw json.RawMessage, path ...any) (cell, bool) {
	var v any
	if json.Unmarshal(raw, &v) != nil {
		return cell{}, false
	}
	switch v := v.(type) {
	case nil:
		return cell{Text: none, Number: true}, true
	case float64:
		return number(Number(v), s.Name, path...), true
	case string:
		return s.text(v, path...), true
	case bool:
		return words("%s", yesNo(v)), true
	}
	return cell{}, false
}

func yesNo(v bool) string {
	if v {
		return "yes"
	}
	return "no"
}

// keyWords are what keys of studies stand for, with units. A probability is a
// fraction of the draws.
var keyWords = map[string]string{
	"name": "flight point", "mach": "Mach number", "incidence_deg": "incidence, deg", "pressure_kPa": "pressure, kPa",
	"temperature_K": "temperature, K", "status": "state",
	"angle_deg": "angle, deg", "limits_kept": "limits kept", "at_stop": "at hinge stop", "low_deg": "limits kept from, deg", "high_deg": "to, deg",
	"truncated_at": "tolerances truncated at, standard deviations", "pass_probability": "probability that every limit holds",
	"pass_probability_error": "its standard error", "surrogate_pass_probability": "the same by surrogates",
	"low": "at least", "high": "at most", "nominal_margin": "margin as drawn, in the unit of the quantity", "affected": "moved by a tolerance",
	"probability": "probability that it holds", "probability_error": "its standard error", "surrogate_probability": "the same by surrogates",
	"share": "fraction of draws", "error": "its standard error", "traced_share": "fraction of draws, traced",
	"nominal": "as drawn", "standard_deviation": "standard deviation",
	"p05": "fifth percentile", "p50": "median", "p95": "ninety-fifth percentile",
}

// inWords is what a key stands for; a state of the flow is in words as it is.
func inWords(key string) string {
	if text, ok := keyWords[key]; ok {
		return text
	}
	return key
}

// listWords are the captions of lists whose key says too little.
var listWords = map[string]string{
	"points": "Flight points", "rows": "Position of the movable part", "per_limit": "How often each limit holds", "unanswered": "Draws without an answer",
}

// captionOf is the key of a list as a caption.
func captionOf(key string) string {
	if text, ok := listWords[key]; ok {
		return text
	}
	text := strings.ReplaceAll(key, "_", " ")
	return strings.ToUpper(text[:1]) + text[1:]
}

// cutOff says that a table does not show every row.
func (c *chapter) cutOff(s *studyPage, rows int) {
	if rows > mostRows {
		c.say(words("The first rows; %s.json has all.", s.Name))
	}
}
