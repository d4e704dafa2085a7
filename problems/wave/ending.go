package wave

import (
	"fmt"
	"math"

	"rampwright/problems/contour"
)

// Reason says why a trace ended ahead of its last plane.
type Reason int

const (
	// Detached: a wall turns the flow more than an attached shock can.
	Detached Reason = iota + 1
	// MachReflection: a shock cannot reflect regularly from a wall, or two shocks
	// cannot cross regularly.
	MachReflection
	// Irregular: two fronts of one family, or a front and a slip line, meet
	// without a regular solution, or one whose fronts do not spread in order.
	Irregular
	// SubsonicPocket: shocks exist, but the flow behind one of them is subsonic; or
	// the flow ahead is so nearly sonic, below Mach 1.1, that it cannot follow even a
	// turning of 1.5 deg. The layer between a shock that falls inside the lip and
	// the cowl often ends so: it has lost much total pressure in one strong shock,
	// and must take the pressure behind the lip shock.
	SubsonicPocket
	// SteepWave: no direction of the sweep was found that every wave runs down: the
	// flow is nearly sonic, or turned far from the walls.
	SteepWave
	// Evacuated: an expansion passes vacuum.
	Evacuated
	// FrontBudget and EventBudget: Settings.Fronts or Settings.Events is spent.
	FrontBudget
	EventBudget
)

var reasons = map[Reason]string{
	Detached: "detached shock", MachReflection: "Mach reflection", Irregular: "irregular crossing",
	SubsonicPocket: "subsonic pocket", SteepWave: "wave leans upstream of the sweep",
	Evacuated: "expansion to vacuum", FrontBudget: "more waves than are traced", EventBudget: "more wave crossings than are traced",
}

// Spent reports whether the trace, not the flow, came to its end: a budget of the
// settings was used up.
func (r Reason) Spent() bool { return r == FrontBudget || r == EventBudget }

// String returns the phrase of a status line.
func (r Reason) String() string { return reasons[r] }

// Ending is why and where a trace ended ahead of its last plane. It is the answer
// of physics, or a spent budget; a Trace that carries one is right up to there.
type Ending struct {
	Reason Reason
	Place  contour.Point // m
	Site   string        // "body corner 2", "lip", "outer cowl", "cowl inside", "body", "crossing"
	State  State         // of the flow that could not go on (the lower one at a crossing)
	// Turning is what was asked of the waves there, rad: of the wall, or the angle
	// between two streams that meet; 0 for a spent budget.
	Turning float64
	// BehindLip is the distance from the lip along x over capture height.
	BehindLip float64
}

func (e *Ending) Error() string {
	where := "behind"
	if e.BehindLip < 0 {
		where = "ahead of"
	}
	if e.Reason.Spent() { // no wall or crossing is to blame
		return fmt.Sprintf("%v, up to x %.5g m, y %.5g m, %.3g capture heights %s the lip, Mach %.4g",
			e.Reason, e.Place.X, e.Place.Y, math.Abs(e.BehindLip), where, e.State.Mach)
	}
	return fmt.Sprintf("%v at %s, x %.5g m, y %.5g m, %.3g capture heights %s the lip, Mach %.4g, turning %.3g deg",
		e.Reason, e.Site, e.Place.X, e.Place.Y, math.Abs(e.BehindLip), where, e.State.Mach, e.Turning*degreesPerRadian)
}

const degreesPerRadian = 57.29577951308232 // 180/pi, exact to double precision

// wallEnding is the ending of a stream that cannot follow a wall: hit says that
// it was a front that met it.
func (s *sweep) wallEnding(p contour.Point, w *wall, state State, turning float64, hit bool, why unsolved) *Ending {
	site := w.surface.String()
	if w.surface == Body && !hit {
		site = fmt.Sprintf("body corner %d", w.segment+1)
	}
	reason := Detached
	if hit {
		reason = MachReflection
	}
	return &Ending{Reason: why.or(reason, state.Mach), Place: p, Site: site, State: state, Turning: turning}
}

// crossingEnding is the ending of a stream whose fronts low..high cannot cross.
func (s *sweep) crossingEnding(p contour.Point, low, high int32, why unsolved) *Ending {
	below, above := s.regions[s.fronts[low].below], s.regions[s.fronts[high].above]
	reason := Irregular
	if s.fronts[low].family > 0 && s.fronts[high].family < 0 {
		reason = MachReflection
	}
	return &Ending{
		Reason: why.or(reason, min(below.Mach, above.Mach)), Place: p, Site: crossing.String(),
		State: below, Turning: below.FlowAngle - above.FlowAngle,
	}
}

// spent is the ending of a stream that has used up a budget ahead of an event.
func (s *sweep) spent(st *stream, e event, reason Reason) *Ending {
	region := st.lowest
	switch e.site {
	case crossing:
		region = s.fronts[e.lower].below
	case atTop:
		region = st.highest
	}
	return &Ending{Reason: reason, Place: e.place(s, st), Site: e.site.String(), State: s.regions[region]}
}

// or is the reason behind an unsolved Riemann problem in flow of a Mach number: the
// one given where the turning is beyond attachment.
func (u unsolved) or(reason Reason, mach float64) Reason {
	switch {
	case u == evacuated:
		return Evacuated
	case u == leaning:
		return SteepWave
	case u == subsonic, mach < nearlySonic:
		return SubsonicPocket
	case u == tangled:
		return Irregular
	}
	return reason
}

// nearlySonic is the Mach number below which the largest turning of an attached
// shock is below 1.5 deg.
const nearlySonic = 1.1
