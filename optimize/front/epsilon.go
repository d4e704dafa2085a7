package front

import (
	"context"
	"errors"
	"fmt"
	"math"
)

// Question asks for the least of one objective.
type Question struct {
	Lower  int     // the objective to lower, 0 or 1
	AtMost float64 // bound on the other objective; +Inf for none
	Near   []int   // earlier answers, by the order of the questions, to start from
}

// Answer is what was found.
type Answer struct {
	Point Point
	Found bool // a design within the bound was found
}

// Solve answers one question.
type Solve func(ctx context.Context, q Question) (Answer, error)

// Slack is the share of an objective's span over the curve by which an end of the
// curve may miss the best value of that objective, where that lowers the other one
// by more than LooseEnd of its span: the best value alone does not decide the
// design there. Slack keeps the region of that question from being a point.
const (
	Slack    = 1e-4
	LooseEnd = 1e-2
)

// Same is the relative difference within which an objective counts as the same at
// both ends of the curve: there is then no trade.
const Same = 1e-6

// ErrTooFewPoints is the answer to a curve of less than its two ends.
var ErrTooFewPoints = errors.New("a trade curve has at least 2 points")

// EpsilonConstraint traces the curve of least objective 0 against bounds on
// objective 1 (Haimes, Lasdon & Wismer 1971, from memory):
//
//	lower f0  subject to  f1 <= eps_k,  eps_k evenly spaced
//
// between the ends of the curve. An end is the least of one objective alone, or
// the least of the other with the first held within Slack of it where that makes a
// difference (lexicographic ends, Mavrotas 2009, from memory). A curve of n points asks
// n + 2 questions: the best of each objective afresh, since the best of the other
// may be a resting place of a local search, every other from its neighbour and
// from the end that keeps every bound. An end that was not found is sought once
// more from the other.
//
// The list holds the questions' numbers along the curve, from the least of
// objective 0 to the least of objective 1, those without an answer left out;
// where one design is best in both, it is the whole curve. An error of solve ends
// the search and returns the curve so far with it.
func EpsilonConstraint(ctx context.Context, n int, solve Solve) (along []int, err error) {
	if n < 2 {
		return nil, fmt.Errorf("%w, not %d", ErrTooFewPoints, n)
	}
	t := &tracer{ctx: ctx, solve: solve}
	first := t.ask(Question{Lower: 0, AtMost: math.Inf(1)})
	last := t.ask(Question{Lower: 1, AtMost: math.Inf(1)})
	if t.found(last) && !t.found(first) {
		first = t.ask(Question{Lower: 0, AtMost: math.Inf(1), Near: []int{last}})
	}
	if t.found(first) && !t.found(last) {
		last = t.ask(Question{Lower: 1, AtMost: math.Inf(1), Near: []int{first}})
	}
	span := t.span(first, last)
	first = t.refine(first, 1, span)
	last = t.refine(last, 0, span)
	switch {
	case !t.found(first) || !t.found(last) || t.same(first, last, 1):
		return t.known(first), t.err
	case t.same(first, last, 0):
		return t.known(last), t.err
	}
	along = []int{first}
	from, to := t.point(first)[1], t.point(last)[1]
	for k := 1; k < n-1; k++ {
		eps := from + (to-from)*float64(k)/float64(n-1)
		along = append(along, t.known(t.ask(Question{Lower: 0, AtMost: eps, Near: []int{along[len(along)-1], last}}))...)
	}
	return append(along, last), t.err
}

// tracer asks questions until one fails.
type tracer struct {
	ctx     context.Context
	solve   Solve
	answers []Answer
	err     error
}

// none is the number of a question that was not asked.
const none = -1

// ask returns the number of the question.
func (t *tracer) ask(q Question) int {
	if t.err == nil {
		t.err = t.ctx.Err()
	}
	if t.err != nil {
		return none
	}
	answer, err := t.solve(t.ctx, q)
	if err != nil {
		t.err = err
		return none
	}
	t.answers = append(t.answers, answer)
	return len(t.answers) - 1
}

func (t *tracer) found(i int) bool { return i != none && t.answers[i].Found }

// known lists the number of a question that has an answer.
func (t *tracer) known(i int) []int {
	if !t.found(i) {
		return nil
	}
	return []int{i}
}

func (t *tracer) point(i int) Point {
	if !t.found(i) {
		return Point{math.NaN(), math.NaN()}
	}
	return t.answers[i].Point
}

// span is how far the objectives reach between two answers.
func (t *tracer) span(a, b int) Point {
	p, q := t.point(a), t.point(b)
	return Point{math.Abs(p[0] - q[0]), math.Abs(p[1] - q[1])}
}

// same reports whether two answers agree in an objective.
func (t *tracer) same(a, b, objective int) bool {
	v, w := t.point(a)[objective], t.point(b)[objective]
	return math.Abs(v-w) <= Same*math.Max(math.Abs(v), math.Abs(w))
}

// refine asks for the least of an objective at an end of the curve, which is the
// least of the other. The end stands where that makes little difference.
func (t *tracer) refine(end, lower int, span Point) int {
	if !t.found(end) || math.IsNaN(span[lower]) {
		return end
	}
	refined := t.ask(Question{Lower: lower, AtMost: t.point(end)[1-lower] + Slack*span[1-lower], Near: []int{end}})
	if t.found(refined) && t.point(end)[lower]-t.point(refined)[lower] > LooseEnd*span[lower] {
		return refined
	}
	return end
}
