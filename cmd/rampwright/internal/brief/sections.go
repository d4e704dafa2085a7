package brief

import (
	"fmt"
	"math"

	"rampwright/problems/gas"
	"rampwright/problems/inlet"
)

// readGas reads the working fluid.
func (r *reader) readGas(root *node) {
	part := r.child(root, gasModel)
	k := known(gasModel, "model")
	n := r.value(part, k)
	if n != nil && n.text == "air" {
		r.add(n, Problem{Message: "gas model air (thermally perfect) is not available yet", Value: n.text, Allowed: k.Allowed(), Hint: "use perfect; at Mach 6 a constant 1.4 puts the throat about 20 K too hot"})
	} else if n != nil && n.text != perfect {
		r.add(n, Problem{Message: "unknown gas model", Value: n.shown(), Allowed: k.Allowed(), Hint: nearestHint(n.text, k.Choices)})
	}
	r.record(k.Path(), perfect, "", n)
	k = known(gasModel, "ratio_of_specific_heats")
	r.brief.Definition.Gas = gas.Perfect{Gamma: r.number(part, k, k.Path()), R: gas.SpecificConstantAir}
}

// readInlet reads what is fixed and what is searched.
func (r *reader) readInlet(root *node) {
	part := r.child(root, inletPart)
	if part == nil {
		return
	}
	number := func(name string) float64 {
		k := known(inletPart, name)
		return r.number(part, k, k.Path())
	}
	d := &r.brief.Definition
	r.brief.place[inletPart] = part
	if part.has(outlinePart) {
		r.readOutline(part)
		return
	}
	d.CaptureHeight = number("capture_height_m")
	d.Width = number("width_m")
	d.RampAngle = r.rampAngles(part)
	r.readCowl(part, d)
	d.CowlWedge = r.setting(part, known(inletPart, "cowl_wedge_deg"))
	d.CowlLength = number("cowl_length")
	d.ShockOnLip = r.settingOr(part, known(inletPart, "shock_on_lip_mach"), func() inlet.Setting {
		if len(d.Points) == 0 {
			return inlet.Setting{}
		}
		return inlet.Fixed(d.Points[0].Mach)
	})
	d.LipSetback = r.setting(part, known(inletPart, "lip_setback"))
	d.TerminalShock = r.truth(part, known(inletPart, "terminal_shock"))
	d.DuctFactor = number("duct_factor")
}

// rampAngles reads ramps and ramp_angle_deg; nil when either is wrong.
func (r *reader) rampAngles(part *node) []inlet.Setting {
	count, _ := r.whole(part, known(inletPart, "ramps"))
	k := known(inletPart, "ramp_angle_deg")
	n := part.get(k.Name)
	if n == nil {
		return nil
	}
	if n.shape != sequence {
		s, ok := r.settingOf(n, k, k.Name)
		if !ok || count == 0 {
			return nil
		}
		r.record(k.Path(), settingText(s), k.Unit, n)
		angles := make([]inlet.Setting, count)
		for i := range angles {
			angles[i] = s
		}
		return angles
	}
	angles, texts, sound := make([]inlet.Setting, len(n.items)), make([]string, len(n.items)), !n.partial
	for i, item := range n.items {
		s, ok := r.settingOf(item, k, fmt.Sprintf("%s of ramp %d", k.Name, i+1))
		angles[i], texts[i], sound = s, settingText(s), sound && ok
	}
	if count != 0 && len(angles) != int(count) && !n.partial {
		r.add(n, Problem{
			Message: fmt.Sprintf("ramp_angle_deg lists %d angles for %d ramps", len(angles), count),
			Allowed: "one entry per ramp",
		})
		sound = false
	}
	if !sound {
		return nil
	}
	r.record(k.Path(), "["+join(texts)+"]", k.Unit, n)
	return angles
}

// aligned is the largest lip turning taken as zero, degrees: the round-off of
// angles written in decimal.
const aligned = 1e-9

// readCowl reads exactly one of cowl_angle_deg and lip_turning_deg.
func (r *reader) readCowl(part *node, d *inlet.Definition) {
	cowl, lip := known(inletPart, "cowl_angle_deg"), known(inletPart, "lip_turning_deg")
	hasCowl, hasLip := part.has(cowl.Name), part.has(lip.Name)
	switch {
	case hasCowl && hasLip:
		r.add(part.key(lip.Name), Problem{Message: "both cowl_angle_deg and lip_turning_deg are given", Hint: "either follows from the other: keep one"})
	case !hasCowl && !hasLip:
		r.add(part, Problem{Message: "cowl_angle_deg or lip_turning_deg is missing in inlet", Allowed: cowl.Allowed() + "; or lip_turning_deg, " + lip.Allowed()})
	case hasLip && part.get(lip.Name) != nil:
		s := r.setting(part, lip)
		d.LipTurning = &s
	case hasCowl && part.get(cowl.Name) != nil:
		s := r.setting(part, cowl)
		d.CowlAngle = &s
		if _, most := lipTurning(*d); len(d.RampAngle) > 0 && !closureSearched(*d) && most < -aligned {
			r.add(part.get(cowl.Name), Problem{
				Message: "the cowl would turn the flow away from the body: the inner cowl is steeper than the last ramp surface",
				Value:   exactNumber(s.Value) + " deg",
				Allowed: "up to " + shortNumber(s.Value+most) + " deg, the sum of the ramp angles",
			})
		}
	}
}

// lipTurning bounds the lip turning over the search box, degrees:
// kappa = sum(theta_i) - phi_c.
func lipTurning(d inlet.Definition) (least, most float64) {
	if d.LipTurning != nil {
		return bounds(*d.LipTurning)
	}
	turnLow, turnHigh := turning(d)
	cowlLow, cowlHigh := bounds(*d.CowlAngle)
	return turnLow - cowlHigh, turnHigh - cowlLow
}

// turning bounds the total turning of the ramps over the search box, degrees.
func turning(d inlet.Definition) (least, most float64) {
	for _, s := range d.RampAngle {
		low, high := bounds(s)
		least, most = least+low, most+high
	}
	return least, most
}

func bounds(s inlet.Setting) (low, high float64) {
	if s.Searched {
		return s.Low, s.High
	}
	return s.Value, s.Value
}

// readEffort reads what the search may spend.
func (r *reader) readEffort(root *node) {
	part := r.child(root, effort)
	searched := max(1, r.brief.Searched())
	whole := func(name string, otherwise int) int {
		k := known(effort, name)
		v, n := r.whole(part, k)
		if n == nil {
			r.record(k.Path(), fmt.Sprint(otherwise), "", nil)
			return otherwise
		}
		return int(v)
	}
	batch, _ := r.whole(part, known(effort, "batch"))
	k := known(effort, "agreement")
	r.brief.Effort = Effort{
		Samples:   whole("samples", samplesPerSearched*searched),
		Infill:    whole("infill", infillPerSearched*searched),
		Batch:     int(batch),
		Seed:      int64(whole("seed", int(known(effort, "seed").fallback()))),
		Agreement: r.number(part, k, k.Path()),
	}
}

// finite reports whether v is a number.
func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
