package report

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"
)

// StudyFile is the result of a further study of the same brief: the document a
// command writes as NAME.json, and its picture NAME.svg if there is one.
type StudyFile struct {
	Name     string
	Document []byte
	Picture  []byte
}

// studyPart is how a study is shown: its head, and the tables of its document. A
// study without tables of its own has one for each list of plain objects.
type studyPart struct {
	name   string
	head   string
	tables func(*chapter, *studyPage) error
}

// studyParts are the studies a page has room for, in its order.
var studyParts = []studyPart{
	{"envelope", "Envelope", plainTables},
	{"spread", "Tolerances", plainTables},
	{"ladder", "Ramp ladder", ladderTables},
	{"trade", "Trade curve", tradeTables},
	{"fits", "Learning curves", fitsTables},
}

// StudyNames lists the studies a page has room for.
func StudyNames() []string {
	names := make([]string, len(studyParts))
	for i, p := range studyParts {
		names[i] = p.name
	}
	return names
}

// studyPage is a document read for the page: what all of them have, and the rest by
// name.
type studyPage struct {
	StudyFile
	Format    int               `json:"format"`
	BriefHash string            `json:"brief_hash"`
	Status    string            `json:"status"`
	Why       string            `json:"why"`
	Advice    []string          `json:"advice"`
	Cautions  []json.RawMessage `json:"cautions"`
	fields    Object[json.RawMessage]
}

// readStudies reads the studies of a folder and says what is wrong with them.
func readStudies(files []StudyFile) (list []*studyPage, found []string) {
	for _, f := range files {
		s := &studyPage{StudyFile: f}
		err := json.Unmarshal(f.Document, s)
		if err == nil {
			err = json.Unmarshal(f.Document, &s.fields)
		}
		switch {
		case err != nil:
			found = append(found, f.Name+".json: "+err.Error())
		case s.Format != format:
			found = append(found, fmt.Sprintf("%s.json has format %d, this program reads %d", f.Name, s.Format, format))
		case slices.ContainsFunc(list, func(other *studyPage) bool { return other.Name == f.Name }):
			found = append(found, "there is more than one "+f.Name+".json")
		case !slices.Contains(StudyNames(), f.Name):
			found = append(found, "a page has no room for "+f.Name)
		default:
			list = append(list, s)
		}
	}
	return list, found
}

// studySections shows what else was run, in the order of the page.
func (r *result) studySections() []chapter {
	var list []chapter
	for _, part := range studyParts {
		for _, s := range r.studies {
			if s.Name == part.name {
				list = append(list, r.studySection(part, s))
			}
		}
	}
	return list
}

func (r *result) studySection(part studyPart, s *studyPage) chapter {
	c := chapter{ID: s.Name, Head: part.head}
	if s.BriefHash != r.BriefHash {
		c.warn(words("Run for another brief than the design above: hash "), s.text(s.BriefHash, "brief_hash"), words("."))
	}
	if s.Status == "stopped" || s.Status == "interrupted" {
		c.warn(words("The run was cut short: what follows is part of what was asked."))
	}
	for i := range s.Cautions {
		c.warn(s.caution(i)...)
	}
	if s.Why != "" {
		c.say(s.text(s.Why, "why"))
	}
	var advice [][]cell
	for i, text := range s.Advice {
		advice = append(advice, []cell{s.text(text, "advice", i)})
	}
	c.list(advice)
	if s.Picture != nil {
		c.figures(false, htmlFigure{Picture: foreign(s.Name, s.Picture)})
	}
	if err := part.tables(&c, s); err != nil {
		c.warn(words("%s.json: %v", s.Name, err))
	}
	return c
}

// text is a quotation of the study.
func (s *studyPage) text(text string, path ...any) cell { return quoted(text, s.Name, path...) }

// caution is a sentence the study raises; one of a table of designs names its
// rows, the first and the last where they are many.
func (s *studyPage) caution(i int) []cell {
	var plain string
	if json.Unmarshal(s.Cautions[i], &plain) == nil {
		return []cell{s.text(plain, "cautions", i)}
	}
	var ofRows RowCaution
	if err := json.Unmarshal(s.Cautions[i], &ofRows); err != nil {
		return []cell{words("%s.json: %v", s.Name, err)}
	}
	var list []cell
	for k, row := range ofRows.Rows {
		switch name := s.text(row, "cautions", i, "rows", k); {
		case k == 0:
			list = append(list, name)
		case len(ofRows.Rows) <= 3:
			list = append(list, words(", "), name)
		case k == len(ofRows.Rows)-1:
			list = append(list, words(" .. "), name)
		}
	}
	return append(list, words(": "), s.text(ofRows.Text, "cautions", i, "text"))
}

// mostRows bounds a table of a study on the page; its file has them all.
const mostRows = 60

// plainTables has a table for each list of objects, with a column for each plain
// value of the first.
func plainTables(c *chapter, s *studyPage) error {
	for _, f := range s.fields {
		var rows []Object[json.RawMessage]
		if f.Name == "cautions" || json.Unmarshal(f.Value, &rows) != nil || len(rows) == 0 {
			continue
		}
		t := &htmlTable{Caption: heads(inWords(f.Name))}
		for _, column := range rows[0] {
			if value, ok := s.plain(column.Value); ok {
				t.Head = append(t.Head, cell{Text: column.Name, Number: value.Number})
			}
		}
		for i, row := range rows[:min(len(rows), mostRows)] {
			var cells []cell
			for _, h := range t.Head {
				raw, _ := row.Get(h.Text)
				value, _ := s.plain(raw, f.Name, i, h.Text)
				cells = append(cells, value)
			}
			t.Rows = append(t.Rows, cells)
		}
		if len(t.Head) > 0 {
			c.table(t)
			c.cutOff(s, len(rows))
		}
	}
	return nil
}

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

// inWords is a key as a caption.
func inWords(key string) string {
	text := strings.ReplaceAll(key, "_", " ")
	return strings.ToUpper(text[:1]) + text[1:]
}

// cutOff says that a table does not show every row.
func (c *chapter) cutOff(s *studyPage, rows int) {
	if rows > mostRows {
		c.say(words("The first rows; %s.json has all.", s.Name))
	}
}
