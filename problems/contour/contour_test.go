package contour

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

const near = 1e-9 // metres, on lines through points within 10 m that cross by at least 0.05 rad

func drawPoint(t *rapid.T, name string) Point {
	coordinate := rapid.Float64Range(-10, 10)
	return Point{coordinate.Draw(t, name+" x"), coordinate.Draw(t, name+" y")}
}

// drawCrossing draws two lines that are not nearly parallel.
func drawCrossing(t *rapid.T) (a, b Line) {
	a = Line{drawPoint(t, "a"), rapid.Float64Range(-math.Pi, math.Pi).Draw(t, "angle")}
	turn := rapid.Float64Range(0.05, math.Pi-0.05).Draw(t, "turn")
	return a, Line{drawPoint(t, "b"), a.Angle + turn}
}

func TestLinesMeetOnBoth(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := drawCrossing(t)
		p, ok := Meet(a, b)
		if !ok || math.Abs(a.Height(p)) > near || math.Abs(b.Height(p)) > near {
			t.Fatalf("meet at %v (%v), %v and %v off the lines", p, ok, a.Height(p), b.Height(p))
		}
		q, ok := Meet(b, a)
		if !ok || Distance(p, q) > near {
			t.Fatalf("the other way round they meet at %v, not %v", q, p)
		}
		distance, ok := a.Reach(b)
		if !ok || math.Abs(distance-a.Along(p)) > near {
			t.Fatalf("reach %v, along %v", distance, a.Along(p))
		}
	})
}

func TestParallelLinesDoNotMeet(t *testing.T) {
	a, b := Line{Point{0, 0}, 0.3}, Line{Point{0, 1}, 0.3}
	if _, ok := Meet(a, b); ok {
		t.Error("parallel lines meet")
	}
	if distance, ok := a.Reach(b); ok || !math.IsInf(distance, 1) {
		t.Errorf("parallel lines reach each other at %v", distance)
	}
}

// Height and Along are the coordinates of a rotated frame: they keep distances
// and rebuild the point.
func TestHeightAndAlongRebuildThePoint(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		line := Line{drawPoint(t, "line"), rapid.Float64Range(-math.Pi, math.Pi).Draw(t, "angle")}
		p := drawPoint(t, "point")
		along, height := line.Along(p), line.Height(p)
		sin, cos := math.Sincos(line.Angle)
		back := Point{line.Through.X + along*cos - height*sin, line.Through.Y + along*sin + height*cos}
		if Distance(p, back) > near || math.Abs(math.Hypot(along, height)-Distance(p, line.Through)) > near {
			t.Fatalf("%v became %v", p, back)
		}
	})
}

func TestHeightIsPositiveToTheLeft(t *testing.T) {
	if got := (Line{Angle: math.Pi / 2}).Height(Point{-1, 5}); math.Abs(got-1) > 1e-15 {
		t.Errorf("height left of a line that points up: %v, want 1", got)
	}
}

func TestRampLengths(t *testing.T) {
	c := Inlet{
		Corners:  []Point{{0, 0}, {3, 4}},
		Angles:   []float64{math.Atan2(4, 3), 0},
		Shoulder: Point{5, 4},
	}
	if got := c.RampLength(0); math.Abs(got-5) > 1e-15 {
		t.Errorf("first ramp %v, want 5", got)
	}
	if got := c.RampLength(1); got != 2 {
		t.Errorf("last ramp %v, want 2", got)
	}
	c.Shoulder.X = 2
	if got := c.RampLength(1); got != -1 {
		t.Errorf("a shoulder ahead of the last corner gives %v, want -1", got)
	}
}

func BenchmarkMeet(b *testing.B) {
	one, other := Line{Point{0, 0}, 0.3}, Line{Point{1, 1}, -0.2}
	for b.Loop() {
		Meet(one, other)
	}
}
