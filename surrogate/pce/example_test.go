package pce_test

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate/doe"
	"rampwright/surrogate/pce"
)

// Fit, predict, and read the indices: the function depends mostly on the first
// of its two inputs.
func Example() {
	x := doe.LatinHypercube(40, 2, doe.Stream(1, "example"))
	y := make([]float64, len(x))
	for i, u := range x {
		y[i] = math.Exp(-u[0]) + 0.1*u[0]*u[1]
	}
	fitted, err := pce.OLS{}.FitExpansion(context.Background(), x, y)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(fitted.Describe())
	fmt.Printf("centre %.4f\n", fitted.Mean([]float64{0.5, 0.5}))
	fmt.Printf("total indices %.3f\n", fitted.Total())
	// Output:
	// degree 4, 15 terms
	// centre 0.6315
	// total indices [0.993 0.010]
}
