package report

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/chart"
)

const somePicture = `<svg width="10" height="10" viewBox="0 0 10 10" role="img" aria-label="curve"><title>curve</title><defs><pattern id="hatch" width="4" height="4"></pattern></defs><rect width="4" height="4" fill="url(#hatch)"/></svg>`

// studies are one of each a page has room for: four as their commands write
// them, plain ones.
func studies(t *testing.T) []StudyFile {
	t.Helper()
	picture := func(names ...string) (list []StudyPicture) {
		for _, name := range names {
			list = append(list, StudyPicture{name, []byte(somePicture)})
		}
		return list
	}
	spread := `{"format": 1, "brief_hash": "abc", "seed": 4, "name": "no study's", "cautions": ["two thirds of 100 draws put a shock inside"], "pass_probability": 0.25, "empty": [],
"quantities": [{"quantity": "recovery", "at": "cruise", "mean": 0.5, "p05": null, "of": {"a": 1}}, {"quantity": "length_m", "at": "geometry", "mean": 0.6, "p05": 0.1}],
"per_limit": [{"quantity": "length_m", "affected": true, "unheard": 3}, {"quantity": "recovery", "affected": false}], "unanswered": [], "shock_inside_the_lip": [{"at": "cruise", "share": 0.66}]}`
	envelope := `{"format": 1, "brief_hash": "another", "status": "stopped", "states": {"regular": 40, "flow ends": 3}, "boundary": [{"name": "edge", "closed": false, "points": [[4.25, 1], [3.5, -2], [5.75, 2]]}, ` +
		strings.Repeat(`{"name": "a", "quantity": "b", "closed": true},`, mostRows+1) + `{"name": "last", "points": [[1, 2]]}]}`
	schedule := `{"format": 1, "brief_hash": "abc", "rows": [{"mach": 4.5, "angle_deg": 3.25, "limits_kept": true, "limits_missed": []}]}`
	problem, flow := flowOf(t, swallowed(), 8.08, 7.22, 8.44, 8)
	return []StudyFile{
		{"flow", NewFlow(head, problem, flow).JSON(), nil},
		{"ladder", NewLadder(head, ladderFixture(t)).JSON(), picture("ladder")},
		{"trade", NewTrade(head, tradeFixture(t)).JSON(), nil},
		{"fits", NewFits(head, fitsFixture(false)).JSON(), nil},
		{"spread", []byte(spread), picture("spread")},
		{"envelope", []byte(envelope), picture("map", "waves-1")},
		{"schedule", []byte(schedule), nil},
	}
}

// Every study has its section, whose numbers are those of its document.
func TestPageShowsStudies(t *testing.T) {
	f := folderOf(t, study(t))
	f.Studies = studies(t)
	page := pageOf(t, f)
	with := checkPage(t, page, documents(f))
	f.Studies = nil
	if without := checkPage(t, pageOf(t, f), documents(f)); with < without+80 {
		t.Errorf("%d numbers, %d without the studies", with, without)
	}
	at := 0
	for _, name := range StudyNames() {
		next := bytes.Index(page, []byte(`<section id="`+name+`">`))
		if next < at {
			t.Errorf("section %s is out of order, or missing", name)
		}
		at = next
	}
	for _, want := range []string{
		">Flight points<", "Static pressure along the walls at ", ">cowl inside<", ">sum, ", " falls inside the lip: ", `aria-label="Pressure along the walls: over"`,
		"Run for another brief than the design of this page: hash", "The geometry is not that of the design of this page.", ">Geometry<", ">x of the design, m<", "The run was cut short", "two thirds of 100 draws", ">Quantities<", ">States<", ">Shock inside the lip<", "envelope.json has all",
		`id="ladder-hatch"`, `url(#ladder-hatch)`, `id="spread-hatch"`, `id="map-hatch"`, `id="waves-1-hatch"`, ">probability that every limit holds<", ">Boundaries<", ">Position of the movable part<", ">How often each limit holds<", ">limits kept<", "knee of the curve", "Number of ramps ", ">40<", ">4.5000<", ">3.5000<", ">5.7500<", ">yes<", ">no<",
	} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page does not hold %q", want)
		}
	}
	for _, not := range []string{"Not drawn", ">Unanswered<", "unheard", ">last<", ">pass_<wbr />probability", ">Rows<", ">closed<"} {
		if bytes.Contains(page, []byte(not)) {
			t.Errorf("the page holds %q", not)
		}
	}
}

