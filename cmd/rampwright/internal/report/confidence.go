package report

import (
	"fmt"
	"slices"
	"strings"
)

// Confidence sets the design that knows no tolerances beside the one that holds
// each limit with the confidence asked for.
type Confidence struct {
	Confidence  Number           `json:"confidence"`
	Met         bool             `json:"met"`
	Why         string           `json:"why"`    // how the search ended
	Aimed       Number           `json:"aimed"`  // probability aimed at over the draws of a round
	Rounds      int              `json:"rounds"` // designs drawn, the nominal one first
	Round       int              `json:"round"`  // that found the backed-off design; 0 where that is the nominal one
	DrawsARound int              `json:"draws_a_round"`
	Draws       int              `json:"draws"`   // fresh ones, on which both designs are judged
	Nominal     *ConfidentDesign `json:"nominal"` // null, as backed_off, where none was backed off: see why
	BackedOff   *ConfidentDesign `json:"backed_off"`
	Limits      []ConfidentLimit `json:"limits"`
}

// ConfidentDesign is one of the two designs.
type ConfidentDesign struct {
	Variables Object[Number] `json:"variables"`
	Aim       Number         `json:"aim"`
	Joint     SpreadShare    `json:"pass_probability"` // of all limits at once
}

// ConfidentLimit is how often a limit holds for both designs, the margin the second
// was searched with, and what that costs.
type ConfidentLimit struct {
	Quantity   string      `json:"quantity"`
	At         string      `json:"at"`
	Low        Number      `json:"low"`
	High       Number      `json:"high"`
	Affected   bool        `json:"affected"`
	Nominal    SpreadShare `json:"nominal"`
	BackedOff  SpreadShare `json:"backed_off"`
	Unanswered int         `json:"unanswered"`
	LowMargin  Number      `json:"low_margin"`  // by which the lower side was moved up
	HighMargin Number      `json:"high_margin"` // by which the upper side was moved down
	Price      Number      `json:"price"`       // of the aim for each unit of margin
	Cost       Number      `json:"cost"`        // price times margin

	low, high float64
}

// Bounds sets the sides of the limit, infinite where absent.
func (l *ConfidentLimit) Bounds(low, high float64) {
	l.low, l.high = low, high
	l.Low, l.High = oneSided(low), oneSided(high)
}

// weakest is the limit of the backed-off design that holds most rarely; nil without
// any that moves.
func (c *Confidence) weakest() *ConfidentLimit {
	var weakest *ConfidentLimit
	for i := range c.Limits {
		if l := &c.Limits[i]; l.Affected && (weakest == nil || l.BackedOff.Share < weakest.BackedOff.Share) {
			weakest = l
		}
	}
	return weakest
}

// unanswered reports whether some draw of a limit has no answer.
func (c *Confidence) unanswered() bool {
	return slices.ContainsFunc(c.Limits, func(l ConfidentLimit) bool { return l.Affected && l.Unanswered > 0 })
}

// missed reports whether a backed-off design does not reach the confidence.
func (c *Confidence) missed() bool { return c != nil && !c.Met && c.BackedOff != nil }

// movedOn reports whether the backed-off design is another than the nominal one.
func (c *Confidence) movedOn() bool {
	return c != nil && c.BackedOff != nil && (c.Round > 0 || c.BackedOff.Aim != c.Nominal.Aim)
}

// percentText is the confidence asked for.
func (c *Confidence) percentText() string { return fmt.Sprintf("%g %%", 100*float64(c.Confidence)) }

// confidenceCautions say where the confidence is not reached.
func (s *Study) confidenceCautions() []Caution {
	c := s.Confidence
	if c == nil || c.Met {
		return nil
	}
	if c.BackedOff == nil {
		return []Caution{{"confidence", "", fmt.Sprintf("The confidence of %s asked for each limit does not bear on this design: %s.", c.percentText(), c.Why)}}
	}
	text := fmt.Sprintf("The confidence of %s asked for each limit is not reached: %s.", c.percentText(), c.Why)
	if weakest := c.weakest(); weakest != nil {
		text += fmt.Sprintf(" Over fresh draws %s holds in %s %%", aimPhrase(weakest.Quantity, weakest.At), sharePercent(weakest.BackedOff.Share))
		if holes := weakest.unansweredText(c.Draws); holes != "" {
			text += fmt.Sprintf(", and has no value in %s %%", holes)
		}
		text += "."
	}
	return []Caution{{"confidence", "", text}}
}

// confidence writes both designs and what the margins cost.
func (d *DesignDocument) confidence(p *page) {
	c := d.Confidence
	if c == nil {
		return
	}
	p.heading(fmt.Sprintf("Confidence: each limit in %g %% of the inlets built and flown", 100*float64(c.Confidence)))
	if c.BackedOff == nil {
		p.wrap("", sentenceCase(c.Why)+".", "")
		return
	}
	p.wrap("", d.confidenceAnswer(), "")
	p.WriteByte('\n')
	d.bothDesigns(p)
	d.marginCosts(p)
	p.WriteByte('\n')
	p.wrap(indent, fmt.Sprintf("Holds: per cent of %d fresh draws of the exact model, standard error %s at most. %s%s Cost: margin times price, in %s, to first order.",
		c.Draws, percentError(c.largestError()), c.holesText(), c.marginWords(), d.aimUnit()), indent)
}

