package optimize

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// Four quantities: a, b at one point, and two members of a group at it.
var objectiveQuantities = []problems.Quantity{
	{Name: "a", Point: "p"}, {Name: "b", Point: "p"},
	{Name: "g", Point: "p", Member: "ramp 1"}, {Name: "g", Point: "p", Member: "ramp 2"},
	{Name: "a", Point: "q"},
}

func read(names ...string) []problems.Read {
	var list []problems.Read
	for _, name := range names {
		list = append(list, problems.Read{Quantity: name, Point: "p"})
	}
	return list
}

func mustObjective(t testing.TB, aim problems.Aim) objective {
	t.Helper()
	o, err := newObjective(objectiveQuantities, aim)
	if err != nil {
		t.Fatal(err)
	}
	return o
}

func TestObjectiveAggregates(t *testing.T) {
	both := []problems.Part{
		{Point: "p", Weight: 3, Reads: read("a")},
		{Point: "q", Weight: 1, Reads: []problems.Read{{Quantity: "a", Point: "q"}}},
	}
	weightless := append(append([]problems.Part(nil), both...), problems.Part{Point: "p", Weight: 0, Reads: read("b")})
	ratio := []problems.Part{{Point: "p", Reads: read("a", "b"), Formula: func(v []float64) float64 { return v[0] / v[1] }}}
	missing := math.NaN()
	for _, c := range []struct {
		name   string
		aim    problems.Aim
		values []float64
		want   float64
	}{
		{"single", problems.Aim{Parts: both[:1]}, []float64{2, 0, 0, 0, 9}, 2},
		{"mean", problems.Aim{Aggregate: problems.Mean, Parts: both}, []float64{2, 0, 0, 0, 6}, 3},
		{"mean without a weightless missing one", problems.Aim{Aggregate: problems.Mean, Parts: weightless}, []float64{2, missing, 0, 0, 6}, 3},
		{"mean with one missing", problems.Aim{Aggregate: problems.Mean, Parts: both}, []float64{2, 0, 0, 0, missing}, missing},
		{"worst of highest", problems.Aim{Highest: true, Aggregate: problems.Worst, Parts: both}, []float64{2, 0, 0, 0, 6}, 2},
		{"worst of lowest", problems.Aim{Aggregate: problems.Worst, Parts: both}, []float64{2, 0, 0, 0, 6}, 6},
		{"worst with the last missing", problems.Aim{Aggregate: problems.Worst, Parts: both}, []float64{2, 0, 0, 0, missing}, missing},
		{"worst with the first missing", problems.Aim{Aggregate: problems.Worst, Parts: both}, []float64{missing, 0, 0, 0, 6}, missing},
		{"worst with the first missing, highest", problems.Aim{Highest: true, Aggregate: problems.Worst, Parts: both}, []float64{missing, 0, 0, 0, 6}, missing},
		{"group", problems.Aim{Parts: []problems.Part{{Reads: read("g")}}}, []float64{0, 0, 5, 4, 0}, 4},
		{"group with one missing", problems.Aim{Parts: []problems.Part{{Reads: read("g")}}}, []float64{0, 0, 5, missing, 0}, missing},
		{"group with the first missing", problems.Aim{Parts: []problems.Part{{Reads: read("g")}}}, []float64{0, 0, missing, 4, 0}, missing},
		{"formula", problems.Aim{Parts: ratio}, []float64{3, 2, 0, 0, 0}, 1.5},
		{"formula not finite", problems.Aim{Parts: ratio}, []float64{3, 0, 0, 0, 0}, missing},
	} {
		o := mustObjective(t, c.aim)
		if got := o.value(c.values); got != c.want && !(math.IsNaN(got) && math.IsNaN(c.want)) {
			t.Errorf("%s: %g, want %g", c.name, got, c.want)
		}
	}
}

