package main

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// The page of every starter can be written again from its folder, byte for byte,
// is small and reads as XML.
func TestReportComesFromTheFolderAlone(t *testing.T) {
	for _, name := range starters {
		d := designStarter(t, name)
		page := d.files[pageName]
		if len(page) == 0 || len(page) > 3<<20 {
			t.Errorf("%s: the page has %d bytes", name, len(page))
		}
		if err := readsAsXML(page); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		for _, want := range []string{"Not drawn", "NaN"} {
			if bytes.Contains(page, []byte(want)) {
				t.Errorf("%s: the page holds %q", name, want)
			}
		}
		dir := d.folder(t)
		if err := os.Remove(filepath.Join(dir, pageName)); err != nil {
			t.Fatal(err)
		}
		if got := command("report", dir); got.code != exitDone || len(got.out) > 0 || !strings.Contains(got.messages, pageName) {
			t.Fatalf("%s: %+v", name, got)
		}
		again, err := os.ReadFile(filepath.Join(dir, pageName))
		if err != nil || !bytes.Equal(again, page) {
			t.Errorf("%s: the page written again differs (%v)", name, err)
		}
	}
	// Two flight points and more have curves off design.
	if !bytes.Contains(designStarter(t, "ondrel-3").files[pageName], []byte(`<section id="off-design">`)) {
		t.Error("ondrel-3 has no curves off design")
	}
}

func readsAsXML(page []byte) error {
	decoder := xml.NewDecoder(bytes.NewReader(page))
	for {
		if _, err := decoder.Token(); err == io.EOF {
			return nil
		} else if err != nil {
			return err
		}
	}
}

