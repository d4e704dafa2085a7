package report

import (
	"fmt"
	"math"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems"
	"rampwright/problems/envelope"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// ScheduleStudy is a finished schedule of a movable part.
type ScheduleStudy struct {
	Definition inlet.Definition
	Hinge      inlet.Hinge
	Design     float64 // the part's angle in the frozen inlet, rad
	Aim        problems.Aim
	LimitsOf   string
	Air        envelope.Air
	Quantities []problems.Quantity
	Traces     wave.Settings
	Schedule   *envelope.Schedule
}

// ScheduleDocument is a schedule as a document.
type ScheduleDocument struct {
	Format       int           `json:"format"`
	Program      string        `json:"program"`
	Title        string        `json:"title"`
	BriefHash    string        `json:"brief_hash"`
	Moved        string        `json:"moved"` // the angle, as a variable is named
	HingeModel   string        `json:"hinge_model"`
	DesignDeg    Number        `json:"design_deg"`
	StopsDeg     [2]Number     `json:"hinge_stops_deg"`
	IncidenceDeg Number        `json:"incidence_deg"`
	Air          EnvelopeAir   `json:"air"`
	LimitsOf     string        `json:"limits_of"`
	Traces       TraceSettings `json:"traces"`
	Aim          LadderAim     `json:"aim"`
	Rows         []ScheduleRow `json:"rows"`
	Evaluations  int           `json:"evaluations"`
	Cautions     []Caution     `json:"cautions"`
	Assumptions  []string      `json:"assumptions"`

	study ScheduleStudy
}

// ScheduleRow is the part at one Mach number. AngleDeg is the best position that keeps
// every limit or, where LimitsKept is false, the one that misses them least.
type ScheduleRow struct {
	Mach       Number           `json:"mach"`
	AngleDeg   Number           `json:"angle_deg"`
	LimitsKept bool             `json:"limits_kept"`
	AtStop     string           `json:"at_stop"`  // "low", "high" or empty
	LowDeg     Number           `json:"low_deg"`  // of the angles around it that keep every limit
	HighDeg    Number           `json:"high_deg"` //
	Aim        Number           `json:"aim"`
	Status     string           `json:"status"`
	Missed     []ScheduleMissed `json:"limits_missed"`
	Quantities Object[Number]   `json:"quantities"`
	Missing    Object[string]   `json:"missing"`

	readings []reading
}

// ScheduleMissed is a limit that no position keeps together with the others.
type ScheduleMissed struct {
	Limit  string `json:"limit"`
	Margin Number `json:"margin"` // negative, in the unit of the quantity
	Reason string `json:"reason"` // why the quantity has no value, else empty
}

const cowlModel = "the cowl is a flap from the lip to abreast of the shoulder; it turns about the lip with its outer surface, and the inner cowl behind it keeps its direction and follows"

// NewSchedule describes a finished schedule.
func NewSchedule(head Head, study ScheduleStudy) *ScheduleDocument {
	s := &study.Schedule.Settings
	d := &ScheduleDocument{
		Format: format, Program: head.Program, Title: head.Title, BriefHash: head.BriefHash,
		Moved: study.Hinge.Name(), HingeModel: cowlModel, DesignDeg: Number(gridDegrees(study.Design)),
		StopsDeg:     [2]Number{Number(gridDegrees(s.LowAngle)), Number(gridDegrees(s.HighAngle))},
		IncidenceDeg: Number(gridDegrees(s.Incidence)), Air: newEnvelopeAir(study.Air), LimitsOf: study.LimitsOf,
		Traces: traceSettings(study.Traces), Aim: LadderAim{study.Aim.Text, "every Mach number", study.Aim.Highest}, Rows: []ScheduleRow{},
		Evaluations: study.Schedule.Evaluations, Assumptions: assumptions(study.Definition), study: study,
	}
	if k := study.Hinge.Ramp; k > 0 {
		d.HingeModel = fmt.Sprintf("ramp %d and those behind it turn as one body about its leading corner; the body wall behind the shoulder keeps its direction and follows", k)
	}
	for i := range study.Schedule.Rows {
		d.Rows = append(d.Rows, d.row(&study.Schedule.Rows[i]))
	}
	d.Cautions = d.raise()
	return d
}

func (d *ScheduleDocument) row(r *envelope.ScheduleRow) ScheduleRow {
	best := &r.Best
	row := ScheduleRow{
		Mach: Number(r.Mach), AngleDeg: Number(gridDegrees(best.Angle)), LimitsKept: best.Kept(),
		LowDeg: Number(gridDegrees(r.Low)), HighDeg: Number(gridDegrees(r.High)), Aim: Number(best.Aim), Status: attachedStatus,
		Missed: []ScheduleMissed{}, readings: readings(d.study.Quantities, best.Exact),
	}
	if best.Status != nil {
		row.Status = best.Status.Error()
	}
	s := &d.study.Schedule.Settings
	switch {
	case best.Angle-s.LowAngle < 2*s.Tolerance:
		row.AtStop = "low"
	case s.HighAngle-best.Angle < 2*s.Tolerance:
		row.AtStop = "high"
	}
	for _, m := range best.Missed {
		missed := ScheduleMissed{m.Limit, Number(m.Margin), ""}
		if math.IsNaN(m.Margin) {
			missed.Reason = reasonText(m.Reason)
		}
		row.Missed = append(row.Missed, missed)
	}
	row.Quantities = values(row.readings)
	row.Missing = append(Object[string]{}, whyNull(
		nullable{"low_deg", r.Low, noneKeeps}, nullable{"high_deg", r.High, noneKeeps},
		nullable{"aim", best.Aim, "a quantity of the aim has no value"})...)
	for _, q := range row.readings {
		if math.IsNaN(q.value) {
			row.Missing = append(row.Missing, Field[string]{q.name, reasonText(q.reason)})
		}
	}
	return row
}

const noneKeeps = "no position keeps every limit"

// JSON returns the document as indented JSON.
func (d *ScheduleDocument) JSON() []byte { return document(d) }

// Kept counts the Mach numbers at which some position keeps every limit.
func (d *ScheduleDocument) Kept() int {
	n := 0
	for i := range d.Rows {
		if d.Rows[i].LimitsKept {
			n++
		}
	}
	return n
}

// raise lists what the schedule itself raises.
func (d *ScheduleDocument) raise() []Caution {
	list := []Caution{}
	add := func(rule, text string, args ...any) {
		list = append(list, Caution{rule, "", fmt.Sprintf(text, args...)})
	}
	if lost := len(d.Rows) - d.Kept(); lost > 0 {
		add("limits_missed", "At %d of %d Mach numbers no position between the hinge stops keeps every limit of %s.", lost, len(d.Rows), d.LimitsOf)
	}
	over, stops, widest := 0, 0, 0.0
	for i := range d.Rows {
		row := &d.Rows[i]
		if find(row.readings, selfStartQuantity, "").value > 1 {
			over++
		}
		if row.AtStop != "" {
			stops++
		}
		if i > 0 && row.LimitsKept && d.Rows[i-1].LimitsKept {
			widest = max(widest, math.Abs(float64(row.AngleDeg-d.Rows[i-1].AngleDeg)))
		}
	}
	if over > 0 {
		add("contraction_above_self_start", "At %d of %d Mach numbers the duct contracts more than starts by itself where it stands: a restart needs another position, and an unstart can destroy the vehicle.", over, len(d.Rows))
	}
	if stops > 0 {
		add("at_stop", "At %d of %d Mach numbers the part rests on a hinge stop: the stop, not the flow, sets the schedule there.", stops, len(d.Rows))
	}
	if share := widest / float64(d.StopsDeg[1]-d.StopsDeg[0]); share > jumpShare {
		add("jump", "Between two neighbouring Mach numbers the schedule moves by %.3g deg, %.2g %% of the whole travel: the two positions may belong to different flows.", widest, 100*share)
	}
	add("moved_parts", "Seals, gaps and the load on the hinge are not computed.")
	return list
}

// jumpShare of the travel between neighbouring Mach numbers raises a caution.
const jumpShare = 0.25

// Text returns the document for a terminal of that width.
func (d *ScheduleDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.cautions(d.Cautions)
	p.heading("Schedule of " + d.Moved)
	p.wrap("", d.held(), "")
	p.WriteByte('\n')
	t := &table{columns: []column{{head: "Mach"}, {head: "angle\ndeg"}, {head: "keeps limits\nfrom"}, {head: "\nto"}, {head: "aim"},
		{head: "capture", drop: 1}, {head: "throat\nMach", drop: 2}, {head: "throat\nkPa", drop: 3}, {head: "note", left: true}}}
	for i := range d.Rows {
		row := &d.Rows[i]
		value := func(name string) string { return significant(find(row.readings, name, "").value) }
		t.add(significant(float64(row.Mach)), significant(float64(row.AngleDeg)), significant(float64(row.LowDeg)), significant(float64(row.HighDeg)),
			significant(float64(row.Aim)), value("capture"), value("throat_mach"), value("throat_pressure_kPa"), row.note())
	}
	p.table(t)
	d.misses(p)
	p.assumptions(d.Assumptions)
	return p.String()
}

func (row *ScheduleRow) note() string {
	switch {
	case !row.LimitsKept:
		return "limits missed"
	case row.AtStop != "":
		return row.AtStop + " stop"
	}
	return ""
}

// held says what was scheduled and how.
func (d *ScheduleDocument) held() string {
	text := fmt.Sprintf("%s %s among the positions that keep every limit of %s, hinge stops %s and %s deg, %s deg as designed.",
		sentenceCase(extreme(d.Aim.Highest)), d.Aim.Text, d.LimitsOf, plain(float64(d.StopsDeg[0])), plain(float64(d.StopsDeg[1])), significant(float64(d.DesignDeg)))
	return text + fmt.Sprintf(" Hinge: %s. Incidence %s deg; ambient air: %s. Every position is traced.", d.HingeModel, plain(float64(d.IncidenceDeg)), d.Air.text())
}

// trifle is a miss that only shows how finely the angle was sought.
const trifle = 1e-5

// misses writes which limits fail, and by how much, where no position keeps all.
func (d *ScheduleDocument) misses(p *page) {
	if d.Kept() == len(d.Rows) {
		return
	}
	p.heading("Where no position keeps every limit")
	p.wrap("", "At the position that misses them least:", "")
	for i := range d.Rows {
		row := &d.Rows[i]
		if row.LimitsKept {
			continue
		}
		var parts []string
		for _, m := range row.Missed {
			switch {
			case m.Reason != "":
				parts = append(parts, m.Limit+" has no value ("+m.Reason+")")
			case -float64(m.Margin) > trifle:
				parts = append(parts, fmt.Sprintf("%s by %s", m.Limit, significant(-float64(m.Margin))))
			}
		}
		if parts == nil {
			parts = append(parts, "the aim has no value")
		}
		p.wrap(fmt.Sprintf("  Mach %s: ", significant(float64(row.Mach))), strings.Join(parts, ", "), "    ")
	}
}

// CSV writes schedule.csv: one row a Mach number, empty where a value is missing.
func (d *ScheduleDocument) CSV() []byte {
	header := []string{"mach", "angle_deg", "limits_kept", "at_stop", "low_deg", "high_deg", "aim", "status", "limits_missed"}
	for _, q := range d.Rows[0].Quantities {
		header = append(header, q.Name)
	}
	rows := [][]string{header}
	for i := range d.Rows {
		row := &d.Rows[i]
		var missed []string
		for _, m := range row.Missed {
			missed = append(missed, m.Limit)
		}
		cells := []string{shortest(float64(row.Mach)), shortest(float64(row.AngleDeg)), fmt.Sprint(row.LimitsKept), row.AtStop,
			shortest(float64(row.LowDeg)), shortest(float64(row.HighDeg)), shortest(float64(row.Aim)), row.Status, strings.Join(missed, "; ")}
		for _, q := range row.Quantities {
			cells = append(cells, shortest(float64(q.Value)))
		}
		rows = append(rows, cells)
	}
	return csvBytes(rows)
}

// Picture draws schedule.svg: the angle against Mach number, how far it may move, and
// the hinge stops.
func (d *ScheduleDocument) Picture() ([]byte, error) {
	c := chart.LineChart{
		Title: d.Title + ": schedule of " + d.Moved, Subtitle: []string{d.held()},
		XLabel: "free-stream Mach number", YLabel: strings.ReplaceAll(strings.TrimSuffix(d.Moved, "_deg"), "_", " ") + ", deg",
		Low: d.study.Schedule.Settings.LowMach, High: d.study.Schedule.Settings.HighMach,
		Levels: []chart.Level{{Name: "lower hinge stop", Y: float64(d.StopsDeg[0])}, {Name: "upper hinge stop", Y: float64(d.StopsDeg[1])}},
	}
	for _, of := range []struct {
		name string
		lead bool
		read func(*ScheduleRow) Number
	}{
		{"best, limits kept", true, func(r *ScheduleRow) Number { return r.AngleDeg }},
		{"highest, limits kept", false, func(r *ScheduleRow) Number { return r.HighDeg }},
		{"lowest, limits kept", false, func(r *ScheduleRow) Number { return r.LowDeg }},
		{"least miss of the limits", false, func(r *ScheduleRow) Number { return r.AngleDeg }},
	} {
		line := chart.Line{Name: of.name, Lead: of.lead}
		line.Points = curve(len(d.Rows), func(i int) (x, y float64) {
			row := &d.Rows[i]
			if row.LimitsKept == (of.name == "least miss of the limits") {
				return float64(row.Mach), math.NaN()
			}
			return float64(row.Mach), float64(of.read(row))
		})
		if line.Points != nil {
			c.Lines = append(c.Lines, line)
		}
	}
	return drawLines(c)
}
