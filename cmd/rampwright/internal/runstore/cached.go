package runstore

import (
	"context"
	"sync/atomic"

	"rampwright/optimize"
	"rampwright/problems"
)

// Counter counts how a cached problem was answered; safe for concurrent use.
type Counter struct {
	primary, second tally
}

type tally struct {
	calls, hits atomic.Int64
}

// Calls returns how often the model itself was run by a route, failures
// included.
func (c *Counter) Calls(route Route) int { return int(c.of(route).calls.Load()) }

// Hits returns how often the ledger answered for a route.
func (c *Counter) Hits(route Route) int { return int(c.of(route).hits.Load()) }

func (c *Counter) of(route Route) *tally {
	if route == Second {
		return &c.second
	}
	return &c.primary
}

// Cached returns the problem answered from the ledger where that has x, and by
// the model otherwise, whose answer is then appended. It implements each optional
// interface of package problems exactly when the problem does. The model hash
// must tell apart any two models whose answers differ.
func Cached(problem problems.Problem, ledger *Ledger, model string) (problems.Problem, *Counter) {
	counter := &Counter{}
	base := &cached{Problem: problem, ledger: ledger, model: model, counter: counter}
	base.primary = base.counted(Primary, problem.Evaluate)
	verifier, isVerifier := problem.(problems.Verifier)
	if !isVerifier {
		return unverified(base), counter
	}
	return verified(base, &secondRoute{base, base.counted(Second, verifier.Verify)}), counter
}

// unverified lends base the interfaces of its problem that cost no model run.
func unverified(base *cached) problems.Problem {
	explicit, isExplicit := base.Problem.(problems.Explicit)
	linear, isLinear := base.Problem.(problems.Linear)
	switch {
	case isExplicit && isLinear:
		return &struct {
			*cached
			problems.Explicit
			problems.Linear
		}{base, explicit, linear}
	case isExplicit:
		return &struct {
			*cached
			problems.Explicit
		}{base, explicit}
	case isLinear:
		return &struct {
			*cached
			problems.Linear
		}{base, linear}
	}
	return base
}

// verified does the same and adds the second route.
func verified(base *cached, verifier problems.Verifier) problems.Problem {
	explicit, isExplicit := base.Problem.(problems.Explicit)
	linear, isLinear := base.Problem.(problems.Linear)
	switch {
	case isExplicit && isLinear:
		return &struct {
			*cached
			problems.Verifier
			problems.Explicit
			problems.Linear
		}{base, verifier, explicit, linear}
	case isExplicit:
		return &struct {
			*cached
			problems.Verifier
			problems.Explicit
		}{base, verifier, explicit}
	case isLinear:
		return &struct {
			*cached
			problems.Verifier
			problems.Linear
		}{base, verifier, linear}
	}
	return &struct {
		*cached
		problems.Verifier
	}{base, verifier}
}

// cached is a problem behind the ledger. The embedded interface lends Variables
// and Quantities.
type cached struct {
	problems.Problem
	ledger  *Ledger
	model   string
	counter *Counter
	primary evaluate
}

// secondRoute is the second route of a cached problem.
type secondRoute struct {
	base *cached
	run  evaluate
}

// Evaluate answers from the ledger or runs the model.
func (c *cached) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return c.ask(ctx, Primary, x, dst, c.primary)
}

var _ optimize.Repeater = (*cached)(nil)

// Repeat runs the model, whatever the ledger has, and leaves the ledger as it is.
func (c *cached) Repeat(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return c.primary(ctx, x, dst)
}

// Verify answers from the ledger or runs the second route.
func (s *secondRoute) Verify(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return s.base.ask(ctx, Second, x, dst, s.run)
}

func (c *cached) ask(ctx context.Context, route Route, x []float64, dst *problems.Evaluation, run evaluate) error {
	known, err := c.ledger.ask(ctx, c.model, route, x, dst, run)
	if known && err == nil {
		c.counter.of(route).hits.Add(1)
	}
	return err
}

// counted returns run with its calls counted.
func (c *cached) counted(route Route, run evaluate) evaluate {
	return func(ctx context.Context, x []float64, dst *problems.Evaluation) error {
		c.counter.of(route).calls.Add(1)
		return run(ctx, x, dst)
	}
}