func TestObjectiveDirection(t *testing.T) {
	up := mustObjective(t, problems.Aim{Highest: true, Parts: []problems.Part{{Reads: read("a")}}})
	down := mustObjective(t, problems.Aim{Parts: []problems.Part{{Reads: read("a")}}})
	if !up.better(2, 1) || up.better(1, 2) || up.better(1, 1) || !down.better(1, 2) || down.better(2, 1) {
		t.Error("better is not the direction of the aim")
	}
	if up.gain(3, 1) != 2 || down.gain(3, 1) != -2 {
		t.Errorf("gain of 3 over 1 is %g and %g", up.gain(3, 1), down.gain(3, 1))
	}
}

// What a search needs of an aim: the quantities it reads, once each.
func TestObjectiveReads(t *testing.T) {
	o := mustObjective(t, problems.Aim{Aggregate: problems.Mean, Parts: []problems.Part{
		{Weight: 1, Reads: read("g", "a"), Formula: func(v []float64) float64 { return v[0] + v[1] }},
		{Weight: 1, Reads: read("a")},
	}})
	if len(o.reads) != 3 || o.reads[0] != 0 || o.reads[1] != 2 || o.reads[2] != 3 {
		t.Errorf("reads %v, want 0 2 3", o.reads)
	}
}

func TestObjectiveRefusals(t *testing.T) {
	for name, aim := range map[string]problems.Aim{
		"no part":                {},
		"unknown quantity":       {Parts: []problems.Part{{Reads: read("c")}}},
		"two without a formula":  {Parts: []problems.Part{{Reads: read("a", "b")}}},
		"none without a formula": {Parts: []problems.Part{{}}},
	} {
		if _, err := newObjective(objectiveQuantities, aim); err == nil {
			t.Errorf("%s is accepted", name)
		}
	}
}

// The gradient of a smooth aim is that of the chain of formula, group and
// aggregate, by central differences over the variables themselves.
func TestObjectiveGradient(t *testing.T) {
	parts := []problems.Part{
		{Weight: 2, Reads: read("a", "g"), Formula: func(v []float64) float64 { return v[0] * v[0] * math.Exp(v[1]) }},
		{Weight: 0, Reads: read("b")},
		{Weight: 0.5, Reads: read("b")},
	}
	for name, aim := range map[string]problems.Aim{
		"single": {Parts: parts[:1]},
		"mean":   {Aggregate: problems.Mean, Parts: parts},
		"group":  {Parts: []problems.Part{{Reads: read("g")}}},
	} {
		o := mustObjective(t, aim)
		rapid.Check(t, func(t *rapid.T) {
			u := []float64{rapid.Float64Range(-1, 1).Draw(t, "u"), rapid.Float64Range(-1, 1).Draw(t, "v")}
			values, jacobian := objectiveModel(u)
			if math.Abs(values[2]-values[3]) < 1e-3 {
				return // on the kink of the group
			}
			got, want := make([]float64, 2), make([]float64, 2)
			o.gradient(values, jacobian, got)
			for j := range u {
				const step = 1e-5
				shifted := append([]float64(nil), u...)
				shifted[j] = u[j] + step
				up, _ := objectiveModel(shifted)
				shifted[j] = u[j] - step
				down, _ := objectiveModel(shifted)
				want[j] = (o.value(up) - o.value(down)) / (2 * step)
			}
			// Differences of step 1e-5 are good to about 1e-9 here.
			if farthest(got, want) > 1e-7 {
				t.Errorf("%s at %v: %v, differences say %v", name, u, got, want)
			}
		})
	}
}

// objectiveModel is smooth in two variables, with its jacobian.
func objectiveModel(u []float64) (values []float64, jacobian [][]float64) {
	x, y := u[0], u[1]
	values = []float64{2 + x*y, math.Sin(x) + y, x * x, 0.3 + y*y/2, x - y}
	jacobian = [][]float64{{y, x}, {math.Cos(x), 1}, {2 * x, 0}, {0, y}, {1, -1}}
	return values, jacobian
}
