package brief

import "strconv"

type shape int

const (
	scalar shape = iota
	mapping
	sequence
)

func (s shape) String() string { return [...]string{"one value", "a section", "a list"}[s] }

// node is one value of the brief with its place. A value set on the command
// line has a flag and no place.
type node struct {
	shape  shape
	text   string // of a scalar
	quoted bool   // the scalar was written with quotes or as a block
	pairs  []pair // of a mapping, in order, keys unique
	items  []*node
	// partial marks a sequence some entries of which could not be read.
	partial bool
	line    int // from 1
	column  int // from 1, in characters
	flag    string
}

type pair struct{ key, value *node }

// origin says where a value came from, as shown in tables.
func (n *node) origin() string {
	switch {
	case n == nil:
		return byDefault
	case n.flag != "":
		return n.flag
	default:
		return "line " + strconv.Itoa(n.line)
	}
}

// byDefault is the origin of a value nobody stated.
const byDefault = "default"

// key returns the node of a key that is present.
func (n *node) key(name string) *node {
	for _, p := range n.pairs {
		if p.key.text == name {
			return p.key
		}
	}
	return n
}

// has reports whether the key is written, even without a usable value.
func (n *node) has(name string) bool { return n.key(name) != n }

// get returns the value of a key, nil when it is absent or has none.
func (n *node) get(name string) *node {
	for _, p := range n.pairs {
		if p.key.text == name {
			return p.value
		}
	}
	return nil
}

// remove drops a key.
func (n *node) remove(name string) {
	for i, p := range n.pairs {
		if p.key.text == name {
			n.pairs = append(n.pairs[:i:i], n.pairs[i+1:]...)
			return
		}
	}
}

// set replaces the value of a key or adds the key.
func (n *node) set(name string, value *node) {
	for i, p := range n.pairs {
		if p.key.text == name {
			n.pairs[i].value = value
			return
		}
	}
	n.pairs = append(n.pairs, pair{&node{text: name, line: n.line, column: n.column, flag: value.flag}, value})
}

// shown is the value as a message quotes it.
func (n *node) shown() string {
	switch n.shape {
	case mapping:
		return "a section"
	case sequence:
		return "a list"
	}
	if n.quoted {
		return strconv.Quote(n.text)
	}
	return n.text
}
