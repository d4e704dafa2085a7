package constraints

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

var (
	below = math.Inf(-1)
	above = math.Inf(1)
)

// responses are two groups of one name at two points, and one that stands alone.
var responses = []problems.Quantity{
	{Name: "mach", Point: "cruise"},
	{Name: "margin", Point: "cruise", Member: "ramp 1"},
	{Name: "margin", Point: "cruise", Member: "ramp 2"},
	{Name: "margin", Point: "climb", Member: "ramp 1"},
	{Name: "margin", Point: "climb", Member: "ramp 2"},
}

func limit(name, point string, low, high float64) problems.Limit {
	return problems.Limit{Quantity: name, Point: point, Low: low, High: high}
}

func mustRows(t testing.TB, limits ...problems.Limit) []Row {
	t.Helper()
	rows, err := Rows(responses, limits)
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

// A limit on a group is a row for every member at its point, in the order of the
// limits; a quantity limited twice has both rows.
func TestRowsExpandGroups(t *testing.T) {
	asked := problems.Limit{Quantity: "margin", Point: "climb", Low: 2, High: above, Kind: problems.Default, Source: "line 7"}
	rows := mustRows(t, asked, limit("mach", "cruise", 1, 3), limit("mach", "cruise", below, 2.5))
	for i, want := range []int{3, 4, 0, 0} {
		if i >= len(rows) || rows[i].Index != want || rows[i].Quantity != responses[want] {
			t.Fatalf("rows %+v", rows)
		}
	}
	if len(rows) != 4 || rows[1].Kind != problems.Default || rows[1].Source != "line 7" || rows[1].Low != 2 || rows[1].High != above {
		t.Errorf("row 1 is %+v", rows[1])
	}
}

func TestRowsReportUnknownQuantities(t *testing.T) {
	for _, wrong := range []problems.Limit{limit("speed", "cruise", 1, 2), limit("mach", "climb", 1, 2)} {
		_, err := Rows(responses, []problems.Limit{limit("mach", "cruise", 1, 3), wrong})
		var unknown *Unknown
		if !errors.As(err, &unknown) || unknown.Limit != wrong {
			t.Errorf("%+v: %v", wrong, err)
		}
		if want := "limit on " + wrong.Quantity + " at " + wrong.Point + ": the problem has no such quantity"; err != nil && err.Error() != want {
			t.Errorf("%q, want %q", err, want)
		}
	}
}

func TestRowSides(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		scale     float64
		bounds    []Bound
	}{
		{below, above, 1, nil},
		{0, above, 1, []Bound{{-1, 0}}},
		{below, 0.05, 1, []Bound{{1, 0.05}}},
		{-780, 1000, 1000, []Bound{{-1, -780}, {1, 1000}}},
		{-1000, -780, 1000, []Bound{{-1, -1000}, {1, -780}}},
		{2, 2, 2, []Bound{{-1, 2}, {1, 2}}},
	} {
		row := mustRows(t, limit("mach", "cruise", c.low, c.high))[0]
		if row.Scale != c.scale || len(row.Bounds()) != len(c.bounds) {
			t.Fatalf("[%g, %g]: scale %g, sides %v", c.low, c.high, row.Scale, row.Bounds())
		}
		for i, bound := range row.Bounds() {
			if bound != c.bounds[i] {
				t.Errorf("[%g, %g]: side %d is %v", c.low, c.high, i, bound)
			}
		}
	}
	free := mustRows(t, limit("mach", "cruise", below, above))[0]
	if margin := free.Margin(1e9); margin != above {
		t.Errorf("a row without sides has a margin of %g", margin)
	}
}

// someRow draws a row with one side or two.
func someRow(t *rapid.T) Row {
	low := rapid.Float64Range(-1e4, 1e4).Draw(t, "low")
	high := low + rapid.Float64Range(0, 1e4).Draw(t, "width")
	switch rapid.IntRange(0, 2).Draw(t, "sides") {
	case 0:
		low = below
	case 1:
		high = above
	}
	rows, err := Rows(responses, []problems.Limit{limit("mach", "cruise", low, high)})
	if err != nil {
		t.Fatal(err)
	}
	return rows[0]
}

// The scale is at least 1 and no side is beyond it; the margin is the distance to
// the nearest side, positive between them, and the sides say the same.
func TestRowProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		row := someRow(t)
		value := rapid.Float64Range(-2e4, 2e4).Draw(t, "value")
		least := above
		for _, bound := range row.Bounds() {
			if !(row.Scale >= 1) || math.Abs(bound.At) > row.Scale {
				t.Errorf("scale %g with a side at %g", row.Scale, bound.At)
			}
			least = math.Min(least, -bound.Sign*(value-bound.At))
		}
		margin := row.Margin(value)
		if margin != least {
			t.Errorf("margin %g of %g in [%g, %g], its sides say %g", margin, value, row.Low, row.High, least)
		}
		if inside := row.Low <= value && value <= row.High; inside != (margin >= 0) {
			t.Errorf("%g in [%g, %g] is %t, its margin %g", value, row.Low, row.High, inside, margin)
		}
		// Moving by d moves the margin by no more than d.
		d := rapid.Float64Range(-10, 10).Draw(t, "d")
		if moved := math.Abs(row.Margin(value+d) - margin); moved > math.Abs(d)+1e-9 {
			t.Errorf("moving by %g moves the margin by %g", d, moved)
		}
	})
}
