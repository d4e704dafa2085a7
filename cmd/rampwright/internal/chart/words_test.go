package chart

import (
	"bytes"
	"errors"
	"go/ast"
	"go/parser"
	"go/token"
	"html"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode"
)

const moduleRoot = "../../../.."

// Nothing the program writes by itself is outside the faces: no text of a recorded
// page or drawing, and no string in its source.
func TestFacesHaveEveryLetter(t *testing.T) {
	has := repertoire()
	check := func(where, text string) {
		for _, r := range text {
			if unicode.IsPrint(r) && !slices.Contains(has, r) {
				t.Errorf("%s: the faces have no %q", where, r)
			}
		}
	}
	words := 0
	for file, data := range files(t, filepath.Join(moduleRoot, "testdata/golden"), ".svg", ".html") {
		for _, text := range betweenTags.FindAllStringSubmatch(data, -1) {
			words++
			check(file, html.UnescapeString(text[1]))
		}
	}
	if words < 1000 {
		t.Errorf("only %d texts recorded", words)
	}
	literals := 0
	for file, data := range files(t, moduleRoot, ".go") {
		if strings.HasSuffix(file, "_test.go") {
			continue
		}
		tree, err := parser.ParseFile(token.NewFileSet(), file, data, parser.SkipObjectResolution)
		if err != nil {
			t.Fatal(err)
		}
		ast.Inspect(tree, func(node ast.Node) bool {
			if literal, ok := node.(*ast.BasicLit); ok && literal.Kind == token.STRING {
				text, err := strconv.Unquote(literal.Value)
				if err != nil {
					t.Fatal(err)
				}
				literals++
				check(file, text)
			}
			return true
		})
	}
	if literals < 1000 {
		t.Errorf("only %d strings found", literals)
	}
}

var betweenTags = regexp.MustCompile(`>([^<]+)<`)

// files reads those of a tree whose names end so.
func files(t *testing.T, root string, endings ...string) map[string]string {
	t.Helper()
	found := map[string]string{}
	err := filepath.WalkDir(root, func(name string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || !slices.Contains(endings, filepath.Ext(name)) {
			return err
		}
		data, err := os.ReadFile(name)
		found[name] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return found
}

// A drawing alone is the one of a page with the face of its text, and nothing else.
func TestAloneCarriesItsFace(t *testing.T) {
	write := func(w io.Writer) error { return WriteSideView(w, simple()) }
	alone, err := Alone(write)
	if err != nil {
		t.Fatal(err)
	}
	bare := draw(t, simple())
	if !bytes.Equal(Bare(alone), bare) || !bytes.Equal(Bare(bare), bare) {
		t.Error("the drawing of a page does not come back")
	}
	if bytes.Contains(bare, []byte("@font-face")) || bytes.Count(alone, []byte("@font-face")) != 1 || len(alone)-len(bare) > 25_000 {
		t.Errorf("%d bytes alone, %d in a page", len(alone), len(bare))
	}
	if strings.Count(FaceStyle(), "@font-face") != 2 || !strings.Contains(FaceStyle(), strings.TrimSpace(fontFace(regularFace, 400))) {
		t.Error("the style of a page has not both faces")
	}
	read(t, alone) // well formed
	refused := errors.New("refused")
	if got, err := Alone(func(io.Writer) error { return refused }); got != nil || err != refused {
		t.Errorf("%d bytes, %v", len(got), err)
	}
}

// Only the style that Alone adds is taken off.
func TestBareKeepsOtherDrawings(t *testing.T) {
	for _, text := range []string{"", "</svg>\n", "<svg></svg>\n", "<svg><style>x</style><g/></svg>\n", "</style></svg>\n", "<style></svg>\n"} {
		if got := string(Bare([]byte(text))); got != text {
			t.Errorf("%q became %q", text, got)
		}
	}
	if got := string(Bare([]byte("<svg><g/><style>anything</style></svg>\n"))); got != "<svg><g/></svg>\n" {
		t.Errorf("it became %q", got)
	}
}
