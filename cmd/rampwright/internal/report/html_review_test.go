package report

import (
	"context"
	"math"
	"strings"
	"testing"

	"rampwright/optimize"
	"rampwright/problems"
)

// Parity rests on the figures of the fit: its root mean square error comes out
// again, and each exact value is one of the samples'.
func TestParityIsThatOfTheFit(t *testing.T) {
	s := study(t)
	review, err := NewReview(context.Background(), head, s)
	if err != nil {
		t.Fatal(err)
	}
	fits := map[string]*Fit{}
	d := NewDesign(head, s)
	for i := range d.Fits {
		fits[d.Fits[i].Quantity+d.Fits[i].Member] = &d.Fits[i]
	}
	if len(review.Parity) < 5 {
		t.Fatalf("%d surrogates", len(review.Parity))
	}
	for _, p := range review.Parity {
		fit := fits[p.Quantity+p.Member]
		sum := 0.0
		for i := range p.Exact {
			off := float64(p.Exact[i] - p.Predicted[i])
			sum += off * off
			known := false
			for _, sample := range s.Result.Samples {
				for k, q := range s.Problem.Quantities() {
					v := sample.Evaluation.Values[k]
					known = known || q.Name == p.Quantity && q.Member == p.Member && math.Abs(v-float64(p.Exact[i])) <= 1e-9*math.Abs(v)
				}
			}
			if !known {
				t.Errorf("%s: %g is the value of no sample", p.Quantity, float64(p.Exact[i]))
			}
		}
		if rmse := math.Sqrt(sum / float64(len(p.Exact))); math.Abs(rmse-float64(fit.RMSE)) > 1e-9*(1+float64(fit.RMSE)) {
			t.Errorf("%s %s: root mean square error %g, the fit has %g", p.Quantity, p.Member, rmse, float64(fit.RMSE))
		}
	}
}

// A map tells the aim and the limits of the model at its cells, and by both models
// alike next to the design.
func TestMapTellsTheModel(t *testing.T) {
	s := study(t)
	review, err := NewReview(context.Background(), head, s)
	if err != nil {
		t.Fatal(err)
	}
	if len(review.Maps) != 3 || review.Pairs != 3 {
		t.Fatalf("%d maps of %d pairs of three ramps", len(review.Maps), review.Pairs)
	}
	m := review.Maps[1] // ramps 1 and 3
	for _, cell := range [][2]int{{0, 0}, {12, 13}, {31, 4}} {
		x := append([]float64(nil), s.Result.Best.X...)
		x[0] = 3 + (float64(cell[0])+0.5)/mapCells*13
		x[2] = 3 + (float64(cell[1])+0.5)/mapCells*13
		_, flow := flowOf(t, supersonic(), x...)
		want := math.NaN()
		for i, q := range s.Problem.Quantities() {
			if q.Name == "recovery" {
				want = flow.Evaluation.Values[i]
			}
		}
		got := float64(m.Exact.Aim[cell[1]*mapCells+cell[0]])
		if math.Abs(got-want) > 1e-5 {
			t.Errorf("cell %v: %g, the flow has %g", cell, got, want)
		}
	}
	v := s.Problem.Variables()
	column, row := 0, 0
	for k, place := range []*int{&column, &row} {
		i := []int{0, 2}[k]
		*place = int((s.Result.Best.X[i] - v[i].Low) / (v[i].High - v[i].Low) * mapCells)
	}
	near := row*mapCells + column
	if exact, predicted := float64(m.Exact.Aim[near]), float64(m.Surrogate.Aim[near]); math.Abs(exact-predicted) > 0.01*exact {
		t.Errorf("next to the design the surrogate says %g, exact is %g", predicted, exact)
	}
	if !strings.Contains(m.Exact.Forbidden, "0") || !strings.Contains(m.Exact.Forbidden, "1") {
		t.Error("limits forbid all cells or none")
	}
}

// Off design, recovery and capture at a flight point are those of the flow there.
func TestOffDesignPassesThroughTheFlightPoints(t *testing.T) {
	d := ramjet()
	x := []float64{8, 5, 5, 3}
	problem, flow := flowOf(t, d, x...)
	s := Study{Problem: problem, Flow: flow, Result: &optimize.Result{Best: optimize.Candidate{X: x}}}
	o, err := s.offDesign(context.Background())
	if err != nil || o == nil {
		t.Fatal(o, err)
	}
	if len(o.Own) != len(d.Points) || len(o.Mach) < sweepSteps {
		t.Fatalf("%d of %d flight points among %d Mach numbers", len(o.Own), len(d.Points), len(o.Mach))
	}
	list := readings(problem.Quantities(), flow.Evaluation)
	for _, own := range o.Own {
		for name, column := range map[string][]Number{"recovery": o.Recovery, "capture": o.Capture} {
			if want := find(list, name, own.Name).value; math.Abs(float64(column[own.Index])-want) > 1e-12 {
				t.Errorf("%s at %s: %g, the flow has %g", name, own.Name, float64(column[own.Index]), want)
			}
		}
	}
	one := supersonic()
	problem, flow = flowOf(t, one, 8, 8, 8, 8)
	s = Study{Problem: problem, Flow: flow, Result: &optimize.Result{Best: optimize.Candidate{X: []float64{8, 8, 8, 8}}}}
	if o, err := s.offDesign(context.Background()); o != nil || err != nil {
		t.Errorf("one Mach number has a curve: %v, %v", o, err)
	}
}

// The aim of a map agrees with hand results: highest and lowest, mean, worst of
// the points, least of a group.
func TestAimReader(t *testing.T) {
	quantities := []problems.Quantity{{Name: "a", Point: "p"}, {Name: "a", Point: "q"}, {Name: "b", Point: "p", Member: "1"}, {Name: "b", Point: "p", Member: "2"}}
	read := func(name, point string, weight float64) problems.Part {
		return problems.Part{Point: point, Weight: weight, Reads: []problems.Read{{Quantity: name, Point: point}}}
	}
	values := []float64{3, 7, 5, 4}
	both := []problems.Part{read("a", "p", 1), read("a", "q", 3)}
	formula := problems.Part{Point: "p", Reads: []problems.Read{{Quantity: "a", Point: "p"}, {Quantity: "b", Point: "p"}}, Formula: func(v []float64) float64 { return v[0] * v[1] }}
	for _, c := range []struct {
		aim  problems.Aim
		want float64
	}{
		{problems.Aim{Parts: both[:1]}, 3},
		{problems.Aim{Parts: both, Aggregate: problems.Mean}, 6}, // (3 + 21)/4
		{problems.Aim{Parts: both, Aggregate: problems.Worst, Highest: true}, 3},
		{problems.Aim{Parts: both, Aggregate: problems.Worst}, 7},
		{problems.Aim{Parts: []problems.Part{read("b", "p", 1)}}, 4},
		{problems.Aim{Parts: []problems.Part{formula}}, 12},
	} {
		if got := newAimReader(quantities, c.aim).value(values); got != c.want {
			t.Errorf("%+v: %g, want %g", c.aim, got, c.want)
		}
		if got := newAimReader(quantities, c.aim).value([]float64{math.NaN(), 7, math.NaN(), 4}); !math.IsNaN(got) {
			t.Errorf("%+v of a missing value: %g", c.aim, got)
		}
	}
}

func BenchmarkReview(b *testing.B) {
	s := study(b)
	for b.Loop() {
		if _, err := NewReview(context.Background(), head, s); err != nil {
			b.Fatal(err)
		}
	}
}
