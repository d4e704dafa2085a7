package robust

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"rampwright/problems"
	"rampwright/surrogate/doe"
)

// Question asks for the best design of a round: under limits, and within the cut
// where there is one, from the design of the round before.
type Question struct {
	Limits []problems.Limit
	Cut    *Cut // nil where draws have answers
	Near   []float64
	// Halfway and Loosened set the further searches of a round apart from its first,
	// which found nothing: half the change of the shifts, and how many times the cut
	// was loosened.
	Halfway  bool
	Loosened int
}

// Search answers a question. An answer that is not feasible holds the limits
// nowhere that was found.
type Search func(ctx context.Context, q Question) (Found, error)

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
	Cut    *Cut // it was searched within; nil without
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
	Checked       int
	Limits        []Probability
	Joint         Probability
	NominalLimits []Probability
	NominalJoint  Probability
	Why           string // how it ended
	NothingHolds  bool   // the last search found no design that holds the shifted limits
}

const (
	loopDraws    = 2000
	mostRounds   = 8
	enoughHeld   = 2    // rounds that hold as aimed at
	mostRetreats = 2    // searches with half the change of the shifts
	tailDraws    = 20   // draws expected beyond the confidence
	shiftsAtRest = 2e-2 // relative change of every shift that ends the loop
)

// drawsOf is how many draws show a confidence: at least n, and enough that
// tailDraws of them are expected to fail.
func drawsOf(confidence float64, n int) int {
	return max(n, int(math.Ceil(tailDraws/(1-confidence))))
}

// checkConfidence refuses what is no confidence, or asks for too many draws.
func checkConfidence(confidence float64) error {
	const most = 1 - float64(tailDraws)/MostDraws
	if !(confidence > 0 && confidence <= most) {
		return fmt.Errorf("confidence %g is not within 0 to %g", confidence, most)
	}
	return nil
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
// same draws. A side whose last change the draws take back moves half way only, and
// where no design holds the shifts asked for, the search goes half way to them (our
// rules). A draw without an answer counts as the worst value, or is left out
// where more have none than may fail: from the first round with more than half as
// many on, a cut keeps the search where draws have answers (our rule). It ends when
// every limit holds as aimed and the shifts are at rest; the best design that holds
// them is then judged, with the nominal one, over fresh draws. A search that finds
// nothing ends it as well. The error reports a goal or setting that makes no sense,
// a model or search that could not be run, or a context that ended.
func BackOff(ctx context.Context, goal Goal, settings Settings, search Search) (*Backoff, error) {
	b := &built{problem: goal.Problem, scatter: goal.Problem.Scatter(), width: len(goal.Problem.Quantities())}
	if len(b.scatter) == 0 {
		return nil, ErrNothingScatters
	}
	settings = settings.WithDefaults(len(b.scatter))
	if err := errors.Join(checkConfidence(goal.Confidence), settings.Validate(len(b.scatter))); err != nil {
		return nil, err
	}
	limits, err := limitedBy(goal.Problem.Quantities(), goal.Limits)
	if err != nil {
		return nil, err
	}
	out := &Backoff{Confidence: goal.Confidence, Draws: drawsOf(goal.Confidence, loopDraws), Checked: drawsOf(goal.Confidence, settings.Draws)}
	out.Aimed = aimed(goal.Confidence, out.Draws)
	deviates := drawn(out.Draws, len(b.scatter), doe.Stream(settings.Seed, "back-off draws"))
	next, retreats := Round{Found: goal.Nominal, Shifts: unshifted(limits)}, 0
	for {
		ask, err := out.judge(ctx, b, &next, limits, deviates, settings.Jobs)
		if err != nil {
			return nil, err
		}
		if out.ended(ask.shifts) || out.crossed(ask.shifts) {
			break
		}
		if n := len(out.Rounds); n > 2 { // the first round knows no shifts
			ask.shifts = damped(out.Rounds[n-2].Shifts, next.Shifts, ask.shifts)
		}
		from := next
		if next, err = ask.answer(ctx, search, from.X); err != nil {
			return nil, err
		}
		if !next.Feasible && retreats < mostRetreats {
			retreats++
			ask.shifts, ask.halfway = halfway(from.Shifts, ask.shifts), true
			if next, err = ask.answer(ctx, search, from.X); err != nil {
				return nil, err
			}
		}
		if !next.Feasible {
			out.NothingHolds, out.Why = true, "no design was found that holds the limits with the margins they need"
			break
		}
	}
	return out, out.verify(ctx, goal, b, limits, settings)
}

// asked is what the draws of a round ask the next search for.
type asked struct {
	shifts   []Shift
	cut      *Cut
	halfway  bool // as in a Question
	loosened int
}

func (a *asked) question(near []float64) Question {
	return Question{Limits: applied(a.shifts), Cut: a.cut, Near: near, Halfway: a.halfway, Loosened: a.loosened}
}

// answer searches with what is asked, from the design of the round before.
func (a *asked) answer(ctx context.Context, search Search, near []float64) (Round, error) {
	found, err := search(ctx, a.question(near))
	if err == nil && !found.Feasible && a.cut != nil { // slopes may have misled
		a.cut = a.cut.looser()
		a.loosened++
		found, err = search(ctx, a.question(near))
	}
	return Round{Found: found, Shifts: a.shifts, Cut: a.cut}, err
}

// judge draws at the design of a round, keeps the round, and returns what its draws
// ask for.
func (o *Backoff) judge(ctx context.Context, b *built, r *Round, limits []limited, deviates [][]float64, jobs int) (asked, error) {
	b.x = r.X
	asDrawn, err := b.evaluate(ctx, "", [][]float64{make([]float64, len(b.scatter))}, 1)
	if err != nil {
		return asked{}, err
	}
	draws, err := b.evaluate(ctx, "", deviates, jobs)
	if err != nil {
		return asked{}, err
	}
	nominal := asDrawn.Values[0]
	r.Limits, r.Joint = passes(limits, draws.Values, nominal)
	r.Least = least(r.Limits)
	o.Rounds = append(o.Rounds, *r)
	ask := asked{shifts: unshifted(limits)}
	for i := range limits {
		if r.Limits[i].Affected {
			limits[i].shift(&ask.shifts[i], draws.Values, nominal, 1-o.Aimed)
		}
	}
	if share := unansweredShare(limits, draws.Values); r.Cut != nil || share > cutAllowed*(1-o.Aimed) {
		ask.cut, err = b.cutAt(ctx, r.X, share, limits, deviates, 1-o.Aimed, jobs)
	}
	return ask, err
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
	case o.holds(last) && atRest(last.Shifts, shifts):
		o.Why = "every limit holds as aimed at, and the margins no longer move"
	case o.heldRounds() >= enoughHeld:
		o.Why = "every limit holds as aimed at in several rounds; the margins still move"
	case len(o.Rounds) > mostRounds:
		o.Why = fmt.Sprintf("the margins still move after %d rounds", mostRounds)
	default:
		return false
	}
	return true
}

