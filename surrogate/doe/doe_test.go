package doe

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// The streams are frozen: these numbers must never change.
func TestStreamsAreFrozen(t *testing.T) {
	a := Stream(1, "samples")
	got := fmt.Sprintf("%.15f %.15f %d", a.Float64(), a.Float64(), a.IntN(1000))
	const want = "0.467766313056433 0.642595402261149 999"
	if got != want {
		t.Errorf("stream 1 samples gives %s, want %s; earlier results can no longer be repeated", got, want)
	}
	if x, y := Stream(1, "samples").Uint64(), Stream(1, "infill").Uint64(); x == y {
		t.Error("two purposes share a stream")
	}
	if x, y := Stream(1, "samples").Uint64(), Stream(2, "samples").Uint64(); x == y {
		t.Error("two seeds share a stream")
	}
}

func TestLatinHypercubeHasOnePointASlice(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, d := rapid.IntRange(1, 40).Draw(t, "points"), rapid.IntRange(1, 7).Draw(t, "inputs")
		seed := rapid.Int64().Draw(t, "seed")
		plain := RandomLatinHypercube(n, d, Stream(seed, ""))
		improved := LatinHypercube(n, d, Stream(seed, ""))
		for _, points := range [][][]float64{plain, improved} {
			for j := range d {
				if missing := emptySlice(points, j, n); missing >= 0 {
					t.Fatalf("input %d: slice %d of %d is empty", j, missing, n)
				}
			}
		}
		if phi(improved) > phi(plain)*(1+1e-12) {
			t.Fatalf("improvement raised the criterion from %g to %g", phi(plain), phi(improved))
		}
	})
}

func phi(points [][]float64) float64 {
	sum := 0.0
	for i := range points {
		for k := range i {
			sum += math.Pow(squaredDistance(points[i], points[k]), -8)
		}
	}
	return sum
}

// emptySlice returns the first of n equal slices of [0,1) without a point, or -1.
func emptySlice(points [][]float64, j, n int) int {
	seen := make([]bool, n)
	for _, p := range points {
		if p[j] >= 0 && p[j] < 1 {
			seen[int(p[j]*float64(n))] = true
		}
	}
	return slices.Index(seen, false)
}

func TestMaximinSpreads(t *testing.T) {
	plain, improved := 0.0, 0.0
	for seed := range int64(5) {
		plain += SmallestDistance(RandomLatinHypercube(40, 4, Stream(seed, "")))
		improved += SmallestDistance(LatinHypercube(40, 4, Stream(seed, "")))
	}
	if improved < 2*plain {
		t.Errorf("mean smallest distance %g, random %g", improved/5, plain/5)
	}
}

// The first ten points in three inputs as printed by Joe & Kuo with their
// direction numbers (from memory).
func TestSobolFirstPoints(t *testing.T) {
	want := [][]float64{
		{0, 0, 0}, {.5, .5, .5}, {.75, .25, .25}, {.25, .75, .75}, {.375, .375, .625},
		{.875, .875, .125}, {.625, .125, .875}, {.125, .625, .375}, {.1875, .3125, .9375}, {.6875, .8125, .4375},
	}
	got, err := Sobol(10, 3, 0)
	if err != nil {
		t.Fatal(err)
	}
	for i := range want {
		if !slices.Equal(got[i], want[i]) {
			t.Errorf("point %d is %v, want %v", i, got[i], want[i])
		}
	}
	later, _ := Sobol(4, 3, 6)
	for i := range later {
		if !slices.Equal(later[i], want[6+i]) {
			t.Errorf("point %d from place 6 is %v, want %v", i, later[i], want[6+i])
		}
	}
}

