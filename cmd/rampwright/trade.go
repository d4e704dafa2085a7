package main

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/report"
	"rampwright/optimize"
	"rampwright/optimize/front"
)

func (a *app) tradeCommand() *cobra.Command {
	var between, dir string
	var points int
	cmd := &cobra.Command{
		Use: "trade BRIEF", Short: "Trace what one quantity costs in another, every point a verified design", Args: exactArgs(1),
		Long: `Trace the curve of best designs between two quantities under the limits of a
brief: the first is driven to its best under a bound on the second, which moves
in even steps between the ends of the curve (the epsilon-constraint method).
Every point is searched and verified by both exact routes, as design does it.
The aim of the brief plays no part; its limits on the two quantities end the
curve. A quantity is NAME, NAME@POINT (default the first point), and may say
which way is better: length_m:lowest. The result folder holds trade.json,
trade.csv and trade.svg; a run that was cut short resumes from it.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			if study.problem == nil {
				return &usageError{"a trade is between quantities of an inlet; this brief poses the analytic problem " + study.analyticName(), ""}
			}
			if refused := brief.CheckSearch(study.brief); len(refused) > 0 {
				return refused
			}
			pair, err := study.tradedPair(between)
			if err != nil {
				return err
			}
			if points < leastTradePoints || points > mostTradePoints {
				return &usageError{fmt.Sprintf("--points %d is not within %d to %d", points, leastTradePoints, mostTradePoints), ""}
			}
			if dir == "" {
				dir = strings.TrimSuffix(filepath.Base(args[0]), filepath.Ext(args[0])) + "-trade"
			}
			return a.trade(study, pair, points, dir)
		},
	}
	cmd.Flags().StringVar(&between, "between", "", "the two quantities, such as recovery,length_m")
	cmd.Flags().IntVar(&points, "points", 11, "designs along the curve, its ends included")
	cmd.Flags().StringVarP(&dir, "output", "o", "", "result folder (default ./<brief name>-trade)")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	a.searchFlags(cmd)
	briefFlags(cmd)
	return cmd
}

const (
	leastTradePoints = 2
	mostTradePoints  = 101
)

// trade traces the curve into a result folder.
func (a *app) trade(of *study, between [2]traded, points int, dir string) (err error) {
	s, err := a.openSession(dir, "trade", of, []*study{of}, a.writesWhatThereIs)
	if err != nil {
		return err
	}
	defer s.close(&err)
	t := &tracing{session: s, study: of, between: between, points: points}
	along, err := front.EpsilonConstraint(s.ctx, points, t.solve)
	cut := err != nil
	if cut && s.ctx.Err() == nil {
		return err
	}
	if len(t.designs) == 0 {
		return a.cutShort(optimize.ErrNothingEvaluated, s.interruption)
	}
	finished, err := t.measured(along, cut)
	if err != nil {
		return err
	}
	document := report.NewTrade(of.head(a.settings(of).Seed), *finished)
	picture, err := document.Picture()
	if err != nil {
		return err
	}
	files := []file{{"trade.json", document.JSON()}, {"trade.csv", document.CSV()}, {"trade.svg", picture}}
	if err := s.finish(of, document, files); err != nil {
		return err
	}
	var results []*optimize.Result
	for _, p := range finished.Points {
		results = append(results, p.Study.Result)
	}
	return s.ending(results, cut)
}

// tracing is a curve under way.
type tracing struct {
	*session
	study   *study
	between [2]traded
	points  int
	designs []*report.Study // by question
}

// solve answers a question of the curve by a design of its own. One that starts
// from designs of the curve takes half the samples: it has its neighbourhood to
// learn, not the box.
func (t *tracing) solve(_ context.Context, q front.Question) (front.Answer, error) {
	lower, other := &t.between[q.Lower], &t.between[1-q.Lower]
	task := optimize.Task{Limits: t.study.limits, Aim: lower.aim()}
	text := lower.direction() + " " + lower.Label()
	if !math.IsInf(q.AtMost, 1) {
		limit := other.limit(q.AtMost)
		task.Limits = narrowed(task.Limits, limit)
		text += " with " + other.Label() + " " + sideText(limit)
	}
	settings := t.app.settings(t.study)
	if q.Near != nil {
		settings.Samples = max(settings.Samples/2, len(t.study.model.Variables())+2)
	}
	for _, i := range q.Near {
		task.Starts = append(task.Starts, t.designs[i].Result.Best.X)
	}
	t.app.say("design %d of %d: %s\n", len(t.designs)+1, t.points+2, text)
	finished, err := t.design(t.study, task, settings)
	switch {
	case t.cut(err):
		return front.Answer{}, t.ctx.Err()
	case err != nil:
		return front.Answer{}, err
	case finished.Result.Status == optimize.Stopped, finished.Result.Status == optimize.Interrupted:
		return front.Answer{}, t.ctx.Err() // a search cut short says nothing of the curve
	}
	t.designs = append(t.designs, finished)
	best := &finished.Result.Best
	return front.Answer{Point: t.point(best), Found: best.Assessment.Feasible}, nil
}

// point is a design as the curve sees it: both quantities to be lowered.
func (t *tracing) point(c *optimize.Candidate) front.Point {
	var p front.Point
	for i := range t.between {
		p[i] = t.between[i].sign() * t.between[i].value(c.Exact)
	}
	return p
}

// measured gathers the points of the curve that no other dominates, its knee and
// its area; without any, the reason.
func (t *tracing) measured(along []int, cut bool) (*report.TradeStudy, error) {
	out := &report.TradeStudy{
		Definition: t.study.problem.Definition(), Asked: t.points, Cut: cut,
		Between: [2]report.Traded{t.between[0].Traded, t.between[1].Traded},
	}
	curve := make([]front.Point, len(along))
	for k, i := range along {
		curve[k] = t.point(&t.designs[i].Result.Best)
	}
	kept := front.NonDominated(curve)
	out.Dropped = len(curve) - len(kept)
	knee, _, bulges := front.Knee(curve)
	for _, k := range kept {
		design := t.designs[along[k]]
		if err := t.flow(t.study, design); err != nil {
			return nil, err
		}
		out.Points = append(out.Points, report.TradePoint{Study: design, Values: t.values(curve[k]), Knee: bulges && k == knee})
	}
	if len(kept) == 0 {
		out.Infeasible = t.designs[0]
		task := optimize.Task{Limits: t.study.limits, Aim: t.between[0].aim()}
		if err := t.explain(t.study, task, out.Infeasible); err != nil {
			return nil, err
		}
		return out, t.flow(t.study, out.Infeasible)
	}
	first, last := curve[kept[0]], curve[kept[len(kept)-1]]
	worst := front.Point{last[0], first[1]}
	out.Reference = t.values(worst)
	out.Hypervolume = front.Hypervolume(curve, worst)
	out.Rectangle = (last[0] - first[0]) * (first[1] - last[1])
	return out, nil
}

// values are the quantities of a point in their own sense.
func (t *tracing) values(p front.Point) [2]float64 {
	return [2]float64{t.between[0].sign() * p[0], t.between[1].sign() * p[1]}
}
