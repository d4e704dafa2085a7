package chart

import (
	"fmt"
	"strings"
)

// rulers draws the x ruler below the labels and the y ruler at the left, in
// metres from the leading edge of the first ramp.
func (d drawing) rulers() {
	const tick = 5.0
	scale := d.frame.scale
	left, right := d.picture.x, d.picture.right()
	y := d.bottom + 16
	along := newRuler((left-d.frame.origin.x)/scale, (right-d.frame.origin.x)/scale, 56/scale)
	var path strings.Builder
	fmt.Fprintf(&path, "M%.2f %.2fH%.2f", left, y, right)
	for k := along.from; k <= along.to; k++ {
		x := d.frame.at(along.value(k), 0).x
		fmt.Fprintf(&path, "M%.2f %.2fv%g", x, y, tick)
		d.write(point{x, y + tick + d.faces.small.ascent() + 1}, along.text(k), d.faces.small, softInk, "middle")
	}
	d.write(point{sheetWidth - margin, y + tick + 2*d.faces.small.height() + 2}, "x and y in m, equal scales", d.faces.small, softInk, "end")

	x := margin + rulerRoom - 8
	top, low := d.picture.y, d.picture.bottom()
	up := newRuler((d.frame.origin.y-low)/scale, (d.frame.origin.y-top)/scale, 26/scale)
	fmt.Fprintf(&path, "M%.2f %.2fV%.2f", x, top, low)
	for k := up.from; k <= up.to; k++ {
		at := d.frame.at(0, up.value(k)).y
		fmt.Fprintf(&path, "M%.2f %.2fh%g", x, at, -tick)
		d.write(point{x - tick - 3, at + d.faces.small.ascent()*0.38}, up.text(k), d.faces.small, softInk, "end")
	}
	d.Path(path.String(), attribute("stroke", softInk), `stroke-width="0.8"`, `fill="none"`)
}

// key draws a sample of every stroke in use with its meaning.
func (d drawing) key() {
	y := d.height() - margin
	x := margin
	sample := func(s stroke, text string) {
		d.Path(fmt.Sprintf("M%.2f %.2fh34", x, y-4), append(s.attributes(), `fill="none"`)...)
		d.write(point{x + 40, y}, text, d.faces.small, softInk, "start")
		x += 40 + d.faces.small.width(text) + 22
	}
	for kind := range WaveKind(len(waveWords)) {
		for _, w := range d.view.Waves {
			if w.Kind == kind {
				sample(strokes[kind], kind.String())
				break
			}
		}
	}
	if len(d.view.LipStreamline) > 0 {
		sample(streamlineStroke, "lip streamline")
	}
}
