package report

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

const someRun = `{"format":1,"program":"rampwright 0","started":"2026-01-02T03:04:05Z","seconds":1.25,"platform":"linux/amd64","jobs":2,"model_calls":{"evaluate":70,"verify":3},"answered_from_ledger":{"evaluate":0,"verify":0}}`

const someView = `<svg width="10" height="10" viewBox="0 0 10 10" role="img" aria-label="side view"><title>side view</title></svg>`

// folderOf is what a design writes for its page.
func folderOf(t testing.TB, s Study) Folder {
	t.Helper()
	review, err := NewReview(context.Background(), head, s)
	if err != nil {
		t.Fatal(err)
	}
	f := Folder{Result: NewDesign(head, s).JSON(), Run: []byte(someRun), Review: review.JSON()}
	if s.Problem != nil {
		f.SideView = []byte(someView)
	}
	return f
}

func pageOf(t testing.TB, f Folder) []byte {
	t.Helper()
	page, err := Page(f)
	if err != nil {
		t.Fatal(err)
	}
	return page
}

// Every number on the page is the one of the result, and every drawing is there.
func TestPageShowsTheResult(t *testing.T) {
	f := folderOf(t, study(t))
	page := pageOf(t, f)
	if numbers := checkPage(t, page, documents(f)); numbers < 250 {
		t.Errorf("%d numbers only", numbers)
	}
	if !bytes.Equal(page, pageOf(t, f)) {
		t.Error("two pages of one folder differ")
	}
	if len(page) > 3<<20 {
		t.Errorf("the page has %d bytes", len(page))
	}
	for _, want := range []string{"Not drawn", "NaN", "Inf", "%!"} {
		if bytes.Contains(page, []byte(want)) {
			t.Errorf("the page holds %q", want)
		}
	}
	for _, id := range []string{"cautions", "design", "side-view", "margins", "stations", "quantities", "agreement", "maps", "progress", "assumptions", "provenance"} {
		if !bytes.Contains(page, []byte(`<section id="`+id+`">`)) {
			t.Errorf("there is no section %s", id)
		}
	}
}

// A page of an early end, of a conflict and of no inlet hold to the same.
func TestPageOfEveryEnding(t *testing.T) {
	for _, status := range []optimize.Status{optimize.NotVerified, optimize.Infeasible, optimize.Stopped, optimize.Interrupted} {
		s := study(t)
		result := *s.Result
		result.Status = status
		s.Result = &result
		f := folderOf(t, s)
		page := pageOf(t, f)
		checkPage(t, page, documents(f))
		if !bytes.Contains(page, []byte(`class="stamp `+status.String()+`"`)) {
			t.Errorf("%v is not stamped", status)
		}
	}
	f := folderOf(t, study(t))
	f.Review, f.SideView = nil, nil
	page := pageOf(t, f)
	checkPage(t, page, map[string][]byte{"result": f.Result, "run": f.Run})
	if !bytes.Contains(page, []byte("The folder holds no review.json")) {
		t.Error("what is missing is not said")
	}
}

// The page of an infeasible result names the conflict and what would do.
func TestPageOfAConflict(t *testing.T) {
	s := study(t)
	result := *s.Result
	result.Status = optimize.Infeasible
	s.Result = &result
	side := optimize.Side{Limit: asked("length_m", problems.Geometry, math.Inf(-1), 0.4), Upper: true}
	s.Explained = &optimize.Explanation{
		Conflicts:   []optimize.Conflict{{Members: []optimize.Side{side}}},
		Relaxations: []optimize.Relaxation{{Side: side, Bound: 0.55, X: s.Result.Best.X}, {Side: side, Bound: math.NaN()}},
	}
	f := folderOf(t, s)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	for _, want := range []string{`<section id="conflicts">`, ">0.40000<", ">0.55000<", "not enough alone"} {
		if !bytes.Contains(page, []byte(want)) {
			t.Errorf("the page does not hold %s", want)
		}
	}
}

// What a brief says stays text on the page.
func TestPageEscapesWhatItQuotes(t *testing.T) {
	f := folderOf(t, study(t))
	hostile := `</title><script>alert(1)</script>&"'`
	raw, err := json.Marshal(hostile)
	if err != nil {
		t.Fatal(err)
	}
	f.Result = bytes.Replace(f.Result, []byte(`"title": "test article"`), []byte(`"title": `+string(raw)), 1)
	page := pageOf(t, f)
	checkPage(t, page, documents(f))
	if !bytes.Contains(page, []byte("&lt;script&gt;")) {
		t.Error("the title is not on the page")
	}
}

