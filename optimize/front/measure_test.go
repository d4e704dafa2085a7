package front

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestHypervolumeOfThreePoints(t *testing.T) {
	// By hand: 3 x 1 + 2 x 1 + 1 x 1.
	points := []Point{{1, 3}, {2, 2}, {3, 1}}
	if got := Hypervolume(points, Point{4, 4}); got != 6 {
		t.Errorf("got %g, want 6", got)
	}
	if got := Hypervolume(points, Point{2.5, 2.5}); got != 0.25 {
		t.Errorf("within (2.5, 2.5): got %g, want 0.25", got)
	}
	if got := Hypervolume(nil, Point{1, 1}); got != 0 {
		t.Errorf("of nothing: %g", got)
	}
}

// points draws small whole coordinates, so that ties are frequent.
func points(t *rapid.T) []Point {
	coordinate := rapid.IntRange(0, 6)
	return rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Point {
		return Point{float64(coordinate.Draw(t, "f0")), float64(coordinate.Draw(t, "f1"))}
	}), 1, 12).Draw(t, "points")
}

// Unit cells of the whole-number grid are dominated or not: counting them is the
// hypervolume by its definition.
func TestHypervolumeCountsCells(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		list := points(t)
		reference := Point{float64(rapid.IntRange(1, 8).Draw(t, "ref0")), float64(rapid.IntRange(1, 8).Draw(t, "ref1"))}
		cells := 0.0
		for x := range int(reference[0]) {
			for y := range int(reference[1]) {
				if slices.ContainsFunc(list, func(p Point) bool { return p[0] <= float64(x) && p[1] <= float64(y) }) {
					cells++
				}
			}
		}
		if got := Hypervolume(list, reference); got != cells {
			t.Fatalf("got %g, want %g", got, cells)
		}
	})
}

// The order of the points changes nothing, and a point more never lowers the area.
func TestHypervolumeGrows(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		list := points(t)
		reference := Point{7, 7}
		whole := Hypervolume(list, reference)
		if less := Hypervolume(list[1:], reference); less > whole {
			t.Fatalf("a point more lowers %g to %g", less, whole)
		}
		shuffled := slices.Clone(list)
		rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1)).Shuffle(len(shuffled), func(i, j int) {
			shuffled[i], shuffled[j] = shuffled[j], shuffled[i]
		})
		if again := Hypervolume(shuffled, reference); again != whole {
			t.Fatalf("in another order %g, not %g", again, whole)
		}
	})
}

// What is kept dominates all that is dropped, and nothing kept dominates another.
func TestNonDominated(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		list := points(t)
		kept := NonDominated(list)
		for k, i := range kept {
			if k > 0 && !(list[kept[k-1]][0] < list[i][0] && list[kept[k-1]][1] > list[i][1]) {
				t.Fatalf("%v and %v are not in order", list[kept[k-1]], list[i])
			}
		}
		for j, p := range list {
			covered := slices.ContainsFunc(kept, func(i int) bool { return list[i] == p || list[i].dominates(p) })
			beaten := slices.ContainsFunc(list, func(o Point) bool { return o.dominates(p) })
			if !covered || slices.Contains(kept, j) && beaten {
				t.Fatalf("point %v: covered %v, beaten %v", p, covered, beaten)
			}
		}
	})
	if got := NonDominated([]Point{{math.NaN(), 0}, {1, 1}, {1, 1}}); !slices.Equal(got, []int{1}) {
		t.Errorf("got %v, want only the first of the equal points", got)
	}
}

func TestKnee(t *testing.T) {
	// A corner: scaled, (1/10, 1/10) lies 0.8/sqrt(2) from the chord.
	i, distance, ok := Knee([]Point{{0, 100}, {1, 10}, {5, 5}, {10, 0}})
	if i != 1 || !ok || math.Abs(distance-0.8/math.Sqrt2) > 1e-15 {
		t.Errorf("corner: point %d at %g, %v", i, distance, ok)
	}
	// The quarter circle about (1, 1), lower left: its middle lies (sqrt(2) - 1)
	// from the chord's parallel, that is 1 - 1/sqrt(2) from the chord.
	var arc []Point
	for k := range 91 {
		s, c := math.Sincos(float64(k) * math.Pi / 180)
		arc = append(arc, Point{1 - c, 1 - s})
	}
	if i, distance, ok = Knee(arc); i != 45 || !ok || math.Abs(distance-(1-math.Sqrt2/2)) > 1e-15 {
		t.Errorf("arc: point %d at %g, %v", i, distance, ok)
	}
	for name, curve := range map[string][]Point{
		"straight line": {{0, 4}, {1, 3}, {2, 2}, {4, 0}},
		"bulge away":    {{0, 1}, {0.9, 0.9}, {1, 0}},
		"two points":    {{0, 1}, {1, 0}},
		"one point":     {{0, 1}},
		"no point":      nil,
	} {
		if _, _, ok := Knee(curve); ok {
			t.Errorf("%s has a knee", name)
		}
	}
}

func BenchmarkHypervolume(b *testing.B) {
	var list []Point
	for k := range 100 {
		x := float64(k) / 99
		list = append(list, Point{x, 1 - math.Sqrt(x)})
	}
	b.ReportAllocs()
	for b.Loop() {
		Hypervolume(list, Point{1.1, 1.1})
	}
}
