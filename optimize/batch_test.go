package optimize

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"testing"

	"rampwright/problems/analytic"
)

// batched are tasks of every way a round is filled: steps alone, linear rows, a
// model that fails, several valleys, and nothing that is feasible.
func batched(t testing.TB) map[string]Task {
	valleys, err := analytic.New("g08")
	if err != nil {
		t.Fatal(err)
	}
	return map[string]Task{
		"disk": disk(1), "linear": beale(3), "edge": cliff(), "worst": charalambous2(), "infeasible": disk(-1),
		"valleys": {Problem: valleys, Limits: valleys.OwnLimits(), Aim: valleys.Aim()},
	}
}

// rounds cuts the infill of a result into the rounds of its history.
func rounds(result *Result) [][]Sample {
	var list [][]Sample
	from := result.Counts.Samples
	for _, step := range result.History {
		list = append(list, result.Samples[from:step.Evaluations])
		from = step.Evaluations
	}
	return list
}

// A round never holds more than the batch, nor two points that would teach the same,
// nor one evaluated before, nor one off the linear rows.
func TestRoundsHoldDistinctPointsWithinTheBatch(t *testing.T) {
	for name, task := range batched(t) {
		p := mustPlan(t, task)
		for i, batch := range []int{1, 2, 3, 4, 8, MostBatch} {
			settings := Settings{Batch: batch, Seed: int64(i + 1), Samples: 5 + i, Infill: 24}
			result := mustDesign(t, task, settings)
			if result.Counts.Rounds != len(result.History) || result.Counts.Infill > settings.Infill {
				t.Errorf("%s: %+v with %d lines of history", name, result.Counts, len(result.History))
			}
			earlier := result.Samples[:result.Counts.Samples]
			for r, round := range rounds(result) {
				if len(round) == 0 || len(round) > batch {
					t.Errorf("%s: round %d holds %d of %d points", name, r, len(round), batch)
				}
				checkRound(t, fmt.Sprintf("%s, round %d of %d", name, r, batch), p, round, earlier)
				earlier = result.Samples[:len(earlier)+len(round)]
			}
		}
	}
}

func checkRound(t *testing.T, where string, p *plan, round, earlier []Sample) {
	t.Helper()
	for i, s := range round {
		u := p.normal(s.X)
		if !p.insideLinear(u) && p.linearViolation(u) > 1e-12 {
			t.Errorf("%s: %v is off the linear rows", where, s.X)
		}
		for _, other := range round[:i] {
			if gap := distance(u, p.normal(other.X)); gap < 0.99*apart {
				t.Errorf("%s: two points are %g apart", where, gap)
			}
		}
		for _, other := range earlier {
			if slices.Equal(s.X, other.X) {
				t.Errorf("%s: %v was evaluated before", where, s.X)
			}
		}
	}
}

// A batch reaches the optimum, verified, in fewer rounds than one or two points a
// round do, and is filled while the search is on its way.
func TestBatchSavesRounds(t *testing.T) {
	for name, task := range map[string]Task{"disk": disk(1), "larger disk": disk(4)} {
		settings := Settings{Samples: 4, Infill: 60}
		alone := mustDesign(t, task, settings)
		settings.Batch = 4
		result := mustDesign(t, task, settings)
		if result.Status != Verified || result.Counts.Rounds >= alone.Counts.Rounds {
			t.Errorf("%s: %v after %d rounds, without a batch after %d", name, result.Status, result.Counts.Rounds, alone.Counts.Rounds)
		}
		if first := rounds(result)[0]; len(first) != 4 {
			t.Errorf("%s: the first round holds %d points of 4", name, len(first))
		}
	}
}

// Cancelled within a round, a design keeps what was evaluated of it.
func TestCancelledWithinARound(t *testing.T) {
	for at := int64(9); at <= 13; at++ {
		ctx, cancel := context.WithCancel(context.Background())
		task := disk(1)
		task.Problem = &interrupting{verifiedToy: task.Problem.(verifiedToy), at: at, end: cancel}
		result, err := Design(ctx, task, Settings{Samples: 8, Infill: 20, Batch: 4}, nil)
		cancel()
		if err != nil {
			t.Fatal(err)
		}
		// The evaluation during which the context ends is lost.
		if want := int(at) - 1; result.Status != Interrupted || len(result.Samples) != want || result.Best.Second == nil {
			t.Errorf("cancelled at evaluation %d: %v with %d evaluations, want %d", at, result.Status, len(result.Samples), want)
		}
	}
}

func TestBatchOutOfRangeIsRefused(t *testing.T) {
	for _, batch := range []int{-1, MostBatch + 1} {
		err := Settings{Batch: batch, Agreement: 2}.WithDefaults(2).Validate(2)
		var joined interface{ Unwrap() []error }
		if !errors.As(err, &joined) || len(joined.Unwrap()) != 2 {
			t.Errorf("batch %d: %v", batch, err)
		}
	}
}
