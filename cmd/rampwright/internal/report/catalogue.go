package report

import (
	"fmt"

	"rampwright/problems/inlet"
)

// Catalogue returns the list of every quantity for a terminal of that width.
func Catalogue(width int) string {
	p := newPage(width)
	scope := inlet.Scope(-1)
	for _, e := range inlet.Catalogue() {
		if e.Scope != scope {
			if scope = e.Scope; scope == inlet.OfGeometry {
				p.WriteByte('\n')
			}
			p.wrap("", scopeTitles[scope], "")
		}
		p.WriteByte('\n')
		p.WriteString(indent + e.Name + gap + "[" + unitText(e.Unit) + "]\n")
		text := e.Definition
		if e.Group() {
			text += " (a group: the least is shown, each member has its own limit)"
		}
		p.wrap("      ", text, "      ")
		p.wrap("      ", fmt.Sprintf("source: %s; applies: %s", e.Source, e.Applies), "      ")
	}
	return p.String()
}

var scopeTitles = map[inlet.Scope]string{
	inlet.PerPoint:   "Quantities of the flow, at each flight point",
	inlet.OfGeometry: "Quantities of the geometry, at the point `geometry`",
}

func unitText(unit string) string {
	if unit == "" {
		return "ratio"
	}
	return unit
}

// CatalogueJSON returns the same list as a JSON document.
func CatalogueJSON(program string) []byte {
	type entry struct {
		Name       string `json:"name"`
		Unit       string `json:"unit"`
		Scope      string `json:"scope"`
		Group      bool   `json:"group"`
		Definition string `json:"definition"`
		Source     string `json:"source"`
		Applies    string `json:"applies"`
	}
	list := struct {
		Format     int     `json:"format"`
		Program    string  `json:"program"`
		Quantities []entry `json:"quantities"`
	}{Format: format, Program: program}
	for _, e := range inlet.Catalogue() {
		scope := "point"
		if e.Scope == inlet.OfGeometry {
			scope = "geometry"
		}
		list.Quantities = append(list.Quantities, entry{e.Name, e.Unit, scope, e.Group(), e.Definition, e.Source, e.Applies})
	}
	return document(list)
}
