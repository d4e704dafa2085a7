package analytic_test

import (
	"context"
	"fmt"

	"rampwright/problems"
	"rampwright/problems/analytic"
)

func ExampleNew() {
	p, err := analytic.New("g24")
	if err != nil {
		fmt.Println(err)
		return
	}
	e := problems.NewEvaluation(len(p.Quantities()))
	if err := p.Evaluate(context.Background(), p.Best, e); err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("value %.6f, published %.6f, limits %d\n", e.Values[0], p.Lowest, len(p.OwnLimits()))
	// Output: value -5.508013, published -5.508013, limits 2
}
