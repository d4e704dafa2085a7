package chart

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Widths of Helvetica in thousandths of the size (Adobe Core 14 font metrics,
// from memory); the measured face keeps them.
func TestMeasuredWidths(t *testing.T) {
	face := newTypeface(100)
	for text, want := range map[string]float64{"0": 55.6, "i": 22.2, "M": 83.3, " ": 27.8, "mm": 166.6, "": 0} {
		if got := face.width(text); math.Abs(got-want) > 0.05 {
			t.Errorf("width of %q is %g, want %g", text, got, want)
		}
	}
	if face.ascent() <= 70 || face.height() <= face.ascent() || face.height() > 130 {
		t.Errorf("ascent %g, height %g of a face of 100", face.ascent(), face.height())
	}
}

func TestWrapKeepsWordsAndRoom(t *testing.T) {
	face := newTypeface(12)
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`([a-z]{1,30} ){0,12}`).Draw(t, "text")
		room := rapid.Float64Range(20, 300).Draw(t, "room")
		lines := face.wrap(text, room)
		for _, line := range lines {
			if face.width(line) > room {
				t.Errorf("%q is wider than %g", line, room)
			}
		}
		squeeze := func(s string) string { return strings.Join(strings.Fields(s), "") }
		if squeeze(strings.Join(lines, " ")) != squeeze(text) {
			t.Errorf("%q became %q", text, lines)
		}
	})
}

func TestRoundStep(t *testing.T) {
	for least, want := range map[float64]float64{1: 1, 1.01: 2, 0.03: 0.05, 0.051: 0.1, 7: 10, 2e-4: 2e-4, 300: 500} {
		if got := roundStep(least); math.Abs(got-want) > 1e-12*want {
			t.Errorf("step of %g is %g, want %g", least, got, want)
		}
	}
}

func TestRulerTicks(t *testing.T) {
	r := newRuler(-0.12, 0.6, 0.08)
	var got []string
	for k := r.from; k <= r.to; k++ {
		got = append(got, r.text(k))
	}
	if want := "-0.1 0.0 0.1 0.2 0.3 0.4 0.5 0.6"; strings.Join(got, " ") != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestIncidenceText(t *testing.T) {
	for degrees, want := range map[float64]string{0: "incidence 0 deg", 2: "incidence 2 deg", -1.25: "incidence -1.25 deg", 1e-9: "incidence 0 deg", -1e-9: "incidence 0 deg"} {
		if got := incidenceText(degrees * radian); got != want {
			t.Errorf("%g: got %q, want %q", degrees, got, want)
		}
	}
}

func anyPoint(t *rapid.T, name string) point {
	return point{rapid.Float64Range(-10, 10).Draw(t, name+" x"), rapid.Float64Range(-10, 10).Draw(t, name+" y")}
}

// A stroke of which a sample lies inside meets the box, and one that meets the
// box has a sample inside the box grown a little.
func TestBoxMeetsStroke(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := segment{anyPoint(t, "a"), anyPoint(t, "b")}
		b := box{-3, -2, 5, 4}
		sampled, nearby := false, false
		for i := range 2001 {
			p := between(s.a, s.b, float64(i)/2000)
			sampled = sampled || b.contains(p)
			nearby = nearby || b.grow(0.02).contains(p)
		}
		if meets := b.meets(s); sampled && !meets || meets && !nearby {
			t.Errorf("meets %v, sampled inside %v, near %v", meets, sampled, nearby)
		}
	})
}

// Two strokes cross when their crossing point, from the line equations, lies on
// both.
func TestStrokesCross(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s, o := segment{anyPoint(t, "a"), anyPoint(t, "b")}, segment{anyPoint(t, "c"), anyPoint(t, "d")}
		d, e := s.b.minus(s.a), o.b.minus(o.a)
		det := d.cross(e)
		if math.Abs(det) < 1e-3 {
			return // nearly parallel: which side rounding takes is not the matter
		}
		u, v := o.a.minus(s.a).cross(e)/det, o.a.minus(s.a).cross(d)/det
		edge := math.Min(math.Min(math.Abs(u), math.Abs(u-1)), math.Min(math.Abs(v), math.Abs(v-1)))
		want := u > 0 && u < 1 && v > 0 && v < 1
		if edge > 1e-9 && (s.crosses(o) != want || o.crosses(s) != want) {
			t.Errorf("crosses %v, want %v", s.crosses(o), want)
		}
	})
}

func TestInside(t *testing.T) {
	notched := []point{{0, 0}, {4, 0}, {4, 4}, {2, 1}, {0, 4}}
	for p, want := range map[point]bool{{1, 1}: true, {3, 1}: true, {2, 2}: false, {2, 0.5}: true, {5, 1}: false, {-1, 1}: false} {
		if got := inside(notched, p); got != want {
			t.Errorf("%v: %v, want %v", p, got, want)
		}
	}
}
