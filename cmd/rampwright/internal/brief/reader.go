package brief

import (
	"cmp"
	"path/filepath"
	"strconv"
	"strings"
)

// reader collects what is wrong and where every value came from while a brief
// is read.
type reader struct {
	file     string
	lines    []string
	problems Problems
	brief    *Brief
	outlined bool // the inlet is given by its outline
}

// Read reads the bytes of a brief and sets the overrides on top: a flag wins
// over the brief, the brief over the default. file is the name shown in
// problems. The error, if any, is Problems: everything wrong, in one reading.
func Read(file string, data []byte, overrides Overrides) (*Brief, error) {
	base := filepath.Base(file)
	r := &reader{file: file, brief: &Brief{
		File:  file,
		Name:  strings.TrimSuffix(base, filepath.Ext(base)),
		place: map[string]*node{},
	}}
	root := r.parse(data)
	r.brief.lines = r.lines
	if root != nil && root.shape != mapping {
		r.wrongShape(root, "the brief", mapping)
		root = nil
	}
	r.override(root, overrides)
	if root != nil {
		r.readBrief(root)
	}
	if len(r.problems) > 0 {
		return nil, r.problems.sorted()
	}
	return r.brief, nil
}

// readBrief reads every section in the order of the documentation.
func (r *reader) readBrief(root *node) {
	r.section(root, top)
	r.whole(root, known(top, "brief"))
	r.brief.Title = r.line(root, known(top, "title"))
	if !r.readProblem(root) {
		return
	}
	if r.brief.Analytic == nil {
		part := root.get(inletPart)
		r.outlined = part != nil && part.has(outlinePart)
		r.readGas(root)
		r.readFlight(root) // a dynamic pressure needs the gas
		r.readInlet(root)
	}
	r.readAim(root)
	r.readLimits(root)
	r.brief.Defaults = r.truth(root, known(top, "defaults"))
	if r.brief.Analytic == nil {
		r.readTolerance(root)
	}
	r.readEffort(root)
}

// add files a problem at a node.
func (r *reader) add(at *node, p Problem) {
	if at.flag != "" {
		p.File, p.Flag = r.file, at.flag
		r.problems = append(r.problems, p)
		return
	}
	r.addAt(at.line, at.column, p)
}

// addAt files a problem at a place of the file.
func (r *reader) addAt(line, column int, p Problem) {
	r.problems = append(r.problems, place(p, r.file, r.lines, line, column))
}

// place completes a problem with file, position and source line.
func place(p Problem, file string, lines []string, line, column int) Problem {
	p.File, p.Line, p.Column = file, line, column
	if line >= 1 && line <= len(lines) {
		p.SourceLine = lines[line-1]
	}
	return p
}

// textAt returns the source from the place of a node to the end of its line.
func (r *reader) textAt(n *node) string {
	if n.line < 1 || n.line > len(r.lines) {
		return ""
	}
	runes := []rune(r.lines[n.line-1])
	return string(runes[min(max(n.column-1, 0), len(runes)):])
}

// record notes a resolved value and where it came from. at is nil for a
// default.
func (r *reader) record(path, text, unit string, at *node) {
	r.brief.values = append(r.brief.values, Value{Path: path, Text: text, Unit: unit, Source: at.origin()})
	if at != nil {
		r.brief.place[path] = at
	}
}

func (r *reader) wrongShape(n *node, name string, want shape) {
	r.add(n, Problem{Message: name + " must be " + want.String() + ", not " + n.shape.String(), Value: n.shown()})
}

// section checks the keys of a mapping against the table.
func (r *reader) section(n *node, section string) {
	names := namesOf(section)
	for _, p := range n.pairs {
		if _, ok := find(section, p.key.text); ok {
			continue
		}
		problem := Problem{Message: "unknown key " + shorten(p.key.text, 60) + inSection(section), Value: p.key.text, Hint: keyHint(section, p.key.text)}
		if problem.Hint == "" {
			problem.Allowed = join(names)
		}
		r.add(p.key, problem)
	}
	for _, name := range names {
		k, _ := find(section, name)
		switch elsewhere := k.Unless != "" && n.has(k.Unless); {
		case elsewhere && n.has(name):
			r.refuseBeside(n, k)
		case k.Required && !elsewhere && !n.has(name):
			r.add(n, Problem{Message: name + " is missing" + inSection(section), Allowed: k.Allowed(), Hint: k.Meaning})
		}
	}
}

func inSection(section string) string {
	switch section {
	case top:
		return ""
	case outlinePart:
		return " in inlet.outline"
	case span:
		return " in a range {from, to}"
	default:
		return " in " + section
	}
}

// keyHint helps with an unknown key: its unit, its spelling, the name it begins, or
// the section it belongs to.
func keyHint(section, typed string) string {
	var names []named
	elsewhere := ""
	for _, k := range keys {
		if k.Section == section {
			names = append(names, named{k.Name, k.Unit})
		} else if k.Name == typed && elsewhere == "" {
			elsewhere = cmp.Or(k.Section, "the top of the brief")
		}
	}
	hint := nameHint(typed, names)
	for _, n := range names {
		if hint == "" && strings.HasPrefix(n.name, typed+"_") {
			hint = "did you mean " + n.name + "?"
		}
	}
	if hint == "" && elsewhere != "" {
		return typed + " belongs in " + elsewhere
	}
	return hint
}

// child returns the mapping under a key of the brief, nil when it is absent or
// unusable.
func (r *reader) child(root *node, section string) *node {
	n := root.get(section)
	if n == nil {
		return nil
	}
	if n.shape != mapping {
		r.wrongShape(n, section, mapping)
		return nil
	}
	r.section(n, section)
	return n
}

// entries returns the sections listed under a key of the brief.
func (r *reader) entries(root *node, section string) []*node {
	list := root.get(section)
	switch k := known(top, section); {
	case list == nil:
		return nil
	case list.shape != sequence:
		r.wrongShape(list, section, sequence)
		return nil
	case len(list.items) > int(k.High):
		r.add(list, Problem{Message: section + " is too long", Value: strconv.Itoa(len(list.items)) + " entries", Allowed: k.Allowed()})
		return nil
	}
	var entries []*node
	for _, entry := range list.items {
		if entry.shape != mapping {
			r.wrongShape(entry, "an entry of "+section, mapping)
			continue
		}
		r.section(entry, section)
		entries = append(entries, entry)
	}
	return entries
}
