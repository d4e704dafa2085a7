package inlet

import (
	"context"
	"testing"

	"rampwright/problems"
)

func benchmarkRoute(b *testing.B, run func(p *Problem, dst *problems.Evaluation) error) {
	p, err := New(veyric())
	if err != nil {
		b.Fatal(err)
	}
	dst := problems.NewEvaluation(len(p.Quantities()))
	b.ReportAllocs()
	for b.Loop() {
		if err := run(p, dst); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkEvaluateTwoPoints(b *testing.B) {
	benchmarkRoute(b, func(p *Problem, dst *problems.Evaluation) error {
		return p.Evaluate(context.Background(), nil, dst)
	})
}

func BenchmarkVerifyTwoPoints(b *testing.B) {
	benchmarkRoute(b, func(p *Problem, dst *problems.Evaluation) error {
		return p.Verify(context.Background(), nil, dst)
	})
}

func BenchmarkEvaluateExplicit(b *testing.B) {
	benchmarkRoute(b, func(p *Problem, dst *problems.Evaluation) error {
		p.EvaluateExplicit(nil, dst)
		return nil
	})
}

// BenchmarkEvaluateTraced is one point beyond the chain: the merged ramp shocks
// pass outside a lip set back.
func BenchmarkEvaluateTraced(b *testing.B) { traced(b, first{}) }

// BenchmarkVerifyTraced is the same by the second route, with its bounds.
func BenchmarkVerifyTraced(b *testing.B) { traced(b, second{}) }

func traced(b *testing.B, r route) {
	d := veyric().at(6.4, 0)
	d.LipSetback = Fixed(0.06)
	p, err := New(d)
	if err != nil {
		b.Fatal(err)
	}
	dst := problems.NewEvaluation(len(p.Quantities()))
	b.ReportAllocs()
	for b.Loop() {
		if err := p.evaluate(context.Background(), r, nil, dst); err != nil {
			b.Fatal(err)
		}
	}
}
