package main

import (
	"bytes"
	"context"
	"fmt"
	"image/png"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/css"
	"github.com/chromedp/cdproto/dom"
	"github.com/chromedp/chromedp"

	"rampwright/cmd/rampwright/internal/chart"
)

// withoutOurFonts keeps from a browser the fonts of this machine that have the
// widths of the drawings' face, so that only the embedded one can give them.
func withoutOurFonts(t *testing.T) chromedp.ExecAllocatorOption {
	t.Helper()
	dir := t.TempDir()
	var reject strings.Builder
	for _, family := range []string{chart.Family, "Liberation Sans", "Arimo", "Arial", "Helvetica", "Nimbus Sans"} {
		fmt.Fprintf(&reject, `<pattern><patelt name="family"><string>%s</string></patelt></pattern>`, family)
	}
	file := filepath.Join(dir, "fonts.conf")
	text := `<?xml version="1.0"?><!DOCTYPE fontconfig SYSTEM "fonts.dtd"><fontconfig><dir>/usr/share/fonts</dir><cachedir>` + dir +
		`</cachedir><selectfont><rejectfont>` + reject.String() + `</rejectfont></selectfont></fontconfig>`
	if err := os.WriteFile(file, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return chromedp.Env("FONTCONFIG_FILE=" + file)
}

// lettering is how a browser sets the words of a page and of its drawings.
type lettering struct {
	Faces []string `json:"faces"` // weight and status
	Texts []struct {
		Words    string  `json:"words"`
		Measured float64 `json:"measured"` // by the chart
		Natural  float64 `json:"natural"`  // in the browser, left to itself
	} `json:"texts"`
	others []string // words set in another face
}

// lettering asks for the faces of a page and measures every text of a drawing
// without the length that binds it.
func (p *tab) lettering() *lettering {
	p.t.Helper()
	found := new(lettering)
	p.ask(`JSON.stringify({
faces: [...document.fonts].map(f => f.family.replace(/"/g, '') + ' ' + f.weight + ' ' + f.status),
texts: [...document.querySelectorAll('text')].map(e => {
  const measured = e.getAttribute('textLength');
  e.removeAttribute('textLength');
  const natural = e.getComputedTextLength();
  e.setAttribute('textLength', measured);
  return {words: e.textContent, measured: +measured, natural};
})})`, found)
	p.do(chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
		return found.look(ctx, target)
	}))
	return found
}

// look asks of words of every kind, cells of the first rows for all, which face they
// are set in.
func (l *lettering) look(ctx context.Context, target *chromedp.Target) error {
	if _, err := cdp.Call(ctx, target, dom.Enable, dom.EnableParams{}); err != nil {
		return err
	}
	if _, err := cdp.Call(ctx, target, css.Enable, cdp.Empty{}); err != nil {
		return err
	}
	document, err := cdp.Call(ctx, target, dom.GetDocument, dom.GetDocumentParams{})
	if err != nil {
		return err
	}
	const worded = "text, h1, h2, p, li, dt, dd, tr:nth-child(1) > *, caption, figcaption"
	nodes, err := cdp.Call(ctx, target, dom.QuerySelectorAll, dom.QuerySelectorAllParams{NodeID: document.Root.NodeID, Selector: worded})
	if err != nil {
		return err
	}
	for _, node := range nodes.NodeIDs {
		used, err := cdp.Call(ctx, target, css.GetPlatformFontsForNode, css.GetPlatformFontsForNodeParams{NodeID: node})
		if err != nil {
			return err
		}
		for _, f := range used.Fonts {
			if !f.IsCustomFont || f.FamilyName != chart.Family {
				l.others = append(l.others, fmt.Sprintf("%s, %g letters", f.FamilyName, f.GlyphCount))
			}
		}
	}
	return nil
}

// widthTolerance is how far the width of a text in the browser may be from the one
// measured, as a share: of a label of 200 drawing units, the unit kept free around it.
const widthTolerance = 0.005

// judge fails a test where words are not set as they were measured.
func (l *lettering) judge(t *testing.T, faces ...string) {
	t.Helper()
	if !slices.Equal(l.Faces, faces) {
		t.Errorf("faces %q, want %q", l.Faces, faces)
	}
	if len(l.Texts) == 0 {
		t.Error("no drawing has words")
	}
	if len(l.others) > 0 {
		t.Errorf("set in other faces, %d times: %.300q", len(l.others), l.others)
	}
	if off, words := l.worst(); !(off <= widthTolerance) {
		t.Errorf("%q is off its width by %.2g", words, off)
	}
}

// worst is the text whose width differs most from the one measured, as a share.
func (l *lettering) worst() (off float64, words string) {
	for _, text := range l.Texts {
		if miss := math.Abs(text.Natural/text.Measured - 1); !(miss <= off) {
			off, words = miss, text.Words
		}
	}
	return off, words
}

