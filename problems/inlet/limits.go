package inlet

import (
	"math"

	"rampwright/problems"
)

// HardLimits are the limits of the model itself: shocks attached, flow
// supersonic where it must be, a contour that closes, and no contraction beyond
// the isentropic ceiling. Nothing removes them.
func HardLimits(d Definition) []problems.Limit {
	var list limitList
	list.kind, list.source = problems.Hard, "hard"
	for _, point := range d.Points {
		list.atLeast("ramp_attachment_margin_deg", point.Name, 0)
		list.atLeast("lip_attachment_margin_deg", point.Name, 0)
		list.atLeast("lip_mach", point.Name, 1)
		if d.TerminalShock {
			list.atLeast("terminal_mach", point.Name, 1)
		} else {
			list.atLeast("throat_mach", point.Name, 1)
		}
		list.atMost("internal_contraction_over_isentropic", point.Name, 1)
	}
	list.atLeast("shortest_ramp_ratio", problems.Geometry, 0)
	if d.lipTurningSearched() {
		list.atLeast("lip_turning_deg", problems.Geometry, SmallestLipTurning)
	}
	return list.limits
}

// DefaultLimits are on unless the brief overrides them; each is common practice
// or the stated source of its quantity.
func DefaultLimits(d Definition) []problems.Limit {
	var list limitList
	list.kind, list.source = problems.Default, "default"
	for _, point := range d.Points {
		list.atLeast("ramp_attachment_margin_deg", point.Name, 2)
		list.atLeast("lip_attachment_margin_deg", point.Name, 1)
		list.atLeast("lip_reflection_margin_deg", point.Name, 1)
		list.atLeast("separation_margin", point.Name, 0.05)
		list.atMost("internal_contraction_over_self_start", point.Name, 1)
		list.atMost("total_contraction_over_started", point.Name, 1)
		if d.TerminalShock {
			list.atLeast("terminal_mach", point.Name, 1.1)
		} else {
			list.atLeast("throat_mach", point.Name, 1.5)
		}
		if point.Mach >= d.lowestShockOnLip() {
			list.atLeast("cowl_attachment_margin_deg", point.Name, 2)
		}
	}
	list.atLeast("shortest_ramp_ratio", problems.Geometry, 0.05)
	list.atMost("total_turning_deg", problems.Geometry, 30)
	return list.limits
}

// lipTurningSearched reports whether the lip turning follows from searched
// angles, so that the search could reach the aligned cowl.
func (d *Definition) lipTurningSearched() bool {
	if d.LipTurning != nil {
		return d.LipTurning.Searched
	}
	searched := d.CowlAngle != nil && d.CowlAngle.Searched
	for _, s := range d.RampAngle {
		searched = searched || s.Searched
	}
	return searched
}

func (d *Definition) lowestShockOnLip() float64 {
	if d.ShockOnLip.Searched {
		return d.ShockOnLip.Low
	}
	return d.ShockOnLip.Value
}

type limitList struct {
	limits []problems.Limit
	kind   problems.LimitKind
	source string
}

func (l *limitList) atLeast(quantity, point string, low float64) {
	l.add(quantity, point, low, math.Inf(1))
}

func (l *limitList) atMost(quantity, point string, high float64) {
	l.add(quantity, point, math.Inf(-1), high)
}

func (l *limitList) add(quantity, point string, low, high float64) {
	l.limits = append(l.limits, problems.Limit{
		Quantity: quantity, Point: point, Low: low, High: high, Kind: l.kind, Source: l.source,
	})
}
