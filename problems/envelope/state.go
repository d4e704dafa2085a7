package envelope

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"rampwright/problems"
	"rampwright/problems/wave"
)

// State is what the flow is at a point of the map, in the order of concern. Whether
// limits hold is told beside it, by Sample.Missed.
type State int

const (
	// Attached: shocks attached, outside the lip, and a duct that starts by itself.
	Attached State = iota
	// OverStart: attached, the duct contracts more than starts by itself.
	OverStart
	// Swallowed: attached, a ramp shock falls inside the lip.
	Swallowed
	// Unresolved: a trace spent its budget of fronts or events ahead of the throat.
	Unresolved
	// Ended: the stream does not reach the throat for a reason not named below.
	Ended
	// Pocket: the flow is subsonic behind a shock.
	Pocket
	// Reflection: shocks in the duct meet in a Mach reflection.
	Reflection
	// LipDetached: the shock of the lip is detached.
	LipDetached
	// RampDetached: a ramp shock is detached.
	RampDetached
	// States counts the states.
	States
)

var stateNames = [States]string{
	"attached", "over the self-start limit", "shocks inside the lip",
	"not resolved", "flow ends", "subsonic pocket", "Mach reflection", "lip shock detached", "ramp shock detached",
}

// String returns the phrase of legends.
func (s State) String() string { return stateNames[s] }

// Quantities of the catalogue that states and boundaries are read from.
const (
	rampMargin  = "ramp_attachment_margin_deg"
	lipMargin   = "lip_attachment_margin_deg"
	reflection  = "lip_reflection_margin_deg"
	clearance   = "lip_clearance"
	overStart   = "internal_contraction_over_self_start"
	overCeiling = "internal_contraction_over_isentropic"
	onTheLip    = 1e-9 // capture heights: a shock that near the lip meets it
)

// stateOf names the state of a sample.
func (s *survey) stateOf(sample *Sample) State {
	if sample.Status != nil {
		return ending(sample.Status)
	}
	if v := s.swallowed.value(sample.Exact); v < -onTheLip {
		return Swallowed
	}
	if s.starting.value(sample.Exact) < 0 {
		return OverStart
	}
	return Attached
}

// missedBy lists the limits an evaluation does not meet, in their order.
func (s *survey) missedBy(e *problems.Evaluation) []string {
	var list []string
	for i := range s.limits {
		if s.limits[i].missed(e) {
			list = append(list, s.limits[i].name())
		}
	}
	return list
}

// ending names the state of a stream that does not reach the throat.
func ending(status error) State {
	var detached *problems.Detached
	if errors.As(status, &detached) {
		if strings.HasPrefix(detached.Shock, "ramp ") {
			return RampDetached
		}
		return LipDetached
	}
	var end *wave.Ending
	if errors.As(status, &end) {
		return tracedEnding(end)
	}
	var phrase *problems.Status
	if errors.As(status, &phrase) && strings.HasPrefix(phrase.Phrase, "flow subsonic") {
		return Pocket
	}
	return Ended
}

// tracedEnding names the state of a trace that ended early.
func tracedEnding(end *wave.Ending) State {
	switch end.Reason {
	case wave.FrontBudget, wave.EventBudget:
		return Unresolved
	case wave.MachReflection:
		return Reflection
	case wave.SubsonicPocket:
		return Pocket
	case wave.Detached:
		switch {
		case end.Site == "lip":
			return LipDetached
		case strings.HasPrefix(end.Site, "body corner"):
			return RampDetached
		}
	}
	return Ended
}

// margin is the signed distance of an evaluation from a bound: positive where it
// holds, in the unit of the quantity, least over the members of a group.
type margin struct {
	quantity  string
	indices   []int
	low, high float64
}

// sides turns limits into margins, one a side, of the quantities there are.
func sides(quantities []problems.Quantity, limits []problems.Limit) []margin {
	var list []margin
	for _, limit := range limits {
		for _, side := range [2][2]float64{{limit.Low, math.Inf(1)}, {math.Inf(-1), limit.High}} {
			m := marginOf(quantities, limit.Quantity, side[0], side[1])
			if len(m.indices) > 0 && !(math.IsInf(m.low, -1) && math.IsInf(m.high, 1)) {
				list = append(list, m)
			}
		}
	}
	return list
}

// scale is what a violation is measured in: the bound, at least 1.
func (m *margin) scale() float64 {
	if math.IsInf(m.low, -1) {
		return max(1, math.Abs(m.high))
	}
	return max(1, math.Abs(m.low))
}

// reason is why the margin of an evaluation is not known.
func (m *margin) reason(e *problems.Evaluation) error {
	for _, i := range m.indices {
		var none *problems.NotApplicable
		if e.Reasons[i] != nil && !errors.As(e.Reasons[i], &none) {
			return e.Reasons[i]
		}
	}
	return nil
}

// name states the bound: "throat_mach >= 2.3".
func (m *margin) name() string {
	switch {
	case math.IsInf(m.high, 1):
		return fmt.Sprintf("%s >= %.6g", m.quantity, m.low)
	case math.IsInf(m.low, -1):
		return fmt.Sprintf("%s <= %.6g", m.quantity, m.high)
	}
	return fmt.Sprintf("%s %.6g .. %.6g", m.quantity, m.low, m.high)
}

// value is the margin of an evaluation. A member to which the definition does not
// apply asks nothing. One that is missing leaves the margin unknown, NaN, unless
// another member fails already.
func (m *margin) value(e *problems.Evaluation) float64 {
	least, unknown := math.Inf(1), false
	for _, i := range m.indices {
		if v := e.Values[i]; !math.IsNaN(v) {
			least = min(least, v-m.low, m.high-v)
			continue
		}
		var none *problems.NotApplicable
		unknown = unknown || !errors.As(e.Reasons[i], &none)
	}
	if math.IsInf(least, 1) || unknown && least >= 0 {
		return math.NaN()
	}
	return least
}

// rounding is the share of a bound by which a value may pass it and still count as
// meeting it: a design that stands on a limit misses it by the rounding of a trace.
const rounding = 1e-7

// missed reports whether the limit does not hold: it fails, or a value it asks for
// is missing.
func (m *margin) missed(e *problems.Evaluation) bool {
	for _, i := range m.indices {
		v := e.Values[i]
		var none *problems.NotApplicable
		if math.IsNaN(v) && !errors.As(e.Reasons[i], &none) || v < m.low-rounding*max(1, math.Abs(m.low)) || v > m.high+rounding*max(1, math.Abs(m.high)) {
			return true
		}
	}
	return false
}

// marginOf finds the quantity's members.
func marginOf(quantities []problems.Quantity, name string, low, high float64) margin {
	m := margin{quantity: name, low: low, high: high}
	for i, q := range quantities {
		if q.Name == name {
			m.indices = append(m.indices, i)
		}
	}
	return m
}
