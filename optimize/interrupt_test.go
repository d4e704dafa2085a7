package optimize

import (
	"context"
	"errors"
	"math"
	"sync/atomic"
	"testing"
	"testing/synctest"
	"time"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// interrupting ends a context at an evaluation.
type interrupting struct {
	verifiedToy
	calls atomic.Int64
	at    int64
	end   func()
}

func (p *interrupting) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	if p.calls.Add(1) == p.at {
		p.end()
	}
	return p.verifiedToy.Evaluate(ctx, x, dst)
}

func (p *interrupting) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.verifiedToy.Evaluate(ctx, x, dst)
}

// Cancelled at any evaluation, a design hands back the best of what it has, with
// the evidence of the second route, or says that it has nothing.
func TestCancelledDesignKeepsTheBest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		at := rapid.Int64Range(1, 40).Draw(t, "at")
		jobs := rapid.IntRange(1, 3).Draw(t, "jobs")
		ctx, cancel := context.WithCancel(context.Background())
		defer cancel()
		task := disk(1)
		task.Problem = &interrupting{verifiedToy: task.Problem.(verifiedToy), at: at, end: cancel}
		result, err := Design(ctx, task, Settings{Samples: 20, Jobs: jobs}, nil)
		if err != nil {
			if !errors.Is(err, ErrNothingEvaluated) || !errors.Is(err, context.Canceled) || at > sampleSlice {
				t.Fatalf("cancelled at evaluation %d of %d jobs: %v", at, jobs, err)
			}
			return
		}
		if ctx.Err() == nil {
			return // done before
		}
		if result.Status != Interrupted || result.Best.Second == nil {
			t.Errorf("cancelled at evaluation %d: %v, second route %v", at, result.Status, result.Best.Second)
		}
		for _, s := range result.Samples {
			if s.Evaluation.Values[1] <= 1 && (!result.Best.Assessment.Feasible || s.Evaluation.Values[0] > result.Best.AimExact) {
				t.Errorf("cancelled at evaluation %d: the best has %g, a sample %g", at, result.Best.AimExact, s.Evaluation.Values[0])
			}
		}
	})
}

// The same for every evaluation in turn: a feasible best is called feasible and no
// other is, and with more evaluations it is never worse.
func TestCancelledAfterEveryEvaluation(t *testing.T) {
	last := math.Inf(-1)
	for at := int64(1); ; at++ {
		ctx, cancel := context.WithCancel(context.Background())
		task := disk(1)
		task.Problem = &interrupting{verifiedToy: task.Problem.(verifiedToy), at: at, end: cancel}
		result, err := Design(ctx, task, Settings{Samples: 8, Infill: 12}, nil)
		ended := ctx.Err() != nil
		cancel()
		if err != nil {
			if !errors.Is(err, ErrNothingEvaluated) || at > 8 {
				t.Fatalf("cancelled at evaluation %d: %v", at, err)
			}
			continue
		}
		if !ended {
			if at < 12 {
				t.Errorf("the design ended by itself at evaluation %d", at)
			}
			return
		}
		best := &result.Best
		if result.Status != Interrupted || best.Assessment.Feasible != (best.Exact.Values[1] <= 1) || best.Second == nil {
			t.Errorf("cancelled at evaluation %d: %v, feasible %t with a square of %g", at, result.Status, best.Assessment.Feasible, best.Exact.Values[1])
		}
		if best.Assessment.Feasible {
			if best.AimExact < last {
				t.Errorf("cancelled at evaluation %d: %g after %g", at, best.AimExact, last)
			}
			last = best.AimExact
		}
	}
}

// A limit at 0, whose scale comes from the samples, has one among few samples too.
func TestCancelledAmongTheSamplesUnderALimitAtZero(t *testing.T) {
	for at := int64(2); at <= 20; at += 3 {
		ctx, cancel := context.WithCancel(context.Background())
		task := disk(0)
		task.Problem = &interrupting{verifiedToy: task.Problem.(verifiedToy), at: at, end: cancel}
		result, err := Design(ctx, task, Settings{Samples: 20}, nil)
		cancel()
		switch {
		case errors.Is(err, ErrNothingEvaluated): // within the first slice
		case err != nil:
			t.Error(err)
		case result.Status != Interrupted:
			t.Errorf("cancelled at evaluation %d: %v", at, result.Status)
		}
	}
}

// slow is a model whose every evaluation lasts.
type slow struct {
	verifiedToy
	lasts time.Duration
}

func (p slow) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	time.Sleep(p.lasts)
	return p.verifiedToy.Evaluate(ctx, x, dst)
}

// A deadline, here in the time of a bubble, stops a design with the best so far,
// feasible or not.
func TestDeadlineStopsADesign(t *testing.T) {
	for _, c := range []struct {
		square   float64
		feasible bool
	}{{1, true}, {-1, false}} {
		synctest.Test(t, func(t *testing.T) {
			task := disk(c.square)
			task.Problem = slow{task.Problem.(verifiedToy), time.Minute}
			ctx, cancel := context.WithTimeout(t.Context(), 25*time.Minute+time.Second)
			defer cancel()
			result, err := Design(ctx, task, Settings{}, nil)
			if err != nil {
				t.Fatal(err)
			}
			if result.Status != Stopped || result.Best.Assessment.Feasible != c.feasible {
				t.Errorf("%v with a feasible best %t", result.Status, result.Best.Assessment.Feasible)
			}
			if n := len(result.Samples); n == 0 || n > 25 {
				t.Errorf("%d evaluations of a minute each in 25 minutes", n)
			}
		})
	}
}