// A study of another brief or geometry says so; one of the design itself does not.
func TestStudiesOfAnotherDesign(t *testing.T) {
	f := folderOf(t, study(t))
	var design DesignDocument
	if err := json.Unmarshal(f.Result, &design); err != nil {
		t.Fatal(err)
	}
	flow := func(title, hash string, move float64) StudyFile {
		shape := *design.Inlet
		lip := *shape.Lip
		lip[0] += Number(move)
		shape.Lip = &lip
		return StudyFile{"flow", compact(FlowDocument{Format: format, Title: title, BriefHash: hash, Inlet: shape}), nil}
	}
	first := design.Best.Variables[0]
	mapped := func(value Number) StudyFile {
		return StudyFile{"envelope", compact(EnvelopeDocument{Format: format, Title: design.Title, BriefHash: design.BriefHash, Variables: Object[Number]{{first.Name, value}}}), nil}
	}
	moved := func(value Number) StudyFile {
		return StudyFile{"schedule", compact(ScheduleDocument{Format: format, Title: design.Title, BriefHash: design.BriefHash, Moved: first.Name, DesignDeg: value}), nil}
	}
	for _, c := range []struct {
		study StudyFile
		want  []string // parts of the notices
	}{
		{flow(design.Title, design.BriefHash, 0), nil},
		{flow(design.Title, design.BriefHash, 1e-5), []string{"flow.json: The geometry is not that"}},
		{flow("Another", "another", 0), []string{"flow.json: Run for another brief than the design of this page: Another, hash another."}},
		{flow(design.Title, "another", 1e-5), []string{"of the same title: hash another.", "The geometry is not that"}},
		{mapped(first.Value), nil},
		{moved(first.Value), nil},
		{moved(first.Value + 1), []string{"schedule.json: The searched values are not those of the design of this page: " + first.Name + " "}},
		{mapped(first.Value + 0.5), []string{"envelope.json: The searched values are not those of the design of this page: " + first.Name + " "}},
	} {
		f.Studies = []StudyFile{c.study}
		got, err := StudyNotices(f)
		if err != nil || len(got) != len(c.want) {
			t.Errorf("notices %q, %v; want %q", got, err, c.want)
			continue
		}
		for i, want := range c.want {
			if !strings.Contains(got[i], want) {
				t.Errorf("notice %q, want %q", got[i], want)
			}
		}
		checkPage(t, pageOf(t, f), documents(f))
	}
}

func TestStudiesThatCannotBeRead(t *testing.T) {
	good := folderOf(t, study(t))
	for want, s := range map[string]StudyFile{
		"ladder.json: ":                       {"ladder", []byte("{"), nil},
		"trade.json has format 7":             {"trade", []byte(`{"format": 7}`), nil},
		"a page has no room for other":        {"other", []byte(`{"format": 1}`), nil},
		"spread.json: json: cannot unmarshal": {"spread", []byte(`[1]`), nil},
		"there is more than one ladder.json":  {"ladder", []byte(`{"format": 1}`), nil},
	} {
		f := good
		f.Studies = []StudyFile{{"ladder", []byte(`{"format": 1}`), nil}, s}
		if want == "ladder.json: " {
			f.Studies = f.Studies[1:]
		}
		var damaged *DamagedFolder
		if _, err := Page(f); !errors.As(err, &damaged) || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", want, err)
		}
	}
}

// A picture from a file is drawn only where it can do nothing else.
func TestForeignPictures(t *testing.T) {
	for _, c := range []string{
		`<svg><script>alert(1)</script></svg>`, `<svg onload="x()"/>`, `<svg><a href="http://example.org"/></svg>`,
		`<svg><rect fill="url(http://example.org/x)"/></svg>`, `<svg><image/></svg>`, `<svg><foreignObject/></svg>`,
		`<svg><rect style="background:url(x)"/></svg>`, `<svg><style>x</style><g/></svg>`, `<!DOCTYPE svg><svg/>`, `<svg/><svg/>`, `<p/>`, `<svg>`, ``, `plain`,
	} {
		if got := string(foreign("ladder", []byte(c))); !strings.Contains(got, "Not drawn: ladder.svg: ") || strings.Contains(got, "<svg") {
			t.Errorf("%s became %s", c, got)
		}
	}
	if got := string(foreign("ladder", []byte(somePicture))); got != strings.ReplaceAll(somePicture, "hatch", "ladder-hatch") {
		t.Error(got)
	}
	alone, err := chart.Alone(func(w io.Writer) error { _, err := io.WriteString(w, somePicture+"\n"); return err })
	if got := string(foreign("ladder", alone)); err != nil || got != strings.ReplaceAll(somePicture, "hatch", "ladder-hatch")+"\n" {
		t.Errorf("with its face it became %.400s, %v", got, err)
	}
}
