package robust

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems"
)

// truncatedVariance is that of a standard normal deviate truncated at 4:
// 1 - 2 t phi(t)/(2 Phi(t) - 1) (Johnson, Kotz & Balakrishnan 1994, from memory).
var truncatedVariance = 1 - 2*4*math.Exp(-8)/math.Sqrt(2*math.Pi)/(2*Phi(4)-1)

// linear is y = 3 + x + 2 e1 - e2 + e3/2 with a quantity no input moves.
func linear() *plain {
	return &plain{scatter: scattered(0.5, 0.8, 0.2), quantities: named("y", "fixed"), value: func(x, e []float64, dst *problems.Evaluation) {
		dst.Set(0, 3+x[0]+2*e[0]-e[1]+e[2]/2)
		dst.Set(1, 7+x[0])
	}}
}

// The sum of normal deviates is known: mean, deviation, percentiles, probability
// and shares of the variance. Estimates lie within four of their standard errors.
func TestLinearCase(t *testing.T) {
	const bound = 4.0
	s := run(t, Task{Problem: linear(), X: []float64{0}, Limits: []problems.Limit{atMost("y", bound), atLeast("fixed", 7)}}, Settings{})
	deviation := math.Sqrt(truncatedVariance * (1 + 0.64 + 0.01))
	y := s.Exact[0]
	near(t, "mean", y.Mean, 3, 4*y.MeanError)
	near(t, "deviation", y.Deviation, deviation, 4*y.DeviationError)
	near(t, "error of the mean", y.MeanError, deviation/100, 0.03*deviation/100)
	near(t, "median", y.P50, 3, 4*1.2533*y.MeanError) // sqrt(pi/2) s/sqrt(n)
	near(t, "5th percentile", y.P05, 3+deviation*Quantile(0.05), 4*2.1*y.MeanError)
	near(t, "95th percentile", y.P95, 3+deviation*Quantile(0.95), 4*2.1*y.MeanError)
	pass := Phi((bound - 3) / deviation)
	near(t, "pass probability", s.Limits[0].Pass, pass, 4*s.Limits[0].Error)
	near(t, "its error", s.Limits[0].Error, math.Sqrt(pass*(1-pass)/10000), 1e-4)
	for j, share := range []float64{1 / 1.65, 0.64 / 1.65, 0.01 / 1.65} {
		index := s.Sensitivity[0][j]
		near(t, fmt.Sprintf("first order of input %d", j+1), index.FirstOrder, share, 4*index.FirstOrderError)
		near(t, fmt.Sprintf("total of input %d", j+1), index.Total, share, 4*index.TotalError)
		if !(index.TotalError < 0.06 && index.FirstOrderError < 0.08) {
			t.Errorf("errors of input %d: %v, %v", j+1, index.FirstOrderError, index.TotalError)
		}
	}
	if fixed := s.Limits[1]; fixed.Affected || fixed.Pass != 1 || fixed.Error != 0 || s.Exact[1].Affected {
		t.Errorf("a limit nothing moves: %+v", fixed)
	}
	if index := s.Sensitivity[1][0]; !math.IsNaN(index.FirstOrder) || !math.IsNaN(index.Total) {
		t.Errorf("a quantity nothing moves has sensitivity %+v", index)
	}
	// A linear response is exact by the expansion: both routes see the same draws.
	near(t, "mean by the surrogate", s.Fitted[0].Mean, y.Mean, 1e-9)
	near(t, "deviation by the surrogate", s.Fitted[0].Deviation, y.Deviation, 1e-9)
	near(t, "probability by the surrogate", s.FittedLimits[0].Pass, s.Limits[0].Pass, 2e-4)
	near(t, "reliability index", s.Reliability[0].Beta, (bound-3)/math.Sqrt(1.65), 1e-6)
	near(t, "median margin", s.Margins[0].P50, bound-y.P50, 1e-12)
	near(t, "median margin by the surrogate", s.FittedMargins[0].P50, bound-y.P50, 1e-9)
	if s.Reliability[1] != nil {
		t.Errorf("a limit nothing moves is broken at %+v", s.Reliability[1])
	}
	if len(s.Fits) != 1 || s.Fits[0].Quantity != 0 {
		t.Errorf("fits %+v, want one of the quantity that moves", s.Fits)
	}
	if want := 1 + 10000 + 3*1000 + 90; s.Evaluations != want {
		t.Errorf("%d evaluations, want %d", s.Evaluations, want)
	}
}

