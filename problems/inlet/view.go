package inlet

import (
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/wave"
)

// view is what an analysis reads off a trace. Every quantity of a traced point
// follows from these numbers, so that moving one of them within its error bound
// shows what the bound means for each quantity.
type view struct {
	corners []cornerView

	lipErr    error     // why the lip was not reached, nil if it was
	lipMach   float64   // just ahead of the lip, below it
	lipFlow   float64   // direction there, rad
	capture   float64   // NaN where the lip streamline was lost
	spillage  float64   // likewise
	clearance []float64 // of each ramp shock, NaN where no shock of the body reaches the lip

	miss float64 // NaN where no shock of the lip reaches the body

	throatErr   error // why the averaging plane was not reached
	recovery    float64
	mach        float64
	pressure    float64
	temperature float64
}

// cornerView is the flow along the body just ahead of a corner.
type cornerView struct {
	err    error // why the corner has no margin
	mach   float64
	turn   float64 // of the corner, rad
	margin float64 // derived, rad
}

// look reads a trace. Capture and spillage follow the lip streamline or, by
// balance, what mass and momentum leave for them.
func look(t *wave.Trace, c *closure, balance bool) view {
	v := view{miss: math.Abs(t.LipShockMiss)}
	v.lookAtCorners(t, c)
	if t.LipRegion < 0 {
		v.lipErr = endedBy(t.Ending)
	} else {
		v.lookAtLip(t, c, balance)
	}
	station := &t.Stations[0]
	if station.Err != nil {
		v.throatErr = endedBy(t.Ending)
		return v
	}
	v.recovery, v.mach = station.Recovery, station.Mach
	v.pressure, v.temperature = station.Pressure, station.Temperature
	return v
}

func (v *view) lookAtLip(t *wave.Trace, c *closure, balance bool) {
	lip := &t.Regions[t.LipRegion]
	v.lipMach, v.lipFlow = lip.Mach, lip.FlowAngle
	v.capture, v.spillage = t.Captured.Traced, t.Captured.Spillage
	if balance {
		v.capture, v.spillage = t.Captured.Capture, t.Captured.Balance
	}
	for i := range c.Corners {
		v.clearance = append(v.clearance, clearanceOf(t.LipShocks, i+1))
	}
}

// clearanceOf is the clearance of the shock of a body corner, counted from 1. One
// that merged is part of a shock that reaches the lip, which counts as the
// strongest in it: the nearer to the lip of its neighbours in the list.
func clearanceOf(shocks []wave.LipShock, corner int) float64 {
	least := math.NaN()
	below, above := 0, math.MaxInt
	for _, s := range shocks {
		if s.Corner == corner {
			return s.Clearance
		}
		if s.Corner < corner {
			below = max(below, s.Corner)
		} else {
			above = min(above, s.Corner)
		}
	}
	for _, s := range shocks {
		if (s.Corner == below || s.Corner == above) && !(least <= s.Clearance) {
			least = s.Clearance
		}
	}
	return least
}

// lookAtCorners finds the flow along the body ahead of every corner: what the
// chain says, or less where a wave of crossing shocks has come back to the body.
func (v *view) lookAtCorners(t *wave.Trace, c *closure) {
	near := 2 * placeTolerance * c.height
	before := -t.Free.Incidence
	for i, corner := range c.Corners {
		seen := cornerView{turn: c.Angles[i] - before}
		before = c.Angles[i]
		if region := bodyAhead(t, corner, i, near); region < 0 {
			seen.err = endedBy(t.Ending)
		} else if seen.turn <= 0 {
			seen.err = notApplicable("the body turns away from the flow there")
		} else {
			seen.mach = t.Regions[region].Mach
		}
		v.corners = append(v.corners, seen)
	}
}

// bodyAhead is the region along the body just ahead of corner i (from 0), the
// free stream for the leading edge; -1 where the trace ended before.
func bodyAhead(t *wave.Trace, corner contour.Point, i int, near float64) int {
	if i == 0 {
		return 0
	}
	for _, w := range slices.Backward(t.Walls) {
		if w.Surface == wave.Body && w.Segment == i && contour.Distance(w.To, corner) <= near {
			return w.Region
		}
	}
	return -1
}

// endedBy is the reason behind an ending, without its place: the same words for
// the same event.
func endedBy(e *wave.Ending) error {
	return &problems.Status{Phrase: e.Reason.String() + " at " + e.Site}
}

// derive fills the margins of the corners.
func (v *view) derive(r route, g gas.Perfect) {
	for i := range v.corners {
		if c := &v.corners[i]; c.err == nil {
			c.margin = r.largestTurning(g, c.mach) - c.turn
		}
	}
}
