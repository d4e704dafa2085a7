package report

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"rampwright/constraints"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// Caution is one thing this very result raises that a reader must know before
// using it.
type Caution struct {
	Rule  string // stable name of what raised it
	Point string // the flight point, geometry, or empty
	Text  string
}

// MarshalJSON writes the sentence alone.
func (c Caution) MarshalJSON() ([]byte, error) { return json.Marshal(c.Text) }

// Thresholds of common practice, each a caution and never a limit.
const (
	unbledTerminalMach   = 1.35 // Délery & Marvin: shock-induced separation without bleed
	bledTerminalMach     = 1.6  // the same with bleed
	separationShare      = 0.8  // of the separation limit that a pressure rise may use
	hottest              = 2000 // K, constant specific heats and frozen air are out of place
	steepestRamp         = 15.0 // deg
	steepestCowl         = 16.0 // deg, outer surface
	leastSetback         = 0.01 // capture heights
	largestMiss          = 0.02 // capture heights, lip shock from shoulder
	leastSeparationMach  = 2.0  // below it the separation correlation is extrapolated
	separationSource     = "Korkegi's correlation"
	selfStartQuantity    = "internal_contraction_over_self_start"
	isentropicQuantity   = "internal_contraction_over_isentropic"
	terminalMachQuantity = "terminal_mach"
)

// inspection is a flow under inspection.
type inspection struct {
	flow     *inlet.Flow
	readings []reading
}

// rule looks at one flight point. It returns a number that grows with the
// concern, the sentence for the worst point, and a short form for the others.
type rule struct {
	name string
	look func(in *inspection, p *inlet.PointFlow) (concern float64, sentence, short string)
}

// flowRules are in the order of the cautions: what invalidates the numbers, then
// what endangers the vehicle, then heating, then reach of the correlations. The
// terminal Mach number leads because it decides whether the recovery of such an
// inlet can be had at all.
var flowRules = []rule{
	{"terminal_mach", terminalMach},
	{"not_attached", notAttached},
	{"ends_behind_throat", endsBehindThroat},
	{"traced", traced},
	{"contraction_beyond_isentropic", beyondIsentropic},
	{"contraction_above_self_start", aboveSelfStart},
	{"pressure_rise", pressureRise},
	{"shock_inside", shockInside},
	{"reflected_rise", reflectedRise},
	{"static_temperature", staticTemperature},
	{"lip_shock_miss", lipShockMiss},
	{"separation_extrapolated", separationExtrapolated},
}

// flowCautions lists what a flow raises, one caution a rule, at its worst point.
func flowCautions(problem *inlet.Problem, flow *inlet.Flow) []Caution {
	cautions := exactCautions(problem, flow)
	return append(cautions, outsideDefaults(problem, flow)...)
}

// exactCautions are those of flow and geometry alone, limits aside.
func exactCautions(problem *inlet.Problem, flow *inlet.Flow) []Caution {
	in := &inspection{flow, readings(problem.Quantities(), flow.Evaluation)}
	cautions := []Caution{}
	for _, r := range flowRules {
		if c, raised := r.apply(in); raised {
			cautions = append(cautions, c)
		}
	}
	return append(cautions, geometryCautions(in)...)
}

func (r rule) apply(in *inspection) (c Caution, raised bool) {
	worst := 0.0
	short := make([]string, len(in.flow.Points))
	c.Rule = r.name
	for i := range in.flow.Points {
		p := &in.flow.Points[i]
		concern, sentence, brief := r.look(in, p)
		short[i] = brief
		if concern > worst {
			worst, c.Point, c.Text = concern, p.Point.Name, sentence
		}
	}
	var also []string
	for i := range in.flow.Points {
		if name := in.flow.Points[i].Point.Name; short[i] != "" && name != c.Point {
			also = append(also, name+" "+short[i])
		}
	}
	if also != nil {
		c.Text += " Also: " + strings.Join(also, ", ") + "."
	}
	return c, worst > 0
}

// value reads a quantity at a point; NaN where missing.
func (in *inspection) value(name string, p *inlet.PointFlow) float64 {
	return find(in.readings, name, p.Point.Name).value
}

func terminalMach(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	mach := in.value(terminalMachQuantity, p)
	if !(mach > unbledTerminalMach) {
		return 0, "", ""
	}
	practice := fmt.Sprintf("%g, common practice without bleed", unbledTerminalMach)
	if mach > bledTerminalMach {
		practice = fmt.Sprintf("%g, common practice even with bleed", bledTerminalMach)
	}
	return mach, fmt.Sprintf("The terminal shock at %s stands at Mach %.3g, beyond %s: the boundary layer separates and the recovery shown will not be reached.",
		p.Point.Name, mach, practice), fmt.Sprintf("Mach %.3g", mach)
}

