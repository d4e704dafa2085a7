package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/optimize"
)

// tradeFixture is a curve of three points with a knee, after one that another
// dominates.
func tradeFixture(t *testing.T) TradeStudy {
	s := study(t)
	s.Aim.Text, s.Aim.Where = "recovery", "cruise"
	point := func(recovery, length float64, knee bool) TradePoint {
		return TradePoint{Study: retold(s, recovery, func(*optimize.Result) {}), Values: [2]float64{recovery, length}, Knee: knee}
	}
	return TradeStudy{
		Definition: supersonic(), Asked: 4, Dropped: 1,
		Between:     [2]Traded{{Name: "recovery", At: "cruise", Highest: true}, {Name: "length_m", At: "geometry", Unit: "m"}},
		Points:      []TradePoint{point(0.65, 0.62, false), point(0.62, 0.5, true), point(0.5, 0.42, false)},
		Hypervolume: 0.02, Rectangle: 0.03, Reference: [2]float64{0.5, 0.62},
	}
}

func TestTradeKeys(t *testing.T) {
	want := slices.Concat(
		strings.Fields("format program title seed brief_hash status between"), under("between", "quantity at unit highest"),
		[]string{"curve"}, under("curve", "values status knee variables exact predicted rate active evidence evidence.route_gap "+
			"evidence.surrogate_error evaluations evaluations.samples evaluations.infill evaluations.rounds evaluations.verify evaluations.surrogate missing"),
		under("curve.values", "recovery length_m"), under("reference", "recovery length_m"),
		strings.Fields("dominated hypervolume hypervolume_share reference knee_rule why conflicts relaxation cautions"),
		under("cautions", "rows text rule"), []string{"assumptions"})
	got := keyPaths(t, NewTrade(head, tradeFixture(t)).JSON())
	slices.Sort(got)
	slices.Sort(want)
	if !slices.Equal(got, want) {
		t.Errorf("keys\n%s\nwant\n%s", strings.Join(got, " "), strings.Join(want, " "))
	}
}

func TestTradeDocument(t *testing.T) {
	d := NewTrade(head, tradeFixture(t))
	// From 0.62 at 0.5 m to 0.65 at 0.62 m; the last point has no next one. The
	// fixture stands on the limit on length, which is traded.
	if rate := float64(d.Curve[0].Rate); math.Abs(rate-0.25) > 1e-12 || finite(float64(d.Curve[2].Rate)) {
		t.Errorf("rates %g, %g", rate, float64(d.Curve[2].Rate))
	}
	if slices.ContainsFunc(d.Curve[0].Active, func(a string) bool { return strings.HasPrefix(a, "length_m") }) {
		t.Errorf("active %q", d.Curve[0].Active)
	}
	if share := float64(d.HypervolumeShare); math.Abs(share-2.0/3) > 1e-15 {
		t.Errorf("share %g", share)
	}
	var read struct {
		Curve []struct{ Values map[string]float64 }
	}
	if err := json.Unmarshal(d.JSON(), &read); err != nil || read.Curve[1].Values["recovery"] != 0.62 || read.Curve[1].Values["length_m"] != 0.5 {
		t.Errorf("%v, %+v", err, read)
	}
	text := strings.Join(strings.Fields(d.Text(100)), " ")
	for _, want := range []string{"3 points, 3 of them verified", "knee at point 2", "Left out: 1 that", "points 1 to 3: throat_temperature_K"} {
		if !strings.Contains(text, want) {
			t.Errorf("text lacks %q", want)
		}
	}
	picture, err := d.Picture()
	if err != nil || !bytes.Contains(picture, []byte("knee")) {
		t.Errorf("picture: %v", err)
	}
	rows, err := csv.NewReader(bytes.NewReader(d.CSV())).ReadAll()
	if err != nil || len(rows) != 4 || rows[2][slices.Index(rows[0], "knee")] != "true" || rows[2][slices.Index(rows[0], "length_m")] != "0.5" {
		t.Errorf("%v, %d rows", err, len(rows))
	}
}

// The curve of one design, none, and part of one say what they are.
func TestTradeEnds(t *testing.T) {
	one := tradeFixture(t)
	one.Points, one.Rectangle = one.Points[:1], 0
	d := NewTrade(head, one)
	if text := d.Text(100); !strings.Contains(text, "No trade") || !strings.Contains(text, "length_m:highest") {
		t.Errorf("one design:\n%s", text)
	}
	if _, why := d.Missing.Get("hypervolume_share"); !why {
		t.Error("no reason for the missing share")
	}
	part := tradeFixture(t)
	part.Cut = true
	if d := NewTrade(head, part); d.Status != "stopped" || !strings.Contains(d.Text(100), "Ended early: 4 were asked for") {
		t.Errorf("cut short: %s", d.Status)
	}
	none := tradeFixture(t)
	none.Points, none.Infeasible = nil, ladderFixture(t).Rungs[1].Study
	d = NewTrade(head, none)
	if text := strings.Join(strings.Fields(d.Text(100)), " "); d.Status != "infeasible" || !strings.Contains(text, "No curve: cannot be met") || !strings.Contains(text, "loosened to 55") {
		t.Errorf("infeasible: %s\n%s", d.Status, text)
	}
	if _, err := d.Picture(); err != nil {
		t.Error(err)
	}
	if rows := bytes.Count(d.CSV(), []byte("\n")); rows != 1 {
		t.Errorf("%d rows of an empty curve", rows)
	}
	same := tradeFixture(t)
	same.Between[1] = Traded{Name: "recovery", At: "dash"}
	if text := string(NewTrade(head, same).JSON()); !strings.Contains(text, `"recovery@cruise"`) || !strings.Contains(text, `"recovery@dash"`) {
		t.Error("one name for two quantities")
	}
}
