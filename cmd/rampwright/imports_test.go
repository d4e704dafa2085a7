package main

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/fstest"
)

const module = "rampwright"

// room is one line of the import policy. A name that ends in "/..." stands for
// everything below it, but not for itself.
type room struct {
	may   []string // packages of this module its non-test files may import
	third []string // module paths outside the standard library
	bare  bool     // library tree: no flag, file, clock, print, environment
}

const (
	gonumPath       = "gonum.org/v1/gonum"
	plotPath        = "gonum.org/v1/plot"
	svgoPath        = "github.com/ajstarks/svgo"
	yamlPath        = "gopkg.in/yaml.v3"
	expressionPath  = "github.com/expr-lang/expr"
	cobraPath       = "github.com/spf13/cobra"
	progressBarPath = "github.com/schollz/progressbar/v3"
	eaoptPath       = "github.com/MaxHalford/eaopt"
)

// rooms is the whole policy: a package that is not a key, or an import its line
// does not name, fails. Packages that do not exist yet are no fault.
var rooms = map[string]room{
	"problems":            library(),
	"problems/gas":        library(),
	"problems/contour":    library(),
	"problems/atmosphere": library("problems/gas"),
	"problems/shock":      library("problems/gas"),
	"problems/viscous":    library("problems/gas", "problems/shock"),
	"problems/ramp":       library("problems/gas", "problems/shock", "problems/contour"),
	"problems/wave":       library("problems/gas", "problems/shock", "problems/contour"),
	"problems/inlet": library("problems", "problems/gas", "problems/contour", "problems/atmosphere",
		"problems/shock", "problems/ramp", "problems/wave", "problems/viscous"),
	"problems/envelope": library("problems", "problems/atmosphere", "problems/contour", "problems/gas", "problems/inlet", "problems/wave"),
	"problems/external": {may: []string{"problems"}, third: []string{gonumPath}}, // runs the user's own program
	"problems/analytic": library("problems"),

	"surrogate":          library(),
	"surrogate/doe":      library(),
	"surrogate/pce":      library("surrogate", "surrogate/doe", "optimize/local"),
	"surrogate/gpr":      using(library("surrogate", "surrogate/doe", "optimize/local"), "golang.org/x/sys"), // asks which vectors the processor has
	"surrogate/crossval": library("surrogate", "surrogate/..."),

	"constraints": library("problems"),

	"optimize":        with(search(), "optimize/global"), // the loops drive both searches
	"optimize/local":  library(),
	"optimize/global": search(eaoptPath),
	"optimize/front":  search(),
	"optimize/robust": search(),

	"cmd/rampwright": {
		may:   []string{"problems", "problems/...", "surrogate", "surrogate/...", "constraints", "optimize", "optimize/...", "cmd/rampwright/..."},
		third: []string{cobraPath, progressBarPath, "golang.org/x/term"},
	},
	"cmd/rampwright/internal/brief": {
		may:   []string{"problems", "problems/...", "surrogate", "surrogate/...", "constraints", "optimize", "optimize/..."},
		third: []string{yamlPath, expressionPath},
	},
	"cmd/rampwright/internal/chart":    {third: []string{plotPath, svgoPath}},
	"cmd/rampwright/internal/report":   results("cmd/rampwright/internal/chart", "problems/envelope"),
	"cmd/rampwright/internal/handoff":  results(),
	"cmd/rampwright/internal/runstore": results(),
}

func library(may ...string) room {
	return room{may: may, third: []string{gonumPath}, bare: true}
}

func search(third ...string) room {
	return using(library("problems", "constraints", "surrogate", "surrogate/...", "optimize/local"), third...)
}

func with(r room, more ...string) room {
	r.may = append(r.may, more...)
	return r
}

func using(r room, third ...string) room {
	r.third = append(r.third, third...)
	return r
}

func results(more ...string) room {
	return room{may: append([]string{"problems", "problems/contour", "problems/wave", "problems/inlet", "constraints", "optimize"}, more...)}
}

// outsideWorld lists the standard packages that reach flags, files, clocks, the
// network, the terminal or the environment; a library tree imports none of
// them, nor anything below them.
var outsideWorld = []string{"flag", "io/ioutil", "log", "net", "os", "path/filepath", "plugin", "syscall", "testing", "time"}

func TestImportArrows(t *testing.T) {
	root := os.DirFS("../..")
	files, err := parseModule(root)
	if err != nil {
		t.Fatal(err)
	}
	if len(files) == 0 {
		t.Fatal("no Go file found: the test looks in the wrong place")
	}
	for _, breach := range breaches(files) {
		t.Error(breach)
	}
}

