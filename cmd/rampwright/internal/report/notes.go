package report

import (
	"context"
	"fmt"
	"math"
	"strings"

	"rampwright/problems/inlet"
)

// Rounded is the nearest design with angles in tenths of a degree that keeps every
// limit; variables are absent where none was found near the optimum.
type Rounded struct {
	Variables Object[Number] `json:"variables,omitzero"`
	Aim       Number         `json:"aim"`
}

// Play is how far a variable may move, the others following, for a vanishing loss
// of the aim.
type Play struct {
	Variable string `json:"variable"`
	Low      Number `json:"low"`
	High     Number `json:"high"`
}

// PlayLoss is the relative loss of the aim at which play is measured.
const PlayLoss = 1e-6

func (s *Study) rounded() *Rounded {
	if s.Rounded == nil {
		return nil
	}
	out := &Rounded{Aim: Number(s.Rounded.Aim)}
	if s.Rounded.X != nil {
		out.Variables = s.variables(s.Rounded.X)
	}
	return out
}

func (s *Study) plays() []Play {
	list := []Play{}
	for i, p := range s.Plays {
		list = append(list, Play{s.model().Variables()[i].Name, Number(p.Low), Number(p.High)})
	}
	return list
}

// notes are what a senior engineer would add to a design that holds its limits.
func (s *Study) notes() []string {
	notes := []string{}
	if note := s.notUnique(); note != "" {
		notes = append(notes, note)
	}
	notes = append(notes, s.tracedNotes()...)
	return append(notes, s.slower()...)
}

// widePlay is the share of a variable's range beyond which its play at a vanishing
// loss means that the aim does not choose it.
const widePlay = 0.05

// notUnique names the variables the aim leaves open.
func (s *Study) notUnique() string {
	var open []string
	for i, p := range s.Plays {
		v := s.model().Variables()[i]
		if p.High-p.Low > widePlay*(v.High-v.Low) {
			open = append(open, fmt.Sprintf("%s %s to %s", v.Name, significant(p.Low), significant(p.High)))
		}
	}
	if len(open) == 0 {
		return ""
	}
	note := fmt.Sprintf("The optimum is not unique: for a relative loss below %g the design may move over %s (the others following). A second criterion, such as length or drag, can choose.", PlayLoss, strings.Join(open, ", "))
	if s.windowed() {
		note += " The cause: pressure and temperature limits fix the recovery, p3/p0 = pi psi^(g/(g-1))."
	}
	return note
}

// windowed reports whether active limits on throat pressure and temperature at
// one point fix the recovery between them.
func (s *Study) windowed() bool {
	active := map[string]bool{}
	for _, c := range s.Result.Best.Assessment.Checks {
		if c.Active {
			active[c.Quantity.Point+"/"+c.Quantity.Name] = true
		}
	}
	if s.Flow == nil {
		return false
	}
	for _, p := range s.Flow.Points {
		at := p.Point.Name + "/"
		if (active[at+"throat_pressure_kPa"] || active[at+"pressure_ratio"]) && (active[at+"throat_temperature_K"] || active[at+"temperature_ratio"]) {
			return true
		}
	}
	return false
}

// slowdown is the change of Mach number behind the sensitivity note.
const slowdown = 0.01

// slower says what a slightly lower Mach number at the design point does to the
// frozen inlet, static state held.
func (s *Study) slower() []string {
	if s.Problem == nil {
		return nil
	}
	definition := s.Problem.Definition()
	point := definition.Points[0]
	before := point.Mach
	point.Mach *= 1 - slowdown
	definition.Points = []inlet.Point{point}
	problem, err := inlet.New(definition)
	if err != nil {
		return nil
	}
	flow, err := problem.FlowBy(context.Background(), s.Result.Best.X, inlet.SearchTrace())
	if err != nil || flow.Points[0].Err != nil {
		return nil
	}
	var changes []string
	for i, q := range problem.Quantities() {
		now := s.exactly(q.Name, point.Name)
		then := flow.Evaluation.Values[i]
		if wanted, ok := slowerNames[q.Name]; ok && q.Point == point.Name && finite(now) && finite(then) {
			changes = append(changes, fmt.Sprintf("%s %s to %s", wanted, significant(now), significant(then)))
		}
	}
	if len(changes) == 0 {
		return nil
	}
	return []string{fmt.Sprintf("At Mach %s instead of %s the frozen inlet changes: %s.", plain(point.Mach), plain(before), strings.Join(changes, ", "))}
}

var slowerNames = map[string]string{
	"recovery": "recovery", "throat_temperature_K": "throat temperature, K,", "capture": "capture", "internal_contraction_over_self_start": "contraction over self-start",
}

// exactly returns the exact value of a quantity that stands alone.
func (s *Study) exactly(name, point string) float64 {
	for i, q := range s.model().Quantities() {
		if q.Name == name && q.Point == point && q.Member == "" {
			return s.Result.Best.Exact.Values[i]
		}
	}
	return math.NaN()
}

// nearby writes the rounded design and the notes.
func (d *DesignDocument) nearby(p *page) {
	if r := d.Rounded; r != nil {
		p.WriteByte('\n')
		p.wrap("", d.roundedText(r), "")
	}
	if len(d.Notes) > 0 {
		p.heading("Notes")
		for _, note := range d.Notes {
			p.wrap("  - ", note, "    ")
		}
	}
}

// roundedText tells of the design in tenths of a degree, which keeps the margins of a
// confidence as well.
func (d *DesignDocument) roundedText(r *Rounded) string {
	keeps, short := "keeps every limit exactly", ""
	if c := d.Confidence; c.movedOn() {
		keeps = "keeps every limit with its margin above"
		if !c.Met {
			short = " Those margins do not reach the confidence."
		}
	}
	if r.Variables == nil {
		return "In tenths of a degree: no design near this one " + keeps + "." + short
	}
	var angles []string
	for _, v := range d.study.model().Variables() {
		value, _ := r.Variables.Get(v.Name)
		angles = append(angles, plain(float64(value)))
	}
	return fmt.Sprintf("In tenths of a degree: the nearest design that %s is %s (in the order above), with %s of %s.%s",
		keeps, strings.Join(angles, ", "), d.aimName(), significant(float64(r.Aim)), short)
}
