package front

import (
	"math"
	"slices"
)

// NonDominated returns the indices of the points that no other point dominates,
// by rising objective 0; of equal points the first. A point with a NaN is left
// out.
func NonDominated(points []Point) []int {
	var order []int
	for i, p := range points {
		if !math.IsNaN(p[0]) && !math.IsNaN(p[1]) {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(i, j int) int { return slices.Compare(points[i][:], points[j][:]) })
	var kept []int
	for _, i := range order {
		// Those before are no worse in objective 0: a new point must be better in
		// objective 1.
		if len(kept) == 0 || points[i][1] < points[kept[len(kept)-1]][1] {
			kept = append(kept, i)
		}
	}
	return kept
}

// Hypervolume returns the area that the points dominate within a reference
// point: the union of the rectangles between each point and the reference,
//
//	sum_k (ref0 - p_k0) (p_(k-1)1 - p_k1),  p_(0)1 = ref1
//
// over the non-dominated points by rising objective 0, exact in two dimensions
// (Zitzler & Thiele 1998, from memory). Points that are not better than the
// reference in both objectives add nothing.
func Hypervolume(points []Point, reference Point) float64 {
	area, above := 0.0, reference[1]
	for _, i := range NonDominated(points) {
		p := points[i]
		if p[0] < reference[0] && p[1] < above {
			area += (reference[0] - p[0]) * (above - p[1])
			above = p[1]
		}
	}
	return area
}

// LeastBulge is the distance from the chord below which a curve has no knee.
const LeastBulge = 0.05

// Knee returns the index of the point farthest from the chord between the ends
// of the curve on its better side, both objectives scaled to 0..1 over the curve
// (after Das 1999, from memory), with that distance: at most 1/sqrt(2). Beyond
// it, one objective gains little for what the other loses. ok is false for a
// curve of less than three points that stand in a trade, or one that nowhere
// bulges by LeastBulge.
func Knee(points []Point) (index int, distance float64, ok bool) {
	curve := NonDominated(points)
	if len(curve) < 3 {
		return 0, 0, false
	}
	first, last := points[curve[0]], points[curve[len(curve)-1]]
	for _, i := range curve {
		u := (points[i][0] - first[0]) / (last[0] - first[0])
		v := (points[i][1] - last[1]) / (first[1] - last[1])
		// The chord is u + v = 1.
		if d := (1 - u - v) / math.Sqrt2; d > distance {
			index, distance = i, d
		}
	}
	return index, distance, distance >= LeastBulge
}
