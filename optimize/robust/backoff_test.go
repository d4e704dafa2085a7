package robust

import (
	"context"
	"math"
	"strings"
	"testing"

	"rampwright/problems"
)

// highestUnder is the largest x with x <= High of every limit on y, x >= Low of
// every one on z.
func highestUnder(_ context.Context, q Question) (Found, error) {
	low, high := math.Inf(-1), math.Inf(1)
	for _, l := range q.Limits {
		low, high = math.Max(low, l.Low), math.Min(high, l.High)
	}
	return Found{X: []float64{high}, Feasible: low <= high, Aim: high}, nil
}

func shiftedBy(deviation float64) *plain {
	return &plain{scatter: scattered(deviation), quantities: named("y", "fixed"), value: func(x, e []float64, dst *problems.Evaluation) {
		dst.Set(0, x[0]+e[0])
		dst.Set(1, x[0])
	}}
}

func backOff(t *testing.T, goal Goal, search Search) *Backoff {
	t.Helper()
	b, err := BackOff(context.Background(), goal, Settings{Jobs: 2}, search)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// x + e at most 1: the answer is 1 less the quantile of e at the probability aimed
// at; the margin is what that costs.
func TestBackOffOfALinearLimit(t *testing.T) {
	const deviation = 0.1
	for _, confidence := range []float64{0.9, 0.95, 0.99} {
		b := backOff(t, Goal{
			Problem: shiftedBy(deviation), Limits: []problems.Limit{atMost("y", 1), atMost("fixed", 2)}, Confidence: confidence, Highest: true,
			Nominal: Found{X: []float64{1}, Feasible: true, Aim: 1},
		}, highestUnder)
		chosen := b.Rounds[b.Chosen]
		p := aimed(confidence, b.Draws)
		sampling := math.Sqrt(p*(1-p)/float64(b.Draws)) / (math.Exp(-Quantile(p)*Quantile(p)/2) / math.Sqrt(2*math.Pi))
		near(t, "x", chosen.X[0], 1-deviation*Quantile(p), 4*deviation*sampling)
		if !b.Met || b.Limits[0].Pass < confidence || b.Joint.Pass < confidence {
			t.Errorf("confidence %v is not met: %+v", confidence, b.Limits)
		}
		near(t, "nominal", b.NominalLimits[0].Pass, 0.5, 4*b.NominalLimits[0].Error)
		if b.Limits[1].Affected || b.Rounds[b.Chosen].Shifts[1].High != 0 {
			t.Errorf("a limit nothing moves was moved: %+v", b.Rounds[b.Chosen].Shifts[1])
		}
		near(t, "margin", b.Rounds[b.Chosen].Shifts[0].High, 1-chosen.X[0], 1e-12)
	}
}

// A limit with two sides shares what may fail between them.
func TestBackOffBetweenTwoSides(t *testing.T) {
	limit := problems.Limit{Quantity: "y", Point: "here", Low: 0, High: 0.36}
	b := backOff(t, Goal{
		Problem: shiftedBy(0.1), Limits: []problems.Limit{limit}, Confidence: 0.9, Highest: true,
		Nominal: Found{X: []float64{0.36}, Feasible: true, Aim: 0.36},
	}, highestUnder)
	if !b.Met || b.Limits[0].Pass < 0.9 {
		t.Errorf("not met: %+v, %s", b.Limits, b.Why)
	}
	x := b.Rounds[b.Chosen].X[0]
	near(t, "probability between the sides", Phi((0.36-x)/0.1)-Phi(-x/0.1), aimed(0.9, b.Draws), 0.02)
}

// The deviation grows with the design, so that the first margins are not the last.
func TestBackOffFollowsTheDesign(t *testing.T) {
	p := &plain{scatter: scattered(0.1), quantities: named("y"), value: func(x, e []float64, dst *problems.Evaluation) {
		dst.Set(0, x[0]*(1+e[0]))
	}}
	b := backOff(t, Goal{Problem: p, Limits: []problems.Limit{atMost("y", 2)}, Confidence: 0.95, Highest: true,
		Nominal: Found{X: []float64{2}, Feasible: true, Aim: 2}}, highestUnder)
	near(t, "x", b.Rounds[b.Chosen].X[0], 2/(1+0.1*Quantile(b.Aimed)), 0.01)
	if !b.Met || len(b.Rounds) < 3 {
		t.Errorf("met %v after %d rounds", b.Met, len(b.Rounds))
	}
}

func TestBackOffThatCannotBe(t *testing.T) {
	goal := Goal{Problem: shiftedBy(0.1), Limits: []problems.Limit{atMost("y", 1), atLeast("fixed", 0.95)}, Confidence: 0.95, Highest: true,
		Nominal: Found{X: []float64{1}, Feasible: true, Aim: 1}}
	b := backOff(t, goal, highestUnder)
	if b.Met || !b.NothingHolds || b.Chosen != 0 || b.Why == "" {
		t.Errorf("margins no design holds: %+v", b)
	}
	goal.Limits = []problems.Limit{{Quantity: "y", Point: "here", Low: 0.9, High: 1}}
	asked := 0
	b = backOff(t, goal, func(ctx context.Context, q Question) (Found, error) {
		asked++
		return highestUnder(ctx, q)
	})
	if b.Met || !b.NothingHolds || asked != 0 {
		t.Errorf("sides nearer than the scatter: met %v, %d searches, %s", b.Met, asked, b.Why)
	}
}

// Draws without an answer cost more than any margin can: e > 2 - x has none, so that
// the answer is where few enough draws lie there, 2 less the quantile of e.
func TestBackOffWithHoles(t *testing.T) {
	p := &plain{scatter: scattered(1), quantities: named("y"), value: func(x, e []float64, dst *problems.Evaluation) {
		if dst.Set(0, x[0]); e[0] > 2-x[0] {
			dst.Miss(0, errNone)
		}
	}}
	cuts := 0
	b := backOff(t, Goal{Problem: p, Limits: []problems.Limit{atMost("y", 2)}, Confidence: 0.95, Highest: true,
		Nominal: Found{X: []float64{2}, Feasible: true, Aim: 2}}, func(_ context.Context, q Question) (Found, error) {
		x := q.Limits[0].High
		if q.Cut != nil {
			cuts++
			problem, limits := q.Cut.Guard(p)
			a, c, ok := problem.(problems.Linear).LinearForm(1)
			if !ok || len(limits) != 1 || problem.Quantities()[1].Name != ShareWithoutAnswer || limits[0].High != q.Cut.AtMost {
				t.Fatalf("the guarded problem has %v, limits %v", problem.Quantities(), limits)
			}
			evaluation := problems.NewEvaluation(2)
			if err := problem.Evaluate(context.Background(), []float64{1}, evaluation); err != nil {
				t.Fatal(err)
			}
			near(t, "share by the form", evaluation.Values[1], a[0]+c, 1e-12)
			x = math.Min(x, (limits[0].High-c)/a[0]) // the largest x within the cut
		}
		return Found{X: []float64{x}, Feasible: true, Aim: x}, nil
	})
	if !b.Met || cuts == 0 || b.NominalLimits[0].Unanswered < 4500 {
		t.Errorf("met %v after %d cuts: %s; nominal %+v", b.Met, cuts, b.Why, b.NominalLimits)
	}
	// Between the share the cut leaves and the whole share that may fail.
	x, least, most := b.Rounds[b.Chosen].X[0], 2-Quantile(1-cutAllowed*(1-b.Aimed)), 2-Quantile(0.95)
	if x < least-0.2 || x > most+0.1 {
		t.Errorf("x is %v, want it within %v and %v", x, least, most)
	}
}

// The further searches of a round say what sets them apart.
func TestSearchesOfARoundDiffer(t *testing.T) {
	p := &plain{scatter: scattered(1), quantities: named("y"), value: func(x, e []float64, dst *problems.Evaluation) {
		if dst.Set(0, x[0]); e[0] > 2-x[0] {
			dst.Miss(0, errNone)
		}
	}}
	var asked []Question
	backOff(t, Goal{Problem: p, Limits: []problems.Limit{atMost("y", 2)}, Confidence: 0.95, Highest: true,
		Nominal: Found{X: []float64{2}, Feasible: true, Aim: 2}}, func(_ context.Context, q Question) (Found, error) {
		asked = append(asked, q)
		return Found{X: []float64{2}}, nil
	})
	want := []Question{{}, {Loosened: 1}, {Loosened: 1, Halfway: true}, {Loosened: 2, Halfway: true}}
	if len(asked) != len(want) {
		t.Fatalf("%d searches, want %d", len(asked), len(want))
	}
	for i, q := range asked {
		if q.Halfway != want[i].Halfway || q.Loosened != want[i].Loosened {
			t.Errorf("search %d: half way %v, loosened %d", i, q.Halfway, q.Loosened)
		}
	}
}

func TestDrawsEnoughForTheConfidence(t *testing.T) {
	for _, c := range []float64{0.5, 0.95, 0.999, 0.9999} {
		n := drawsOf(c, loopDraws)
		if n < loopDraws || float64(n)*(1-c) < tailDraws*0.999 {
			t.Errorf("confidence %v: %d draws", c, n)
		}
		if p := aimed(c, n); p < c || p > (1+c)/2 {
			t.Errorf("confidence %v aims at %v", c, p)
		}
	}
}

// What makes no sense is refused at once and in one answer: no negative number of
// workers is waited for, no confidence asks for draws without end.
func TestBackOffRefuses(t *testing.T) {
	nothing := func(context.Context, Question) (Found, error) { panic("searched") }
	for _, confidence := range []float64{-1, 0, 1, 1 - 1e-9, math.NaN()} {
		_, err := BackOff(context.Background(), Goal{Problem: shiftedBy(0.1), Confidence: confidence}, Settings{Jobs: -1}, nothing)
		if err == nil || !strings.Contains(err.Error(), "confidence") || !strings.Contains(err.Error(), "jobs -1") {
			t.Errorf("confidence %v: %v", confidence, err)
		}
	}
}

// A value that no draw moves but by its rounding asks for no margin.
func TestNoShiftWithinRounding(t *testing.T) {
	s := side{present: true, nominal: 0.45, sorted: []float64{0.45, math.Nextafter(0.45, 1), math.Nextafter(0.45, 1)}, draws: 3}
	if by := s.shift(0.1); by != 0 {
		t.Errorf("a shift of %g", by)
	}
	s.sorted[2] = 0.47
	near(t, "shift", s.shift(0.1), 0.02, 1e-15)
}
