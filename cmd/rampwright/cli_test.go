package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

const cliCases = "../../testdata/cli"

// TestCommandLine runs every script in testdata/cli/*.txtar in a folder of its
// own, which holds the files of the archive. A line of a script is one of
//
//	exits CODE ARGUMENT...     run the program; "" is an empty argument
//	stdout TEXT, stderr TEXT   the last run printed this
//	not-stdout, not-stderr TEXT
//	no-stdout, no-stderr       it printed nothing
//	stdout-is, stderr-is FILE  it printed exactly this
//	json                       it printed exactly one JSON document
//	json PATH = VALUE          with this at a dotted path; text, number or list length by .len
//	json PATH = VALUE +- T     a number within T
//	folder NAME...             the folder holds these and nothing else
//	file NAME has TEXT         so does this one
//	same NAME NAME             two files of the same bytes
//	save stdout NAME           keep what was printed
//	mkdir NAME, fill NAME BYTES
//
// A line that starts with # is a comment. Numbers in the cases are converged
// values of at most six digits.
func TestCommandLine(t *testing.T) {
	for _, path := range archives(t, cliCases, 15) {
		c := readCase(t, path)
		t.Run(c.name, func(t *testing.T) {
			c.unpack(t)
			s := &script{T: t}
			for i, line := range strings.Split(c.comment, "\n") {
				if line = strings.TrimSpace(line); line != "" && line[0] != '#' {
					s.at = fmt.Sprintf("line %d: %s", i+1, line)
					s.do(strings.Cut(line, " "))
				}
			}
			if s.runs == 0 {
				t.Error("the script runs nothing")
			}
		})
	}
}

// TestBrokenBriefs reads every brief in testdata/cli/broken with each command:
// the report is the whole of what is printed, and nothing is left behind.
func TestBrokenBriefs(t *testing.T) {
	rules := map[string]string{}
	for _, path := range archives(t, cliCases+"/broken", 60) {
		c := readCase(t, path)
		t.Run(c.name, func(t *testing.T) {
			c.unpack(t)
			want := string(c.file(t, "stderr"))
			if !strings.HasPrefix(want, "brief.yaml:") {
				t.Fatalf("the report wanted has no place: %q", want)
			}
			for _, name := range []string{"check", "flow", "design"} {
				got := command(name, "brief.yaml")
				if got.code != exitUsage || len(got.out) > 0 || got.messages != want {
					t.Errorf("%s: code %d, stdout %q, stderr\n%s\nwanted\n%s", name, got.code, got.out, got.messages, want)
				}
			}
			if left := entries(t, "."); !slices.Equal(left, []string{"brief.yaml", "stderr"}) {
				t.Errorf("left behind: %q", left)
			}
			rule := said(want)
			if other, twice := rules[rule]; twice {
				t.Errorf("breaks the same rule as %s: %s", other, rule)
			}
			rules[rule] = c.name
		})
	}
}

// said is what a report says, without places and values: two reports that say
// the same are about one rule.
func said(report string) string {
	var words []string
	for line := range strings.Lines(report) {
		line = strings.TrimSpace(line)
		if rest, ok := strings.CutPrefix(line, "brief.yaml:"); ok {
			_, message, _ := strings.Cut(rest, ": ")
			words = append(words, message)
		} else if strings.HasPrefix(line, "hint:") {
			words = append(words, line)
		}
	}
	return strings.Join(words, "; ")
}

// archive is one case: a comment, which is the script, and files, in the txtar
// form of the Go project.
type archive struct {
	name    string
	comment string
	files   []file
}

// archives lists the cases in a folder, of which there are at least so many.
func archives(t *testing.T, dir string, least int) []string {
	t.Helper()
	paths, err := filepath.Glob(filepath.Join(dir, "*.txtar"))
	if err != nil || len(paths) < least {
		t.Fatalf("%d cases in %s, at least %d wanted: %v", len(paths), dir, least, err)
	}
	return paths
}

func readCase(t *testing.T, path string) *archive {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	c := &archive{name: strings.TrimSuffix(filepath.Base(path), ".txtar")}
	var comment []byte
	into := &comment
	for line := range bytes.Lines(data) {
		name, isMark := bytes.CutPrefix(bytes.TrimSpace(line), []byte("-- "))
		name, isEnd := bytes.CutSuffix(name, []byte(" --"))
		if isMark && isEnd {
			c.files = append(c.files, file{name: string(name)})
			into = &c.files[len(c.files)-1].data
			continue
		}
		*into = append(*into, line...)
	}
	c.comment = string(comment)
	return c
}

// unpack makes a fresh folder with the files of the case the working directory.
func (c *archive) unpack(t *testing.T) {
	t.Helper()
	t.Chdir(t.TempDir())
	for _, f := range c.files {
		if err := os.WriteFile(f.name, f.data, 0o600); err != nil {
			t.Fatal(err)
		}
	}
}

func (c *archive) file(t *testing.T, name string) []byte {
	t.Helper()
	for _, f := range c.files {
		if f.name == name {
			return f.data
		}
	}
	t.Fatalf("the case has no file %s", name)
	return nil
}

// entries lists the names in a folder.
func entries(t *testing.T, dir string) []string {
	t.Helper()
	found, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, entry := range found {
		names = append(names, entry.Name())
	}
	return names
}

// script is a case under way.
type script struct {
	*testing.T
	at   string // the line at work
	last ended
	runs int
}

