package report

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"html/template"
	"io"
	"regexp"
	"slices"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
)

// drawingElements are all a picture of this program is made of.
var drawingElements = []string{
	"svg", "title", "desc", "defs", "pattern", "clipPath", "g", "rect", "circle", "ellipse", "line", "polyline", "polygon", "path", "text", "tspan",
}

// foreign is a picture read from a file, or why it is left out: it may hold
// nothing but shapes and words. Its ids are made its own, its face is the page's.
func foreign(name string, picture []byte) template.HTML {
	picture = chart.Bare(picture)
	return drawn(func(w io.Writer) error {
		if err := onlyDrawing(picture); err != nil {
			return fmt.Errorf("%s.svg: %w", name, err)
		}
		_, err := w.Write(ownIDs(name, picture))
		return err
	})
}

// onlyDrawing refuses a picture that could do or fetch anything.
func onlyDrawing(picture []byte) error {
	decoder := xml.NewDecoder(bytes.NewReader(picture))
	for depth, seen := 0, 0; ; {
		token, err := decoder.Token()
		if err == io.EOF && depth == 0 && seen > 0 {
			return nil
		}
		if err != nil {
			return err
		}
		switch token := token.(type) {
		case xml.StartElement:
			if seen++; seen == 1 && token.Name.Local != "svg" || seen > 1 && depth == 0 {
				return fmt.Errorf("it is not one svg element")
			}
			depth++
			if !slices.Contains(drawingElements, token.Name.Local) {
				return fmt.Errorf("it holds an element %q", token.Name.Local)
			}
			for _, a := range token.Attr {
				if strings.HasPrefix(a.Name.Local, "on") || a.Name.Local == "href" || a.Name.Local == "style" || strings.Contains(idReference.ReplaceAllString(a.Value, ""), "url(") {
					return fmt.Errorf("it holds an attribute %s=%q", a.Name.Local, a.Value)
				}
			}
		case xml.EndElement:
			depth--
		case xml.ProcInst, xml.Directive:
			return fmt.Errorf("it is not one svg element")
		}
	}
}

var (
	idAttribute = regexp.MustCompile(` id="([^"]+)"`)
	idReference = regexp.MustCompile(`url\(#([-\w]+)\)`)
)

// ownIDs puts a name ahead of every id, so that pictures of one page do not share
// one.
func ownIDs(name string, picture []byte) []byte {
	picture = idAttribute.ReplaceAll(picture, []byte(` id="`+name+`-$1"`))
	return idReference.ReplaceAll(picture, []byte(`url(#`+name+`-$1)`))
}
