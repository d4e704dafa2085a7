// Package analytic holds published test problems whose answers are known:
// smooth functions for surrogates, and constrained ones for searches. They are
// yardsticks; none of them is an inlet.
package analytic

import (
	"context"
	"fmt"
	"math"
	"strings"

	"rampwright/problems"
)

const (
	// Point is the point of every quantity of an analytic problem.
	Point = "model"
	// Value is the quantity an analytic problem drives down.
	Value = "value"
)

// Function is one published problem: the lowest Value over a box under limits
// on g1, g2, .. Everything in it is without unit unless the definition says so.
type Function struct {
	Name       string
	Definition string // formula and box, as published
	Source     string // where it was published; every one is recalled from memory
	Variables  []problems.Variable
	Limits     []Range // of g1, g2, ..; none for a function over a box alone
	// Best is a place of the lowest value; other places may share it.
	Best    []float64
	Lowest  float64
	Moments *Moments // under independent uniform inputs; nil where not known

	evaluate func(x, dst []float64) // Value, then g1, g2, ..
}

// Range is what a limit allows: Low <= g <= High, an absent side an infinity.
type Range struct{ Low, High float64 }

// Moments are exact mean and variance of Value for inputs spread evenly and
// independently over the box.
type Moments struct{ Mean, Variance float64 }

// Functions returns every problem in its fixed order. The slice is a copy.
func Functions() []Function { return append([]Function(nil), functions...) }

var functions = concat(smooth, engineering, collection, hockSchittkowski)

func concat(lists ...[]Function) []Function {
	var all []Function
	for _, list := range lists {
		all = append(all, list...)
	}
	return all
}

// Names returns the name of every problem, in the same order.
func Names() []string {
	names := make([]string, len(functions))
	for i := range functions {
		names[i] = functions[i].Name
	}
	return names
}

// Unknown is the error of a name no problem has.
type Unknown struct{ Name string }

func (e *Unknown) Error() string {
	return fmt.Sprintf("there is no analytic problem %q; there are %s", e.Name, strings.Join(Names(), ", "))
}

// Problem is a function as a search sees it. It implements problems.Problem and
// is safe for concurrent use.
type Problem struct {
	Function
	quantities []problems.Quantity
}

// New returns the problem of that name, or *Unknown.
func New(name string) (*Problem, error) {
	for _, f := range functions {
		if f.Name == name {
			p := &Problem{Function: f, quantities: []problems.Quantity{{Name: Value, Point: Point}}}
			for i := range f.Limits {
				p.quantities = append(p.quantities, problems.Quantity{Name: constraintName(i), Point: Point})
			}
			return p, nil
		}
	}
	return nil, &Unknown{name}
}

func constraintName(i int) string { return fmt.Sprintf("g%d", i+1) }

// Variables returns the inputs with their box.
func (p *Problem) Variables() []problems.Variable { return p.Function.Variables }

// Quantities returns Value, then g1, g2, ..
func (p *Problem) Quantities() []problems.Quantity { return p.quantities }

// Evaluate computes every quantity at x. One that is not finite there is missing
// with a *problems.Status.
func (p *Problem) Evaluate(ctx context.Context, x []float64, dst *problems.Evaluation) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	dst.Clear()
	p.evaluate(x, dst.Values)
	for i, v := range dst.Values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			dst.Miss(i, &problems.Status{Phrase: "the formula has no finite value here"})
		}
	}
	return nil
}

// Aim returns the aim of the problem as published: the lowest Value.
func (p *Problem) Aim() problems.Aim {
	return problems.Aim{Text: Value, Where: Point, Parts: []problems.Part{
		{Point: Point, Weight: 1, Reads: []problems.Read{{Quantity: Value, Point: Point}}},
	}}
}

// OwnLimits returns the limits of the problem as published. A brief may replace
// each.
func (p *Problem) OwnLimits() []problems.Limit {
	list := make([]problems.Limit, len(p.Limits))
	for i, r := range p.Limits {
		list[i] = problems.Limit{
			Quantity: constraintName(i), Point: Point, Low: r.Low, High: r.High, Kind: problems.Default, Source: "published",
		}
	}
	return list
}

var _ problems.Problem = (*Problem)(nil)

// axes returns variables x1, x2, .. that share one range.
func axes(n int, low, high float64) []problems.Variable {
	sides := make([][2]float64, n)
	for i := range sides {
		sides[i] = [2]float64{low, high}
	}
	return box(sides...)
}

// box returns variables x1, x2, .. with the ranges given.
func box(sides ...[2]float64) []problems.Variable {
	list := make([]problems.Variable, len(sides))
	for i, s := range sides {
		list[i] = problems.Variable{Name: fmt.Sprintf("x%d", i+1), Low: s[0], High: s[1]}
	}
	return list
}

// below returns n limits g <= 0, the form most problems are published in.
func below(n int) []Range {
	list := make([]Range, n)
	for i := range list {
		list[i] = Range{math.Inf(-1), 0}
	}
	return list
}

// repeat returns n times v.
func repeat(n int, v float64) []float64 {
	list := make([]float64, n)
	for i := range list {
		list[i] = v
	}
	return list
}

func square(v float64) float64 { return v * v }
func cube(v float64) float64   { return v * v * v }
func fourth(v float64) float64 { return square(square(v)) }
