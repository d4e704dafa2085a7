package report

import (
	"fmt"
	"math"
)

// balances writes what the stream tubes of every traced point leave open, and how far
// capture and spillage drag by two routes differ.
func (p *page) balances(points []Point) {
	t := &table{columns: []column{
		{head: "flight\npoint"}, {head: "captured\nmass"}, {head: "\nmomentum"}, {head: "\nenergy", drop: 2}, {head: "spilled\nmass"}, {head: "\nmomentum"}, {head: "\nenergy", drop: 1}, {head: "capture\nroutes"}, {head: "spillage\nroutes"},
	}}
	shown := false
	for i := range points {
		trace := points[i].Trace
		if trace == nil || !finite(float64(trace.Capture)) {
			continue
		}
		shown = true
		row := []string{shorten(points[i].Name)}
		for _, v := range trace.open() {
			row = append(row, openText(float64(v)))
		}
		t.add(row...)
	}
	if !shown {
		return
	}
	p.heading("What the traces leave open")
	p.wrap(indent, "Of the stream tube captured, as far as the throat plane, and of that spilled over the lip: mass and energy over those of the free stream through the capture area, momentum over q0 Ac. Routes: by how much capture and spillage drag along the lip streamline differ from the balances of mass and momentum.", indent)
	p.table(t)
}

// open lists what both stream tubes leave open and how far both routes to capture and
// to spillage drag differ.
func (t *Trace) open() []Number {
	c, s := &t.Closure, &t.SpilledClosure
	return []Number{c.Mass, c.Momentum, c.Energy, s.Mass, s.Momentum, s.Energy, t.CaptureByStreamline - t.Capture, t.Spillage - t.SpillageByMomentum}
}

// openText writes what a balance leaves open: rounding errors as none.
func openText(v float64) string {
	switch {
	case !finite(v):
		return "-"
	case math.Abs(v) < leastOpen:
		return "0"
	}
	return shortExponent(fmt.Sprintf("%.1e", v))
}

// leastOpen is what a balance may leave open by rounding.
const leastOpen = 1e-12
