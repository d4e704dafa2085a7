package robust

import (
	"context"
	"fmt"
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/surrogate/doe"
)

// Search finds the best design under limits; near is the design of the round
// before. An answer that is not feasible holds the limits nowhere that was found.
type Search func(ctx context.Context, limits []problems.Limit, near []float64) (Found, error)

// Found is the answer of a search.
type Found struct {
	X        []float64
	Feasible bool
	Aim      float64
}

// Goal is a design wanted with a confidence.
type Goal struct {
	Problem    problems.Perturbable
	Limits     []problems.Limit
	Confidence float64 // least probability with which each limit holds
	Highest    bool    // the aim is driven up
	Nominal    Found   // the best design under the limits as they stand
}

// Round is one design of a back-off: the margins it was searched with, and how its
// limits hold over the draws of the loop.
type Round struct {
	Found
	Shifts []Shift
	Limits []Probability
	Joint  Probability
	Least  float64 // the least probability of a limit
}

// Asked lists the limits the design of a round was searched with.
func (r *Round) Asked() []problems.Limit { return applied(r.Shifts) }

// Backoff is a design searched with a confidence.
type Backoff struct {
	Confidence float64
	Aimed      float64 // probability aimed at over the draws of the loop
	Draws      int     // a round
	Rounds     []Round // the nominal design first
	Chosen     int     // among Rounds
	// Met says that the chosen design holds each limit with the confidence over
	// draws of its own.
	Met bool
	// Verified and Nominal are the chosen and the nominal design over Checked fresh
	// draws that no round has seen.
	Checked        int
	Limits         []Probability
	Joint          Probability
	NominalLimits  []Probability
	NominalJoint   Probability
	Why            string // how it ended
	NothingHolds   bool   // the last search found no design that holds the shifted limits
	ShiftsOfChosen []Shift
}

const (
	loopDraws    = 4000
	mostRounds   = 10
	tailDraws    = 20   // draws expected beyond the confidence
	shiftsAtRest = 2e-2 // relative change of every shift that ends the loop
)

// drawsOf is how many draws show a confidence: at least n, and enough that
// tailDraws of them are expected to fail.
func drawsOf(confidence float64, n int) int {
	return max(n, int(math.Ceil(tailDraws/(1-confidence))))
}

// aimed is the probability a round aims at so that fresh draws confirm the
// confidence in spite of the errors of both samples: two standard errors above it,
// and not more than half way to 1.
func aimed(confidence float64, draws int) float64 {
	return min(confidence+2*math.Sqrt(confidence*(1-confidence)/float64(draws)), (1+confidence)/2)
}

// BackOff searches the best design that holds each limit with a confidence, by
// sequential optimization and reliability assessment (Du & Chen 2004, from memory)
// with margins from exact draws: at the design x of a round, each side of a limit
// moves inside by
//
//	s = g(x) - g_a(x),  g_a the (1 - aimed) quantile of g over the draws,
//
// at least 0, and the next search keeps g(x) >= bound + s. Every round uses the
// same draws. A draw without an answer counts as the worst value; where more draws
// than may fail have none, no margin follows from them, and those sides the design
// stands on grow by a quarter each round to lead it away (our rule). It ends when
// every limit holds as aimed and the shifts are at rest; the best design that holds
// them is then judged, with the nominal one, over fresh draws. A search that finds
// nothing ends it as well.
func BackOff(ctx context.Context, goal Goal, settings Settings, search Search) (*Backoff, error) {
	b := &built{problem: goal.Problem, scatter: goal.Problem.Scatter(), width: len(goal.Problem.Quantities())}
	if len(b.scatter) == 0 {
		return nil, ErrNothingScatters
	}
	if !(goal.Confidence > 0 && goal.Confidence < 1) {
		return nil, fmt.Errorf("confidence %g is not within (0, 1)", goal.Confidence)
	}
	settings = settings.WithDefaults(len(b.scatter))
	limits, err := limitedBy(goal.Problem.Quantities(), goal.Limits)
	if err != nil {
		return nil, err
	}
	out := &Backoff{Confidence: goal.Confidence, Draws: drawsOf(goal.Confidence, loopDraws), Checked: drawsOf(goal.Confidence, settings.Draws)}
	out.Aimed = aimed(goal.Confidence, out.Draws)
	deviates := drawn(out.Draws, len(b.scatter), doe.Stream(settings.Seed, "back-off draws"))
	next := Round{Found: goal.Nominal, Shifts: unshifted(limits)}
	for {
		shifts, err := out.judge(ctx, b, &next, limits, deviates, settings.Jobs)
		if err != nil {
			return nil, err
		}
		if out.ended(shifts) {
			break
		}
		asked := applied(shifts)
		if crossed := slices.IndexFunc(asked, func(l problems.Limit) bool { return l.Low > l.High }); crossed >= 0 {
			out.NothingHolds, out.Why = true, fmt.Sprintf("tolerances scatter %s at %s wider than its limits are apart", asked[crossed].Quantity, asked[crossed].Point)
			break
		}
		found, err := search(ctx, asked, next.X)
		if err != nil {
			return nil, err
		}
		if !found.Feasible {
			out.NothingHolds, out.Why = true, "no design was found that holds the limits with the margins they need"
			break
		}
		next = Round{Found: found, Shifts: shifts}
	}
	return out, out.verify(ctx, goal, b, limits, settings)
}