// z1 + z2 + z1 z2 of standard deviates with variance v: v of the variance from each
// alone and v^2 from the product.
func TestIndicesOfAProduct(t *testing.T) {
	p := &plain{scatter: scattered(1, 1), quantities: named("y"), value: func(_, e []float64, dst *problems.Evaluation) {
		dst.Set(0, e[0]+e[1]+e[0]*e[1])
	}}
	s := run(t, Task{Problem: p, X: []float64{0}}, Settings{Draws: 20000, Replaced: 10000})
	v := truncatedVariance
	for j, index := range s.Sensitivity[0] {
		near(t, fmt.Sprintf("first order of input %d", j+1), index.FirstOrder, 1/(2+v), 4*index.FirstOrderError)
		near(t, fmt.Sprintf("total of input %d", j+1), index.Total, (1+v)/(2+v), 4*index.TotalError)
	}
}

// A draw without an answer fails the limit that needed it, is counted apart, and
// leaves the moments alone; a quantity that does not apply asks nothing.
func TestDrawsWithoutAnAnswer(t *testing.T) {
	p := &plain{scatter: scattered(1), quantities: named("y", "z", "w"), value: func(_, e []float64, dst *problems.Evaluation) {
		dst.Set(0, e[0])
		if e[0] > 1 {
			dst.Miss(1, errNone)
			dst.Miss(2, &problems.NotApplicable{Why: "beyond 1"})
			return
		}
		dst.Set(1, 1)
		dst.Set(2, 1)
	}}
	s := run(t, Task{Problem: p, X: []float64{0}, Limits: []problems.Limit{atLeast("z", 0), atLeast("w", 0)}}, Settings{})
	z, w := s.Limits[0], s.Limits[1]
	near(t, "probability", z.Pass, Phi(1), 4*z.Error)
	if failing := int(math.Round(10000 * (1 - z.Pass))); z.Unanswered != failing || failing == 0 {
		t.Errorf("%d draws without an answer, %v pass", z.Unanswered, z.Pass)
	}
	if w.Pass != 1 || w.Unanswered != 0 || !w.Affected {
		t.Errorf("a limit that does not apply: %+v", w)
	}
	if s.Exact[1].Unanswered != z.Unanswered || s.Exact[2].NotApplicable != z.Unanswered || s.Exact[1].Mean != 1 {
		t.Errorf("summaries %+v, %+v", s.Exact[1], s.Exact[2])
	}
	if got := s.Draws.Missing[1]; len(got) != 1 || got[0].Text != "no answer" || got.Total() != z.Unanswered {
		t.Errorf("reasons %+v", got)
	}
	if s.Joint.Pass != z.Pass {
		t.Errorf("jointly %v, want %v", s.Joint.Pass, z.Pass)
	}
}

// A limit on a group holds where every member keeps it, and the group's value is
// its least member.
func TestGroups(t *testing.T) {
	p := &plain{scatter: scattered(1, 1), quantities: named("g", "g"), value: func(_, e []float64, dst *problems.Evaluation) {
		dst.Set(0, e[0])
		dst.Set(1, e[1])
	}}
	s := run(t, Task{Problem: p, X: []float64{0}, Limits: []problems.Limit{atLeast("g", -1)}}, Settings{})
	near(t, "both at least -1", s.Limits[0].Pass, Phi(1)*Phi(1), 4*s.Limits[0].Error)
	if len(s.Responses) != 1 || len(s.Exact) != 1 {
		t.Fatalf("%d responses", len(s.Responses))
	}
	near(t, "mean of the least", s.Exact[0].Mean, -1/math.Sqrt(math.Pi), 4*s.Exact[0].MeanError) // expected least of two standard normals
}

func TestSameForAnyJobs(t *testing.T) {
	print := func(jobs int) []byte {
		s := run(t, Task{Problem: kinked(), X: []float64{0.2}, Limits: []problems.Limit{atMost("y", 1), atLeast("z", 0)}},
			Settings{Draws: 500, Replaced: 100, Jobs: jobs})
		var b bytes.Buffer
		fmt.Fprint(&b, s.Exact, s.Fitted, s.Sensitivity, s.Limits, s.Joint, s.FittedLimits, s.FittedJoint, s.Draws.Values, s.Draws.Missing)
		return b.Bytes()
	}
	want := print(1)
	for _, jobs := range []int{2, 7} {
		if !bytes.Equal(print(jobs), want) {
			t.Errorf("%d jobs give other figures", jobs)
		}
	}
}

// kinked has a kink, a hole and a group-free pair.
func kinked() *plain {
	return &plain{scatter: scattered(0.3, 0.6), quantities: named("y", "z"), value: func(x, e []float64, dst *problems.Evaluation) {
		dst.Set(0, x[0]+math.Abs(e[0])+e[1]*e[1])
		if dst.Set(1, e[0]+1); e[1] < -1 {
			dst.Miss(1, &problems.Detached{Shock: "ramp 1", Mach: 2 + e[1], By: 0.1})
		}
	}}
}

