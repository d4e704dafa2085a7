package main

import (
	"context"
	"strings"
	"testing"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/optimize"
	"rampwright/optimize/robust"
)

// No two searches of a round are told in the same words.
func TestSearchesOfARoundReadApart(t *testing.T) {
	seen := map[string]bool{}
	for _, q := range []robust.Question{{}, {Loosened: 1}, {Halfway: true}, {Halfway: true, Loosened: 1}, {Halfway: true, Loosened: 2}} {
		text := searchWords(q)
		if seen[text] || len("confidence, round 4: "+text) > 120 {
			t.Errorf("%+v reads %q", q, text)
		}
		seen[text] = true
	}
}

// A confidence that no design is backed off for is kept, with the reason.
func TestConfidenceIsNeverDropped(t *testing.T) {
	of := goldenStudy(t)
	of.brief.Tolerance.Confidence = 0.9
	ended, end := context.WithCancel(t.Context())
	end()
	for want, ctx := range map[string]context.Context{"no design that holds the limits": t.Context(), "was ended before": ended} {
		finished := report.Study{Result: &optimize.Result{}} // nothing holds the limits
		searched, err := (&app{quiet: true}).withConfidence(ctx, of, of.model, optimize.Settings{}, &finished)
		if err != nil || searched != of || finished.Confidence == nil || finished.Confidence.Met || !strings.Contains(finished.Confidence.Why, want) {
			t.Errorf("want %q: %+v, %v", want, finished.Confidence, err)
		}
	}
}
