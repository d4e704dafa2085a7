package main

import (
	"context"
	"fmt"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/optimize/robust"
	"rampwright/problems"
)

func (a *app) spreadCommand() *cobra.Command {
	var of, dir string
	var draws int
	cmd := &cobra.Command{
		Use: "spread BRIEF", Short: "Show what the tolerances of a brief do to one design", Args: exactArgs(1),
		Long: `Draw the tolerances of a brief around one design, as built and flown, through
the exact model and through surrogates fitted in the space of the tolerances:
mean, deviation and percentiles of every quantity, how often each limit holds and
all of them together, the share of draws with a shock inside the lip, and the
sensitivity to each input. Values the brief searches are taken from a result
folder (--of DIR) or fixed by flags, a flag winning. The result folder holds
spread.json, spread.csv and spread.svg.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			if study.problem == nil {
				return &usageError{"spread is of an inlet; this brief poses the analytic problem " + study.analyticName(), ""}
			}
			if !study.brief.Tolerance.Any() {
				return &usageError{"the brief states no tolerance: nothing scatters", "add `tolerance: {ramp_angle_deg: 0.1, mach: 0.03, incidence_deg: 0.5}`"}
			}
			if draws < robust.LeastDraws || draws > robust.MostDraws {
				return &usageError{fmt.Sprintf("--draws %d: allowed %d to %d", draws, robust.LeastDraws, robust.MostDraws), "fewer leave every share uncertain, more take memory"}
			}
			x, err := study.fixed("spread", of)
			if err != nil {
				return err
			}
			if dir == "" {
				dir = strings.TrimSuffix(filepath.Base(args[0]), filepath.Ext(args[0])) + "-spread"
			}
			return a.spread(study, x, draws, dir)
		},
	}
	cmd.Flags().StringVar(&of, "of", "", "take searched values from this result folder")
	cmd.Flags().IntVar(&draws, "draws", robust.DefaultDraws, "exact draws")
	cmd.Flags().StringVarP(&dir, "output", "o", "", "result folder (default ./<brief name>-spread)")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	a.searchFlags(cmd)
	briefFlags(cmd)
	return cmd
}

// spread studies the tolerances of one design into a result folder.
func (a *app) spread(of *study, x []float64, draws int, dir string) (err error) {
	built, err := of.problem.Built(of.brief.Tolerance.Deviations())
	if err != nil {
		return &usageError{strings.ReplaceAll(err.Error(), "\n", "; "), "change the tolerance of the brief"}
	}
	settings := robust.Settings{Draws: draws, Seed: of.brief.Effort.Seed, Jobs: a.jobs}
	inputs := len(built.Scatter())
	if err := settings.WithDefaults(inputs).Validate(inputs); err != nil && a.jobs >= 1 {
		return &usageError{"--" + strings.ReplaceAll(err.Error(), "\n", "; "), fmt.Sprintf("%d or more", robust.LeastDraws)}
	}
	s, err := a.openSession(dir, "spread", of, []*study{of}, nil)
	if err != nil {
		return err
	}
	defer s.close(&err)
	a.say("%d draws of %d inputs, then %d for the sensitivity and %d for the surrogates\n", costs(settings, inputs)...)
	progress := a.progress()
	settings.Observe = func(e robust.Event) {
		progress.show(stage{phase: e.Phase, done: e.Done, total: e.Total, unit: "step"})
	}
	result, err := robust.Run(s.ctx, robust.Task{Problem: built, X: x, Limits: of.limits, Fitted: of.aimed()}, settings)
	progress.end()
	if err != nil {
		return s.cutDraws(err)
	}
	flow, err := of.problem.Flow(context.WithoutCancel(s.ctx), x)
	if err != nil {
		return err
	}
	document := report.NewSpread(of.head(settings.Seed), of.spreadStudy(result, built, x, flow), problems.TruncatedAt)
	picture, err := document.Picture()
	if err != nil {
		return err
	}
	return s.finish(of, document, []file{{"spread.json", document.JSON()}, {"spread.csv", document.CSV()}, {"spread.svg", picture}})
}

// cutDraws gives draws that were cut short the code of what ended them; there is
// nothing to keep of them.
func (s *session) cutDraws(err error) error {
	switch code := s.interruption.code.Load(); {
	case s.ctx.Err() == nil:
		return err
	case code != 0:
		return s.app.nothingWritten(code)
	}
	s.app.complain("the time was up before the draws were done", "give more time, or fewer --draws")
	return &endedWith{exitNotMet}
}

// costs are the exact evaluations of a study.
func costs(settings robust.Settings, inputs int) []any {
	s := settings.WithDefaults(inputs)
	return []any{s.Draws, inputs, inputs * s.Replaced, s.Samples}
}

// aimed lists the quantities the aim depends on, by index.
func (s *study) aimed() []int {
	var list []int
	for _, part := range s.brief.Aim.Parts {
		for _, read := range part.Reads {
			for i, q := range s.model.Quantities() {
				if q.Name == read.Quantity && q.Point == read.Point && (read.Member == "" || read.Member == q.Member) {
					list = append(list, i)
				}
			}
		}
	}
	return list
}
