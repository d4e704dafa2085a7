package report

import (
	"fmt"
	"math"

	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// Trace is what a trace of every wave says of one flight point: the source of its
// quantities where the chain of straight shocks has no answer or the brief asks for
// the trace, a comparison beside the chain where its lip shock misses the shoulder.
type Trace struct {
	WaveletDeg Number `json:"wavelet_deg"` // turning of one expansion wavelet
	Threshold  Number `json:"threshold"`   // strength below which a wave is merged
	Events     int    `json:"events"`
	// Ending is why the captured stream was not followed to the throat plane.
	Ending *Ending `json:"ending,omitempty"`
	// BehindThroat is why the stream does not go on down the duct behind the throat
	// plane, which the averages know nothing of.
	BehindThroat *Ending `json:"behind_throat,omitempty"`
	// Capture is by the mass under the lip and by following the lip streamline, the
	// spillage drag by the pressures along that streamline and by momentum.
	Capture             Number     `json:"capture"`
	CaptureByStreamline Number     `json:"capture_by_streamline"`
	Spillage            Number     `json:"spillage_drag"`
	SpillageByMomentum  Number     `json:"spillage_drag_by_momentum"`
	LipShockMiss        Number     `json:"lip_shock_miss"` // negative ahead of the shoulder
	Throat              Throat     `json:"throat"`
	Closure             Closure    `json:"closure"`
	SpilledClosure      Closure    `json:"spilled_closure"`
	Error               TraceError `json:"error"`
	LipShocks           []LipShock `json:"lip_shocks"` // bottom to top
	// Walls reach as far as the throat plane or the ending, the outer cowl to its
	// length; Forces sum them up.
	Walls          []TraceWall    `json:"walls"`
	Forces         []WallForce    `json:"forces"`
	ForceSums      []ForceSum     `json:"force_sums"`
	ForceReference Number         `json:"force_reference_N"` // q0 Ac
	Missing        Object[string] `json:"missing,omitzero"`
}

// Ending is where and why a trace ends early.
type Ending struct {
	Reason     string    `json:"reason"`
	Site       string    `json:"site"`
	PlaceM     [2]Number `json:"place_m"`
	Mach       Number    `json:"mach"`
	TurningDeg Number    `json:"turning_deg"`
}

// Throat is the average over the vertical plane at the shoulder: recovery, Mach
// number and temperature over the mass, pressure over the area; ratios to the free
// stream.
type Throat struct {
	XM                 Number `json:"x_m"`
	HeightM            Number `json:"height_m"`
	ShockRecovery      Number `json:"shock_recovery"`
	Mach               Number `json:"mach"`
	PressureRatio      Number `json:"pressure_ratio"`
	TemperatureRatio   Number `json:"temperature_ratio"`
	WorstTotalPressure Number `json:"worst_total_pressure_ratio"`
	BestTotalPressure  Number `json:"best_total_pressure_ratio"`
	Distortion         Number `json:"distortion"`
	Tubes              []Tube `json:"tubes"`
}

// Closure is what mass, momentum and energy of a stream tube leave open: of the
// captured one as far as the throat plane, or of the one spilled over the lip.
type Closure struct {
	Mass     Number `json:"mass"`
	Momentum Number `json:"momentum"`
	Energy   Number `json:"energy"`
}

// TraceError are the error bounds of a trace.
type TraceError struct {
	Capture       Number `json:"capture"`
	SpillageDrag  Number `json:"spillage_drag"`
	ShockRecovery Number `json:"shock_recovery"`
	Mach          Number `json:"mach"`
	PressureRatio Number `json:"pressure_ratio"`
}

// newTrace describes the trace of a point, but for what addWalls adds; nil where there
// is none.
func newTrace(flow *inlet.PointFlow) *Trace {
	t := flow.Trace
	if t == nil {
		return nil
	}
	none := Number(math.NaN())
	trace := &Trace{
		WaveletDeg: Number(degrees(t.Settings.Wavelet)), Threshold: Number(t.Threshold), Events: t.Events,
		Capture: Number(t.Captured.Capture), CaptureByStreamline: Number(t.Captured.Traced),
		Spillage: Number(t.Captured.Spillage), SpillageByMomentum: Number(t.Captured.Balance),
		LipShockMiss: Number(t.LipShockMiss), SpilledClosure: newClosure(t.Spilled),
		Throat:  Throat{Number(t.Stations[0].X), none, none, none, none, none, none, none, none, nil},
		Closure: Closure{none, none, none},
		Error:   TraceError{Number(t.Error.Capture), Number(t.Error.Spillage), none, none, none},
	}
	trace.Ending, trace.BehindThroat = newEnding(t.Ending), newEnding(flow.Behind)
	if s := &t.Stations[0]; s.Err == nil {
		trace.Throat = Throat{
			Number(s.X), Number(s.Height), Number(s.Recovery), Number(s.Mach), Number(s.Pressure), Number(s.Temperature),
			Number(s.Worst), Number(s.Best), Number(s.Distortion), nil,
		}
		trace.Closure = newClosure(s.Closure)
		if len(t.Error.Stations) > 0 {
			e := t.Error.Stations[0]
			trace.Error.ShockRecovery, trace.Error.Mach, trace.Error.PressureRatio = Number(e.Recovery), Number(e.Mach), Number(e.Pressure)
		}
	}
	trace.Missing = trace.reasons(t)
	return trace
}

func newEnding(e *wave.Ending) *Ending {
	if e == nil {
		return nil
	}
	return &Ending{e.Reason.String(), e.Site, pair(e.Place), Number(e.State.Mach), Number(degrees(e.Turning))}
}

func newClosure(c wave.Closure) Closure {
	return Closure{Number(c.Mass), Number(c.Momentum), Number(c.Energy)}
}

// reasons says why numbers of a trace are null.
func (t *Trace) reasons(from *wave.Trace) Object[string] {
	var list Object[string]
	add := func(name string, missing bool, why string) {
		if missing {
			list = append(list, Field[string]{name, why})
		}
	}
	ended := "the trace ended ahead of it"
	add("capture", !finite(float64(t.Capture)), ended)
	add("capture_by_streamline", !finite(float64(t.CaptureByStreamline)), ended)
	add("spillage_drag", !finite(float64(t.Spillage)), ended)
	add("spillage_drag_by_momentum", !finite(float64(t.SpillageByMomentum)), ended)
	noShock := "no lip shock reaches the body"
	if t.Ending != nil {
		noShock = ended
	}
	add("lip_shock_miss", !finite(float64(t.LipShockMiss)), noShock)
	add("throat", from.Stations[0].Err != nil, ended)
	add("closure", from.Stations[0].Err != nil, ended)
	add("spilled_closure", !finite(float64(t.SpilledClosure.Mass)), "the flow over the cowl was not followed to its end")
	bounds := []Number{t.Error.Capture, t.Error.SpillageDrag, t.Error.ShockRecovery, t.Error.Mach, t.Error.PressureRatio}
	for _, b := range bounds {
		if !finite(float64(b)) {
			add("error", true, "this trace or the coarser one beside it ended ahead of it")
			break
		}
	}
	return list
}

// text tells the trace of a point in a few sentences.
func (t *Trace) text(point *Point) string {
	text := t.averagesText(point)
	if t.BehindThroat != nil {
		text += " Behind the throat plane no regular supersonic flow goes on: " + t.BehindThroat.text() + fmt.Sprintf(", turning %s deg.", significant(float64(t.BehindThroat.TurningDeg)))
	}
	return text
}

func (t *Trace) averagesText(point *Point) string {
	settings := fmt.Sprintf("expansion wavelets of %s deg, threshold %s", plain(float64(t.WaveletDeg)), shortExponent(fmt.Sprintf("%.2g", t.Threshold)))
	chain := !point.Traced && point.Status == attachedStatus // it has an answer of its own
	if t.Ending != nil {
		if !chain {
			return fmt.Sprintf("traced (%s). The trace ends ahead of the throat: %s.", settings, t.Ending.text())
		}
		return fmt.Sprintf("%s. Traced on (%s), %s: %s. The throat state of the table leaves that out.",
			t.missText(), settings, unreached(t.Ending.spent()), t.Ending.text())
	}
	average := fmt.Sprintf("Mach %s, static pressure ratio %s, total pressure ratio %s", significant(float64(t.Throat.Mach)),
		significant(float64(t.Throat.PressureRatio)), significant(float64(t.Throat.ShockRecovery)))
	if share := t.share(); finite(share) && share >= noise {
		average += fmt.Sprintf(", within %s %%", plain(roundUp(100*share)))
	}
	if !chain {
		return fmt.Sprintf("traced (%s). Throat averages: %s; best and worst stream tube differ by %s of the recovery.",
			settings, average, significant(float64(t.Throat.Distortion)))
	}
	state := "just behind the lip shock"
	if !finite(float64(t.LipShockMiss)) { // an aligned cowl
		state = "behind the last ramp"
	}
	return fmt.Sprintf("%s. Traced on (%s), the throat averages are %s; the throat state of the table is that %s.",
		t.missText(), settings, average, state)
}

// text says why and where a trace ends; no wall or crossing is to blame for a budget.
func (e *Ending) text() string {
	at := e.Reason + " at " + e.Site + ", x"
	if e.spent() {
		at = e.Reason + ", up to x"
	}
	return fmt.Sprintf("%s %s m, y %s m, Mach %s", at,
		significant(float64(e.PlaceM[0])), significant(float64(e.PlaceM[1])), significant(float64(e.Mach)))
}

// spent reports whether a budget ended the trace, not the flow.
func (e *Ending) spent() bool {
	return e.Reason == wave.FrontBudget.String() || e.Reason == wave.EventBudget.String()
}

// unreached says that a trace ends ahead of the throat plane; of the flow itself only
// where no budget ended it.
func unreached(spent bool) string {
	if spent {
		return "the trace does not reach the throat plane"
	}
	return "no regular supersonic flow reaches the throat plane"
}

// missText says where the lip shock of a chain of straight shocks goes.
func (t *Trace) missText() string {
	miss := float64(t.LipShockMiss)
	switch {
	case !finite(miss) && t.Ending != nil:
		return "the lip shock is not followed to the body"
	case !finite(miss):
		return "no lip shock reaches the body"
	case math.Abs(miss) < noise:
		return "the lip shock ends at the shoulder"
	case miss < 0:
		return "the lip shock strikes the body " + significant(-miss) + " capture heights ahead of the shoulder and reflects"
	}
	return "the lip shock strikes the body " + significant(miss) + " capture heights behind the shoulder and reflects"
}

// share is the error bound of the throat averages over their values.
func (t *Trace) share() float64 {
	return float64(t.Error.ShockRecovery) / float64(t.Throat.ShockRecovery)
}

// roundUp keeps one significant digit of a bound, rounded up.
func roundUp(v float64) float64 {
	if !(v > 0) {
		return v
	}
	size := math.Pow(10, math.Floor(math.Log10(v)))
	return math.Ceil(v/size-1e-9) * size
}