func (s *script) do(word, rest string, _ bool) {
	rest = strings.TrimSpace(rest)
	switch word {
	case "exits":
		s.run(strings.Fields(rest))
	case "stdout", "stderr", "not-stdout", "not-stderr":
		wanted := !strings.HasPrefix(word, "not-")
		if text := s.stream(strings.TrimPrefix(word, "not-")); rest == "" || strings.Contains(text, rest) != wanted {
			s.fail("in:\n%s", text)
		}
	case "no-stdout", "no-stderr":
		if text := s.stream(strings.TrimPrefix(word, "no-")); text != "" {
			s.fail("printed:\n%s", text)
		}
	case "stdout-is", "stderr-is":
		if text := s.stream(strings.TrimSuffix(word, "-is")); text != s.read(rest) {
			s.fail("printed:\n%s\nwanted:\n%s", text, s.read(rest))
		}
	case "json":
		s.json(rest)
	default:
		s.files(word, strings.Fields(rest), rest)
	}
}

// files does the lines about files.
func (s *script) files(word string, names []string, rest string) {
	switch {
	case word == "folder":
		if left := entries(s.T, "."); !slices.Equal(left, names) {
			s.fail("it holds %q", left)
		}
	case word == "file" && len(names) > 2 && names[1] == "has":
		if _, text, _ := strings.Cut(rest, " has "); !strings.Contains(s.read(names[0]), text) {
			s.fail("in:\n%s", s.read(names[0]))
		}
	case word == "same" && len(names) == 2:
		if s.read(names[0]) != s.read(names[1]) {
			s.fail("%s", firstDifference([]byte(s.read(names[0])), []byte(s.read(names[1]))))
		}
	case word == "save" && len(names) == 2:
		s.must(os.WriteFile(names[1], []byte(s.stream(names[0])), 0o600))
	case word == "mkdir" && len(names) == 1:
		s.must(os.Mkdir(names[0], 0o700))
	case word == "fill" && len(names) == 2:
		size, err := strconv.Atoi(names[1])
		s.must(err)
		s.must(os.WriteFile(names[0], bytes.Repeat([]byte("#"), size), 0o600))
	default:
		s.fail("no such line in a script")
	}
}

// run runs the program and checks its exit code.
func (s *script) run(words []string) {
	code, err := strconv.Atoi(words[0])
	s.must(err)
	for i, word := range words {
		if word == `""` {
			words[i] = ""
		}
	}
	s.runs++
	s.last = command(words[1:]...)
	if s.last.code != code {
		s.fail("code %d\nstdout:\n%s\nstderr:\n%s", s.last.code, s.last.out, s.last.messages)
	}
}

func (s *script) stream(name string) string {
	if name == "stdout" {
		return string(s.last.out)
	}
	return s.last.messages
}

// json checks the document printed last.
func (s *script) json(rest string) {
	decoder := json.NewDecoder(bytes.NewReader(s.last.out))
	decoder.UseNumber()
	var document any
	s.must(decoder.Decode(&document))
	if _, err := decoder.Token(); !errors.Is(err, io.EOF) {
		s.fail("something follows the document: %v", err)
	}
	if rest == "" {
		return
	}
	path, want, _ := strings.Cut(rest, " = ")
	got, ok := at(document, path)
	if !ok {
		s.fail("no such place in:\n%s", s.last.out)
	}
	if text, band, isNumber := strings.Cut(want, " +- "); isNumber {
		value, err := strconv.ParseFloat(got, 64)
		s.must(err)
		if !(math.Abs(value-s.number(text)) <= s.number(band)) {
			s.fail("it is %s", got)
		}
	} else if got != want {
		s.fail("it is %s", got)
	}
}

// at follows a dotted path into a decoded document; .len is the length of a list.
func at(document any, path string) (string, bool) {
	for step := range strings.SplitSeq(path, ".") {
		switch level := document.(type) {
		case map[string]any:
			next, ok := level[step]
			if !ok {
				return "", false
			}
			document = next
		case []any:
			index, err := strconv.Atoi(step)
			switch {
			case step == "len":
				document = len(level)
			case err != nil || index < 0 || index >= len(level):
				return "", false
			default:
				document = level[index]
			}
		default:
			return "", false
		}
	}
	return fmt.Sprint(document), true
}

func (s *script) number(text string) float64 {
	value, err := strconv.ParseFloat(text, 64)
	s.must(err)
	return value
}

func (s *script) read(name string) string {
	data, err := os.ReadFile(name)
	s.must(err)
	return string(data)
}

func (s *script) must(err error) {
	s.Helper()
	if err != nil {
		s.fail("%v", err)
	}
}

func (s *script) fail(format string, arguments ...any) {
	s.Helper()
	s.Fatalf("%s\n"+format, append([]any{s.at}, arguments...)...)
}

// tightBrief is veyric-6 asked to start by itself: more than a planar inlet of
// this kind can do.
func tightBrief(t *testing.T) []byte {
	t.Helper()
	data, err := os.ReadFile(starterBrief("veyric-6"))
	if err != nil {
		t.Fatal(err)
	}
	const loose, tight = "self_start, at_most: 1.45}", "self_start, at_most: 1.0}"
	if strings.Count(string(data), loose) != 1 {
		t.Fatal("the brief has no limit on contraction")
	}
	return []byte(strings.Replace(string(data), loose, tight, 1))
}
