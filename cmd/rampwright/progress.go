package main

import (
	"fmt"
	"math"
	"time"

	"github.com/schollz/progressbar/v3"
	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/optimize"
)

// progressFlags adds the flags of every command that takes its time.
func (a *app) progressFlags(cmd *cobra.Command) {
	cmd.Flags().BoolVar(&a.quiet, "quiet", false, "no progress messages")
	cmd.Flags().Var(&a.form, "progress", "messages as auto (a line that moves on a terminal), lines, or json (one object a line)")
}

// stage is a sign of work under way.
type stage struct {
	phase       string
	done, total int
	unit        string // what is counted, such as "exact evaluation"
	searching   bool   // there is a best so far
	best        float64
	violation   float64
}

// progress shows work under way: on a terminal one line a phase that moves and
// then stays; elsewhere a line when a phase ends; JSON lines where asked; nothing
// when quiet. It is told from one goroutine.
type progress struct {
	app    *app
	moving bool // on a terminal
	now    func() time.Time
	began  time.Time

	last  stage
	shown time.Time // when the last JSON line was written
	held  bool      // the last stage was not shown: too soon after the one before
	bar   *progressbar.ProgressBar
}

func (a *app) progress() *progress {
	return &progress{app: a, moving: a.form == autoProgress && terminal(a.messages), now: time.Now, began: time.Now()}
}

// observe shows an event of a search.
func (p *progress) observe(e optimize.Event) {
	p.show(stage{
		phase: e.Phase, done: e.Evaluations, total: e.Planned, unit: "exact evaluation",
		searching: true, best: e.Aim, violation: e.Violation,
	})
}

// jsonPace is the least time between two JSON lines of one phase.
const jsonPace = 200 * time.Millisecond

// show tells of a stage.
func (p *progress) show(s stage) {
	if p.app.quiet {
		return
	}
	if p.last.phase != s.phase {
		if s.done < p.last.done { // counted anew
			p.began = p.now()
		}
		p.close()
	}
	p.last = s
	switch {
	case p.app.form == jsonLines:
		if p.held = p.now().Sub(p.shown) < jsonPace; !p.held {
			p.write()
		}
	case p.moving:
		p.draw(p.best() + p.timeLeft())
	}
}

// close ends the phase shown last, if any.
func (p *progress) close() {
	switch {
	case p.last.phase == "":
	case p.app.form == jsonLines:
		if p.held {
			p.write()
		}
	case p.moving:
		p.draw(p.best())
		fmt.Fprintln(p.app.messages)
	default:
		p.app.say("%s: %s%s\n", p.last.phase, count(p.last.done, p.last.unit), p.best())
	}
	p.last, p.bar, p.held, p.shown = stage{}, nil, false, time.Time{}
}

// end closes the display.
func (p *progress) end() { p.close() }

// draw moves the line of the phase.
func (p *progress) draw(about string) {
	if p.bar == nil {
		p.bar = p.app.bar(p.last.total)
	}
	p.bar.Describe(p.last.phase + about)
	_ = p.bar.Set(p.last.done) // a bar that cannot be drawn stops nothing
}

// bar is an empty bar in our plain style.
func (a *app) bar(total int) *progressbar.ProgressBar {
	return progressbar.NewOptions(total,
		progressbar.OptionSetWriter(a.messages),
		progressbar.OptionSetWidth(16),
		progressbar.OptionShowCount(),
		progressbar.OptionSetElapsedTime(false),
		progressbar.OptionSetPredictTime(false),
		progressbar.OptionSetTheme(progressbar.Theme{Saucer: "/", SaucerHead: "/", SaucerPadding: ".", BarStart: "", BarEnd: ""}),
	)
}

// write writes the stage as a JSON line.
func (p *progress) write() {
	line := &progressLine{
		Phase: p.last.phase, Done: p.last.done, Total: p.last.total, Unit: p.last.unit,
		Best: report.Number(p.last.best), Violation: report.Number(p.last.violation), SecondsLeft: report.Number(p.secondsLeft()),
	}
	if !p.last.searching {
		line.Best, line.Violation = report.Number(math.NaN()), report.Number(math.NaN())
	}
	p.app.writeLine(messageLine{Event: "progress", progressLine: line})
	p.shown = p.now()
}

// best describes the best so far.
func (p *progress) best() string {
	switch s := &p.last; {
	case !s.searching:
		return ""
	case !math.IsNaN(s.best):
		return fmt.Sprintf(", best %.5g", s.best)
	case math.IsInf(s.violation, 0):
		return ""
	case p.moving:
		return ", none feasible yet"
	}
	return fmt.Sprintf(", nothing feasible yet (least violation %.3g)", p.last.violation)
}

// secondsLeft is how long what is left takes at the pace so far, NaN before there
// is one.
func (p *progress) secondsLeft() float64 {
	if p.last.done == 0 {
		return math.NaN()
	}
	pace := p.now().Sub(p.began).Seconds() / float64(p.last.done)
	return pace * float64(max(0, p.last.total-p.last.done))
}

// timeLeft is the same in words.
func (p *progress) timeLeft() string {
	left := p.secondsLeft()
	if math.IsNaN(left) {
		return ""
	}
	return fmt.Sprintf(", %v left", time.Duration(math.Ceil(left))*time.Second)
}
