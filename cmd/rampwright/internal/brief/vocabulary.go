package brief

import (
	"rampwright/problems/analytic"
	"rampwright/problems/inlet"
)

// noun is a quantity a brief may name in aims and limits.
type noun struct {
	name     string
	unit     string
	geometry bool // it has one value, at no flight point
}

// vocabulary is every quantity of the problem a brief poses.
type vocabulary struct {
	nouns []noun
	// hint says where to find a name.
	hint string
}

func inletVocabulary() vocabulary {
	v := vocabulary{hint: "`rampwright quantities` lists them"}
	for _, entry := range inlet.Catalogue() {
		v.nouns = append(v.nouns, noun{entry.Name, entry.Unit, entry.Scope == inlet.OfGeometry})
	}
	return v
}

func analyticVocabulary(p *analytic.Problem) vocabulary {
	var v vocabulary
	var names []string
	for _, q := range p.Quantities() {
		v.nouns = append(v.nouns, noun{name: q.Name, unit: q.Unit})
		names = append(names, q.Name)
	}
	v.hint = p.Name + " has " + join(names)
	return v
}

func (v vocabulary) find(name string) (noun, bool) {
	for _, n := range v.nouns {
		if n.name == name {
			return n, true
		}
	}
	return noun{}, false
}

// unknown is the problem of a name that is no quantity.
func (v vocabulary) unknown(typed string) Problem {
	var names []named
	for _, n := range v.nouns {
		names = append(names, named{n.name, n.unit})
	}
	hint := nameHint(typed, names)
	if hint == "" {
		hint = v.hint
	}
	return Problem{Message: "unknown quantity " + shorten(typed, 60), Value: typed, Hint: hint}
}

// check reports what is wrong with quantity@point, nil if nothing but perhaps
// the name of the point.
func (v vocabulary) check(quantity, point string) *formulaError {
	n, ok := v.find(quantity)
	if !ok {
		p := v.unknown(quantity)
		return &formulaError{message: p.Message, value: p.Value, hint: p.Hint}
	}
	if point != "" && n.geometry {
		return &formulaError{message: quantity + " belongs to the geometry and takes no @point", value: quantity + "@" + point, hint: "write " + quantity}
	}
	return nil
}
