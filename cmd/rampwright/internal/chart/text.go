package chart

import (
	"strings"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
)

// typeface measures text of one size in drawing units.
type typeface struct {
	size float64
	face font.Face
}

func newTypeface(size float64) typeface {
	fonts := font.NewCache(liberation.Collection())
	sans := font.Font{Typeface: "Liberation", Variant: "Sans"}
	return typeface{size, fonts.Lookup(sans, font.Points(size))}
}

func (t typeface) width(text string) float64 { return t.face.Width(text).Points() }

// ascent is the height of the letters above the base line, height the whole
// line with its descenders.
func (t typeface) ascent() float64 { return t.face.Extents().Ascent.Points() }
func (t typeface) height() float64 {
	e := t.face.Extents()
	return e.Ascent.Points() + e.Descent.Points()
}

// wrap breaks text into lines no wider than the room given, at blanks where it
// can and inside a word where it must.
func (t typeface) wrap(text string, room float64) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		if line != "" && t.width(line+" "+word) <= room {
			line += " " + word
			continue
		}
		if line != "" {
			lines = append(lines, line)
		}
		line = ""
		for _, letter := range word {
			if line != "" && t.width(line+string(letter)) > room {
				lines = append(lines, line)
				line = ""
			}
			line += string(letter)
		}
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}