// marginWords say whose the margins are, so that those of a confidence that is not
// met are not read as those that would do.
func (c *Confidence) marginWords() string {
	if !c.movedOn() {
		return "Margin: none, as the design shown is the nominal one."
	}
	text := fmt.Sprintf("Margin: by how much the search of the design shown, that of round %d, kept inside; from %d draws of each design before it, aimed at %.4g %%.", c.Round, c.DrawsARound, 100*float64(c.Aimed))
	if !c.Met {
		text += " What was asked for after it is not shown; these margins are not enough."
	}
	return text
}

// holesText says what draws without an answer are.
func (c *Confidence) holesText() string {
	if !c.unanswered() {
		return ""
	}
	return "No answer: per cent of the draws of the backed-off design without a value of the quantity; they count as not held, and no margin of the limit mends them. "
}

func (c *Confidence) largestError() Number {
	most := max(c.Nominal.Joint.Error, c.BackedOff.Joint.Error)
	for i := range c.Limits {
		most = max(most, c.Limits[i].Nominal.Error, c.Limits[i].BackedOff.Error)
	}
	return most
}

func (d *DesignDocument) aimUnit() string {
	if what := d.Best.Aim.Text; !strings.ContainsAny(what, " +-*/^(@") {
		return what
	}
	return "the aim"
}

// confidenceAnswer is what the confidence costs, in a sentence.
func (d *DesignDocument) confidenceAnswer() string {
	c := d.Confidence
	word := "Met"
	if !c.Met {
		word = "Not met (" + c.Why + ")"
	}
	if !c.movedOn() {
		return fmt.Sprintf("%s. The design shown is the one that knows no tolerances, with %s of %s. All limits together hold in %s %%.",
			word, d.aimName(), significant(float64(c.Nominal.Aim)), sharePercent(c.Nominal.Joint.Share))
	}
	text := fmt.Sprintf("%s: %s of %s instead of %s for the design that knows no tolerances. All limits together hold in %s %% instead of %s %%.",
		word, d.aimName(), significant(float64(c.BackedOff.Aim)), significant(float64(c.Nominal.Aim)), sharePercent(c.BackedOff.Joint.Share), sharePercent(c.Nominal.Joint.Share))
	for _, v := range c.BackedOff.Variables {
		if v.Name == "lip_setback" {
			text += fmt.Sprintf(" The lip setback chosen is %s capture heights.", significant(float64(v.Value)))
		}
	}
	return text
}

// bothDesigns sets the searched values side by side.
func (d *DesignDocument) bothDesigns(p *page) {
	c := d.Confidence
	t := &table{columns: []column{{head: "searched"}, {head: "nominal"}, {head: "backed off"}}}
	for i, v := range c.Nominal.Variables {
		t.add(v.Name, significant(float64(v.Value)), significant(float64(c.BackedOff.Variables[i].Value)))
	}
	p.table(t)
	p.WriteByte('\n')
}

// marginCosts writes how often each limit holds for both designs, and its margin.
func (d *DesignDocument) marginCosts(p *page) {
	t := &table{columns: []column{{head: "limit"}, {head: "bound", drop: 2}, {head: "nominal\nholds"}, {head: "backed\noff\nholds"}, {head: "margin"}, {head: "cost", drop: 1}}}
	holes := d.Confidence.unanswered()
	if holes {
		t.columns = slices.Insert(t.columns, 4, column{head: "no\nanswer"})
	}
	for _, point := range d.study.points() {
		first := true
		for i := range d.Confidence.Limits {
			l := &d.Confidence.Limits[i]
			if l.At != point {
				continue
			}
			if first {
				t.section(point)
				first = false
			}
			cells := l.cells()
			if holes {
				cells = slices.Insert(cells, 4, l.unansweredText(d.Confidence.Draws))
			}
			t.add(cells...)
		}
	}
	p.table(t)
}

// cells are the row of a limit.
func (l *ConfidentLimit) cells() []string {
	if !l.Affected {
		return []string{l.Quantity, bounds(l.low, l.high), "not", "affected", "", ""}
	}
	cost := ""
	if l.Cost > 0 {
		cost = significant(float64(l.Cost))
	}
	return []string{l.Quantity, bounds(l.low, l.high), sharePercent(l.Nominal.Share), sharePercent(l.BackedOff.Share), l.marginText(), cost}
}

// unansweredText is the share of the draws of the backed-off design that gave the
// quantity no value.
func (l *ConfidentLimit) unansweredText(draws int) string {
	if !l.Affected || l.Unanswered == 0 {
		return ""
	}
	return sharePercent(Number(float64(l.Unanswered) / float64(draws)))
}

// marginText is the margin of the sides that have one.
func (l *ConfidentLimit) marginText() string {
	var parts []string
	if finite(float64(l.Low)) {
		parts = append(parts, fmt.Sprintf("%.3g", float64(l.LowMargin)))
	}
	if finite(float64(l.High)) {
		parts = append(parts, fmt.Sprintf("%.3g", float64(l.HighMargin)))
	}
	return strings.Join(parts, "; ")
}