func notAttached(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	if p.Err == nil {
		return 0, "", ""
	}
	what := p.Status()
	if p.Trace != nil && p.Trace.Ending != nil {
		what = p.Trace.Ending.Error()
	}
	return 1, fmt.Sprintf("The stream is not attached at %s (Mach %.3g): %s. What lies behind is not known.", p.Point.Name, p.Point.Mach, what), p.Status()
}

// endsBehindThroat tells of the stream that ends nearest behind the throat plane.
func endsBehindThroat(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	e := p.Behind
	if e == nil || p.Err != nil {
		return 0, "", ""
	}
	behind := (e.Place.X - p.Trace.Stations[0].X) / in.flow.Contour.Lip.Y
	return 1 / (1 + math.Max(behind, 0)), fmt.Sprintf("Behind the throat plane at %s no regular supersonic flow goes on: %s at %s, %.2g capture heights behind the plane, Mach %.4g, turning %.3g deg. The shocks of a real duct will stand elsewhere, perhaps ahead of the throat; the state shown holds only if they do not.",
		p.Point.Name, e.Reason, e.Site, behind, e.State.Mach, degrees(e.Turning)), fmt.Sprintf("%.2g capture heights (%s)", behind, e.Reason)
}

// traced says what the numbers of a traced point rest on, at the point of the
// greatest error bound.
func traced(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	if !p.Traced || p.Err != nil {
		return 0, "", ""
	}
	t := newTrace(p)
	settings := fmt.Sprintf("expansions in wavelets of %s deg, waves below %s merged", plain(float64(t.WaveletDeg)), shortExponent(fmt.Sprintf("%.2g", t.Threshold)))
	share := t.share()
	if !finite(share) {
		return math.MaxFloat64, fmt.Sprintf("The flow at %s is traced wave by wave (%s), with no error bound, because a coarser trace does not reach the throat.",
			p.Point.Name, settings), "no bound"
	}
	within := "exact"
	if share >= noise {
		within = fmt.Sprintf("within %s %%", plain(roundUp(100*share)))
	}
	return 1 + share, fmt.Sprintf("The flow at %s is traced wave by wave (%s) and averaged over the throat plane: throat averages %s, capture %s. Shocks that reflect in the duct separate boundary layers, which no trace sees.",
		p.Point.Name, settings, within, exactOrWithin(float64(t.Error.Capture))), within
}

func exactOrWithin(bound float64) string {
	if bound < noise {
		return "exact"
	}
	return fmt.Sprintf("within %.1g", roundUp(bound))
}

func beyondIsentropic(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	ratio := in.value(isentropicQuantity, p)
	if !(ratio > 1) {
		return 0, "", ""
	}
	return ratio, fmt.Sprintf("The internal contraction at %s is %.4g times the isentropic ceiling: the duct cannot pass the stream even once started.", p.Point.Name, ratio), fmt.Sprintf("%.4g", ratio)
}

func aboveSelfStart(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	ratio := in.value(selfStartQuantity, p)
	if !(ratio > 1) {
		return 0, "", ""
	}
	return ratio, fmt.Sprintf("The internal contraction at %s is %.4g times the largest that starts by itself: the inlet needs help to start, by bleed, variable geometry or overspeed, and an unstart can destroy the vehicle.",
		p.Point.Name, ratio), fmt.Sprintf("%.4g", ratio)
}

func pressureRise(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	r := find(in.readings, "separation_margin", p.Point.Name)
	share := 1 - r.value
	if !(share > separationShare) {
		return 0, "", ""
	}
	return share, fmt.Sprintf("The pressure ratio across the %s uses %.3g %% of the separation limit at %s (%s, caution above %g %%).",
		shockOf(r.member), 100*share, p.Point.Name, separationSource, 100*separationShare), fmt.Sprintf("%s %.3g %%", r.member, 100*share)
}

// shockOf names the shock of a member of the separation margin: a ramp, by its corner,
// or the lip shock.
func shockOf(member string) string {
	if strings.HasSuffix(member, "shock") {
		return member
	}
	return member + " shock"
}

func staticTemperature(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	worst, where := 0.0, ""
	for _, s := range p.Stations {
		if s.Temperature > worst {
			worst, where = s.Temperature, s.Name
		}
	}
	if !(worst > hottest) {
		return 0, "", ""
	}
	return worst, fmt.Sprintf("The static temperature at %s reaches %.4g K (%s), above %d K: the gas model does not hold there.",
		p.Point.Name, worst, where, hottest), fmt.Sprintf("%.4g K", worst)
}

func lipShockMiss(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	miss := in.value("lip_shock_miss", p)
	if !(miss > largestMiss) {
		return 0, "", ""
	}
	if p.Traced { // the throat is an average behind the reflections
		return 0, "", ""
	}
	return miss, fmt.Sprintf("The lip shock at %s misses the shoulder by %.3g capture heights (caution above %g): it reflects in the duct, and the throat state shown leaves that out.%s",
		p.Point.Name, miss, largestMiss, in.tracedThroat(p)), fmt.Sprintf("%.3g", miss)
}

