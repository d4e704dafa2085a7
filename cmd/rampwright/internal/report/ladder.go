package report

import (
	"fmt"
	"math"
	"strings"

	"rampwright/optimize"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// LadderStudy is a finished ladder: one inlet designed with one ramp more at a
// time.
type LadderStudy struct {
	Definition inlet.Definition // of the brief; its ramps are those the brief has
	Aim        problems.Aim
	Rungs      []Rung // by rising number of ramps
}

// Rung is one number of ramps.
type Rung struct {
	Ramps   int
	Study   *Study         // nil where no search was run
	Refused []string       // why no search over the brief can succeed; nil where one may
	Equal   *EqualStrength // nil without a terminal shock
}

// EqualStrength is the greatest recovery of a number of oblique shocks and a
// terminal shock with free turning.
type EqualStrength struct {
	Shocks   int
	Recovery float64 // duct factor included
}

// Results lists those of the rungs that were searched.
func (l *LadderStudy) Results() []*optimize.Result {
	var list []*optimize.Result
	for _, r := range l.Rungs {
		if r.Study != nil {
			list = append(list, r.Study.Result)
		}
	}
	return list
}

// LadderDocument is a ladder as a document.
type LadderDocument struct {
	Format    int         `json:"format"`
	Program   string      `json:"program"`
	Title     string      `json:"title"`
	Seed      int64       `json:"seed"`
	BriefHash string      `json:"brief_hash"`
	Aim       LadderAim   `json:"aim"`
	Rows      []LadderRow `json:"rows"`
	Advice    []string    `json:"advice"`
	// StandardRecovery is that of MIL-E-5007D at the design point.
	StandardRecovery Number       `json:"standard_recovery"`
	Limit            string       `json:"equal_strength_rule"` // what the rows' equal_strength is, or why there is none
	Cautions         []RowCaution `json:"cautions"`
	Assumptions      []string     `json:"assumptions"`

	study LadderStudy
}

// LadderAim is what every search drove.
type LadderAim struct {
	Text    string `json:"text"`
	Where   string `json:"where"`
	Highest bool   `json:"highest"`
}

// LadderRow is the design with one number of ramps. Status is that of a design,
// "refused" where the box or a limit leaves nothing to search, "not_run" where
// time ran out before.
type LadderRow struct {
	Ramps         int                    `json:"ramps"`
	Status        string                 `json:"status"`
	Reason        string                 `json:"reason"` // why no design holds every limit, or why there is none; else empty
	Aim           RowAim                 `json:"aim"`
	Variables     Object[Number]         `json:"variables"`
	Exact         Object[Object[Number]] `json:"exact"`
	Gain          Number                 `json:"gain"`            // of the aim over the row before, positive when better
	RampAtMinimum []int                  `json:"ramp_at_minimum"` // ramps at their smallest angle: delete one
	Feasible      bool                   `json:"feasible"`
	Violation     Number                 `json:"violation"`
	Conflicts     []Conflict             `json:"conflicts"`
	Relaxation    []Loosened             `json:"relaxation"`
	EqualStrength Number                 `json:"equal_strength"`
	Evidence      Evidence               `json:"evidence"`
	Evaluations   Evaluations            `json:"evaluations"`
	Missing       Object[string]         `json:"missing,omitzero"`

	study *Study
}

// RowAim is the aim of one row.
type RowAim struct {
	Exact     Number `json:"exact"`
	Predicted Number `json:"predicted"`
}

// NewLadder describes a finished ladder.
func NewLadder(head Head, study LadderStudy) *LadderDocument {
	point := study.Definition.Points[0]
	d := &LadderDocument{
		Format: format, Program: head.Program, Title: head.Title, Seed: head.Seed, BriefHash: head.BriefHash,
		Aim:  LadderAim{study.Aim.Text, study.Aim.Where, study.Aim.Highest},
		Rows: []LadderRow{}, StandardRecovery: Number(inlet.StandardRecovery(point.Mach)), Limit: study.limit(),
		Assumptions: assumptions(study.Definition), study: study,
	}
	for i := range study.Rungs {
		row := newLadderRow(&study.Rungs[i])
		if i > 0 {
			row.gainOver(&d.Rows[i-1], study.Aim.Highest)
		} else {
			row.noGain("the first row")
		}
		d.Rows = append(d.Rows, row)
	}
	d.Advice = d.advise()
	d.Cautions = rowCautions(d.studies())
	return d
}

// JSON returns the document as indented JSON.
func (d *LadderDocument) JSON() []byte { return document(d) }

// limit says what the equal-strength limit of the rows is.
func (l *LadderStudy) limit() string {
	for _, r := range l.Rungs {
		if r.Equal == nil {
			return "not drawn: without a terminal shock recovery has no bound but the turning asked for"
		}
		if r.Equal.Shocks > r.Ramps {
			return "greatest recovery of the ramp shocks, the lip shock and the terminal shock with free turning (Oswatitsch 1944), times the duct factor"
		}
	}
	return "greatest recovery of the ramp shocks and the terminal shock with free turning (Oswatitsch 1944), times the duct factor"
}

func newLadderRow(r *Rung) LadderRow {
	none := Number(math.NaN())
	row := LadderRow{
		Ramps: r.Ramps, Status: neverRun, Reason: "the run ended before it", study: r.Study,
		Aim: RowAim{none, none}, Variables: Object[Number]{}, Exact: Object[Object[Number]]{}, RampAtMinimum: []int{},
		Gain: none, Violation: none, Conflicts: []Conflict{}, Relaxation: []Loosened{}, EqualStrength: none,
		Evidence: Evidence{RouteGap: none, SurrogateError: none},
	}
	if r.Equal != nil {
		row.EqualStrength = Number(r.Equal.Recovery)
	}
	if r.Refused != nil {
		row.Status, row.Reason = "refused", strings.Join(r.Refused, "; ")
	}
	if r.Study != nil {
		row.describe(r.Study)
	} else {
		row.Evidence.Missing = Object[string]{{"route_gap", row.Reason}, {"surrogate_error", row.Reason}}
	}
	row.Missing = whyNull(
		nullable{"aim.exact", float64(row.Aim.Exact), row.Reason},
		nullable{"aim.predicted", float64(row.Aim.Predicted), unforeseen},
		nullable{"violation", float64(row.Violation), row.Reason},
		nullable{"equal_strength", float64(row.EqualStrength), "no terminal shock"})
	return row
}

// describe fills the row of a design.
func (row *LadderRow) describe(s *Study) {
	best := &s.Result.Best
	candidate := s.candidate(best)
	row.Status, row.Reason = s.Result.Status.String(), ""
	row.Aim = RowAim{candidate.Aim.Exact, candidate.Aim.Predicted}
	row.Variables, row.Feasible, row.Violation = candidate.Variables, candidate.Feasible, candidate.Violation
	row.Evidence, row.Evaluations = candidate.Evidence, Evaluations(s.Result.Counts)
	row.Conflicts, row.Relaxation = s.conflicts(), s.relaxation()
	list := readings(s.model().Quantities(), best.Exact)
	for _, point := range s.points() {
		row.Exact = append(row.Exact, Field[Object[Number]]{point, values(at(list, point))})
	}
	ramp := 0
	for i, v := range s.model().Variables() {
		if _, err := fmt.Sscanf(v.Name, "ramp_%d_angle_deg", &ramp); err != nil {
			continue
		}
		if side, _ := boundSide(v, best.X[i]); side == "lower" {
			row.RampAtMinimum = append(row.RampAtMinimum, ramp)
		}
	}
	if !row.Feasible {
		row.Reason = s.whyInfeasible()
	}
}

// whyInfeasible is the reason in one sentence: the contradictions of limits where
// they were looked for, else what the best design misses.
func (s *Study) whyInfeasible() string {
	var sets []string
	for _, conflict := range s.conflicts() {
		members := make([]string, len(conflict.Members))
		for i, m := range conflict.Members {
			members[i] = m.String()
		}
		text := strings.Join(members, " with ")
		if len(members) == 1 {
			text += " alone"
		}
		sets = append(sets, text)
	}
	if sets == nil {
		return "the nearest design misses limits: " + unmet(s.Result.Best.Assessment, false)
	}
	return "cannot be met in the search box: " + strings.Join(sets, "; nor ")
}

// gainOver compares with the row before.
func (row *LadderRow) gainOver(before *LadderRow, highest bool) {
	switch {
	case !row.Feasible:
		row.noGain("this row has no design that holds every limit")
	case !before.Feasible:
		row.noGain("the row before has no design that holds every limit")
	default:
		row.Gain = row.Aim.Exact - before.Aim.Exact
		if !highest {
			row.Gain = -row.Gain
		}
	}
}

func (row *LadderRow) noGain(why string) {
	row.Missing = append(row.Missing, Field[string]{"gain", why})
}

const neverRun = "not_run"

// worthARamp is the relative gain of the aim below which a ramp is called not
// worth its corner: a judgement, what a model without viscosity can tell apart.
const worthARamp = 0.005

// advise says which row is best, what the last ramps gain, and which ramps the
// search would rather not have.
func (d *LadderDocument) advise() []string {
	best := d.best()
	if best == nil {
		if d.Cut() {
			return []string{"No design holds every limit yet: the run was ended early."}
		}
		return []string{"No number of ramps holds every limit."}
	}
	list := []string{fmt.Sprintf("The %s %s is %s, with %s.", extreme(d.Aim.Highest), aimPhrase(d.Aim.Text, d.Aim.Where), significant(float64(best.Aim.Exact)), ramps(best.Ramps))}
	for _, row := range d.Rows {
		share := float64(row.Gain) / math.Abs(float64(row.Aim.Exact))
		switch {
		case share < 0:
			list = append(list, fmt.Sprintf("Ramp %d costs: %s against %s with one less.", row.Ramps, significant(float64(row.Aim.Exact)), significant(float64(row.Aim.Exact)-d.signed(row.Gain))))
		case share < worthARamp:
			list = append(list, fmt.Sprintf("Ramp %d gains %.2g %% of the aim: less than an inviscid figure is good to.", row.Ramps, 100*share))
		}
		if len(row.RampAtMinimum) > 0 && row.Feasible {
			list = append(list, fmt.Sprintf("With %s, %s at the smallest angle: delete %s.", ramps(row.Ramps), stand(row.RampAtMinimum), it(len(row.RampAtMinimum))))
		}
	}
	return list
}

// Cut reports whether a row is missing or unfinished.
func (d *LadderDocument) Cut() bool {
	for _, row := range d.Rows {
		switch row.Status {
		case neverRun, optimize.Stopped.String(), optimize.Interrupted.String():
			return true
		}
	}
	return false
}

// signed is a gain as a difference of the aim.
func (d *LadderDocument) signed(gain Number) float64 {
	if d.Aim.Highest {
		return float64(gain)
	}
	return -float64(gain)
}

// best is the row of the best aim among those that hold every limit.
func (d *LadderDocument) best() *LadderRow {
	var best *LadderRow
	for i := range d.Rows {
		row := &d.Rows[i]
		if row.Feasible && (best == nil || d.Aim.Highest == (row.Aim.Exact > best.Aim.Exact)) {
			best = row
		}
	}
	return best
}

// studies lists the rows that hold every limit, by name.
func (d *LadderDocument) studies() []namedStudy {
	var list []namedStudy
	for _, row := range d.Rows {
		if row.Feasible {
			list = append(list, namedStudy{ramps(row.Ramps), row.study})
		}
	}
	return list
}

func ramps(n int) string {
	if n == 1 {
		return "1 ramp"
	}
	return fmt.Sprintf("%d ramps", n)
}

// stand is "ramp 2 stands" or "ramps 2 and 3 stand".
func stand(list []int) string {
	if len(list) == 1 {
		return fmt.Sprintf("ramp %d stands", list[0])
	}
	names := make([]string, len(list))
	for i, n := range list {
		names[i] = fmt.Sprint(n)
	}
	return "ramps " + strings.Join(names, " and ") + " stand"
}

func it(n int) string {
	if n == 1 {
		return "it"
	}
	return "one of them"
}
