package main

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
)

var updateReadme = flag.Bool("update-readme", false, "rewrite the outputs shown in README.md and the arrows in DEVELOPERS.md")

const readmeFile = "../../README.md"

// notRerun are the commands of README.md that the test does not run again, and why.
var notRerun = map[string]string{
	"go test ./...": "it is the run this test is part of",
}

// Every command block of README.md is run again, in order, in a folder that holds
// the starter briefs where the commands look for them; output and exit code must
// be those shown.
//
// In a ```sh block each line is a command that must end with code 0. In a
// ```console block a command follows "$ ", and what follows it is all it writes to
// both streams; a line "..." stands for any number of lines. A block without a
// command goes on with the output of the last command. "$ echo $?" shows the exit
// code, which is 0 where it is not shown.
func TestReadmeCommands(t *testing.T) {
	lines := readLines(t, readmeFile)
	readme, err := filepath.Abs(readmeFile) // before the working folder moves
	if err != nil {
		t.Fatal(err)
	}
	steps, err := commands(lines)
	if err != nil {
		t.Fatal(err)
	}
	if len(steps) < 5 {
		t.Fatalf("README.md shows %d commands only: the test looks in the wrong place", len(steps))
	}
	outputs := rerunAll(t, steps)
	if *updateReadme {
		update(t, readme, lines, steps, outputs)
		return
	}
	for i, s := range steps {
		if !s.shows {
			continue
		}
		if why := differs(s.wanted(lines), outputs[i]); why != "" {
			t.Errorf("README.md:%d: %s: %s", s.line+1, s.command, why)
		}
	}
}

// rerunAll runs every step in a fresh folder and returns the lines each writes.
func rerunAll(t *testing.T, steps []step) [][]string {
	t.Helper()
	dir := t.TempDir()
	if err := os.CopyFS(filepath.Join(dir, "testdata", "briefs"), os.DirFS("../../testdata/briefs")); err != nil {
		t.Fatal(err)
	}
	t.Chdir(dir)
	outputs := make([][]string, len(steps))
	code := exitDone
	for i, s := range steps {
		if s.command == askCode {
			outputs[i] = []string{strconv.Itoa(code)}
			continue
		}
		var output string
		var err error
		if output, code, err = rerun(s.command); err != nil {
			t.Fatalf("README.md:%d: %v", s.line+1, err)
		}
		outputs[i] = splitLines(output)
		if shown := i+1 < len(steps) && steps[i+1].command == askCode; code != exitDone && !shown {
			t.Errorf("README.md:%d: %s ended with code %d, which is not shown:\n%s", s.line+1, s.command, code, output)
		}
	}
	return outputs
}

// askCode shows the exit code of the command before.
const askCode = "echo $?"

// rerun runs one command of README.md and returns what it writes to both streams.
func rerun(command string) (output string, code int, err error) {
	arguments, ok := strings.CutPrefix(command, "go run ./cmd/rampwright ")
	if !ok {
		if arguments, ok = strings.CutPrefix(command, "rampwright "); !ok {
			return "", 0, fmt.Errorf("%q is no run of this program", command)
		}
	}
	var both bytes.Buffer
	code = run(strings.Fields(arguments), strings.NewReader(""), &both, &both)
	return both.String(), code, nil
}

// step is one command of README.md and where its output stands, by line number
// from 0.
type step struct {
	command string
	line    int
	shows   bool // the output is compared
	output  []int
}

func commands(lines []string) ([]step, error) {
	var steps []step
	language := ""
	for i, line := range lines {
		fence, isFence := strings.CutPrefix(line, "```")
		command, isCommand := strings.CutPrefix(line, "$ ")
		switch {
		case isFence && language != "":
			language = ""
		case isFence:
			if language = fence; language == "" {
				language = "plain"
			}
		case language == "sh" && line != "" && notRerun[line] == "":
			steps = append(steps, step{command: line, line: i})
		case language != "console":
		case isCommand:
			steps = append(steps, step{command: command, line: i, shows: true})
		case len(steps) == 0:
			return nil, fmt.Errorf("README.md:%d: output of no command", i+1)
		default:
			last := &steps[len(steps)-1]
			last.shows, last.output = true, append(last.output, i)
		}
	}
	return steps, nil
}

func (s *step) wanted(lines []string) []string {
	text := make([]string, len(s.output))
	for k, i := range s.output {
		text[k] = lines[i]
	}
	return text
}

const gap = "..."

// segment is a run of lines between gaps: wanted[first:end].
type segment struct{ first, end int }

func segments(wanted []string) []segment {
	list := []segment{{}}
	for i, line := range wanted {
		if line == gap {
			list = append(list, segment{i + 1, i + 1})
		} else {
			list[len(list)-1].end = i + 1
		}
	}
	return list
}

// differs returns how an output departs from the text wanted, "" where it does
// not.
func differs(wanted, got []string) string {
	parts := segments(wanted)
	at := 0
	for k, part := range parts {
		text := wanted[part.first:part.end]
		from, to := at, len(got)-len(text) // where the segment may start
		switch k {
		case 0:
			to = at
		case len(parts) - 1:
			from = max(from, to)
		}
		best, most := from, -1
		for start := from; start <= max(from, to) && most < len(text); start++ {
			if n := common(text, got[min(start, len(got)):]); n > most {
				best, most = start, n
			}
		}
		switch found := best + most; {
		case most < len(text) && found < len(got):
			return fmt.Sprintf("wanted the line\n%s\ngot\n%s", text[most], got[found])
		case most < len(text):
			return fmt.Sprintf("the output ends before the line\n%s", text[most])
		case len(parts) == 1 && found < len(got):
			return fmt.Sprintf("the output goes on with the line\n%s", got[found])
		}
		at = best + most
	}
	return ""
}

