package main

import (
	"context"
	"errors"
	"fmt"
	"strings"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/constraints"
	"rampwright/optimize"
	"rampwright/optimize/robust"
	"rampwright/problems"
)

// backOff is the search of a design that holds each limit with the confidence of a
// brief, from the best design under the limits as they stand.
type backOff struct {
	app      *app
	study    *study
	problem  problems.Problem // behind the ledger
	settings optimize.Settings
	nominal  *optimize.Result
	results  []*optimize.Result // by round
}

// withConfidence replaces the result of a finished design by the backed-off one and
// describes both. It returns the study whose limits are those the new result was
// searched with; a brief without a confidence is left as it is.
func (a *app) withConfidence(ctx context.Context, of *study, cached problems.Problem, settings optimize.Settings, finished *report.Study) (*study, error) {
	confidence := of.brief.Tolerance.Confidence
	result := finished.Result
	switch {
	case confidence == 0:
		return of, nil
	case ctx.Err() != nil:
		finished.Confidence = notBackedOff(confidence, cutOff)
		return of, nil
	case !result.Best.Assessment.Feasible:
		finished.Confidence = notBackedOff(confidence, "the search found no design that holds the limits even without tolerances, so that none was backed off")
		return of, nil
	}
	built, err := of.problem.Built(of.brief.Tolerance.Deviations())
	if err != nil {
		return nil, err
	}
	b := &backOff{app: a, study: of, problem: cached, settings: settings, nominal: result, results: []*optimize.Result{result}}
	goal := robust.Goal{
		Problem: built, Limits: of.limits, Confidence: confidence, Highest: of.brief.Aim.Highest,
		Nominal: robust.Found{X: result.Best.X, Feasible: true, Aim: result.Best.AimExact},
	}
	a.say("confidence %g: drawing the design that knows no tolerances\n", confidence)
	answer, err := robust.BackOff(ctx, goal, robust.Settings{Seed: settings.Seed, Jobs: a.jobs}, b.search)
	switch {
	case ctx.Err() != nil:
		finished.Confidence = notBackedOff(confidence, cutOff)
		finished.Result.Status = cutStatus(ctx)
		return of, nil
	case err != nil:
		return nil, err
	}
	finished.Result = b.results[answer.Chosen]
	finished.Confidence = b.describe(answer)
	round := &answer.Rounds[answer.Chosen]
	searched := *of
	guarded, guard := round.Cut.Guard(of.model)
	searched.model, searched.limits = guarded, append(guard, round.Asked()...)
	return &searched, nil
}

const cutOff = "the search was ended before a design was backed off: the one shown knows no tolerances"

// notBackedOff says why a confidence that was asked for bears on no design.
func notBackedOff(confidence float64, why string) *report.Confidence {
	return &report.Confidence{
		Confidence: report.Number(confidence), Aimed: report.Number(confidence), Limits: []report.ConfidentLimit{}, Why: why,
	}
}

// cutStatus is the status of a search whose context has ended.
func cutStatus(ctx context.Context) optimize.Status {
	if errors.Is(context.Cause(ctx), context.DeadlineExceeded) {
		return optimize.Stopped
	}
	return optimize.Interrupted
}

// search answers one round: a design of its own, from that of the round before.
func (b *backOff) search(ctx context.Context, q robust.Question) (robust.Found, error) {
	b.app.say("confidence, round %d: %s\n", len(b.results), searchWords(q))
	problem, guard := q.Cut.Guard(b.problem)
	task := optimize.Task{Problem: problem, Limits: append(guard, q.Limits...), Aim: b.study.brief.Aim, Starts: [][]float64{q.Near}}
	progress := b.app.progress()
	result, err := optimize.Design(ctx, task, b.settings, progress.observe)
	progress.end()
	if err != nil {
		return robust.Found{}, err
	}
	if ctx.Err() != nil {
		return robust.Found{}, ctx.Err()
	}
	best := &result.Best
	if best.Assessment.Feasible {
		b.results = append(b.results, result)
	}
	return robust.Found{X: best.X, Feasible: best.Assessment.Feasible, Aim: best.AimExact}, nil
}

// searchWords tell the searches of a round apart.
func searchWords(q robust.Question) string {
	var changed []string
	if q.Halfway {
		changed = append(changed, "half the change of the margins")
	}
	switch {
	case q.Loosened == 1:
		changed = append(changed, "more draws without an answer")
	case q.Loosened > 1:
		changed = append(changed, "still more draws without an answer")
	}
	if changed == nil {
		return "searching with the margins the draws ask for"
	}
	return "nothing found, so again with " + strings.Join(changed, " and ")
}