// The policy is worth what it catches: each case is one module with one fault.
func TestImportArrowsCatch(t *testing.T) {
	cases := map[string]struct {
		files map[string]string
		want  string // part of the only breach; empty when there must be none
	}{
		"allowed arrow":        {one("problems/shock/a.go", `import "rampwright/problems/gas"`), ""},
		"tests are free":       {one("problems/gas/a_test.go", `import "rampwright/optimize"; import "pgregory.net/rapid"`), ""},
		"testdata is free":     {one("testdata/a.go", `import "rampwright/optimize"`), ""},
		"deep third party":     {one("optimize/local/a.go", `import "gonum.org/v1/gonum/lapack/lapack64"`), ""},
		"wildcard":             {one("surrogate/crossval/a.go", `import "rampwright/surrogate/gpr"`), ""},
		"standard library":     {one("problems/gas/a.go", `import ("math"; "fmt"); var _ = fmt.Sprintf("%g", math.Pi)`), ""},
		"seeded source":        {one("surrogate/doe/a.go", `import "math/rand/v2"; var _ = rand.New(rand.NewPCG(1, 2))`), ""},
		"seeded argument":      {one("optimize/global/a.go", `import "math/rand"; func F(*rand.Rand) {}`), ""},
		"external runs":        {one("problems/external/a.go", `import "os/exec"; var _ = exec.Command`), ""},
		"physics sees search":  {one("problems/ramp/a.go", `import "rampwright/optimize/local"`), "may not import rampwright/optimize/local"},
		"search sees physics":  {one("optimize/a.go", `import "rampwright/problems/inlet"`), "may not import rampwright/problems/inlet"},
		"chart sees ours":      {one("cmd/rampwright/internal/chart/a.go", `import "rampwright/problems"`), "may not import rampwright/problems"},
		"unknown room":         {one("helpers/a.go", ``), "helpers has no line"},
		"unknown third party":  {one("problems/gas/a.go", `import "example.org/thing"`), "may not import example.org/thing"},
		"rapid outside tests":  {one("problems/gas/a.go", `import "pgregory.net/rapid"`), "may not import pgregory.net/rapid"},
		"yaml outside brief":   {one("cmd/rampwright/a.go", `import "gopkg.in/yaml.v3"`), "may not import gopkg.in/yaml.v3"},
		"cobra outside main":   {one("cmd/rampwright/internal/brief/a.go", `import "github.com/spf13/cobra"`), "may not import github.com/spf13/cobra"},
		"plot outside chart":   {one("cmd/rampwright/internal/report/a.go", `import "gonum.org/v1/plot/font"`), "may not import gonum.org/v1/plot/font"},
		"eaopt outside global": {one("optimize/a.go", `import "github.com/MaxHalford/eaopt"`), "may not import github.com/MaxHalford/eaopt"},
		"eaopt in two files": {map[string]string{
			"optimize/global/a.go": `import "github.com/MaxHalford/eaopt"`,
			"optimize/global/b.go": `import "github.com/MaxHalford/eaopt"`,
		}, "2 files import github.com/MaxHalford/eaopt"},
		"prefix is no module": {one("problems/gas/a.go", `import "gonum.org/v1/gonumerous"`), "may not import gonum.org/v1/gonumerous"},
		"file access":         {one("problems/gas/a.go", `import "os"`), "library tree may not import os"},
		"clock":               {one("optimize/local/a.go", `import "time"`), "library tree may not import time"},
		"subprocess":          {one("surrogate/a.go", `import "os/exec"`), "library tree may not import os/exec"},
		"print":               {one("constraints/a.go", `import f "fmt"; func init() { f.Printf("x") }`), "prints with fmt.Printf"},
		"print as a value":    {one("constraints/a.go", `import "fmt"; var show = fmt.Println`), "prints with fmt.Println"},
		"built-in print":      {one("constraints/a.go", `func init() { println("x") }`), "prints with println"},
		"shared source":       {one("surrogate/doe/a.go", `import "math/rand/v2"; var _ = rand.Float64()`), "draws from the shared source with rand.Float64"},
		"dot import":          {one("problems/gas/a.go", `import . "math"`), "dot import of math"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			tree := fstest.MapFS{}
			for file, body := range c.files {
				tree[file] = &fstest.MapFile{Data: []byte("package p\n" + body)}
			}
			files, err := parseModule(tree)
			if err != nil {
				t.Fatal(err)
			}
			found := breaches(files)
			switch {
			case c.want == "" && len(found) > 0:
				t.Errorf("unwanted: %q", found)
			case c.want != "" && (len(found) != 1 || !strings.Contains(found[0], c.want)):
				t.Errorf("got %q, want one breach with %q", found, c.want)
			}
		})
	}
}

func one(file, body string) map[string]string { return map[string]string{file: body} }

// source is one parsed non-test file of the module.
type source struct {
	name string // slash path from the module root
	tree *ast.File
}