// Every block of 2^k points is stratified on every axis; the pair of the first
// two inputs fills every elementary box of 2^-k (a (0,2)-sequence).
func TestSobolIsStratified(t *testing.T) {
	for _, block := range []uint32{0, 1, 5} {
		points, err := Sobol(256, MostSobolInputs, 256*block)
		if err != nil {
			t.Fatal(err)
		}
		for j := range MostSobolInputs {
			if missing := emptySlice(points, j, 256); missing >= 0 {
				t.Errorf("block %d, input %d: slice %d is empty", block, j, missing)
			}
		}
		for split := range 9 {
			wide, tall := 1<<split, 256>>split
			seen := make([]bool, 256)
			for _, p := range points {
				seen[int(p[0]*float64(wide))*tall+int(p[1]*float64(tall))] = true
			}
			if slices.Contains(seen, false) {
				t.Errorf("block %d: a box of %d x %d is empty", block, wide, tall)
			}
		}
	}
	var many *TooManyInputs
	if _, err := Sobol(4, 22, 0); !errors.As(err, &many) || many.Inputs != 22 {
		t.Errorf("22 inputs: %v", err)
	}
}

// No two inputs may be the same sequence or badly correlated.
func TestSobolIntegratesProducts(t *testing.T) {
	points, _ := Sobol(4096, MostSobolInputs, 0)
	for j := range MostSobolInputs {
		for k := range j {
			sum := 0.0
			for _, p := range points {
				sum += p[j] * p[k]
			}
			if math.Abs(sum/4096-0.25) > 2e-3 {
				t.Errorf("mean product of inputs %d and %d is %g", k, j, sum/4096)
			}
		}
	}
}

func TestInsideRespectsThePredicate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, d := rapid.IntRange(1, 30).Draw(t, "points"), rapid.IntRange(2, 6).Draw(t, "inputs")
		limit := rapid.Float64Range(0.3, 1.5).Draw(t, "limit")
		inside := func(u []float64) bool { return u[0]+u[1] <= limit }
		seed := rapid.Int64().Draw(t, "seed")
		points, err := Inside(n, d, nil, inside, Stream(seed, ""))
		if err != nil {
			t.Fatal(err)
		}
		if len(points) != n {
			t.Fatalf("%d points, want %d", len(points), n)
		}
		for _, p := range points {
			if !inside(p) {
				t.Fatalf("%v lies outside", p)
			}
		}
		more, err := Inside(n, d, points, inside, Stream(seed, ""))
		if err != nil {
			t.Fatal(err)
		}
		if n > 1 && !(SmallestDistance(append(more, points...)) > 0) {
			t.Fatal("a point was chosen twice")
		}
	})
}

func TestInsideReportsAnEmptyRegion(t *testing.T) {
	_, err := Inside(5, 2, nil, func([]float64) bool { return false }, Stream(1, ""))
	var few *TooFew
	if !errors.As(err, &few) || few.Found != 0 || few.Wanted != 5 || few.Tried == 0 {
		t.Errorf("empty region: %v", err)
	}
}

// Greedy maximin reaches half of the best smallest distance (Gonzalez 1985);
// on a square the corners and the centre are the best five points.
func TestSpreadFindsTheCorners(t *testing.T) {
	var grid [][]float64
	for i := range 11 {
		for k := range 11 {
			grid = append(grid, []float64{float64(i) / 10, float64(k) / 10})
		}
	}
	chosen := Spread(5, nil, grid)
	if got := SmallestDistance(chosen); math.Abs(got-math.Sqrt(0.5)) > 1e-12 {
		t.Errorf("five points of a square lie %g apart, want %g: %v", got, math.Sqrt(0.5), chosen)
	}
	if got := len(Spread(500, nil, grid)); got != len(grid) {
		t.Errorf("%d points of %d candidates", got, len(grid))
	}
}

func BenchmarkLatinHypercube(b *testing.B) {
	for _, n := range []int{60, 150, 320} {
		b.Run(fmt.Sprintf("n=%d", n), func(b *testing.B) {
			for b.Loop() {
				LatinHypercube(n, 5, Stream(1, ""))
			}
		})
	}
}
