package main

import (
	"fmt"

	"github.com/schollz/progressbar/v3"
)

// fitsProgress shows a study under way: a bar on a terminal, a line at the end
// elsewhere, nothing when quiet. It is told from one goroutine; nil shows
// nothing.
type fitsProgress struct {
	app  *app
	bar  *progressbar.ProgressBar
	done int
}

func (a *app) fitsProgress() *fitsProgress {
	if a.quiet {
		return nil
	}
	return &fitsProgress{app: a}
}

func (p *fitsProgress) begin(total int) {
	if p == nil {
		return
	}
	if terminal(p.app.messages) {
		p.bar = p.app.bar(total)
	}
}

// step is told that one more design with that many samples was fitted.
func (p *fitsProgress) step(samples int) {
	if p == nil {
		return
	}
	p.done++
	if p.bar != nil {
		p.bar.Describe(fmt.Sprintf("%d samples", samples))
		_ = p.bar.Add(1) // a bar that cannot be drawn stops nothing
	}
}

func (p *fitsProgress) end() {
	switch {
	case p == nil || p.done == 0:
		return
	case p.bar != nil:
		_ = p.bar.Finish()
		return
	}
	p.app.say("fitted every kind to %s\n", count(p.done, "design"))
}
