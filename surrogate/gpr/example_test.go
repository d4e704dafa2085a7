package gpr_test

import (
	"context"
	"fmt"
	"math"

	"rampwright/surrogate/doe"
	"rampwright/surrogate/gpr"
)

// Fit, predict with a deviation, and refit cheaply after one more sample.
func Example() {
	x := doe.LatinHypercube(13, 1, doe.Stream(1, "example"))
	y := make([]float64, len(x))
	for i, u := range x {
		y[i] = math.Sin(6 * u[0])
	}
	fitted, err := gpr.Config{Kernel: gpr.Matern52}.Fit(context.Background(), x[:12], y[:12])
	if err != nil {
		fmt.Println(err)
		return
	}
	mean, deviation := fitted.Predict([]float64{0.5})
	fmt.Printf("%.2f within %v: %v\n", mean, 0.02, math.Abs(mean-math.Sin(3)) < 0.02 && deviation < 0.02)
	again, err := fitted.Warm().Fit(context.Background(), x, y)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.2f\n", again.Mean([]float64{0.5}))
	// Output:
	// 0.14 within 0.02: true
	// 0.14
}
