package envelope

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// BenchmarkRoot is one boundary point of a smooth margin.
func BenchmarkRoot(b *testing.B) {
	l := level{tolerance: 1e-5, value: func(p place) (float64, error) { return math.Exp(p.x) - 1.7 + 0.1*p.y, nil }}
	p, q := place{0, 0}, place{1, 1}
	fp, _ := l.value(p)
	fq, _ := l.value(q)
	b.ReportAllocs()
	for b.Loop() {
		if _, ok, _ := l.root(p, q, fp, fq); !ok {
			b.Fatal("no root")
		}
	}
}

// BenchmarkChains joins the roots of a circle on a grid of 40 by 40.
func BenchmarkChains(b *testing.B) {
	g := circle(40, 12.3)
	rooted := map[int]bool{}
	for _, edge := range g.crossings() {
		rooted[edge] = true
	}
	for b.Loop() {
		if list := g.chains(rooted); len(list) != 1 {
			b.Fatalf("%d chains", len(list))
		}
	}
}

// circle is a lattice that is positive within a radius of its middle.
func circle(n int, radius float64) lattice {
	g := lattice{nx: n, ny: n, values: make([]float64, n*n)}
	for node := range g.values {
		p := g.at(node)
		g.values[node] = radius - math.Hypot(p.x-float64(n-1)/2-0.1, p.y-float64(n-1)/2+0.07)
	}
	return g
}

// TestACircleIsOneLoop: every edge that a closed line crosses stands in one chain,
// once but for the first, which closes it.
func TestACircleIsOneLoop(t *testing.T) {
	g := circle(20, 7)
	crossings := g.crossings()
	rooted := map[int]bool{}
	for _, edge := range crossings {
		rooted[edge] = true
	}
	list := g.chains(rooted)
	if len(list) != 1 {
		t.Fatalf("%d chains", len(list))
	}
	c := list[0]
	if len(c.edges) != len(crossings)+1 || c.edges[0] != c.edges[len(c.edges)-1] || c.looseStart || c.looseEnd {
		t.Errorf("%d edges of %d, from %d to %d, loose %v %v", len(c.edges), len(crossings), c.edges[0], c.edges[len(c.edges)-1], c.looseStart, c.looseEnd)
	}
}

// TestRootsAreBracketed: the root of any monotone function, smooth, kinked or a jump,
// is found within the tolerance, on its positive side, in at most one step more than
// bisection takes.
func TestRootsAreBracketed(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		at := rapid.Float64Range(0.001, 0.999).Draw(t, "root")
		power := rapid.Float64Range(0, 9).Draw(t, "power")
		steep := rapid.Float64Range(1e-6, 1e6).Draw(t, "slope")
		steps := 0
		l := level{tolerance: 1e-7, value: func(p place) (float64, error) {
			steps++
			x := p.x - at
			if x >= 0 {
				return steep * math.Pow(x, power), nil
			}
			return -math.Pow(-x, power), nil
		}}
		low, high := place{}, place{x: 1}
		fl, _ := l.value(low)
		fh, _ := l.value(high)
		steps = 0
		v, ok, err := l.root(low, high, fl, fh)
		if err != nil || !ok {
			t.Fatalf("no root: %v", err)
		}
		// Beyond the sixteenth digit of a value the sign is lost, not the root.
		if off := v.x - at; off < -1e-12 || off > 1e-7+1e-12 {
			t.Fatalf("root %v of %v", v.x, at)
		}
		if most := int(math.Ceil(math.Log2(1/1e-7))) + 2; steps > most {
			t.Fatalf("%d steps, bisection takes %d", steps, most-2)
		}
	})
}
