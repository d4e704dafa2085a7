package crossval_test

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate/crossval"
)

// Choose among the usual kinds and transforms; the exponential of a polynomial
// is a polynomial on the logarithm.
func Example() {
	x, y := sampled(40, 2, 1, func(u []float64) float64 { return math.Exp(u[0] - 2*u[1]*u[1]) })
	choice, err := crossval.Choose(context.Background(), crossval.Default(1), x, y)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s on %v, Q2 %.4f\n", choice.Kind, choice.Transform, choice.Quality.Q2)
	fmt.Printf("%.4f\n", choice.Mean([]float64{0.5, 0.5}))
	// Output:
	// polynomial chaos on log, Q2 1.0000
	// 1.0000
}