// tracedThroat is what is to be said of the throat of a trace beside the chain, and
// what asking for that trace would do.
func (in *inspection) tracedThroat(p *inlet.PointFlow) string {
	const (
		take = " Write throat: traced at this flight point to take its throat, and what the limits hold there, from the trace."
		keep = " Write throat: traced at this flight point for a search to keep to designs whose trace reaches the throat."
	)
	switch t := p.Trace; {
	case t == nil:
		return take
	case t.Ending != nil && t.Ending.Reason.Spent():
		return fmt.Sprintf(" Traced, %s: %s.", unreached(true), t.Ending.Reason) + keep
	case t.Ending != nil:
		return fmt.Sprintf(" Traced, %s: %s at %s.", unreached(false), t.Ending.Reason, t.Ending.Site) + keep
	default:
		throat := in.value("throat_mach", p)
		if mach := in.value(terminalMachQuantity, p); finite(mach) {
			throat = mach
		}
		return fmt.Sprintf(" Traced, its average Mach number is %s in place of %s.", significant(t.Stations[0].Mach), significant(throat)) + take
	}
}

// separationExtrapolated looks at the Mach numbers ahead of the corner shocks of
// ramps 2.. and of the lip shock: the stations of ramps 1..n.
func separationExtrapolated(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	least := math.Inf(1)
	for _, s := range p.Stations {
		if strings.HasPrefix(s.Name, "ramp ") {
			least = math.Min(least, s.Mach)
		}
	}
	if !(least < leastSeparationMach) {
		return 0, "", ""
	}
	return 1 / least, fmt.Sprintf("The separation margin at %s extrapolates %s to Mach %.3g; it holds from Mach %g on.",
		p.Point.Name, separationSource, least, leastSeparationMach), fmt.Sprintf("Mach %.3g", least)
}

// geometryCautions are those of the frozen contour.
func geometryCautions(in *inspection) []Caution {
	var cautions []Caution
	add := func(rule, text string, args ...any) {
		cautions = append(cautions, Caution{rule, problems.Geometry, fmt.Sprintf(text, args...)})
	}
	design := &in.flow.Design
	var steep []string
	for i, turning := range design.Turning[:design.Ramps] {
		if angle := degrees(turning); angle > steepestRamp {
			steep = append(steep, fmt.Sprintf("ramp %d turns by %.4g deg", i+1, angle))
		}
	}
	if steep != nil {
		add("steep_ramp", "%s, above the %g deg of common practice for one ramp.", sentenceCase(strings.Join(steep, ", ")), steepestRamp)
	}
	if outer := degrees(design.Outer()); outer > steepestCowl {
		add("steep_cowl", "The outer cowl stands at %.4g deg, above the %g deg of common practice: its wave drag grows fast.", outer, steepestCowl)
	}
	if in.flow.Outline == nil && design.Setback < leastSetback {
		add("shock_on_lip", "The lip setback is %s capture heights, below %g: at Mach %.4g every ramp shock strikes the lip, which multiplies its heating, and any disturbance puts a shock inside.",
			setbackText(design.Setback), leastSetback, design.ShockOnLip)
	}
	return cautions
}

// outsideDefaults names the default limits that a flow computed without limits
// does not meet; the contraction above self-start has a caution of its own.
func outsideDefaults(problem *inlet.Problem, flow *inlet.Flow) []Caution {
	definition := problem.Definition()
	rows, err := constraints.Rows(problem.Quantities(), inlet.DefaultLimits(definition))
	if err != nil {
		return []Caution{{"outside_default_limits", "", "The default limits were not checked: " + err.Error() + "."}}
	}
	var outside []string
	named := map[string]bool{}
	for _, check := range constraints.Assess(rows, flow.Evaluation).Checks {
		place := check.Quantity.Name + "@" + check.Quantity.Point
		if check.Met || check.Missing != nil || named[place] || check.Quantity.Name == selfStartQuantity {
			continue
		}
		named[place] = true
		outside = append(outside, fmt.Sprintf("%s %s at %s (%s)", check.Quantity.Name, significant(check.Value), check.Quantity.Point, bounds(check.Low, check.High)))
	}
	if outside == nil {
		return nil
	}
	return []Caution{{"outside_default_limits", "", "Outside the default limits: " + strings.Join(outside, ", ") + "."}}
}

func sentenceCase(text string) string { return strings.ToUpper(text[:1]) + text[1:] }

// setbackText writes a setback with three digits, zero for what a search leaves of it.
func setbackText(v float64) string {
	if v < residue {
		return "0"
	}
	return fmt.Sprintf("%.3g", v)
}
