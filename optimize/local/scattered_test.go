package local

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// scattered draws a smooth program in the unit cube with many curved
// constraints, feasible at a known point inside: paraboloids and saddles through
// or around it, the first of them equalities.
func scattered(random *rand.Rand, n, equalities, inequalities int, loose float64) (Program, []float64) {
	m := equalities + inequalities
	inside, goal := make([]float64, n), make([]float64, n)
	for j := range n {
		inside[j] = 0.2 + 0.6*random.Float64()
		goal[j] = random.Float64()*3 - 1
	}
	linear, bend, slack := make([]float64, m*n), make([]float64, m*n), make([]float64, m)
	for k := range linear {
		linear[k] = random.NormFloat64()
		bend[k] = 0.5 * random.NormFloat64()
	}
	for i := equalities; i < m; i++ {
		slack[i] = loose * math.Abs(random.NormFloat64())
	}
	p := Program{Low: fill(n, 0), High: fill(n, 1), Equalities: equalities, Inequalities: inequalities}
	p.Value = func(x, c []float64) float64 {
		for i := range c {
			c[i] = -slack[i]
			for j, v := range x {
				d := v - inside[j]
				c[i] += linear[i*n+j]*d + bend[i*n+j]*d*d
			}
		}
		f := 0.3 * math.Sin(3*x[0]) * x[n-1]
		for j, v := range x {
			f += math.Exp(v-goal[j]) - v + goal[j]
		}
		return f
	}
	p.Gradient = func(x, g, jac []float64) {
		for i := range m {
			for j, v := range x {
				jac[i*n+j] = linear[i*n+j] + 2*bend[i*n+j]*(v-inside[j])
			}
		}
		for j, v := range x {
			g[j] = math.Exp(v-goal[j]) - 1
		}
		g[0] += 0.9 * math.Cos(3*x[0]) * x[n-1]
		g[n-1] += 0.3 * math.Sin(3*x[0])
	}
	start := make([]float64, n)
	for j := range start {
		start[j] = random.Float64()
		if random.IntN(4) == 0 {
			start[j] = math.Round(start[j])
		}
	}
	return p, start
}

// rescaled restates a program of the unit cube with the variables in units from
// 1e-4 to 1e4 and the constraints from 0.01 to 100.
func rescaled(random *rand.Rand, p Program, start []float64) (Program, []float64) {
	n, m := p.Dimension(), p.Constraints()
	unit, price, y := make([]float64, n), make([]float64, m), make([]float64, n)
	for j := range unit {
		unit[j] = math.Pow(10, 8*random.Float64()-4)
		start[j] *= unit[j]
	}
	for i := range price {
		price[i] = math.Pow(10, 4*random.Float64()-2)
	}
	value, gradient := p.Value, p.Gradient
	p.High = unit
	p.Value = func(x, c []float64) float64 {
		for j, v := range x {
			y[j] = v / unit[j]
		}
		f := value(y, c)
		for i := range c {
			c[i] *= price[i]
		}
		return f
	}
	p.Gradient = func(x, g, jac []float64) {
		for j, v := range x {
			y[j] = v / unit[j]
		}
		gradient(y, g, jac)
		for j := range g {
			g[j] /= unit[j]
			for i := range price {
				jac[i*n+j] *= price[i] / unit[j]
			}
		}
	}
	return p, start
}

func TestManyCurvedConstraints(t *testing.T) {
	cases := []struct {
		name                        string
		n, equalities, inequalities int
		loose                       float64
		rescaled                    bool
	}{
		{"few", 2, 0, 5, 0.3, false},
		{"vertex", 5, 0, 60, 0, false}, // all through one point
		{"middle", 8, 2, 120, 0.3, false},
		{"large", 15, 0, 250, 0.5, false},
		{"large with equalities", 15, 12, 40, 0.5, false},
		{"in odd units", 7, 0, 40, 0.3, true},
		{"equalities in odd units", 12, 10, 10, 0.3, true},
	}
	for k, c := range cases {
		random := rand.New(rand.NewPCG(11, uint64(k)))
		count := map[Status]int{}
		worst := 0.0
		var values []int
		for trial := range 100 {
			p, start := scattered(random, c.n, c.equalities, c.inequalities, c.loose)
			if c.rescaled {
				p, start = rescaled(random, p, start)
			}
			r := solve(t, p, start)
			count[r.Status]++
			values = append(values, r.Values)
			switch r.Status {
			case Converged:
				worst = max(worst, r.KKT)
				if !c.rescaled {
					checkConditions(t, c.name, &p, r, 1e-8)
				}
			case Infeasible:
				checkLeastViolation(t, c.name, &p, r)
			default:
				t.Errorf("%s %d: %v kkt %.2g violation %.2g, %d iterations %d values", c.name, trial, r.Status, r.KKT, r.Violation, r.Iterations, r.Values)
			}
		}
		slices.Sort(values)
		t.Logf("%s: %v, worst kkt %.2g, values median %d most %d", c.name, count, worst, values[50], values[99])
		// Each has a feasible point; saddles may hide it from a local method, rarely.
		if count[Converged] < 95 {
			t.Errorf("%s: only %d of 100 converged", c.name, count[Converged])
		}
	}
}

