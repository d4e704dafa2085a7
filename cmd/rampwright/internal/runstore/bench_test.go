package runstore

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"testing"

	"rampwright/problems"
)

func TestLookupDoesNotAllocate(t *testing.T) {
	l := newLedger(t)
	x := []float64{1, 2, 3, 4}
	if err := l.Append("m", Primary, x, sample(1)); err != nil {
		t.Fatal(err)
	}
	dst := problems.NewEvaluation(3)
	ctx := context.Background()
	allocations := testing.AllocsPerRun(100, func() {
		if known, err := l.ask(ctx, "m", Primary, x, dst, nil); !known || err != nil {
			t.Fatal(known, err)
		}
	})
	if allocations != 0 {
		t.Errorf("%v allocations", allocations)
	}
}

// wide is an evaluation of the size a three-point inlet has.
func wide(v float64) *problems.Evaluation {
	e := problems.NewEvaluation(120)
	for i := range e.Values {
		e.Set(i, math.Sqrt(v+float64(i)))
	}
	return e
}

func BenchmarkAppend(b *testing.B) {
	l := newLedger(b)
	e := wide(2)
	x := make([]float64, 4)
	for i := 0; b.Loop(); i++ {
		x[0] = float64(i)
		if err := l.Append("m", Primary, x, e); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkLookup(b *testing.B) {
	l := newLedger(b)
	e := wide(2)
	x := make([]float64, 4)
	if err := l.Append("m", Primary, x, e); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if known, err := l.Lookup("m", Primary, x, e); !known || err != nil {
			b.Fatal(known, err)
		}
	}
}

func BenchmarkLoad(b *testing.B) {
	path := filepath.Join(b.TempDir(), ledgerName)
	l, _, err := openLedger(path, nil)
	if err != nil {
		b.Fatal(err)
	}
	for i := range 1000 {
		if err := l.Append("m", Primary, []float64{float64(i), 1, 2, 3}, wide(float64(i))); err != nil {
			b.Fatal(err)
		}
	}
	if err := l.close(); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		l, counts, err := openLedger(path, nil)
		if err != nil || counts.known != 1000 {
			b.Fatal(fmt.Sprint(counts), err)
		}
		if err := l.close(); err != nil {
			b.Fatal(err)
		}
	}
}