func TestReportOfNoResult(t *testing.T) {
	empty, unfinished := t.TempDir(), t.TempDir()
	if err := os.WriteFile(filepath.Join(unfinished, "rampwright-folder.json"), []byte(`{"program":"rampwright","format":1}`), 0o600); err != nil {
		t.Fatal(err)
	}
	damaged := designStarter(t, "veyric-6").folder(t)
	if err := os.WriteFile(filepath.Join(damaged, "result.json"), []byte("{"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		args []string
		code int
		want string
	}{
		{[]string{"report", empty}, exitUsage, "no finished design there"},
		{[]string{"compare", damaged + "-no", empty}, exitUsage, "-no is no result folder of a design"},
		{[]string{"report", unfinished}, exitUsage, "no finished design there"},
		{[]string{"report", damaged}, exitError, "damaged: result.json"},
		{[]string{"report"}, exitUsage, "expected 1 argument"},
		{[]string{"compare", damaged}, exitUsage, "expected 2 to 50 result folders, got 1"},
		{[]string{"compare", damaged, damaged}, exitError, "damaged"},
	} {
		if got := command(c.args...); got.code != c.code || !strings.Contains(got.messages, c.want) {
			t.Errorf("%q: code %d, %q", c.args, got.code, got.messages)
		}
	}
}

// A page shows the studies of its folder and of folders named beside it.
func TestReportWithStudies(t *testing.T) {
	dir, ladder, empty := designStarter(t, "veyric-6").folder(t), t.TempDir(), t.TempDir()
	veyricLadder().done(t, "ladder.json")
	for _, name := range []string{"ladder.json", "ladder.svg"} {
		if err := os.WriteFile(filepath.Join(ladder, name), veyricLadder().files[name], 0o600); err != nil {
			t.Fatal(err)
		}
	}
	fits := command("fits", starterBrief("veyric-6"), "-o", dir, "--counts", "20,40", "--replicates", "2", "--test-points", "64", "--quiet")
	if fits.code != exitDone {
		t.Fatalf("%+v", fits)
	}
	page := filepath.Join(t.TempDir(), "page.html")
	if got := command("report", dir, "--with", ladder, "-o", page, "--quiet"); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	data, err := os.ReadFile(page)
	if err != nil || readsAsXML(data) != nil {
		t.Fatal(err, readsAsXML(data))
	}
	at := 0
	for _, want := range []string{`<section id="ladder">`, "recovery against ramps", `<section id="fits">`, "Learning curves: ", `<section id="progress">`} {
		next := bytes.Index(data, []byte(want))
		if next < at {
			t.Errorf("%s is out of order, or missing", want)
		}
		at = next
	}
	if bytes.Contains(data, []byte("Run for another brief")) || bytes.Contains(data, []byte("Not drawn")) {
		t.Error("the studies are those of this brief, and their pictures drawings")
	}
	for _, c := range []struct{ with, want string }{{empty, "holds no study"}, {dir, "one more fits.json"}} {
		if got := command("report", dir, "--with", c.with); got.code != exitUsage || !strings.Contains(got.messages, c.want) {
			t.Errorf("--with %s: %+v", c.with, got)
		}
	}
}

// A flow of the design itself is shown without a word; one of another brief is named.
func TestReportWithTheFlowOfAnotherBrief(t *testing.T) {
	dir, other, folder := designStarter(t, "veyric-6").folder(t), designStarter(t, "ondrel-3").folder(t), t.TempDir()
	for _, c := range []struct{ brief, of, want string }{
		{"veyric-6", dir, ""},
		{"ondrel-3", other, "flow.json: Run for another brief than the design of this page: ONDREL-3"},
	} {
		waves := filepath.Join(folder, c.brief)
		if got := command("flow", starterBrief(c.brief), "--of", c.of, "--waves", waves); got.code != exitDone {
			t.Fatalf("%+v", got)
		}
		got := command("report", dir, "--with", waves)
		notices, _, _ := strings.Cut(got.messages, "review page: ")
		if got.code != exitDone || !strings.HasPrefix(notices, c.want) || (notices == "") != (c.want == "") {
			t.Errorf("%s: %+v", c.brief, got)
		}
	}
}

// Results stand side by side as text, JSON and page.
func TestCompareStarters(t *testing.T) {
	var args []string
	for _, name := range starters {
		args = append(args, designStarter(t, name).folder(t))
	}
	page := filepath.Join(t.TempDir(), "compare.html")
	got := command(append([]string{"compare", "--json", "-o", page}, args...)...)
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var document struct {
		Format  int
		Results []struct {
			Folder, Status string
			Aim            struct{ Exact float64 }
		}
	}
	decode(t, got.out, &document)
	if document.Format != 1 || len(document.Results) != len(starters) {
		t.Fatalf("%+v", document)
	}
	for i, name := range starters {
		var result struct {
			Best struct{ Aim struct{ Exact float64 } }
		}
		decode(t, designStarter(t, name).files["result.json"], &result)
		if r := document.Results[i]; r.Aim.Exact != result.Best.Aim.Exact || r.Status != "verified" || r.Folder != filepath.ToSlash(args[i]) {
			t.Errorf("%s: %+v", name, r)
		}
	}
	data, err := os.ReadFile(page)
	if err != nil || readsAsXML(data) != nil || bytes.Contains(data, []byte("Not drawn")) {
		t.Errorf("the page is not whole: %v, %v", err, readsAsXML(data))
	}
	text := command(append([]string{"compare", "--quiet"}, args...)...)
	if text.code != exitDone || !bytes.Contains(text.out, []byte("Searched values")) || text.messages != "" {
		t.Errorf("%+v", text)
	}
}

// The schema is printed as it is generated, and nothing else.
func TestSchemaCommand(t *testing.T) {
	got := command("schema")
	if got.code != exitDone || got.messages != "" || !json.Valid(got.out) {
		t.Errorf("code %d, %d bytes, %q", got.code, len(got.out), got.messages)
	}
	if got := command("schema", "extra"); got.code != exitUsage {
		t.Errorf("an argument too many ends with %d", got.code)
	}
}

// What the page adds to a result does not depend on the workers either.
func TestReviewDoesNotDependOnJobs(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "result")
	if got := command("design", starterBrief("veyric-6"), "-o", dir, "--jobs", "1", "--quiet"); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	got, err := os.ReadFile(filepath.Join(dir, "review.json"))
	if err != nil || !bytes.Equal(got, designStarter(t, "veyric-6").files["review.json"]) {
		t.Errorf("review.json of one worker differs from that of two (%v)", err)
	}
}
