package main

import (
	"fmt"
	"time"

	"rampwright/optimize"
)

// slowRound is how long a round of the search lasts at least, on average, for a batch
// to be worth a word.
const slowRound = 5 * time.Second

// hintBatch tells of the batch that a search would have gained by, where it would.
func (a *app) hintBatch(settings optimize.Settings, counts optimize.Counts, took time.Duration) {
	if hint := batchHint(settings, counts, took); hint != "" {
		a.say("%s", hint)
	}
}

// batchHint is said of a search on a slow model whose rounds left workers idle; empty
// where there is nothing to gain. The clock decides, so it goes to no result.
func batchHint(settings optimize.Settings, counts optimize.Counts, took time.Duration) string {
	if settings.Batch > 0 || settings.Jobs <= 2 || counts.Rounds == 0 {
		return ""
	}
	// Samples fill every worker, rounds one or two.
	slices := counts.Rounds + (counts.Samples+settings.Jobs-1)/settings.Jobs
	if took < slowRound*time.Duration(slices) {
		return ""
	}
	batch := min(settings.Jobs, optimize.MostBatch)
	return fmt.Sprintf("%d rounds of one or two evaluations kept few of %d jobs at work: effort: {batch: %d}, or --batch %d, evaluates %d a round\n",
		counts.Rounds, settings.Jobs, batch, batch, batch)
}
