package doe

import (
	"fmt"
	"math"
	"math/rand/v2"
)

// TooFew reports a region so small that the candidates did not hold enough
// points of it.
type TooFew struct {
	Wanted int // points asked for
	Found  int // candidates inside
	Tried  int // candidates drawn
}

func (e *TooFew) Error() string {
	return fmt.Sprintf("%d of %d candidates lie inside the constraints, %d points are wanted", e.Found, e.Tried, e.Wanted)
}

const (
	candidatesPerPoint = 20  // admissible candidates sought for each point wanted
	candidateRounds    = 200 // hypercubes drawn at most
)

// Inside returns n space-filling points of [0,1]^d that satisfy the predicate.
// Candidates come from Latin hypercubes drawn until 20 n of them are inside
// (at most 200 hypercubes of 20 n points); the choice among them is Spread's.
// existing points, which may be nil, are kept away from. It returns *TooFew
// when fewer than n candidates are inside. The predicate is called in a fixed
// order from one goroutine and must not keep its argument.
func Inside(n, d int, existing [][]float64, inside func(u []float64) bool, source *rand.Rand) ([][]float64, error) {
	wanted := candidatesPerPoint * n
	var candidates [][]float64
	tried := 0
	for round := 0; round < candidateRounds && len(candidates) < wanted; round++ {
		for _, u := range RandomLatinHypercube(wanted, d, source) {
			tried++
			if inside(u) {
				candidates = append(candidates, u)
			}
		}
	}
	if len(candidates) < n {
		return nil, &TooFew{Wanted: n, Found: len(candidates), Tried: tried}
	}
	return Spread(n, existing, candidates), nil
}

// Spread returns copies of the candidates chosen by SpreadRows.
func Spread(n int, existing, candidates [][]float64) [][]float64 {
	rows := SpreadRows(n, existing, candidates)
	points := make([][]float64, len(rows))
	for i, r := range rows {
		points[i] = append([]float64(nil), candidates[r]...)
	}
	return points
}

// SpreadRows chooses n of the candidates (all of them if there are fewer), each
// time the one farthest from the existing points and those already chosen:
// greedy maximin, at least half as far apart as the best choice (Gonzalez
// 1985). Without existing points it begins with the candidate nearest the
// candidates' centroid. Ties go to the first candidate.
func SpreadRows(n int, existing, candidates [][]float64) []int {
	n = min(n, len(candidates))
	if n <= 0 {
		return nil
	}
	nearest := make([]float64, len(candidates)) // squared distance to the nearest point so far
	for i, c := range candidates {
		nearest[i] = math.Inf(1)
		for _, e := range existing {
			nearest[i] = math.Min(nearest[i], squaredDistance(c, e))
		}
	}
	next := farthest(nearest)
	if len(existing) == 0 {
		next = closest(candidates, centroid(candidates))
	}
	rows := make([]int, 0, n)
	for len(rows) < n {
		rows = append(rows, next)
		nearest[next] = -1 // stays below every distance: never again
		for i, c := range candidates {
			nearest[i] = math.Min(nearest[i], squaredDistance(c, candidates[next]))
		}
		next = farthest(nearest)
	}
	return rows
}

func farthest(nearest []float64) int {
	best := 0
	for i, v := range nearest {
		if v > nearest[best] {
			best = i
		}
	}
	return best
}

func closest(points [][]float64, to []float64) int {
	best := 0
	for i, p := range points {
		if squaredDistance(p, to) < squaredDistance(points[best], to) {
			best = i
		}
	}
	return best
}

func centroid(points [][]float64) []float64 {
	c := make([]float64, len(points[0]))
	for _, p := range points {
		for j, v := range p {
			c[j] += v / float64(len(points))
		}
	}
	return c
}
