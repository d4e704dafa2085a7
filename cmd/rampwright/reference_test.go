package main

import (
	"encoding/csv"
	"fmt"
	"io/fs"
	"os"
	"path"
	"regexp"
	"strings"
	"testing"
	"testing/fstest"
)

// pedigreeOrigin is the word that says how a value came here: read in the
// source or a text that quotes it, recalled from memory, or computed.
var pedigreeOrigin = regexp.MustCompile(`(?i)\b(read|memory|computed)\b`)

func TestReferenceTablesHavePedigree(t *testing.T) {
	faults, tables, err := pedigreeFaults(os.DirFS("../../testdata/reference"))
	if err != nil {
		t.Fatal(err)
	}
	if tables == 0 {
		t.Fatal("no reference table found: the test looks in the wrong place")
	}
	for _, fault := range faults {
		t.Error(fault)
	}
}

func TestReferencePedigreeCatches(t *testing.T) {
	const good = "# Ballistic tables 1950, Table II, four digits, read in the report\nmach,value\n1.5,0.9\n"
	cases := map[string]struct{ text, want string }{
		"good":              {good, ""},
		"no header":         {"mach,value\n1.5,0.9\n", "no pedigree"},
		"empty comment":     {"#\n# \nmach,value\n1.5,0.9\n", "no pedigree"},
		"origin not said":   {"# Ballistic tables 1950, Table II, four digits\nmach,value\n1.5,0.9\n", "does not say"},
		"nothing below":     {"# Ballistic tables 1950, read\nmach,value\n", "no row"},
		"ragged":            {good + "1.6\n", "wrong number of fields"},
		"row without how":   {"# Ballistic tables 1950, read\nmach,how\n1.5,\n", "how"},
		"row of odd origin": {"# Ballistic tables 1950, read\nmach,how\n1.5,guessed\n", "how"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			faults, _, err := pedigreeFaults(fstest.MapFS{"deep/t.csv": {Data: []byte(c.text)}})
			if err != nil {
				t.Fatal(err)
			}
			got := strings.Join(faults, "; ")
			if (c.want == "") != (got == "") || !strings.Contains(got, c.want) {
				t.Errorf("got %q, want %q", got, c.want)
			}
		})
	}
}

// pedigreeFaults checks every .csv below root and counts them.
func pedigreeFaults(root fs.FS) (faults []string, tables int, err error) {
	err = fs.WalkDir(root, ".", func(name string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || path.Ext(name) != ".csv" {
			return err
		}
		text, err := fs.ReadFile(root, name)
		if err != nil {
			return err
		}
		tables++
		if why := pedigreeFault(string(text)); why != "" {
			faults = append(faults, fmt.Sprintf("%s: %s", name, why))
		}
		return nil
	})
	return faults, tables, err
}

// pedigreeFault returns what is wrong with one table: it opens with comment
// lines that name the source and say how the values came here; a column "how"
// says it again for each row.
func pedigreeFault(text string) string {
	var pedigree strings.Builder
	for line := range strings.Lines(text) {
		comment, ok := strings.CutPrefix(line, "#")
		if !ok {
			break
		}
		pedigree.WriteString(strings.TrimSpace(comment) + " ")
	}
	header := strings.TrimSpace(pedigree.String())
	if header == "" {
		return "no pedigree: open the file with # lines that name source, table or page, digits, and read or memory"
	}
	if !pedigreeOrigin.MatchString(header) {
		return "the pedigree does not say whether the values were read, recalled from memory or computed"
	}
	reader := csv.NewReader(strings.NewReader(text))
	reader.Comment = '#'
	rows, err := reader.ReadAll()
	if err != nil {
		return err.Error()
	}
	if len(rows) < 2 {
		return "no row below the column names"
	}
	for column, name := range rows[0] {
		if name != "how" {
			continue
		}
		for i, row := range rows[1:] {
			if !pedigreeOrigin.MatchString(row[column]) {
				return fmt.Sprintf("row %d: how is %q, want read, memory or computed", i+1, row[column])
			}
		}
	}
	return ""
}
