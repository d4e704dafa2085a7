package chart

import (
	"bytes"
	"fmt"
	"io"
	"math"

	svg "github.com/ajstarks/svgo/float"
)

// MarginBar is one margin as a share of its limit's scale, on an axis that all
// bars share: violated to the left, met to the right, comfortable from a tenth.
type MarginBar struct {
	Name  string
	Share float64 // NaN where there is no value
}

// Comfortable is the share of scale from which a margin is called comfortable.
const Comfortable = 0.1

const (
	barWidth  = 240.0
	barHeight = 20.0
	barEdge   = 12.0
	finest    = 1e-3 // share of scale at which the axis turns from linear to logarithmic
)

// place maps a share to the bar: sign(s) log(1 + |s|/finest)/log(1 + 1/finest),
// clipped to one whole scale either way.
func (b MarginBar) place(share float64) float64 {
	t := math.Log1p(math.Abs(share)/finest) / math.Log1p(1/finest)
	return barWidth/2 + math.Copysign(min(t, 1), share)*(barWidth/2-barEdge)
}

// Verdict is the bar in a word.
func (b MarginBar) Verdict() string {
	switch {
	case math.IsNaN(b.Share):
		return "no value"
	case b.Share < -1e-6:
		return "violated"
	case b.Share <= 1e-6:
		return "on the limit"
	case b.Share < Comfortable:
		return "met"
	}
	return "comfortable"
}

// WriteMarginBar draws one bar as SVG; data-share states the margin and data-zero
// and data-end the ends of the bar on the sheet.
func WriteMarginBar(w io.Writer, b MarginBar) error {
	if math.IsInf(b.Share, 0) || len(b.Name) > longestText {
		return &InvalidChart{"margin bar", []string{fmt.Sprintf("name of %d bytes, margin %g", len(b.Name), b.Share)}}
	}
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet)}
	d.Decimals = sheetDecimals
	label := b.Name + ": " + b.Verdict()
	d.Start(barWidth, barHeight, fmt.Sprintf(`viewBox="0 0 %g %g"`, barWidth, barHeight), `role="img"`, attribute("aria-label", label), `class="bar"`)
	d.Title(label)
	zero, ease := b.place(0), b.place(Comfortable)
	d.Rect(barEdge, 4, zero-barEdge, barHeight-8, attribute("fill", solidInk))
	d.Rect(ease, 4, barWidth-barEdge-ease, barHeight-8, attribute("fill", comfortInk))
	d.Path(fmt.Sprintf("M%g %gH%g", barEdge, barHeight/2, barWidth-barEdge), attribute("stroke", faintInk), `stroke-width="0.8"`)
	if finite(b.Share) {
		end, ink := b.place(b.Share), strokes[RampShock].ink
		if b.Verdict() == "violated" {
			ink = cautionInk
		}
		d.Rect(min(zero, end), 7, math.Abs(end-zero), barHeight-14, attribute("fill", ink),
			fmt.Sprintf(`data-share="%g" data-zero="%.2f" data-end="%.2f"`, b.Share, zero, end))
		d.Circle(end, barHeight/2, 4.5, attribute("fill", ink))
	}
	d.Path(fmt.Sprintf("M%g 1V%g", zero, barHeight-1), attribute("stroke", darkInk), `stroke-width="1.6"`)
	d.End()
	return writeSheet(w, &sheet)
}

// WriteMarginScale draws the axis the bars share.
func WriteMarginScale(w io.Writer) error {
	var sheet bytes.Buffer
	d := linesSheet{SVG: svg.New(&sheet), faces: typefaces{small: newTypeface(10)}}
	d.Decimals = sheetDecimals
	const height = 30.0
	label := "margin in per cent of the limit, logarithmic: violated to the left, met to the right, comfortable from ten"
	d.Start(barWidth, height, fmt.Sprintf(`viewBox="0 0 %g %g"`, barWidth, height), `role="img"`, attribute("aria-label", label), lettering, `class="bar"`)
	d.Title(label)
	for _, word := range []struct {
		text string
		at   float64
	}{{"violated", MarginBar{}.place(-0.05)}, {"met", MarginBar{}.place(0.008)}, {"comfortable", MarginBar{}.place(0.38)}} {
		writeText(d.SVG, point{word.at, 10}, word.text, d.faces.small, softInk, "middle")
	}
	for _, percent := range []float64{-100, -10, -1, 0, 1, 10, 100} {
		x, text := MarginBar{}.place(percent/100), fmt.Sprintf("%g", percent)
		if percent == 100 {
			text += " %"
		}
		width := d.faces.small.width(text)
		d.Path(fmt.Sprintf("M%.2f 26v4", x), attribute("stroke", softInk), `stroke-width="0.9"`)
		d.labelled(text, box{min(x-width/2, barWidth-width), 14, width, d.faces.small.height()}, d.faces.small, softInk)
	}
	d.End()
	return writeSheet(w, &sheet)
}
