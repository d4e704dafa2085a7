package report

import (
	"fmt"

	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// shockInside says which shocks a trace finds inside the lip, by how much, and what
// the quantities of the lip do not say there.
func shockInside(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	if p.Trace == nil {
		return 0, "", ""
	}
	deepest, which, others := 0.0, "", 0
	for _, s := range p.Trace.LipShocks {
		if !s.Inside {
			continue
		}
		others++
		if depth := -s.Clearance; which == "" || depth > deepest {
			deepest, which = depth, lipShockName(s)
		}
	}
	if which == "" {
		return 0, "", ""
	}
	more := ""
	if others--; others > 0 {
		more = fmt.Sprintf(", %d more with it", others)
	}
	text := fmt.Sprintf("The %s falls inside the lip at %s by %s capture heights, along x at lip height%s: it strikes the inner cowl, which multiplies the heating there and at the lip, and reflects in the duct.",
		which, p.Point.Name, significant(deepest), more)
	if p.Traced {
		text += " The separation, reflection and attachment margins of the lip and the self-start limit there are those of the flow just ahead of the lip, nearest the cowl: they say nothing of that reflection."
	}
	return 1 + deepest, text, fmt.Sprintf("%s %.3g", which, deepest)
}

func lipShockName(s wave.LipShock) string { return fmt.Sprintf("ramp %d shock", s.Corner) }

// reflectedRise is the largest pressure rise of a reflection against the separation
// limit, which the separation margin leaves out.
func reflectedRise(in *inspection, p *inlet.PointFlow) (float64, string, string) {
	if !p.Traced {
		return 0, "", ""
	}
	rise, ok := p.WorstRise()
	if !ok || !(rise.Share > separationShare) {
		return 0, "", ""
	}
	place := "inner cowl"
	if rise.Surface == wave.Body {
		place = "body"
	}
	return rise.Share, fmt.Sprintf("A shock that reflects on the %s at %s (x %s m, Mach %.3g ahead of it) raises the pressure by a factor of %s, %.3g %% of the separation limit (%s, caution above %g %%); separation_margin judges the corners and the wave at the lip alone.",
		place, p.Point.Name, significant(rise.Place.X), rise.Mach, significant(rise.Ratio), 100*rise.Share, separationSource, 100*separationShare), fmt.Sprintf("%s %.3g %%", place, 100*rise.Share)
}