// A run that is cancelled tells of no draw that was not made.
func TestTellsOfNoDrawThatWasNotMade(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	settings := Settings{Draws: 500, Jobs: 2, Observe: func(e Event) {
		if e.Done == 10 {
			cancel()
		}
		if e.Done > 10 {
			t.Errorf("told of %d draws of %d after the end", e.Done, e.Total)
		}
	}}
	if _, err := Run(ctx, Task{Problem: kinked(), X: []float64{0.2}}, settings); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}

func TestReasonsAreCountedWithoutTheirNumbers(t *testing.T) {
	s := run(t, Task{Problem: kinked(), X: []float64{0}}, Settings{Draws: 1000})
	if got := s.Draws.Missing[1]; len(got) != 1 || got[0].Text != "ramp 1 detached" {
		t.Errorf("reasons %+v", got)
	}
}

// Whatever is asked: percentiles are in order, the joint probability is at most
// the least and at least what the failures of all leave, and a looser limit holds
// at least as often.
func TestProperties(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		low := rapid.Float64Range(-2, 1).Draw(rt, "low")
		more := rapid.Float64Range(0, 1).Draw(rt, "more")
		seed := rapid.Int64Range(1, 1000).Draw(rt, "seed")
		s := run(rt2{t, rt}, Task{Problem: kinked(), X: []float64{0}, Limits: []problems.Limit{
			atLeast("z", low), atLeast("z", low-more), atMost("y", low+2), atMost("y", low+2+more),
		}}, Settings{Draws: 200, Replaced: 20, Samples: 12, Seed: seed})
		for _, y := range s.Exact {
			if !(y.P05 <= y.P50 && y.P50 <= y.P95) {
				rt.Errorf("percentiles %v %v %v", y.P05, y.P50, y.P95)
			}
		}
		failing := 0.0
		for _, l := range s.Limits {
			failing += 1 - l.Pass
		}
		if s.Joint.Pass > least(s.Limits) || s.Joint.Pass < 1-failing-1e-12 {
			rt.Errorf("jointly %v of %+v", s.Joint.Pass, s.Limits)
		}
		if s.Limits[1].Pass < s.Limits[0].Pass || s.Limits[3].Pass < s.Limits[2].Pass {
			rt.Errorf("a looser limit holds less: %+v", s.Limits)
		}
	})
}

// rt2 lets helpers that take a testing.TB fail a property.
type rt2 struct {
	*testing.T
	rt *rapid.T
}

func (r rt2) Fatal(args ...any) { r.rt.Fatal(args...) }

func TestRefusals(t *testing.T) {
	ctx := context.Background()
	if _, err := Run(ctx, Task{Problem: &plain{quantities: named("y")}, X: []float64{0}}, Settings{}); !errors.Is(err, ErrNothingScatters) {
		t.Errorf("without inputs: %v", err)
	}
	if _, err := Run(ctx, Task{Problem: linear(), X: []float64{0}, Limits: []problems.Limit{atLeast("unheard", 1)}}, Settings{}); err == nil {
		t.Error("a limit on an unknown quantity is accepted")
	}
	bad := Settings{Draws: 5, Replaced: 1, Samples: 1, Jobs: -1}.WithDefaults(3).Validate(3)
	joined, ok := bad.(interface{ Unwrap() []error })
	if !ok || len(joined.Unwrap()) != 4 {
		t.Errorf("settings with four faults: %v", bad)
	}
	ended, end := context.WithCancel(ctx)
	end()
	if _, err := Run(ended, Task{Problem: linear(), X: []float64{0}}, Settings{}); !errors.Is(err, context.Canceled) {
		t.Errorf("a context that has ended: %v", err)
	}
}

func TestTruncatedNormal(t *testing.T) {
	// Phi(-3) = 1.34989803163009e-3, standard tables.
	near(t, "Phi(-3)", Phi(-3), 1.34989803163009e-3, 1e-17)
	near(t, "Quantile(0.95)", Quantile(0.95), 1.6448536269514722, 1e-14) // standard tables
	rapid.Check(t, func(rt *rapid.T) {
		p := rapid.Float64Range(0, 1).Draw(rt, "p")
		z := truncated(p)
		if !(z >= -4 && z <= 4) {
			rt.Fatalf("z(%v) = %v", p, z)
		}
		near(t, "distribution", (Phi(z)-Phi(-4))/(1-2*Phi(-4)), p, 1e-12)
	})
}

// A study without its model's cost: 10000 draws, indices and surrogates of two
// quantities.
func BenchmarkRun(b *testing.B) {
	task := Task{Problem: kinked(), X: []float64{0}, Limits: []problems.Limit{atMost("y", 1), atLeast("z", 0)}}
	for b.Loop() {
		run(b, task, Settings{})
	}
}
