package main

import (
	"fmt"
	"maps"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/brief"
)

// The tables of README.md are those of the program.
func TestReadmeTables(t *testing.T) {
	lines := readLines(t, readmeFile)
	t.Run("exit codes", func(t *testing.T) {
		var want [][]string
		for _, row := range exitTable {
			want = append(want, []string{strconv.Itoa(row.Code), row.Meaning})
		}
		sameRows(t, tableUnder(t, lines, "exit code"), want)
	})
	t.Run("commands", func(t *testing.T) {
		var want [][]string
		for _, c := range (&app{}).root().Commands() {
			if !c.Hidden && c.Name() != "help" {
				want = append(want, []string{"`" + c.Use + "`", c.Short})
			}
		}
		got := tableUnder(t, lines, "command")
		slices.SortFunc(got, func(a, b []string) int { return strings.Compare(a[0], b[0]) })
		slices.SortFunc(want, func(a, b []string) int { return strings.Compare(a[0], b[0]) })
		sameRows(t, got, want)
	})
	t.Run("result folder", func(t *testing.T) {
		want := slices.Sorted(maps.Keys(designStarter(t, "veyric-6").files))
		if got := slices.Sorted(slices.Values(firstColumn(tableUnder(t, lines, "file")))); !slices.Equal(got, want) {
			t.Errorf("README.md lists %q, the folder holds %q", got, want)
		}
	})
	t.Run("keys of the brief", func(t *testing.T) {
		want := map[string]bool{}
		for _, k := range brief.Keys() {
			want[k.Section+"."+k.Name] = true
		}
		for _, row := range tableUnder(t, lines, "section") {
			section := ""
			if name := quoted.FindStringSubmatch(row[0]); name != nil {
				section = name[1]
			}
			for _, name := range quoted.FindAllStringSubmatch(row[1], -1) {
				if path := section + "." + name[1]; !want[path] {
					t.Errorf("README.md names %s, which is no key", path)
				} else {
					delete(want, path)
				}
			}
		}
		for path := range want {
			t.Errorf("README.md does not name %s", path)
		}
	})
}

var quoted = regexp.MustCompile("`([^`]+)`")

// tableUnder returns the rows of the table whose first column has that head.
func tableUnder(t *testing.T, lines []string, head string) [][]string {
	t.Helper()
	for i, line := range lines {
		if !strings.HasPrefix(line, "| "+head+" |") {
			continue
		}
		var rows [][]string
		for _, row := range lines[min(i+2, len(lines)):] {
			if !strings.HasPrefix(row, "|") {
				break
			}
			cells := strings.Split(strings.Trim(row, "| "), "|")
			for j := range cells {
				cells[j] = strings.TrimSpace(cells[j])
			}
			rows = append(rows, cells)
		}
		return rows
	}
	t.Fatalf("no table headed %q", head)
	return nil
}

func firstColumn(rows [][]string) []string {
	var column []string
	for _, row := range rows {
		column = append(column, strings.Trim(row[0], "`"))
	}
	return column
}

func sameRows(t *testing.T, got, want [][]string) {
	t.Helper()
	if !slices.EqualFunc(got, want, slices.Equal[[]string]) {
		t.Errorf("README.md has\n%q\nthe program\n%q", got, want)
	}
}

const (
	developersFile = "../../DEVELOPERS.md"
	arrowsBegin    = "<!-- arrows: written by go test ./cmd/rampwright -update-readme -->"
	arrowsEnd      = "<!-- end of arrows -->"
)

// The arrows DEVELOPERS.md shows are those of the import policy.
func TestDevelopersArrows(t *testing.T) {
	lines := readLines(t, developersFile)
	begin, end := slices.Index(lines, arrowsBegin), slices.Index(lines, arrowsEnd)
	if begin < 0 || end < begin {
		t.Fatal("DEVELOPERS.md has no place for the arrows")
	}
	want := arrows()
	if slices.Equal(lines[begin+1:end], want) {
		return
	}
	if !*updateReadme {
		t.Fatalf("DEVELOPERS.md does not show the import policy; -update-readme writes:\n%s", strings.Join(want, "\n"))
	}
	writeLines(t, developersFile, slices.Concat(lines[:begin+1], want, lines[end:]))
}

// arrows is the import policy as a table, one room a row.
func arrows() []string {
	code := func(names []string) string {
		if len(names) == 0 {
			return "-"
		}
		return "`" + strings.Join(names, "` `") + "`"
	}
	table := []string{"", "| package | may import of ours | third parties | library tree |", "|---|---|---|---|"}
	for _, name := range slices.Sorted(maps.Keys(rooms)) {
		r, library := rooms[name], "no"
		if r.bare {
			library = "yes"
		}
		table = append(table, fmt.Sprintf("| `%s` | %s | %s | %s |", name, code(r.may), code(r.third), library))
	}
	return append(table, "")
}