// On a machine without fonts of these widths the words of a page, its print and a
// drawing are set in the embedded face, as wide as measured, and nothing is asked
// for.
func TestFacesInABrowser(t *testing.T) {
	b := openBrowser(t, withoutOurFonts(t))
	regular, bold := chart.Family+" 400 loaded", chart.Family+" 700 loaded"
	files := pages(t)
	for name, file := range files {
		t.Run(name, func(t *testing.T) {
			p := b.open(t, file)
			p.show("screen", "light", 1400, 0)
			found := p.lettering()
			found.judge(t, regular, bold)
			off, words := found.worst()
			t.Logf("%d texts of drawings, widths within %.2g (%q)", len(found.Texts), off, words)
			p.quiet(t, file)
		})
	}
	page := files[starters[0]]
	for _, f := range goldenFiles(t) {
		if filepath.Ext(f.name) != ".svg" {
			continue
		}
		t.Run(f.name, func(t *testing.T) {
			file := filepath.Join(t.TempDir(), f.name)
			if err := os.WriteFile(file, f.data, 0o600); err != nil {
				t.Fatal(err)
			}
			p := b.open(t, file)
			p.lettering().judge(t, regular)
			p.quiet(t, file)
		})
	}
	t.Run("image", func(t *testing.T) { asImage(t, b, filepath.Join(filepath.Dir(page), "inlet.svg")) })
	t.Run("print", func(t *testing.T) { inPrint(t, b, page) })
	t.Run("without", func(t *testing.T) { faceless(t, b, page) })
}

// asImage compares a drawing shown as the image of a page with the same one in a
// page that has the faces, and with an image that has none.
func asImage(t *testing.T, b *browser, file string) {
	t.Helper()
	drawing, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	bare := filepath.Join(t.TempDir(), "bare.svg")
	if err := os.WriteFile(bare, chart.Bare(drawing), 0o600); err != nil {
		t.Fatal(err)
	}
	const size = `<style>svg,img{display:block;width:1000px;height:600px}</style>`
	inside := painted(t, b, size+`<style>`+chart.FaceStyle()+`</style>`+string(chart.Bare(drawing)))
	image := size + `<img alt="" src="%s">`
	with, without := differing(t, inside, painted(t, b, fmt.Sprintf(image, file))), differing(t, inside, painted(t, b, fmt.Sprintf(image, bare)))
	t.Logf("of a page's drawing an image differs in %d points, without the face in %d", with, without)
	if 100*with > without || without < 500 {
		t.Errorf("as an image %d points differ, without the face %d", with, without)
	}
}

// painted is a picture of a page with a body.
func painted(t *testing.T, b *browser, body string) []byte {
	t.Helper()
	file := filepath.Join(t.TempDir(), "page.html")
	if err := os.WriteFile(file, []byte(`<!DOCTYPE html><html lang="en"><head><meta charset="utf-8"><title>x</title></head><body style="margin:0">`+body), 0o600); err != nil {
		t.Fatal(err)
	}
	p := b.open(t, file)
	p.show("screen", "light", 1000, 600)
	picture, err := chromedp.Run(p.ctx, chromedp.FullScreenshot(100))
	if err != nil {
		t.Fatal(err)
	}
	return picture
}

// differing counts the points of two pictures of one size that differ.
func differing(t *testing.T, a, b []byte) int {
	t.Helper()
	one, err := png.Decode(bytes.NewReader(a))
	if err != nil {
		t.Fatal(err)
	}
	other, err := png.Decode(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	if one.Bounds() != other.Bounds() {
		t.Fatalf("pictures of %v and %v", one.Bounds(), other.Bounds())
	}
	n := 0
	for y := range one.Bounds().Dy() {
		for x := range one.Bounds().Dx() {
			if one.At(x, y) != other.At(x, y) {
				n++
			}
		}
	}
	return n
}

// faceless shows that the measure is worth what it catches: a page without its faces
// is not set as measured.
func faceless(t *testing.T, b *browser, page string) {
	t.Helper()
	data, err := os.ReadFile(page)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "bare.html")
	if err := os.WriteFile(file, []byte(strings.Replace(string(data), chart.FaceStyle(), "", 1)), 0o600); err != nil {
		t.Fatal(err)
	}
	found := b.open(t, file).lettering()
	if off, _ := found.worst(); len(found.Faces) != 0 || len(found.others) == 0 || off < 10*widthTolerance {
		t.Errorf("faces %q, %d words in others, widths within %.2g", found.Faces, len(found.others), off)
	}
}

// inPrint looks for the faces in a printed page.
func inPrint(t *testing.T, b *browser, page string) {
	t.Helper()
	tool, err := exec.LookPath("pdffonts")
	if err != nil {
		t.Skip("no print is looked into: this machine has no pdffonts (Debian package poppler-utils)")
	}
	sheets, err := chromedp.Run(b.open(t, page).ctx, chromedp.PrintToPDF())
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "page.pdf")
	if err := os.WriteFile(file, sheets, 0o600); err != nil {
		t.Fatal(err)
	}
	listed, err := exec.Command(tool, file).CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, listed)
	}
	rows := strings.Split(strings.TrimSpace(string(listed)), "\n")[2:] // below the head
	for _, row := range rows {
		if !strings.Contains(row, strings.ReplaceAll(chart.Family, " ", "")) {
			t.Errorf("the print uses %s", row)
		}
	}
	if len(rows) == 0 {
		t.Error("the print has no font")
	}
}
