package robust

import (
	"context"
	"errors"
	"math"
	"testing"

	"rampwright/problems"
)

// plain is a problem of formulas in the offsets e and the design x.
type plain struct {
	scatter    []problems.Scatter
	quantities []problems.Quantity
	value      func(x, e []float64, dst *problems.Evaluation)
}

func (p *plain) Variables() []problems.Variable {
	return []problems.Variable{{Name: "x", Low: -10, High: 10}}
}
func (p *plain) Quantities() []problems.Quantity { return p.quantities }
func (p *plain) Scatter() []problems.Scatter     { return p.scatter }

func (p *plain) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	return p.EvaluateBuilt(ctx, x, make([]float64, len(p.scatter)), dst)
}

func (p *plain) EvaluateBuilt(ctx context.Context, x, offsets []float64, dst *problems.Evaluation) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	p.value(x, offsets, dst)
	return nil
}

// scattered names inputs e1.. by their deviations.
func scattered(deviations ...float64) []problems.Scatter {
	var list []problems.Scatter
	for i, s := range deviations {
		list = append(list, problems.Scatter{Name: "e" + string(rune('1'+i)), Deviation: s})
	}
	return list
}

// named lists quantities at one point; a name twice is a group.
func named(names ...string) []problems.Quantity {
	var list []problems.Quantity
	count := map[string]int{}
	for _, n := range names {
		count[n]++
	}
	for i, n := range names {
		q := problems.Quantity{Name: n, Point: "here"}
		if count[n] > 1 {
			q.Member = string(rune('a' + i))
		}
		list = append(list, q)
	}
	return list
}

func atLeast(quantity string, low float64) problems.Limit {
	return problems.Limit{Quantity: quantity, Point: "here", Low: low, High: math.Inf(1)}
}

func atMost(quantity string, high float64) problems.Limit {
	return problems.Limit{Quantity: quantity, Point: "here", Low: math.Inf(-1), High: high}
}

var errNone = errors.New("no answer")

func run(t testing.TB, task Task, settings Settings) *Study {
	t.Helper()
	s, err := Run(context.Background(), task, settings)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// near fails unless got is within the tolerance of want.
func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s is %.9g, want %.9g within %.2g", what, got, want, tolerance)
	}
}
