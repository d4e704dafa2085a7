package inlet

import (
	"context"
	"math"

	"rampwright/problems"
)

// Moves reports, for each quantity, whether some scattering input moves it at x: its
// value, or whether it has one, changes when one input alone is off by one deviation,
// either way.
func (b *Built) Moves(ctx context.Context, x []float64) ([]bool, error) {
	count := len(b.Quantities())
	moves := make([]bool, count)
	given := make([]float64, len(b.scatter))
	drawn, off := problems.NewEvaluation(count), problems.NewEvaluation(count)
	if err := b.EvaluateBuilt(ctx, x, given, drawn); err != nil {
		return nil, err
	}
	for i, s := range b.scatter {
		for _, by := range []float64{-s.Deviation, s.Deviation} {
			given[i] = by
			if err := b.EvaluateBuilt(ctx, x, given, off); err != nil {
				return nil, err
			}
			for k, v := range drawn.Values {
				moves[k] = moves[k] || apart(v, off.Values[k])
			}
		}
		given[i] = 0
	}
	return moves, nil
}

// apart reports whether two values differ by more than rounding.
func apart(a, b float64) bool {
	if math.IsNaN(a) || math.IsNaN(b) {
		return math.IsNaN(a) != math.IsNaN(b)
	}
	return math.Abs(a-b) > 1e-12*math.Max(1, math.Abs(a))
}