func parseModule(root fs.FS) ([]source, error) {
	var files []source
	err := fs.WalkDir(root, ".", func(name string, entry fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		base := path.Base(name)
		if entry.IsDir() {
			if name != "." && (base == "testdata" || base == "vendor" || base[0] == '.' || base[0] == '_') {
				return fs.SkipDir
			}
			return nil
		}
		if path.Ext(name) != ".go" || strings.HasSuffix(name, "_test.go") {
			return nil
		}
		text, err := fs.ReadFile(root, name)
		if err != nil {
			return err
		}
		tree, err := parser.ParseFile(token.NewFileSet(), name, text, parser.SkipObjectResolution)
		if err != nil {
			return err
		}
		files = append(files, source{name, tree})
		return nil
	})
	return files, err
}

func breaches(files []source) []string {
	var found []string
	engines := 0
	for _, file := range files {
		here := path.Dir(file.name)
		policy, known := rooms[here]
		if !known {
			found = append(found, fmt.Sprintf("%s: package %s has no line in the import policy", file.name, here))
			continue
		}
		for _, imported := range imports(file.tree) {
			if imported == eaoptPath {
				engines++
			}
			if why := policy.refuses(imported); why != "" {
				found = append(found, fmt.Sprintf("%s: %s", file.name, why))
			}
		}
		if policy.bare {
			for _, why := range sideEffects(file.tree) {
				found = append(found, fmt.Sprintf("%s: %s", file.name, why))
			}
		}
	}
	if engines > 1 {
		found = append(found, fmt.Sprintf("%d files import %s, want one", engines, eaoptPath))
	}
	return found
}

func imports(tree *ast.File) []string {
	var paths []string
	for _, spec := range tree.Imports {
		paths = append(paths, importPath(spec))
	}
	return paths
}

func importPath(spec *ast.ImportSpec) string {
	unquoted, err := strconv.Unquote(spec.Path.Value)
	if err != nil { // the parser accepted it
		panic(err)
	}
	return unquoted
}

// refuses returns why a file of the room may not import that path, or "".
func (r room) refuses(imported string) string {
	first, _, _ := strings.Cut(imported, "/")
	switch {
	case first == module:
		ours := strings.TrimPrefix(imported, module+"/")
		if slices.ContainsFunc(r.may, func(pattern string) bool { return covers(pattern, ours) }) {
			return ""
		}
	case strings.Contains(first, "."):
		if slices.ContainsFunc(r.third, func(module string) bool { return within(module, imported) }) {
			return ""
		}
	default: // standard library
		if r.bare && slices.ContainsFunc(outsideWorld, func(top string) bool { return within(top, imported) }) {
			return "a library tree may not import " + imported
		}
		return ""
	}
	return "may not import " + imported
}

func covers(pattern, name string) bool {
	if parent, wild := strings.CutSuffix(pattern, "/..."); wild {
		return strings.HasPrefix(name, parent+"/")
	}
	return name == pattern
}

func within(parent, name string) bool {
	return name == parent || strings.HasPrefix(name, parent+"/")
}

// sideEffects reports uses of printing functions, draws from the process-wide random
// source, and dot imports, which would hide both.
func sideEffects(tree *ast.File) []string {
	var found []string
	local := map[string]string{} // name in this file -> import path
	for _, spec := range tree.Imports {
		imported := importPath(spec)
		name := path.Base(strings.TrimSuffix(imported, "/v2"))
		if spec.Name != nil {
			name = spec.Name.Name
		}
		if name == "." {
			found = append(found, "dot import of "+imported)
		}
		local[name] = imported
	}
	ast.Inspect(tree, func(node ast.Node) bool {
		switch n := node.(type) {
		case *ast.CallExpr:
			if name, ok := n.Fun.(*ast.Ident); ok && (name.Name == "print" || name.Name == "println") {
				found = append(found, "prints with "+name.Name)
			}
		case *ast.SelectorExpr:
			if base, ok := n.X.(*ast.Ident); ok {
				if why := forbiddenName(local[base.Name], n.Sel.Name); why != "" {
					found = append(found, why)
				}
			}
		}
		return true
	})
	return found
}

// randomTypes are the names of math/rand and math/rand/v2 that carry a seed of
// their own; every other one draws from the process-wide source.
var randomTypes = []string{"Rand", "Source", "Source64", "PCG", "ChaCha8", "Zipf"}

func forbiddenName(imported, name string) string {
	switch imported {
	case "fmt":
		if strings.HasPrefix(name, "Print") || strings.HasPrefix(name, "Scan") {
			return "prints with fmt." + name
		}
	case "math/rand", "math/rand/v2":
		if !strings.HasPrefix(name, "New") && !slices.Contains(randomTypes, name) {
			return "draws from the shared source with rand." + name
		}
	}
	return ""
}
