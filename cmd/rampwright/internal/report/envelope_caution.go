package report

import (
	"fmt"

	"rampwright/problems/envelope"
)

// raise lists what the map itself raises, what endangers the vehicle first.
func (d *EnvelopeDocument) raise() []Caution {
	list := []Caution{}
	add := func(rule, text string, args ...any) {
		list = append(list, Caution{rule, "", fmt.Sprintf(text, args...)})
	}
	count := func(state envelope.State) int {
		n, _ := d.States.Get(state.String())
		return n
	}
	all := len(d.Rows)
	if d.Within == 0 {
		add("nowhere_within_limits", "Nowhere on the map does the inlet keep every limit of %s.", d.LimitsOf)
	}
	if n := count(envelope.OverStart); n > 0 {
		add("contraction_above_self_start", "At %d of %d conditions the duct contracts more than starts by itself. The map is that of the started inlet: once unstarted there it stays so, and an unstart can destroy the vehicle.", n, all)
	}
	if n := count(envelope.Swallowed); n > 0 {
		add("shocks_inside", "At %d of %d conditions a ramp shock falls inside the lip: it strikes the cowl and reflects in the duct, and the boundary layer there may separate, which is not computed.", n, all)
	}
	if n := count(envelope.RampDetached) + count(envelope.LipDetached) + count(envelope.Reflection) + count(envelope.Pocket) + count(envelope.Ended) + count(envelope.Unresolved); n > 0 {
		add("not_attached", "At %d of %d conditions the captured stream does not reach the throat as computed; what lies behind is not known.", n, all)
	}
	if t := d.hottestThroat(); t > hottest {
		add("static_temperature", "The static temperature in the throat reaches %.4g K, above %d K: the gas model does not hold there.", t, hottest)
	}
	return list
}

// hottestThroat is the highest throat temperature of the map, K.
func (d *EnvelopeDocument) hottestThroat() float64 {
	most := 0.0
	for i := range d.Rows {
		if t := d.Rows[i].value("throat_temperature_K"); t > most {
			most = t
		}
	}
	return most
}
