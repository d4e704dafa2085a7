package doe_test

import (
	"fmt"

	"rampwright/surrogate/doe"
)

// Five points where the turnings must not add up to more than 1.
func ExampleInside() {
	inside := func(u []float64) bool { return u[0]+u[1] <= 1 }
	points, err := doe.Inside(5, 2, nil, inside, doe.Stream(1, "samples"))
	if err != nil {
		fmt.Println(err)
		return
	}
	kept := 0
	for _, p := range points {
		if inside(p) {
			kept++
		}
	}
	fmt.Println(kept, "of", len(points))
	// Output: 5 of 5
}