// holds reports whether every limit of a round holds well enough to be judged over
// fresh draws: half way from the confidence to what is aimed at, so that the last
// digits of a search do not decide.
func (o *Backoff) holds(r *Round) bool { return r.Least >= (o.Confidence+o.Aimed)/2 }

// heldRounds counts the rounds that hold, but not with more than twice the care
// aimed at: those gave away what a later round may win back.
func (o *Backoff) heldRounds() int {
	n := 0
	for i := range o.Rounds {
		if r := &o.Rounds[i]; o.holds(r) && r.Least <= (1+o.Aimed)/2 {
			n++
		}
	}
	return n
}

// crossed reports whether the margins asked for leave nothing between the sides of a
// limit.
func (o *Backoff) crossed(shifts []Shift) bool {
	for _, l := range applied(shifts) {
		if l.Low > l.High {
			o.NothingHolds, o.Why = true, fmt.Sprintf("tolerances scatter %s at %s wider than its limits are apart", l.Quantity, l.Point)
			return true
		}
	}
	return false
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

// verify judges the nominal design over fresh draws, and the rounds in the order of
// preference until one holds each limit with the confidence; else the first stands.
func (o *Backoff) verify(ctx context.Context, goal Goal, b *built, limits []limited, settings Settings) error {
	deviates := drawn(o.Checked, len(b.scatter), doe.Stream(settings.Seed, drawsStream))
	var err error
	if o.NominalLimits, o.NominalJoint, err = fresh(ctx, b, goal.Nominal.X, limits, deviates, settings.Jobs); err != nil {
		return err
	}
	for k, round := range o.preference(goal.Highest) {
		each, joint, err := fresh(ctx, b, o.Rounds[round].X, limits, deviates, settings.Jobs)
		if err != nil {
			return err
		}
		met := least(each) >= o.Confidence
		if k == 0 || met {
			o.Chosen, o.Limits, o.Joint, o.Met = round, each, joint, met
		}
		if met || !o.holds(&o.Rounds[round]) {
			break
		}
	}
	return nil
}

// fresh tells how often the limits of the design at x hold over draws of its own.
func fresh(ctx context.Context, b *built, x []float64, limits []limited, deviates [][]float64, jobs int) ([]Probability, Probability, error) {
	b.x = x
	all, err := b.evaluate(ctx, "", append([][]float64{make([]float64, len(b.scatter))}, deviates...), jobs)
	if err != nil {
		return nil, Probability{}, err
	}
	each, joint := passes(limits, all.Values[1:], all.Values[0])
	return each, joint, nil
}

// preference orders the rounds: those that hold as aimed at by their aim, then the
// others by how often their weakest limit holds.
func (o *Backoff) preference(highest bool) []int {
	order := make([]int, len(o.Rounds))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int {
		a, b := &o.Rounds[i], &o.Rounds[j]
		holds, held := o.holds(a), o.holds(b)
		switch {
		case holds != held && holds:
			return -1
		case holds != held:
			return 1
		case !holds:
			return cmp.Compare(b.Least, a.Least)
		case highest:
			return cmp.Compare(b.Aim, a.Aim)
		}
		return cmp.Compare(a.Aim, b.Aim)
	})
	return order
}
