package brief

import (
	"fmt"
	"slices"
	"sort"
	"strings"
	"unicode/utf8"
)

// Problem is one thing wrong with a brief, at its place.
type Problem struct {
	File       string
	Line       int    // from 1; 0 when the value came from a flag
	Column     int    // from 1, in characters
	Flag       string // "--width-m" when the value came from the command line
	Message    string
	Value      string // the offending value, as written; may be empty
	Allowed    string // what is allowed there; may be empty
	Hint       string // how to put it right; may be empty
	SourceLine string // the line as written
}

// Place returns "file:line:column", or the flag.
func (p Problem) Place() string {
	if p.Flag != "" {
		return p.Flag
	}
	return fmt.Sprintf("%s:%d:%d", p.File, p.Line, p.Column)
}

// Error returns place and message on one line.
func (p Problem) Error() string { return p.Place() + ": " + p.Message }

// Problems is everything wrong with a brief, flags first, then by position.
type Problems []Problem

// Error returns one line a problem.
func (ps Problems) Error() string {
	lines := make([]string, len(ps))
	for i, p := range ps {
		lines[i] = p.Error()
	}
	return strings.Join(lines, "\n")
}

// Format returns the report a user reads: each problem with its place, the
// source line with a caret below the value, the allowed range and a hint.
func (ps Problems) Format() string {
	var b strings.Builder
	for i, p := range ps {
		if i > 0 {
			b.WriteByte('\n')
		}
		p.format(&b)
	}
	return b.String()
}

func (p Problem) format(b *strings.Builder) {
	fmt.Fprintf(b, "%s\n", p.Error())
	if p.Flag == "" && p.SourceLine != "" {
		line, column := window(p.SourceLine, p.Column)
		fmt.Fprintf(b, "%5d | %s\n      | %s^\n", p.Line, line, blank(line, column-1))
	}
	for _, row := range [][2]string{{"value", p.Value}, {"allowed", p.Allowed}, {"hint", p.Hint}} {
		if row[1] != "" {
			fmt.Fprintf(b, "        %-8s %s\n", row[0]+":", shorten(row[1], 200))
		}
	}
}

// widest is the longest piece of a source line shown, in characters.
const widest = 72

// window cuts a long source line around the column and returns the column in
// what is left.
func window(line string, column int) (string, int) {
	runes := []rune(line)
	if len(runes) <= widest {
		return line, column
	}
	start := max(0, min(column-1-widest/2, len(runes)-widest))
	piece := string(runes[start:min(start+widest, len(runes))])
	if start == 0 {
		return piece + " ..", column
	}
	return ".. " + piece + " ..", column - start + len(".. ")
}

// blank returns n characters of white space that line up below those of line.
func blank(line string, n int) string {
	var b strings.Builder
	for _, r := range line {
		if n--; n < 0 {
			break
		}
		if r == '\t' {
			b.WriteByte('\t')
		} else {
			b.WriteByte(' ')
		}
	}
	return b.String() + strings.Repeat(" ", max(0, n))
}

// shorten cuts text to n characters and keeps it on one line.
func shorten(text string, n int) string {
	text = strings.Join(strings.Fields(text), " ")
	if utf8.RuneCountInString(text) <= n {
		return text
	}
	return string([]rune(text)[:n]) + " .."
}

// sorted orders problems by flag, then position, and drops repetitions.
func (ps Problems) sorted() Problems {
	sort.SliceStable(ps, func(i, j int) bool {
		a, b := ps[i], ps[j]
		switch {
		case a.Flag != b.Flag:
			return a.Flag != "" && (b.Flag == "" || a.Flag < b.Flag)
		case a.Line != b.Line:
			return a.Line < b.Line
		default:
			return a.Column < b.Column
		}
	})
	return slices.Compact(ps)
}
