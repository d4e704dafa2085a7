package report

import (
	"encoding/json"
	"fmt"
	"slices"
)

// StudyFile is the result of a further study of the same brief: the document a
// command writes as NAME.json, and its pictures as far as there are any.
type StudyFile struct {
	Name     string
	Document []byte
	Pictures []StudyPicture
}

// StudyPicture is a picture with the name of its file, less .svg.
type StudyPicture struct {
	Name string
	Data []byte
}

// studyPart is how a study is shown.
type studyPart struct {
	name     string
	head     string
	pictures []string // names of its files; nil for the one of the study's name
	tables   func(*chapter, *studyPage) error
}

// studyParts are the studies a page has room for, in its order.
var studyParts = []studyPart{
	{"flow", "Flow of the given geometry", nil, flowTables},
	{"envelope", "Envelope", []string{"map", "capture", "drag", "waves-1", "waves-2", "waves-3", "waves-4"}, envelopeTables},
	{"schedule", "Schedule", nil, scheduleTables},
	{"spread", "Tolerances", nil, plainTables(
		plainList{of: everything},
		plainList{"per_limit", []string{"quantity", "at", "low", "high", "nominal_margin", "affected", "probability", "probability_error", "surrogate_probability"}},
		plainList{of: "shock_inside_the_lip"}, plainList{of: "unanswered"},
		plainList{"quantities", []string{"quantity", "at", "route", "nominal", "mean", "standard_deviation", "p05", "p50", "p95"}},
	)},
	{"ladder", "Ramp ladder", nil, ladderTables},
	{"trade", "Trade curve", nil, tradeTables},
	{"fits", "Learning curves", nil, fitsTables},
}

// StudyNames lists the studies a page has room for.
func StudyNames() []string {
	names := make([]string, len(studyParts))
	for i, p := range studyParts {
		names[i] = p.name
	}
	return names
}

// StudyPictures lists the pictures a study may have, by the names of their files
// less .svg.
func StudyPictures(study string) []string {
	for _, p := range studyParts {
		if p.name == study && p.pictures != nil {
			return p.pictures
		}
	}
	return []string{study}
}

// studyPage is a document read for the page: what all of them have, and the
// rest by name.
type studyPage struct {
	StudyFile `json:"-"`

	Format    int               `json:"format"`
	Title     string            `json:"title"`
	BriefHash string            `json:"brief_hash"`
	Inlet     *Shape            `json:"inlet"`      // of a flow
	Variables Object[Number]    `json:"variables"`  // held by a map, or as drawn
	Moved     string            `json:"moved"`      // the variable that a schedule moves
	DesignDeg Number            `json:"design_deg"` // its value as designed
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
	for _, sentence := range r.strange(s) {
		c.warn(sentence...)
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
	for _, p := range s.Pictures {
		c.figures(false, htmlFigure{Picture: foreign(p.Name, p.Data)})
	}
	c.table(r.geometryTable(s))
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