// common counts the lines at the head of both texts that are the same.
func common(wanted, got []string) int {
	n := 0
	for n < len(wanted) && n < len(got) && sameLine(wanted[n], got[n]) {
		n++
	}
	return n
}

// smallNumber is a number such as 2.6e-8 with the blanks ahead of it: a difference
// of nearly equal numbers, whose digits are rounding and not promised.
var smallNumber = regexp.MustCompile(` *-?\d(\.\d+)?e-\d+`)

func sameLine(a, b string) bool {
	return smallNumber.ReplaceAllString(a, " small") == smallNumber.ReplaceAllString(b, " small")
}

// rewrite notes the lines of README.md that show an output anew: all of it, or, of
// an excerpt, each segment from its first line to its last, where that is still
// found, or else as many lines as it had.
func (s *step) rewrite(lines, got []string, rewritten map[int][]string) error {
	wanted := s.wanted(lines)
	parts := segments(wanted)
	if len(parts) == 1 {
		rewritten[s.line] = append([]string{lines[s.line]}, got...)
		for _, i := range s.output {
			rewritten[i] = nil
		}
		return nil
	}
	at := 0
	for _, part := range parts {
		text := wanted[part.first:part.end]
		if len(text) == 0 {
			continue
		}
		ahead := indexLine(got[at:], text[0])
		if ahead < 0 {
			return fmt.Errorf("the output no longer has the line\n%s", text[0])
		}
		at += ahead
		length := min(len(text), len(got)-at)
		if last := indexLine(got[at:], text[len(text)-1]); last >= 0 && text[len(text)-1] != "" {
			length = last + 1
		}
		for j := range text {
			rewritten[s.output[part.first+j]] = nil
		}
		rewritten[s.output[part.first]] = got[at : at+length]
		at += length
	}
	return nil
}

func indexLine(lines []string, line string) int {
	return slices.IndexFunc(lines, func(other string) bool { return sameLine(line, other) })
}

// update writes README.md with the outputs the commands have now.
func update(t *testing.T, readme string, lines []string, steps []step, outputs [][]string) {
	t.Helper()
	rewritten := map[int][]string{}
	for i, s := range steps {
		if !s.shows {
			continue
		}
		if err := s.rewrite(lines, outputs[i], rewritten); err != nil {
			t.Fatalf("README.md:%d: %s: %v", s.line+1, s.command, err)
		}
	}
	var text []string
	for i, line := range lines {
		if anew, ok := rewritten[i]; ok {
			text = append(text, anew...)
		} else {
			text = append(text, line)
		}
	}
	writeLines(t, readme, text)
}

// The comparison is worth what it catches.
func TestReadmeComparison(t *testing.T) {
	got := []string{"a", "b 1.5e-9", "c", "d", "c", "e"}
	cases := map[string]struct {
		wanted []string
		same   bool
	}{
		"whole":                 {[]string{"a", "b 2e-10", "c", "d", "c", "e"}, true},
		"head":                  {[]string{"a", "...", "e"}, true},
		"middle":                {[]string{"...", "c", "d", "..."}, true},
		"second match":          {[]string{"...", "c", "e"}, true},
		"tail":                  {[]string{"a", "..."}, true},
		"several gaps":          {[]string{"a", "...", "c", "...", "c", "..."}, true},
		"cut short":             {[]string{"a", "b 1.5e-9"}, false},
		"line too many":         {[]string{"a", "b 1.5e-9", "c", "d", "c", "e", "f"}, false},
		"other line":            {[]string{"a", "...", "x", "..."}, false},
		"wrong order":           {[]string{"...", "d", "...", "a", "..."}, false},
		"other number":          {[]string{"a", "b 1.5", "..."}, false},
		"other end":             {[]string{"a", "...", "d"}, false},
		"other head":            {[]string{"b 1.5e-9", "..."}, false},
		"nothing":               {nil, false},
		"gap between neighbors": {[]string{"a", "...", "b 1.5e-9", "..."}, true},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			if why := differs(c.wanted, got); (why == "") != c.same {
				t.Errorf("differs: %q", why)
			}
		})
	}
}

// The briefs README.md shows are those it tells of.
func TestReadmeBriefs(t *testing.T) {
	var shown [][]string
	inside := false
	for _, line := range readLines(t, readmeFile) {
		switch {
		case line == "```yaml":
			inside = true
			shown = append(shown, nil)
		case line == "```":
			inside = false
		case inside:
			last := len(shown) - 1
			shown[last] = append(shown[last], line)
		}
	}
	names := []string{"veyric-6", "sorvane-5", "veyric-6"}
	if len(shown) != len(names) {
		t.Fatalf("README.md shows %d briefs, want %d", len(shown), len(names))
	}
	for i, name := range names {
		if why := differs(shown[i], readLines(t, starterBrief(name))); why != "" {
			t.Errorf("%s: %s", name, why)
		}
	}
}

func readLines(t *testing.T, file string) []string {
	t.Helper()
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	return splitLines(string(data))
}

func splitLines(text string) []string {
	if text == "" {
		return nil
	}
	return strings.Split(strings.TrimSuffix(strings.ReplaceAll(text, "\r\n", "\n"), "\n"), "\n")
}

func writeLines(t *testing.T, file string, lines []string) {
	t.Helper()
	if err := os.WriteFile(file, []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
		t.Fatal(err)
	}
}
