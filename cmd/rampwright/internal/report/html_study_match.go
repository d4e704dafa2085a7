package report

import (
	"math"
	"strings"
)

// StudyNotices says which studies of a folder are of another brief or another
// geometry than its design. It returns *DamagedFolder for files that cannot be read.
func StudyNotices(f Folder) ([]string, error) {
	r, err := readResult(f)
	if err != nil {
		return nil, err
	}
	var list []string
	for _, s := range r.studies {
		for _, sentence := range r.strange(s) {
			list = append(list, s.Name+".json: "+inText(sentence))
		}
	}
	return list, nil
}

// inText is what cells say one after the other.
func inText(cells []cell) string {
	var text strings.Builder
	for _, c := range cells {
		text.WriteString(c.Text)
	}
	return text.String()
}

// strange says in what a study is not one of the design of the page.
func (r *result) strange(s *studyPage) [][]cell {
	var list [][]cell
	switch hash := s.text(s.BriefHash, "brief_hash"); {
	case s.BriefHash == r.BriefHash:
	case s.Title != "" && s.Title != r.Title:
		list = append(list, []cell{words("Run for another brief than the design of this page: "), s.text(s.Title, "title"), words(", hash "), hash, words(".")})
	case s.Title != "":
		list = append(list, []cell{words("Run for another brief than the design of this page, of the same title: hash "), hash, words(".")})
	default:
		list = append(list, []cell{words("Run for another brief than the design of this page: hash "), hash, words(".")})
	}
	if s.Inlet != nil && r.Inlet != nil && !sameContour(s.Inlet, r.Inlet) {
		list = append(list, []cell{words("The geometry is not that of the design of this page.")})
	}
	var differ []cell
	compare := func(name string, value Number, path ...any) {
		if designed, ok := r.Best.Variables.Get(name); ok && !sameLength(value, designed, designed) {
			between := "; "
			if differ == nil {
				between = "The searched values are not those of the design of this page: "
			}
			differ = append(differ, words("%s%s ", between, name), number(value, s.Name, path...),
				words(", of the design "), number(designed, "result", "best", "variables", name))
		}
	}
	for _, v := range s.Variables {
		compare(v.Name, v.Value, "variables", v.Name)
	}
	if s.Moved != "" {
		compare(s.Moved, s.DesignDeg, "design_deg")
	}
	if differ != nil {
		list = append(list, append(differ, words(".")))
	}
	return list
}

// sameTrifle is how far, as a fraction of a scale, two numbers of one design may be
// apart: beyond the digits of the page, and far below what can be built.
const sameTrifle = 1e-5

func sameLength(a, b, scale Number) bool {
	return math.Abs(float64(a-b)) <= sameTrifle*math.Abs(float64(scale))
}

// sameContour reports whether corners, shoulder and lip stand at the same places, or
// neither contour closes.
func sameContour(a, b *Shape) bool {
	of, and := a.places(), b.places()
	if len(of) != len(and) {
		return false
	}
	for i := range of {
		for k := range of[i].at {
			if !sameLength(of[i].at[k], and[i].at[k], b.HeightM) {
				return false
			}
		}
	}
	return true
}

// shapePlace is a named point of a contour, and where it stands in a document.
type shapePlace struct {
	name string
	at   [2]Number
	path []any
}

// places are the corners in the order of the flow, the shoulder and the lip; none
// where the contour does not close.
func (s *Shape) places() []shapePlace {
	if s.Lip == nil || s.Shoulder == nil {
		return nil
	}
	var list []shapePlace
	for i, corner := range s.Corners {
		name := "next corner"
		if i == 0 {
			name = "leading edge"
		}
		list = append(list, shapePlace{name, corner, []any{"inlet", "corners_m", i}})
	}
	return append(list, shapePlace{"shoulder", *s.Shoulder, []any{"inlet", "shoulder_m"}}, shapePlace{"lip", *s.Lip, []any{"inlet", "lip_m"}})
}

// geometryTable shows the contour of a study, beside that of the design where they
// differ in places of the same name.
func (r *result) geometryTable(s *studyPage) *htmlTable {
	t := &htmlTable{Caption: heads("Geometry"), Head: columnHeads(1, "point", "x, m", "y, m")}
	if s.Inlet == nil {
		return t
	}
	var designed []shapePlace
	if r.Inlet != nil && !sameContour(s.Inlet, r.Inlet) {
		designed = r.Inlet.places()
	}
	places := s.Inlet.places()
	beside := len(designed) == len(places)
	if beside {
		t.Head = append(t.Head, columnHeads(0, "x of the design, m", "y of the design, m")...)
	}
	for i, p := range places {
		row := []cell{words("%s", p.name), number(p.at[0], s.Name, append(p.path, 0)...), number(p.at[1], s.Name, append(p.path, 1)...)}
		if beside {
			d := &designed[i]
			row = append(row, number(d.at[0], "result", append(d.path, 0)...), number(d.at[1], "result", append(d.path, 1)...))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
