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
