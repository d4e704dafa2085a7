package optimize

import (
	"context"
	"math"
	"testing"

	"rampwright/constraints"
	"rampwright/problems"
)

// glass is the product mix of the Wyndor Glass Co. (Hillier & Lieberman,
// Introduction to Operations Research, sec. 3.1; from memory): the highest
// 3 x + 5 y with x <= 4, 2 y <= 12 and 3 x + 2 y <= 18, at (2, 6). The last two have
// the shadow prices 1.5 and 1, allowable to increase by 6 each.
func glass(first, second, third float64, linear bool) Task {
	quantities := []problems.Quantity{quantity("profit"), quantity("first"), quantity("second"), quantity("third")}
	t := &toy{
		variables:  []problems.Variable{variable("x", 0, 10), variable("y", 0, 20)},
		quantities: quantities,
		fill: func(x []float64, dst *problems.Evaluation) {
			dst.Set(0, 3*x[0]+5*x[1])
			dst.Set(1, x[0])
			dst.Set(2, 2*x[1])
			dst.Set(3, 3*x[0]+2*x[1])
		},
	}
	task := Task{
		Problem: verifiedToy{t},
		Limits:  []problems.Limit{atMost("first", first), atMost("second", second), atMost("third", third)},
		Aim:     aimAt("profit", true),
	}
	if linear {
		for i := range quantities[1:] {
			quantities[1+i].Explicit = true
		}
		task.Problem = explicitToy{verifiedToy{t}, map[int]linearForm{1: {[]float64{1, 0}, 0}, 2: {[]float64{0, 2}, 0}, 3: {[]float64{3, 2}, 0}}}
	}
	return task
}

// flat is the highest x + y with x + y <= 1 and y <= 0.7: every point of a side is
// an optimum.
func flat() Task {
	return Task{
		Problem: verifiedToy{&toy{
			variables:  []problems.Variable{variable("x", 0, 1), variable("y", 0, 1)},
			quantities: []problems.Quantity{quantity("sum"), quantity("y")},
			fill: func(x []float64, dst *problems.Evaluation) {
				dst.Set(0, x[0]+x[1])
				dst.Set(1, x[1])
			},
		}},
		Limits: []problems.Limit{atMost("sum", 1), atMost("y", 0.7)},
		Aim:    aimAt("sum", true),
	}
}

// priced are the checks of a task priced on its exact model at x.
func priced(t *testing.T, task Task, x []float64) []constraints.Check {
	t.Helper()
	evaluation := problems.NewEvaluation(len(task.Problem.Quantities()))
	if err := task.Problem.Evaluate(context.Background(), x, evaluation); err != nil {
		t.Fatal(err)
	}
	rows, err := constraints.Rows(task.Problem.Quantities(), task.Limits)
	if err != nil {
		t.Fatal(err)
	}
	checks := constraints.Assess(rows, evaluation).Checks
	if err := Price(context.Background(), task, x, checks); err != nil {
		t.Fatal(err)
	}
	return checks
}

// The range of a price against ranging by hand: at vertices of a linear program,
// along a curved limit, and inside one limit of a quadratic program.
func TestPriceRanges(t *testing.T) {
	type want struct {
		check        int
		price, reach float64
		end          constraints.PriceEnd
	}
	// ln(price) of the disk has the slope 0.15 sqrt(5/s) - 1/(2 s) by its square s.
	diskSlope := func(square float64) float64 { return 0.15*math.Sqrt(5/square) - 1/(2*square) }
	vertex := []want{
		{1, 1.5, 6, constraints.PriceEnd{Kind: constraints.LowerEndMet, Index: 0}},
		{2, 1, 6, constraints.PriceEnd{Kind: constraints.LimitMet, Index: 0}},
	}
	for name, c := range map[string]struct {
		task Task
		x    []float64
		want []want
	}{
		"glass":        {glass(4, 12, 18, false), []float64{2, 6}, vertex},
		"linear glass": {glass(4, 12, 18, true), []float64{2, 6}, vertex},
		// Three limits pass through (2, 6): the prices of two hold nowhere.
		"degenerate glass": {glass(2, 12, 18, false), []float64{2, 6}, []want{
			{1, 2.5, 0, constraints.PriceEnd{Kind: constraints.LimitMet, Index: 2}},
		}},
		// 0.02 ahead of x <= 2.02 the third limit stops paying after 0.06.
		"near glass": {glass(2.02, 12, 18, false), []float64{2, 6}, []want{
			{2, 1, 0.06, constraints.PriceEnd{Kind: constraints.LimitMet, Index: 0}},
		}},
		"disk": {disk(1), diskX(1), []want{{0, diskPrice(1), -0.2 / diskSlope(1), constraints.PriceEnd{Kind: constraints.PriceFalls, Index: 0}}}},
		// Nothing curves along x + y <= 1: the optimum moves by the shortest way, which
		// meets y <= 0.7 after 0.4.
		"flat": {flat(), []float64{0.5, 0.5}, []want{{0, 1, 0.4, constraints.PriceEnd{Kind: constraints.LimitMet, Index: 1}}}},
		// The price 2/9 (4 - s) of Hock & Schittkowski 35 vanishes at the sum 4.
		"Hock & Schittkowski 35": {beale(3), bealeX, []want{{0, bealePrice, 0.2, constraints.PriceEnd{Kind: constraints.PriceFalls, Index: 0}}}},
	} {
		checks := priced(t, c.task, c.x)
		for _, w := range c.want {
			got := checks[w.check]
			if math.Abs(got.Price-w.price) > 1e-6*w.price || !(math.Abs(got.PriceRange-w.reach) <= 1e-4*w.reach) || got.PriceEnd != w.end {
				t.Errorf("%s, %s: price %.6g for %.6g, end %v; want %+v", name, got.Quantity.Name, got.Price, got.PriceRange, got.PriceEnd, w)
			}
		}
		for _, got := range checks {
			if (got.Price > 0) == math.IsNaN(got.PriceRange) {
				t.Errorf("%s, %s: price %g with a range of %g", name, got.Quantity.Name, got.Price, got.PriceRange)
			}
		}
	}
}