// describe sets the nominal and the backed-off design side by side, with what each
// margin costs.
func (b *backOff) describe(answer *robust.Backoff) *report.Confidence {
	chosen := b.results[answer.Chosen]
	out := &report.Confidence{
		Confidence: report.Number(answer.Confidence), Aimed: report.Number(answer.Aimed), Met: answer.Met, Why: answer.Why,
		Rounds: len(answer.Rounds), Round: answer.Chosen, DrawsARound: answer.Draws, Draws: answer.Checked,
		Nominal:   b.side(b.nominal, answer.NominalJoint),
		BackedOff: b.side(chosen, answer.Joint), Limits: []report.ConfidentLimit{},
	}
	for i := range answer.Limits {
		p, was, shift := &answer.Limits[i], &answer.NominalLimits[i], &answer.Rounds[answer.Chosen].Shifts[i]
		if p.Limit.Kind == problems.Hard && (p.Pass == 1 && was.Pass == 1 || outdone(p.Limit, answer.Limits)) {
			continue
		}
		l := report.ConfidentLimit{
			Quantity: p.Limit.Quantity, At: p.Limit.Point, Affected: p.Affected || was.Affected,
			Nominal: share(*was), BackedOff: share(*p), Unanswered: p.Unanswered,
			LowMargin: report.Number(shift.Low), HighMargin: report.Number(shift.High),
			Price: report.Number(priceOf(chosen, p.Limit)),
		}
		l.Bounds(p.Limit.Low, p.Limit.High)
		l.Cost = l.Price * (l.LowMargin + l.HighMargin)
		out.Limits = append(out.Limits, l)
	}
	return out
}

func (b *backOff) side(r *optimize.Result, joint robust.Probability) *report.ConfidentDesign {
	variables := report.Object[report.Number]{}
	for i, v := range b.problem.Variables() {
		variables = append(variables, report.Field[report.Number]{Name: v.Name, Value: report.Number(r.Best.X[i])})
	}
	return &report.ConfidentDesign{Variables: variables, Aim: report.Number(r.Best.AimExact), Joint: share(joint)}
}

// priceOf sums the prices of the rows of a limit.
func priceOf(r *optimize.Result, limit problems.Limit) float64 {
	sum := 0.0
	for i := range r.Best.Assessment.Checks {
		c := &r.Best.Assessment.Checks[i]
		if c.Quantity.Name == limit.Quantity && c.Quantity.Point == limit.Point && c.Kind == limit.Kind {
			sum += c.Price
		}
	}
	return sum
}

// judgeAsAsked judges a backed-off result on the limits of the brief, which its
// search had moved, and drops the quantity it had added. What held the moved limits
// holds these, but a finer trace may break the moved ones alone; and what does not
// hold them with the confidence is not verified.
func judgeAsAsked(of *study, finished *report.Study) error {
	result := finished.Result
	rows, err := constraints.Rows(of.model.Quantities(), of.limits)
	if err != nil {
		return fmt.Errorf("limits of the brief: %w", err)
	}
	width := len(of.model.Quantities())
	result.Rows = rows
	for i := range result.Samples {
		trim(result.Samples[i].Evaluation, width)
	}
	for i := range result.Candidates {
		judgeAnew(&result.Candidates[i], rows, width)
	}
	judgeAnew(&result.Best, rows, width)
	if result.Status == optimize.Verified || result.Status == optimize.NotVerified {
		result.Status = optimize.NotVerified
		if finished.Confidence.Met && result.Best.Verified(finished.Agreement) {
			result.Status = optimize.Verified
		}
	}
	return nil
}

func judgeAnew(c *optimize.Candidate, rows []constraints.Row, width int) {
	trim(c.Exact, width)
	trim(c.Second, width)
	c.Predicted = c.Predicted[:min(width, len(c.Predicted))]
	c.Judge(rows)
}

// trim drops the values behind the first.
func trim(e *problems.Evaluation, width int) {
	if e == nil || len(e.Values) <= width {
		return
	}
	e.Values, e.Reasons = e.Values[:width], e.Reasons[:width]
	if e.Bounds != nil {
		e.Bounds = e.Bounds[:width]
	}
}
