package brief

import (
	"bytes"
	"fmt"

	"rampwright/problems"
	"rampwright/problems/inlet"
)

// Tolerance is the scatter of a built and flown inlet: standard deviations of
// normal distributions truncated at 4 of them, and the confidence a design is
// asked to hold its limits with.
type Tolerance struct {
	RampAngleDeg float64 `json:"ramp_angle_deg"`
	CowlAngleDeg float64 `json:"cowl_angle_deg"`
	LipSetback   float64 `json:"lip_setback"`
	Mach         float64 `json:"mach"`
	IncidenceDeg float64 `json:"incidence_deg"`
	Confidence   float64 `json:"confidence"` // 0 where none is asked for
}

// Any reports whether anything scatters.
func (t Tolerance) Any() bool {
	return t.RampAngleDeg > 0 || t.CowlAngleDeg > 0 || t.LipSetback > 0 || t.Mach > 0 || t.IncidenceDeg > 0
}

// Deviations are the standard deviations as the inlet takes them.
func (t Tolerance) Deviations() inlet.Tolerances {
	return inlet.Tolerances{
		RampAngle: t.RampAngleDeg, CowlAngle: t.CowlAngleDeg, LipSetback: t.LipSetback,
		Mach: t.Mach, Incidence: t.IncidenceDeg,
	}
}

// readTolerance reads the scatter of the built inlet. A confidence without any
// scatter, and flight points that scatter out of supersonic flow, are refused.
func (r *reader) readTolerance(root *node) {
	part := r.child(root, tolerance)
	number := func(name string) float64 {
		k := known(tolerance, name)
		return r.number(part, k, k.Path())
	}
	t := Tolerance{
		RampAngleDeg: number("ramp_angle_deg"),
		CowlAngleDeg: number("cowl_angle_deg"),
		LipSetback:   number("lip_setback"),
		Mach:         number("mach"),
		IncidenceDeg: number("incidence_deg"),
	}
	k := known(tolerance, "confidence")
	if n := r.value(part, k); n != nil {
		t.Confidence, _ = r.decimalOf(n, k, k.Name)
		r.record(k.Path(), exactNumber(t.Confidence), "", n)
		if sum := t.RampAngleDeg + t.CowlAngleDeg + t.LipSetback + t.Mach + t.IncidenceDeg; sum == 0 {
			r.add(n, Problem{Message: "a confidence needs a tolerance: nothing scatters", Value: n.text, Hint: "state ramp_angle_deg, mach or another standard deviation"})
		}
	}
	r.brief.Tolerance = t
	r.checkWalls(part)
	r.checkSlowest(part)
}

// checkWalls refuses a scatter of what a given outline does not have.
func (r *reader) checkWalls(part *node) {
	if !r.outlined {
		return
	}
	t := &r.brief.Tolerance
	for _, angle := range []struct {
		name      string
		deviation float64
	}{{"ramp_angle_deg", t.RampAngleDeg}, {"cowl_angle_deg", t.CowlAngleDeg}, {"lip_setback", t.LipSetback}} {
		if angle.deviation > 0 {
			r.add(part.get(angle.name), Problem{
				Message: angle.name + " does not scatter: the walls of an outline stay as given",
				Value:   exactNumber(angle.deviation), Allowed: "0", Hint: "mach and incidence_deg scatter",
			})
		}
	}
}

// checkSlowest refuses a scatter of Mach that leaves supersonic flow.
func (r *reader) checkSlowest(part *node) {
	deviation := r.brief.Tolerance.Mach
	for _, c := range r.brief.Flight {
		if slowest := c.Mach - problems.TruncatedAt*deviation; slowest <= 1 {
			r.add(part.get("mach"), Problem{
				Message: fmt.Sprintf("mach scatters %s down to %s: the flow must stay supersonic", c.Name, shortNumber(slowest)),
				Value:   exactNumber(deviation),
				Allowed: fmt.Sprintf("below %s, a quarter of what the point lies above Mach 1", shortNumber((c.Mach-1)/problems.TruncatedAt)),
			})
			return
		}
	}
}

func (b *Brief) writeTolerance(w *bytes.Buffer) {
	t := b.Tolerance
	fmt.Fprintf(w, "tolerance: {ramp_angle_deg: %s, cowl_angle_deg: %s, lip_setback: %s, mach: %s, incidence_deg: %s",
		exactNumber(t.RampAngleDeg), exactNumber(t.CowlAngleDeg), exactNumber(t.LipSetback), exactNumber(t.Mach), exactNumber(t.IncidenceDeg))
	if t.Confidence > 0 {
		fmt.Fprintf(w, ", confidence: %s", exactNumber(t.Confidence))
	}
	w.WriteString("}\n")
}