// A value with noise, as of a sum whose terms cancel, does not keep the exact
// gradients from leading to the optimum once its size is stated.
func TestNoisyValues(t *testing.T) {
	for _, noise := range []float64{1e-13, 1e-11} {
		for trial := range uint64(100) {
			random := rand.New(rand.NewPCG(77, trial))
			p, start := scattered(random, 2+random.IntN(8), 0, 2+random.IntN(20), 0.4)
			smooth := solve(t, p, start)
			value := p.Value
			p.Value = func(x, c []float64) float64 {
				f, phase := value(x, c), 0.0
				for j, v := range x {
					phase += 1e9 * float64(j+1) * v
				}
				return f + noise*math.Sin(phase)
			}
			r, err := Minimize(t.Context(), &p, start, Settings{Rounding: 5 * noise})
			if err != nil || r.Status != Converged || math.Abs(r.F-smooth.F) > 1e-9 {
				t.Errorf("noise %g trial %d: %v %v kkt %.2g, f %.12g against %.12g", noise, trial, err, r.Status, r.KKT, r.F, smooth.F)
			}
		}
	}
}

// Constraints tightened until most programs have no feasible point: the end is
// a point of least violation, or one that meets everything after all.
func TestTightenedConstraints(t *testing.T) {
	count := map[Status]int{}
	random := rand.New(rand.NewPCG(12, 12))
	for trial := range 200 {
		n := 1 + random.IntN(10)
		p, start := scattered(random, n, random.IntN(n), 1+random.IntN(40), 0)
		tighter, value := random.Float64(), p.Value
		p.Value = func(x, c []float64) float64 {
			f := value(x, c)
			for i := range c {
				c[i] += tighter
			}
			return f
		}
		if trial%2 == 1 {
			p, start = rescaled(random, p, start)
		}
		r := solve(t, p, start)
		count[r.Status]++
		switch r.Status {
		case Converged:
		case Infeasible:
			checkLeastViolation(t, "tightened", &p, r)
		default:
			t.Errorf("%d: %v kkt %.2g violation %.2g, %d iterations %d values", trial, r.Status, r.KKT, r.Violation, r.Iterations, r.Values)
		}
	}
	t.Logf("%v", count)
	if count[Infeasible] < 100 {
		t.Errorf("only %d of 200 infeasible: the test says little", count[Infeasible])
	}
}

// checkLeastViolation checks that no point nearby has a smaller l1 violation.
func checkLeastViolation(t testing.TB, name string, p *Program, r *Result) {
	t.Helper()
	c := make([]float64, p.Constraints())
	violation := func(x []float64) float64 {
		p.Value(x, c)
		sum := 0.0
		for i, v := range c {
			if i < p.Equalities {
				v = math.Abs(v)
			}
			sum += max(v, 0)
		}
		return sum
	}
	least := violation(r.X)
	if least <= 0 {
		t.Errorf("%s: infeasible without violation", name)
	}
	random := rand.New(rand.NewPCG(5, 6))
	x := make([]float64, len(r.X))
	for range 500 {
		radius := math.Pow(10, -2-3*random.Float64())
		for j, v := range r.X {
			width := p.High[j] - p.Low[j]
			x[j] = min(max(v+radius*width*random.NormFloat64(), p.Low[j]), p.High[j])
		}
		if v := violation(x); v < least-1e-9*max(1, least) {
			t.Errorf("%s: violation %.10g near %v, where it is said to be least at %.10g", name, v, r.X, least)
			return
		}
	}
}

func BenchmarkSQPFifteenByTwoHundredFifty(b *testing.B) {
	p, start := scattered(rand.New(rand.NewPCG(11, 3)), 15, 0, 250, 0.5)
	benchmark(b, p, start)
}

func BenchmarkSQPHS43(b *testing.B)  { c := hs43(); benchmark(b, c.program, c.start) }
func BenchmarkSQPHS71(b *testing.B)  { c := hs71(); benchmark(b, c.program, c.start) }
func BenchmarkSQPHS100(b *testing.B) { c := hs100(); benchmark(b, c.program, c.start) }

func benchmark(b *testing.B, p Program, start []float64) {
	var w Workspace
	b.ReportAllocs()
	for b.Loop() {
		if r, err := w.Minimize(b.Context(), &p, start, Settings{}); err != nil || r.Status != Converged {
			b.Fatal(err, r.Status)
		}
	}
}