func TestDamagedFolder(t *testing.T) {
	good := folderOf(t, study(t))
	for name, damage := range map[string]func(f *Folder){
		"result.json":        func(f *Folder) { f.Result = f.Result[:len(f.Result)/2] },
		"run.json":           func(f *Folder) { f.Run = nil },
		"review.json":        func(f *Folder) { f.Review = []byte(`{"maps": 3}`) },
		"another brief":      func(f *Folder) { f.Review = []byte(`{"brief_hash": "other"}`) },
		"format 7":           func(f *Folder) { f.Result = bytes.Replace(f.Result, []byte(`"format": 1`), []byte(`"format": 7`), 1) },
		"holds no design":    func(f *Folder) { f.Result = []byte(`{"format": 1, "brief_hash": "abc"}`) },
		"differ in length":   func(f *Folder) { f.Review = []byte(`{"brief_hash": "abc", "parity": [{"exact": [1]}]}`) },
		"columns off design": func(f *Folder) { f.Review = []byte(`{"brief_hash": "abc", "off_design": {"mach": [1]}}`) },
		"is no object": func(f *Folder) {
			f.Result = bytes.Replace(f.Result, []byte(`"exact": {`), []byte(`"exact": [1], "old": {`), 1)
		},
		"cannot unmarshal": func(f *Folder) { f.Result = []byte(`{"inlet": {"corners_m": 3}}`) },
	} {
		f := good
		damage(&f)
		var damaged *DamagedFolder
		if _, err := Page(f); !errors.As(err, &damaged) || !strings.Contains(err.Error(), name) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// What a result holds comes back from its JSON unchanged.
func TestResultReadsBack(t *testing.T) {
	want := NewDesign(head, study(t)).JSON()
	var d DesignDocument
	if err := json.Unmarshal(want, &d); err != nil {
		t.Fatal(err)
	}
	if got := d.JSON(); !bytes.Equal(got, want) {
		t.Error("a result read and written again differs")
	}
}

// The comparison shows the numbers of its own document, which are those of the
// results.
func TestCompareShowsItsResults(t *testing.T) {
	f := folderOf(t, study(t))
	other := f
	other.Result = bytes.ReplaceAll(f.Result, []byte(`"highest": true`), []byte(`"highest": false`))
	d, err := NewCompare("rampwright 0", []Named{{"first", f}, {"second/one", f}, {"third", other}})
	if err != nil {
		t.Fatal(err)
	}
	page, err := d.Page()
	if err != nil {
		t.Fatal(err)
	}
	if numbers := checkPage(t, page, map[string][]byte{"compare": d.JSON()}); numbers < 40 {
		t.Errorf("%d numbers only", numbers)
	}
	var result, compared any
	if err := errors.Join(json.Unmarshal(f.Result, &result), json.Unmarshal(d.JSON(), &compared)); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{"/aim/exact", "/variables/ramp_1_angle_deg", "/limits/0/margin", "/exact/cruise/recovery"} {
		want, err := lookup(result, "/best"+path)
		got, failed := lookup(compared, "/results/1"+path)
		if err != nil || failed != nil || got != want {
			t.Errorf("%s: %v, %v (%v, %v)", path, got, want, err, failed)
		}
	}
	if d.best() != -1 || len(d.Notes) != 1 {
		t.Errorf("aims that differ: best %d, notes %q", d.best(), d.Notes)
	}
	if same, err := NewCompare("rampwright 0", []Named{{"first", f}, {"second", f}}); err != nil || same.best() != 0 || len(same.Notes) != 0 {
		t.Errorf("equal results: %v, %+v", err, same)
	}
	var damaged *DamagedFolder
	if _, err := NewCompare("rampwright 0", []Named{{"first", f}, {"second", Folder{}}}); !errors.As(err, &damaged) || !strings.Contains(err.Error(), "second: ") {
		t.Errorf("a damaged folder: %v", err)
	}
}

// Fifty results fit any terminal, all of them named.
func TestCompareTextOfMany(t *testing.T) {
	f := folderOf(t, study(t))
	var folders []Named
	for i := range MostCompared {
		folders = append(folders, Named{fmt.Sprintf("design-%d", i), f})
	}
	d, err := NewCompare("rampwright 0", folders)
	if err != nil {
		t.Fatal(err)
	}
	for _, width := range []int{72, 100, 140} {
		text := d.Text(width)
		for _, line := range strings.Split(text, "\n") {
			if len(line) > width {
				t.Errorf("wider than %d: %q", width, line)
			}
		}
		for _, want := range []string{"design-49", "no. 50"} {
			if !strings.Contains(text, want) {
				t.Errorf("%s is not in the text", want)
			}
		}
	}
}

func BenchmarkPage(b *testing.B) {
	f := folderOf(b, study(b))
	for b.Loop() {
		pageOf(b, f)
	}
}
