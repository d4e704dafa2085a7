package brief

import (
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode"
	"unicode/utf8"

	"gopkg.in/yaml.v3"
)

// Bounds on what is read: the size of a brief, bytes, and the length of a line,
// characters.
const (
	largest     = 1 << 20
	longestLine = 2000
)

// parse turns the bytes of a brief into a tree. It returns nil when there is
// none; the reasons are then among the reader's problems.
func (r *reader) parse(data []byte) *node {
	if len(data) > largest {
		r.addAt(1, 1, Problem{Message: "the file is too large", Value: fmt.Sprintf("%d bytes", len(data)), Allowed: fmt.Sprintf("up to %d bytes", largest)})
		return nil
	}
	text := strings.TrimPrefix(string(data), "\ufeff")
	text = strings.ReplaceAll(text, "\r\n", "\n")
	r.lines = strings.Split(text, "\n")
	if !r.checkCharacters() {
		return nil
	}
	documents, err := decode(text)
	if err != nil {
		r.addAt(r.syntaxProblem(text, err))
	}
	if err == nil && (len(documents) == 0 || isEmpty(documents[0].Content[0])) {
		r.addAt(1, 1, Problem{Message: "the brief is empty", Hint: "start from `rampwright new FILE`"})
		return nil
	}
	if len(documents) == 0 {
		return nil
	}
	if len(documents) > 1 {
		r.addAt(documents[1].Line, documents[1].Column, Problem{Message: "a second document in the file", Hint: "one file holds one brief: remove the line with --- or ... and what follows"})
	}
	return r.convert(documents[0].Content[0])
}

// checkCharacters refuses lines too long to show, and the first byte of a line
// that is not UTF-8 or character that an editor does not show.
func (r *reader) checkCharacters() bool {
	clean := true
	for i, line := range r.lines {
		if n := utf8.RuneCountInString(line); n > longestLine {
			r.addAt(i+1, 1, Problem{Message: "the line is too long", Value: fmt.Sprintf("%d characters", n), Allowed: fmt.Sprintf("up to %d characters", longestLine)})
			clean = false
			continue
		}
		column := 0
		for at, c := range line {
			column++
			_, size := utf8.DecodeRuneInString(line[at:])
			if c == utf8.RuneError && size == 1 {
				r.addAt(i+1, column, Problem{Message: "the file is not UTF-8 text", Value: fmt.Sprintf("byte %#02x", line[at])})
			} else if c != '\t' && !unicode.IsPrint(c) {
				r.addAt(i+1, column, Problem{Message: "a character that cannot be seen", Value: fmt.Sprintf("%U", c), Hint: "remove it or write a plain space"})
			} else {
				continue
			}
			clean = false
			break
		}
	}
	return clean
}

// decode returns the documents of text, at most two, and the first error.
func decode(text string) ([]*yaml.Node, error) {
	decoder := yaml.NewDecoder(strings.NewReader(text))
	var documents []*yaml.Node
	for len(documents) < 2 {
		document := new(yaml.Node)
		if err := decoder.Decode(document); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			return documents, err
		}
		documents = append(documents, document)
	}
	return documents, nil
}

// syntaxProblem places an error of the YAML library, whose own line numbers
// are missing or one short for some errors: the line is the last one without
// which the text before it still reads.
func (r *reader) syntaxProblem(text string, err error) (line, column int, p Problem) {
	message := strings.TrimPrefix(err.Error(), "yaml: ")
	var reported int
	if n, scanErr := fmt.Sscanf(message, "line %d:", &reported); scanErr == nil && n == 1 {
		_, message, _ = strings.Cut(message, ": ")
	}
	line = len(r.lines)
	if reported > 0 {
		line = min(line, reported+1)
	} else if !reads(r.lines[:1]) {
		line = 1
	}
	for tries := 0; line > 1 && tries < mostTries && len(text) <= rereadable && !reads(r.lines[:line-1]); tries++ {
		line--
	}
	source := r.lines[line-1]
	column = utf8.RuneCountInString(source) - utf8.RuneCountInString(strings.TrimLeft(source, " \t")) + 1
	hint := ""
	if strings.HasPrefix(strings.TrimLeft(source, " "), "\t") {
		hint = "indent with spaces, not tabs"
	}
	return line, column, Problem{Message: "not YAML: " + message, Hint: hint}
}