// judge draws at the design of a round, keeps the round, and returns the shifts its
// draws ask for.
func (o *Backoff) judge(ctx context.Context, b *built, r *Round, limits []limited, deviates [][]float64, jobs int) ([]Shift, error) {
	b.x = r.X
	asDrawn, err := b.evaluate(ctx, [][]float64{make([]float64, len(b.scatter))}, 1)
	if err != nil {
		return nil, err
	}
	draws, err := b.evaluate(ctx, deviates, jobs)
	if err != nil {
		return nil, err
	}
	nominal := asDrawn.Values[0]
	r.Limits, r.Joint = passes(limits, draws.Values, nominal)
	r.Least = least(r.Limits)
	o.Rounds = append(o.Rounds, *r)
	shifts := unshifted(limits)
	allowed := int((1 - o.Aimed) * float64(o.Draws))
	for i := range limits {
		if !r.Limits[i].Affected {
			continue
		}
		limits[i].shift(&shifts[i], draws.Values, nominal, 1-o.Aimed)
		if r.Limits[i].Unanswered > allowed {
			limits[i].grow(&shifts[i], &r.Shifts[i], nominal)
		}
	}
	return shifts, nil
}

// least is the least probability of the limits, 1 without any.
func least(limits []Probability) float64 {
	p := 1.0
	for i := range limits {
		p = min(p, limits[i].Pass)
	}
	return p
}

// ended decides whether another round is worth it, and why not.
func (o *Backoff) ended(shifts []Shift) bool {
	last := &o.Rounds[len(o.Rounds)-1]
	switch {
	case last.Least >= o.Aimed && atRest(last.Shifts, shifts):
		o.Why = "every limit holds as aimed at, and the margins no longer move"
	case len(o.Rounds) > mostRounds:
		o.Why = fmt.Sprintf("the margins still move after %d rounds", mostRounds)
	default:
		return false
	}
	return true
}

// atRest reports whether the sides that were shifted have come to rest.
func atRest(before, after []Shift) bool {
	for i := range before {
		for _, pair := range [][2]float64{{before[i].Low, after[i].Low}, {before[i].High, after[i].High}} {
			if math.Abs(pair[0]-pair[1]) > shiftsAtRest*math.Max(pair[0], pair[1]) {
				return false
			}
		}
	}
	return true
}

// verify chooses among the rounds and judges the chosen and the nominal design over
// fresh draws.
func (o *Backoff) verify(ctx context.Context, goal Goal, b *built, limits []limited, settings Settings) error {
	o.choose(goal.Highest)
	chosen := &o.Rounds[o.Chosen]
	o.ShiftsOfChosen = chosen.Shifts
	deviates := drawn(o.Checked, len(b.scatter), doe.Stream(settings.Seed, drawsStream))
	var err error
	if o.NominalLimits, o.NominalJoint, err = fresh(ctx, b, goal.Nominal.X, limits, deviates, settings.Jobs); err != nil {
		return err
	}
	if o.Limits, o.Joint, err = fresh(ctx, b, chosen.X, limits, deviates, settings.Jobs); err != nil {
		return err
	}
	o.Met = least(o.Limits) >= o.Confidence
	return nil
}

func fresh(ctx context.Context, b *built, x []float64, limits []limited, deviates [][]float64, jobs int) ([]Probability, Probability, error) {
	b.x = x
	all, err := b.evaluate(ctx, append([][]float64{make([]float64, len(b.scatter))}, deviates...), jobs)
	if err != nil {
		return nil, Probability{}, err
	}
	each, joint := passes(limits, all.Values[1:], all.Values[0])
	return each, joint, nil
}

// choose takes the best design among the rounds that hold as aimed, else the one
// whose weakest limit holds most often.
func (o *Backoff) choose(highest bool) {
	best := 0
	for i := 1; i < len(o.Rounds); i++ {
		a, b := &o.Rounds[i], &o.Rounds[best]
		holds, held := a.Least >= o.Aimed, b.Least >= o.Aimed
		switch {
		case holds && !held, !holds && !held && a.Least > b.Least,
			holds && held && a.Aim != b.Aim && (a.Aim > b.Aim) == highest:
			best = i
		}
	}
	o.Chosen = best
}
