package brief

import (
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"rampwright/problems/inlet"
)

// value returns the scalar under a key of a mapping that may itself be absent
// (nil), nil when there is none or it is no scalar.
func (r *reader) value(parent *node, k Key) *node {
	if parent == nil {
		return nil
	}
	n := parent.get(k.Name)
	if n != nil && n.shape != scalar {
		r.wrongShape(n, k.Name, scalar)
		return nil
	}
	return n
}

// decimalOf reads a scalar as a number in the key's range, NaN when it is
// wrong. name is what a message calls it.
func (r *reader) decimalOf(n *node, k Key, name string) (float64, bool) {
	value, hint, ok := 0.0, "leave out the quotes", false
	if !n.quoted {
		value, hint, ok = decimal(n.text)
	}
	if !ok {
		r.add(n, Problem{Message: name + " is not a plain decimal number", Value: n.shown(), Allowed: k.Allowed(), Hint: hint})
		return math.NaN(), false
	}
	if !k.holds(value) {
		r.add(n, Problem{Message: name + " is out of range", Value: n.text, Allowed: k.Allowed()})
		return math.NaN(), false
	}
	return value, true
}

// number reads a number and records it under path; NaN when it is wrong, or
// absent without a default, which has been said.
func (r *reader) number(parent *node, k Key, path string) float64 {
	v := math.NaN()
	n := r.value(parent, k)
	switch {
	case n != nil:
		v, _ = r.decimalOf(n, k, k.Name)
	case k.Default != "":
		v = k.fallback()
	}
	r.record(path, exactNumber(v), k.Unit, n)
	return v
}

// wholeOf reads a scalar as a whole number in the key's range.
func (r *reader) wholeOf(n *node, k Key) (int64, bool) {
	unsigned := strings.TrimPrefix(n.text, "-") // a whole number all the same, out of range
	if n.quoted || !isDecimal(n.text) || digits(unsigned) != len(unsigned) {
		hint := "leave out the quotes"
		if !n.quoted {
			hint = decimalHint(n.text)
			if isDecimal(n.text) {
				hint = "write it with digits alone"
			}
		}
		r.add(n, Problem{Message: k.Name + " is not a whole number", Value: n.shown(), Allowed: k.Allowed(), Hint: hint})
		return 0, false
	}
	v, err := strconv.ParseInt(n.text, 10, 64)
	if err != nil || !k.holds(float64(v)) {
		r.add(n, Problem{Message: k.Name + " is out of range", Value: n.text, Allowed: k.Allowed()})
		return 0, false
	}
	return v, true
}

// whole reads a whole number; 0 and false when it is absent or wrong.
func (r *reader) whole(parent *node, k Key) (int64, *node) {
	n := r.value(parent, k)
	if n == nil {
		return 0, nil
	}
	v, ok := r.wholeOf(n, k)
	if !ok {
		return 0, nil
	}
	r.record(k.Path(), strconv.FormatInt(v, 10), "", n)
	return v, n
}

// truth reads true or false.
func (r *reader) truth(parent *node, k Key) bool {
	n := r.value(parent, k)
	text := k.Default
	if n != nil {
		text = n.text
		if n.quoted || text != "true" && text != "false" {
			r.add(n, Problem{Message: k.Name + " is neither true nor false", Value: n.shown(), Allowed: "true, false", Hint: truthHint(n)})
			return false
		}
	}
	r.record(k.Path(), text, "", n)
	return text == "true"
}

// truthHint translates the words other formats take for true and false.
func truthHint(n *node) string {
	switch strings.ToLower(n.text) {
	case "yes", "on", "y", "1", "true":
		return "write true"
	case "no", "off", "n", "0", "false":
		return "write false"
	}
	return ""
}

// longest is the longest title, characters.
const longest = 200

// line reads one line of text.
func (r *reader) line(parent *node, k Key) string {
	n := r.value(parent, k)
	if n == nil {
		return ""
	}
	for _, c := range n.text {
		if !unicode.IsPrint(c) {
			r.add(n, Problem{Message: k.Name + " must be one line of visible characters", Value: n.shown(), Allowed: "one line of text"})
			return ""
		}
	}
	if utf8.RuneCountInString(n.text) > longest {
		r.add(n, Problem{Message: k.Name + " is too long", Value: n.shown(), Allowed: "up to " + strconv.Itoa(longest) + " characters"})
		return ""
	}
	r.record(k.Path(), n.text, "", n)
	return n.text
}

// settingOf reads a number (fixed) or {from, to} (searched) in the key's range.
func (r *reader) settingOf(n *node, k Key, name string) (inlet.Setting, bool) {
	switch n.shape {
	case scalar:
		v, ok := r.decimalOf(n, k, name)
		return inlet.Fixed(v), ok
	case sequence:
		r.add(n, Problem{Message: name + " must be a number or {from, to}, not a list", Value: n.shown(), Allowed: k.Allowed()})
		return inlet.Setting{}, false
	}
	before := len(r.problems)
	r.section(n, span)
	from, to := r.end(n, k, name, "from"), r.end(n, k, name, "to")
	if len(r.problems) > before || math.IsNaN(from+to) {
		return inlet.Setting{}, false
	}
	if from >= to {
		r.add(n, Problem{Message: name + ": from must be below to", Value: exactNumber(from) + " to " + exactNumber(to), Hint: "a value that is not searched is written as one number"})
		return inlet.Setting{}, false
	}
	return inlet.Between(from, to), true
}

// end reads one end of a range, NaN when it is absent or wrong.
func (r *reader) end(n *node, k Key, name, which string) float64 {
	at := r.value(n, known(span, which))
	if at == nil {
		return math.NaN()
	}
	v, _ := r.decimalOf(at, k, name+" "+which)
	return v
}

// setting reads a number or range with a numeric default.
func (r *reader) setting(parent *node, k Key) inlet.Setting {
	return r.settingOr(parent, k, func() inlet.Setting { return inlet.Fixed(k.fallback()) })
}

// settingOr reads a number or range with a default of the caller's.
func (r *reader) settingOr(parent *node, k Key, otherwise func() inlet.Setting) inlet.Setting {
	n := parent.get(k.Name)
	var s inlet.Setting
	if n != nil {
		s, _ = r.settingOf(n, k, k.Name)
	} else {
		s = otherwise()
	}
	r.record(k.Path(), settingText(s), k.Unit, n)
	return s
}

// settingText prints a setting as it is written in a brief.
func settingText(s inlet.Setting) string {
	if s.Searched {
		return "{from: " + exactNumber(s.Low) + ", to: " + exactNumber(s.High) + "}"
	}
	return exactNumber(s.Value)
}