// Bounds on reading a text again to place an error: its size, bytes, and how
// often.
const (
	rereadable = 1 << 15
	mostTries  = 400
)

func reads(lines []string) bool {
	_, err := decode(strings.Join(lines, "\n") + "\n")
	return err == nil
}

// convert turns a YAML node into one of ours and refuses every feature a brief
// has no use for. It returns nil for a value that cannot be used.
func (r *reader) convert(y *yaml.Node) *node {
	n := &node{line: y.Line, column: y.Column}
	r.refuseDecoration(y, n)
	switch y.Kind {
	case yaml.AliasNode:
		r.add(n, Problem{Message: "aliases are not allowed", Value: "*" + y.Value, Hint: "write the value out"})
		return nil
	case yaml.ScalarNode:
		n.text = y.Value
		n.quoted = y.Style&^yaml.TaggedStyle != 0
	case yaml.SequenceNode:
		n.shape = sequence
		for _, item := range y.Content {
			if item = r.present(item, item, "list entry"); item == nil {
				n.partial = true
			} else if converted := r.convert(item); converted == nil {
				n.partial = true
			} else {
				n.items = append(n.items, converted)
			}
		}
	case yaml.MappingNode:
		n.shape = mapping
		first := map[string]int{} // line of each key
		for i := 0; i+1 < len(y.Content); i += 2 {
			r.convertPair(n, first, y.Content[i], y.Content[i+1])
		}
	}
	return n
}

// refuseDecoration reports anchors and tags.
func (r *reader) refuseDecoration(y *yaml.Node, n *node) {
	if y.Anchor != "" {
		r.add(n, Problem{Message: "anchors are not allowed", Value: "&" + y.Anchor, Hint: "remove it"})
	}
	if y.Style&yaml.TaggedStyle != 0 || y.Kind != yaml.AliasNode && strings.HasPrefix(r.textAt(n), "!") {
		r.add(n, Problem{Message: "tags are not allowed", Value: firstWord(r.textAt(n)), Hint: "remove it"})
	}
}

// convertPair adds one key and its value to the mapping n; first holds the line
// of every key so far.
func (r *reader) convertPair(n *node, first map[string]int, key, value *yaml.Node) {
	at := &node{text: key.Value, line: key.Line, column: key.Column}
	line, twice := first[key.Value]
	switch {
	case key.Kind != yaml.ScalarNode:
		r.add(at, Problem{Message: "a key is a plain word"})
		return
	case key.Value == "<<" && key.Style == 0:
		r.add(at, Problem{Message: "merge keys are not allowed", Value: "<<", Hint: "write the values out"})
		return
	case twice:
		r.add(at, Problem{Message: shorten(key.Value, 60) + " is given twice", Value: key.Value, Hint: fmt.Sprintf("the first is on line %d", line)})
		return
	}
	first[key.Value] = key.Line
	r.refuseDecoration(key, at)
	p := pair{key: at}
	if value = r.present(value, key, shorten(key.Value, 60)); value != nil {
		p.value = r.convert(value)
	}
	n.pairs = append(n.pairs, p)
}

// present returns the value unless it is empty, which is reported at place.
func (r *reader) present(value, place *yaml.Node, name string) *yaml.Node {
	if !isEmpty(value) {
		return value
	}
	r.add(&node{line: place.Line, column: place.Column}, Problem{Message: name + " has no value", Hint: "give a value or remove it"})
	return nil
}

// isEmpty reports whether a value holds nothing.
func isEmpty(value *yaml.Node) bool {
	switch value.Kind {
	case yaml.ScalarNode:
		plain := value.Style&^yaml.TaggedStyle == 0
		return strings.TrimSpace(value.Value) == "" || plain && isNull(value.Value)
	case yaml.SequenceNode, yaml.MappingNode:
		return len(value.Content) == 0
	default:
		return false
	}
}

func isNull(text string) bool {
	return text == "~" || text == "null" || text == "Null" || text == "NULL"
}

func firstWord(text string) string {
	word, _, _ := strings.Cut(text, " ")
	return word
}
