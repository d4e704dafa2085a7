package brief

import (
	"sort"
	"strings"
)

// Overrides are values set on the command line, by name of the key:
// "ramp_angle_deg" -> "8.08,7.22,8.44". A list is separated by commas; LOW..HIGH
// is a searched range. A wrong name or value is a problem that names its flag.
type Overrides map[string]string

// flagName is the flag of a key.
func flagName(name string) string { return "--" + strings.ReplaceAll(name, "_", "-") }

// FlagKeys returns the keys that may be set on the command line.
func FlagKeys() []Key {
	var settable []Key
	for _, k := range keys {
		if k.Flag {
			settable = append(settable, k)
		}
	}
	return settable
}

// override writes the values set by flags into the tree, in order of name.
func (r *reader) override(root *node, overrides Overrides) {
	names := make([]string, 0, len(overrides))
	for name := range overrides {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		k, ok := flagKey(name)
		at := &node{flag: flagName(name)}
		switch value := r.flagValue(at.flag, overrides[name]); {
		case !ok:
			r.add(at, Problem{Message: "no value of a brief can be set by this flag", Value: name, Hint: nearestHint(name, flagNames())})
		case value == nil:
			r.add(at, Problem{Message: "the flag has an empty value", Value: overrides[name], Allowed: k.Allowed()})
		case root != nil:
			r.setFlag(root, k, value)
		}
	}
}

func flagKey(name string) (Key, bool) {
	for _, k := range keys {
		if k.Flag && k.Name == name {
			return k, true
		}
	}
	return Key{}, false
}

func flagNames() []string {
	var names []string
	for _, k := range FlagKeys() {
		names = append(names, k.Name)
	}
	return names
}

// alternative pairs the keys of which a brief states exactly one.
var alternative = map[string]string{"cowl_angle_deg": "lip_turning_deg", "lip_turning_deg": "cowl_angle_deg"}

// setFlag puts a value in its section, in place of the brief's.
func (r *reader) setFlag(root *node, k Key, value *node) {
	part := root
	if k.Section != top {
		if part = root.get(k.Section); part == nil {
			part = &node{shape: mapping, line: root.line, column: root.column}
			root.set(k.Section, part)
		}
	}
	if part.shape != mapping {
		return // reported when the section is read
	}
	if other := alternative[k.Name]; other != "" {
		if n := part.get(other); n != nil && n.flag == "" {
			part.remove(other)
		}
	}
	part.set(k.Name, value)
}

// flagValue turns the text of a flag into a node, nil when a piece is empty.
func (r *reader) flagValue(flag, text string) *node {
	pieces := strings.Split(text, ",")
	list := &node{shape: sequence, flag: flag}
	for _, piece := range pieces {
		item := &node{text: strings.TrimSpace(piece), flag: flag}
		if item.text == "" {
			return nil
		}
		if low, high, ranged := strings.Cut(item.text, ".."); ranged {
			item = &node{shape: mapping, flag: flag}
			item.set("from", &node{text: strings.TrimSpace(low), flag: flag})
			item.set("to", &node{text: strings.TrimSpace(high), flag: flag})
		}
		list.items = append(list.items, item)
	}
	if len(list.items) == 1 {
		return list.items[0]
	}
	return list
}
