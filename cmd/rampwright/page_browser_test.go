package main

import (
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

var picturesDir = flag.String("pictures", "", "folder for screenshots and prints of the pages a browser opens, to be looked at")

// pages writes the review pages of two starters, one with a study, and their
// comparison.
func pages(t *testing.T) map[string]string {
	t.Helper()
	files := map[string]string{}
	compared := filepath.Join(t.TempDir(), "compare.html")
	arguments := []string{"compare", "--quiet", "-o", compared}
	for _, name := range starters[:2] {
		dir := designStarter(t, name).folder(t)
		files[name] = filepath.Join(dir, pageName)
		arguments = append(arguments, dir)
	}
	if got := command(arguments...); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	files["compare"] = compared
	veyricLadder().done(t, "ladder.json")
	for _, name := range []string{"ladder.json", "ladder.svg"} {
		if err := os.WriteFile(filepath.Join(filepath.Dir(files["veyric-6"]), name), veyricLadder().files[name], 0o600); err != nil {
			t.Fatal(err)
		}
	}
	if got := command("report", filepath.Dir(files["veyric-6"]), "--quiet"); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	return files
}

// In a browser a page is quiet, asks for nothing, is readable in light and dark,
// fits a phone, and prints to A4.
func TestPagesInABrowser(t *testing.T) {
	b := openBrowser(t)
	for name, file := range pages(t) {
		t.Run(name, func(t *testing.T) {
			p := b.open(t, file)
			for _, scheme := range []string{"light", "dark"} {
				p.show("screen", scheme, 1400, 0)
				p.keep(name + "-1400-" + scheme + ".png")
				found := p.look()
				found.judge(t, name+" in "+scheme)
				t.Logf("%s: %d lines of text, least contrast %.2f", scheme, found.Texts, found.Least)
				if wide := p.tooWide(); len(wide) > 0 {
					t.Errorf("too wide for 1400 px: %.400q", wide)
				}
				p.show("screen", scheme, 390, 0)
				p.keep(name + "-390-" + scheme + ".png")
				if wide := p.tooWide(); len(wide) > 0 {
					t.Errorf("too wide for 390 px: %.400q", wide)
				}
			}
			p.print(name)
			p.quiet(t, file)
		})
	}
}

// quiet fails a test for complaints and for requests beyond the file itself.
func (p *tab) quiet(t *testing.T, file string) {
	t.Helper()
	if len(p.console) > 0 {
		t.Errorf("the console says %q", p.console)
	}
	if len(p.requests) != 1 || !strings.HasSuffix(p.requests[0], filepath.Base(file)) {
		t.Errorf("asked for %q", p.requests)
	}
}

// leastTexts is a number of lines every page exceeds: fewer were not looked at.
const leastTexts = 150

// judge fails a test for what should not be seen on a page.
func (f *probed) judge(t *testing.T, where string) {
	t.Helper()
	if f.Texts < leastTexts {
		t.Errorf("%s: %d lines of text only", where, f.Texts)
	}
	for what, words := range map[string][]string{
		"contrast below 4.5": f.Faint, "covered": f.Covered, "on each other": f.Clashes, "outside the drawing": f.Outside,
	} {
		if len(words) > 0 {
			t.Errorf("%s: %s, %d times: %.200q", where, what, len(words), words)
		}
	}
}

// The printable width and height of A4 within the margins of the page, in CSS
// pixels (96 an inch).
const (
	printWidth  = (210 - 2*13) * 960 / 254
	printHeight = (297 - 2*13) * 960 / 254
)

// print checks that nothing is cut off on paper, and that there is a print.
func (p *tab) print(name string) {
	p.t.Helper()
	p.show("print", "light", printWidth, printHeight)
	if wide := p.tooWide(); len(wide) > 0 {
		p.t.Errorf("too wide for A4: %.400q", wide)
	}
	sheets, err := chromedp.Run(p.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize(), chromedp.PDFPrintBackground()))
	if err != nil {
		p.t.Fatal(err)
	}
	if !strings.HasPrefix(string(sheets), "%PDF-") {
		p.t.Error("the print is no PDF")
	}
	p.write(name+".pdf", sheets)
}

// keep saves a screenshot where one is asked for.
func (p *tab) keep(name string) {
	p.t.Helper()
	if *picturesDir == "" {
		return
	}
	picture, err := chromedp.Run(p.ctx, chromedp.FullScreenshot(100))
	if err != nil {
		p.t.Fatal(err)
	}
	p.write(name, picture)
}

