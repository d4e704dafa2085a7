package report

import (
	"fmt"
	"strings"
)

const (
	fewPass       = 0.95 // a limit that holds less often raises a caution
	fewUnanswered = 0.001
	rarelyInside  = 0.001
)

// cautions lists what a spread raises: shocks inside the lip first, then limits
// that hold too rarely, draws without an answer, and what the design as drawn
// raises by itself.
func (s *SpreadStudy) cautions() []Caution {
	list := []Caution{}
	add := func(c Caution, raised bool) {
		if raised {
			list = append(list, c)
		}
	}
	add(s.shocksInside())
	add(s.rarelyHeld())
	add(s.withoutAnswer())
	add(s.tooFewDraws())
	for _, c := range exactCautions(s.Problem, s.Flow) {
		if c.Rule != "shock_on_lip" || s.worstInside().Share <= rarelyInside { // said above, with its share
			list = append(list, c)
		}
	}
	return list
}

func (s *SpreadStudy) shocksInside() (Caution, bool) {
	worst := s.worstInside()
	if worst.Share <= rarelyInside {
		return Caution{}, false
	}
	var also []string
	for _, p := range s.Inside {
		if p.At != worst.At && p.Share > rarelyInside {
			also = append(also, fmt.Sprintf("%s %s %%", p.At, sharePercent(p.Share)))
		}
	}
	text := fmt.Sprintf("In %s %% of the draws a ramp shock, run straight, falls inside the lip at %s; some merge ahead of it, and in %s %% one passes inside.",
		sharePercent(worst.Share), worst.At, sharePercent(worst.Traced))
	if s.outline() {
		text = fmt.Sprintf("In %s %% of the draws a ramp shock passes inside the lip at %s.", sharePercent(worst.Share), worst.At)
	}
	text += " It enters the duct, reflects there, heats the walls and may unstart the inlet. A lip set back from the focus keeps it out at the cost of capture."
	if also != nil {
		text += " Also: " + strings.Join(also, ", ") + "."
	}
	return Caution{"shock_inside_lip", worst.At, text}, true
}

func (s *SpreadStudy) rarelyHeld() (Caution, bool) {
	var names []string
	for i := range s.Limits {
		l := &s.Limits[i]
		if l.Affected && l.Probability < fewPass {
			names = append(names, fmt.Sprintf("%s (%s %%)", aimPhrase(l.Quantity, l.At), sharePercent(l.Probability)))
		}
	}
	if names == nil {
		return Caution{}, false
	}
	return Caution{"rarely_held", "", fmt.Sprintf("Held in less than %g %% of the draws: %s; all limits together in %s %%. Ask the design for a confidence, or tighten the limits by what the workshop needs.",
		100*fewPass, strings.Join(names, ", "), sharePercent(s.Joint.Share))}, true
}

func (s *SpreadStudy) withoutAnswer() (Caution, bool) {
	most, where := 0, ""
	counts := map[string]int{}
	for _, r := range s.Reasons {
		if counts[r.At] += r.Draws; counts[r.At] > most {
			most, where = counts[r.At], r.At
		}
	}
	if float64(most) <= fewUnanswered*float64(s.Draws) {
		return Caution{}, false
	}
	return Caution{"unanswered", where, fmt.Sprintf("In %s %% of the draws the flow at %s has no regular solution as far as the throat; they count as failing every limit that needed it. The surrogates know nothing of them.",
		sharePercent(Number(float64(most)/float64(s.Draws))), where)}, true
}

// enoughDraws is how many draws a pass probability of common use asks for.
const enoughDraws = 1000

func (s *SpreadStudy) tooFewDraws() (Caution, bool) {
	if s.Draws >= enoughDraws {
		return Caution{}, false
	}
	return Caution{"few_draws", "", fmt.Sprintf("%d draws leave the 5th percentile and every pass probability uncertain: read them with their errors.", s.Draws)}, true
}
