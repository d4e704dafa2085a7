package main

import (
	"fmt"
	"math"
	"os"

	"github.com/schollz/progressbar/v3"

	"rampwright/cmd/rampwright/internal/runstore"
	"rampwright/optimize"
)

// say writes a message, unless quiet.
func (a *app) say(format string, arguments ...any) {
	if !a.quiet {
		fmt.Fprintf(a.messages, format, arguments...)
	}
}

// notices passes on what the result folder wants known.
func (a *app) notices(folder *runstore.Folder) {
	for _, n := range folder.Notices() {
		a.say("%s\n", n)
	}
}

// terminal reports whether a stream is one, and not a file or pipe.
func terminal(stream any) bool {
	f, ok := stream.(*os.File)
	if !ok {
		return false
	}
	info, err := f.Stat()
	return err == nil && info.Mode()&os.ModeCharDevice != 0
}

// progress shows a search under way: a bar on a terminal, a line a phase
// elsewhere, nothing when quiet.
type progress struct {
	app   *app
	bar   *progressbar.ProgressBar
	phase string
	last  optimize.Event
}

func (a *app) progress() *progress { return &progress{app: a} }

func (p *progress) observe(e optimize.Event) {
	if p.app.quiet {
		return
	}
	if !terminal(p.app.messages) {
		p.plain(e)
		return
	}
	if p.bar == nil {
		p.bar = p.app.bar(e.Planned)
	}
	p.bar.Describe(e.Phase + bestShort(e))
	_ = p.bar.Set(e.Evaluations) // a bar that cannot be drawn stops nothing
}

// bar is an empty bar in our plain style.
func (a *app) bar(total int) *progressbar.ProgressBar {
	return progressbar.NewOptions(total,
		progressbar.OptionSetWriter(a.messages),
		progressbar.OptionSetWidth(24),
		progressbar.OptionShowCount(),
		progressbar.OptionSetElapsedTime(false),
		progressbar.OptionSetPredictTime(false),
		progressbar.OptionClearOnFinish(),
		progressbar.OptionSetTheme(progressbar.Theme{Saucer: "/", SaucerHead: "/", SaucerPadding: ".", BarStart: "", BarEnd: ""}),
	)
}

// plain says when a phase ends.
func (p *progress) plain(e optimize.Event) {
	if p.phase != "" && p.phase != e.Phase {
		p.sayLast()
	}
	p.phase, p.last = e.Phase, e
}

func (p *progress) sayLast() {
	p.app.say("%s: %s%s\n", p.phase, count(p.last.Evaluations, "exact evaluation"), best(p.last))
}

// bestShort is the best so far in the room beside a bar.
func bestShort(e optimize.Event) string {
	if math.IsNaN(e.Aim) {
		return ", none feasible yet"
	}
	return best(e)
}

// best describes the best so far.
func best(e optimize.Event) string {
	switch {
	case !math.IsNaN(e.Aim):
		return fmt.Sprintf(", best %.5g", e.Aim)
	case math.IsInf(e.Violation, 0):
		return ""
	}
	return fmt.Sprintf(", nothing feasible yet (least violation %.3g)", e.Violation)
}

// end closes the display.
func (p *progress) end() {
	switch {
	case p.bar != nil:
		_ = p.bar.Finish()
	case p.phase != "":
		p.sayLast()
	}
}