func (p *tab) write(name string, data []byte) {
	p.t.Helper()
	if *picturesDir == "" {
		return
	}
	if err := os.WriteFile(filepath.Join(*picturesDir, name), data, 0o666); err != nil {
		p.t.Fatal(err)
	}
}

// The probe is worth what it catches.
func TestProbeCatches(t *testing.T) {
	b := openBrowser(t)
	for name, c := range map[string]struct {
		body string
		of   func(*probed, []string) bool
	}{
		"faint text":    {`<p style="color:#888">pale</p>`, func(f *probed, _ []string) bool { return len(f.Faint) == 1 }},
		"faint label":   {`<svg width="90" height="40"><rect width="90" height="40" fill="#005f9e"/><text x="5" y="20" fill="#1c2530">deep</text></svg>`, func(f *probed, _ []string) bool { return len(f.Faint) == 1 }},
		"covered label": {`<svg width="90" height="40"><text x="5" y="20">under</text><rect width="90" height="40" fill="#fff"/></svg>`, func(f *probed, _ []string) bool { return len(f.Covered) == 1 }},
		"clash":         {`<svg width="90" height="40"><text x="5" y="20">one</text><text x="9" y="22">two</text></svg>`, func(f *probed, _ []string) bool { return len(f.Clashes) == 1 }},
		"outside":       {`<svg width="90" height="40"><text x="70" y="20">beyond</text></svg>`, func(f *probed, _ []string) bool { return len(f.Outside) == 1 }},
		"too wide":      {`<div style="width:500px">wide</div>`, func(_ *probed, wide []string) bool { return len(wide) == 1 }},
		"spilling":      {`<table style="width:50px;table-layout:fixed"><tr><td>unbreakable_words_of_a_name</td></tr></table>`, func(_ *probed, wide []string) bool { return len(wide) == 1 }},
		"sound": {`<p>good</p><svg width="90" height="40"><text x="5" y="20">label</text></svg>`, func(f *probed, wide []string) bool {
			return f.Texts == 2 && f.Least > 20 && len(f.Faint)+len(f.Covered)+len(f.Clashes)+len(f.Outside) == 0 && len(wide) == 0
		}},
	} {
		file := filepath.Join(t.TempDir(), "page.html")
		page := `<!DOCTYPE html><html lang="en"><head><title>x</title></head><body style="margin:0;background:#fff">` + c.body + `</body></html>`
		if err := os.WriteFile(file, []byte(page), 0o600); err != nil {
			t.Fatal(err)
		}
		p := b.open(t, file)
		p.show("screen", "light", 390, 600)
		if found, wide := p.look(), p.tooWide(); !c.of(found, wide) {
			t.Errorf("%s: %+v, %q", name, found, wide)
		}
	}
	file := filepath.Join(t.TempDir(), "page.html")
	page := `<!DOCTYPE html><html lang="en"><head><title>x</title></head><body><img src="other.png" alt=""><script>console.error('x')</script></body></html>`
	if err := os.WriteFile(file, []byte(page), 0o600); err != nil {
		t.Fatal(err)
	}
	if p := b.open(t, file); len(p.requests) != 2 || len(p.console) < 1 {
		t.Errorf("asked for %q, the console says %q", p.requests, p.console)
	}
}

// Pages are valid HTML by the Nu checker, whose jar the environment names.
func TestPagesAreValidHTML(t *testing.T) {
	jar := os.Getenv("VNU_JAR")
	if jar == "" {
		t.Skip("no page is validated: VNU_JAR names no vnu.jar (npm package vnu-jar)")
	}
	arguments := []string{"-jar", jar, "--errors-only"}
	for _, file := range pages(t) {
		arguments = append(arguments, file)
	}
	if complaints, err := exec.Command("java", arguments...).CombinedOutput(); err != nil || len(complaints) > 0 {
		t.Errorf("%v\n%s", err, complaints)
	}
	broken := filepath.Join(t.TempDir(), "broken.html")
	if err := os.WriteFile(broken, []byte(`<!DOCTYPE html><title>x</title><p><table><p>`), 0o600); err != nil {
		t.Fatal(err)
	}
	if exec.Command("java", "-jar", jar, "--errors-only", broken).Run() == nil {
		t.Error("the checker passes a broken page")
	}
}
