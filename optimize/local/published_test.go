package local

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/floats"
)

// published are problems of Hock & Schittkowski, Test Examples for Nonlinear
// Programming Codes (1981), by their numbers there; formulas from memory,
// optimal values as printed there.
type published struct {
	name    string
	program Program
	start   []float64
	x       []float64 // nil where the collection's digits are not carried
	f       float64
	digits  float64 // tolerance of the printed digits
}

func fill(n int, v float64) []float64 {
	s := make([]float64, n)
	for i := range s {
		s[i] = v
	}
	return s
}

var infinity = math.Inf(1)

func hs35() published {
	return published{
		name: "HS35",
		program: Program{
			Low: fill(3, 0), High: fill(3, infinity),
			AtMost: Rows{A: []float64{1, 1, 2}, B: []float64{3}},
			Value: func(x, _ []float64) float64 {
				return 9 - 8*x[0] - 6*x[1] - 4*x[2] + 2*x[0]*x[0] + 2*x[1]*x[1] + x[2]*x[2] + 2*x[0]*x[1] + 2*x[0]*x[2]
			},
			Gradient: func(x, g, _ []float64) {
				g[0] = -8 + 4*x[0] + 2*x[1] + 2*x[2]
				g[1] = -6 + 4*x[1] + 2*x[0]
				g[2] = -4 + 2*x[2] + 2*x[0]
			},
		},
		start: fill(3, 0.5), x: []float64{4. / 3, 7. / 9, 4. / 9}, f: 1. / 9, digits: 1e-12,
	}
}

func hs43() published {
	return published{
		name: "HS43",
		program: Program{
			Low: fill(4, -infinity), High: fill(4, infinity), Inequalities: 3,
			Value: func(x, c []float64) float64 {
				a, b, d, e := x[0], x[1], x[2], x[3]
				c[0] = a*a + b*b + d*d + e*e + a - b + d - e - 8
				c[1] = a*a + 2*b*b + d*d + 2*e*e - a - e - 10
				c[2] = 2*a*a + b*b + d*d + 2*a - b - e - 5
				return a*a + b*b + 2*d*d + e*e - 5*a - 5*b - 21*d + 7*e
			},
			Gradient: func(x, g, jac []float64) {
				a, b, d, e := x[0], x[1], x[2], x[3]
				copy(g, []float64{2*a - 5, 2*b - 5, 4*d - 21, 2*e + 7})
				copy(jac, []float64{
					2*a + 1, 2*b - 1, 2*d + 1, 2*e - 1,
					2*a - 1, 4 * b, 2 * d, 4*e - 1,
					4*a + 2, 2*b - 1, 2 * d, -1,
				})
			},
		},
		start: fill(4, 0), x: []float64{0, 1, 2, -1}, f: -44, digits: 1e-9,
	}
}

func hs71() published {
	return published{
		name: "HS71",
		program: Program{
			Low: fill(4, 1), High: fill(4, 5), Equalities: 1, Inequalities: 1,
			Value: func(x, c []float64) float64 {
				c[0] = x[0]*x[0] + x[1]*x[1] + x[2]*x[2] + x[3]*x[3] - 40
				c[1] = 25 - x[0]*x[1]*x[2]*x[3]
				return x[0]*x[3]*(x[0]+x[1]+x[2]) + x[2]
			},
			Gradient: func(x, g, jac []float64) {
				copy(g, []float64{x[3] * (2*x[0] + x[1] + x[2]), x[0] * x[3], x[0]*x[3] + 1, x[0] * (x[0] + x[1] + x[2])})
				copy(jac, []float64{
					2 * x[0], 2 * x[1], 2 * x[2], 2 * x[3],
					-x[1] * x[2] * x[3], -x[0] * x[2] * x[3], -x[0] * x[1] * x[3], -x[0] * x[1] * x[2],
				})
			},
		},
		start: []float64{1, 5, 5, 1}, x: []float64{1, 4.7429994, 3.8211503, 1.3794082}, f: 17.0140173, digits: 5e-8,
	}
}

func hs76() published {
	return published{
		name: "HS76",
		program: Program{
			Low: fill(4, 0), High: fill(4, infinity),
			AtMost: Rows{
				A: []float64{1, 2, 1, 1, 3, 1, 2, -1, 0, -1, -4, 0},
				B: []float64{5, 4, -1.5},
			},
			Value: func(x, _ []float64) float64 {
				return x[0]*x[0] + 0.5*x[1]*x[1] + x[2]*x[2] + 0.5*x[3]*x[3] - x[0]*x[2] + x[2]*x[3] - x[0] - 3*x[1] + x[2] - x[3]
			},
			Gradient: func(x, g, _ []float64) {
				copy(g, []float64{2*x[0] - x[2] - 1, x[1] - 3, 2*x[2] - x[0] + x[3] + 1, x[3] + x[2] - 1})
			},
		},
		start: fill(4, 0.5), x: []float64{3. / 11, 23. / 11, 0, 6. / 11}, f: -4.6818181818, digits: 1e-10,
	}
}

func hs100() published {
	return published{
		name: "HS100",
		program: Program{
			Low: fill(7, -infinity), High: fill(7, infinity), Inequalities: 4,
			Value: func(x, c []float64) float64 {
				c[0] = 2*x[0]*x[0] + 3*math.Pow(x[1], 4) + x[2] + 4*x[3]*x[3] + 5*x[4] - 127
				c[1] = 7*x[0] + 3*x[1] + 10*x[2]*x[2] + x[3] - x[4] - 282
				c[2] = 23*x[0] + x[1]*x[1] + 6*x[5]*x[5] - 8*x[6] - 196
				c[3] = 4*x[0]*x[0] + x[1]*x[1] - 3*x[0]*x[1] + 2*x[2]*x[2] + 5*x[5] - 11*x[6]
				a, b, d := x[0]-10, x[1]-12, x[3]-11
				return a*a + 5*b*b + math.Pow(x[2], 4) + 3*d*d + 10*math.Pow(x[4], 6) + 7*x[5]*x[5] + math.Pow(x[6], 4) - 4*x[5]*x[6] - 10*x[5] - 8*x[6]
			},
			Gradient: func(x, g, jac []float64) {
				copy(g, []float64{
					2 * (x[0] - 10), 10 * (x[1] - 12), 4 * math.Pow(x[2], 3), 6 * (x[3] - 11), 60 * math.Pow(x[4], 5),
					14*x[5] - 4*x[6] - 10, 4*math.Pow(x[6], 3) - 4*x[5] - 8,
				})
				copy(jac, []float64{
					4 * x[0], 12 * math.Pow(x[1], 3), 1, 8 * x[3], 5, 0, 0,
					7, 3, 20 * x[2], 1, -1, 0, 0,
					23, 2 * x[1], 0, 0, 0, 12 * x[5], -8,
					8*x[0] - 3*x[1], 2*x[1] - 3*x[0], 4 * x[2], 0, 0, 5, -11,
				})
			},
		},
		start: []float64{1, 2, 0, 4, 0, 1, 1}, f: 680.630057374402, digits: 1e-11,
	}
}

// minimiserDigits is the tolerance of a published minimiser: the printed value of
// HS71 meets its own equality to 4e-7 only.
const minimiserDigits = 5e-7

func allPublished() []published { return []published{hs35(), hs43(), hs71(), hs76(), hs100()} }

func solve(t testing.TB, p Program, start []float64) *Result {
	t.Helper()
	r, err := Minimize(context.Background(), &p, start, Settings{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestPublishedOptima(t *testing.T) {
	for _, c := range allPublished() {
		r := solve(t, c.program, c.start)
		t.Logf("%s: %v, f %.15g, kkt %.1e, violation %.1e, %d iterations, %d values, %d gradients", c.name, r.Status, r.F, r.KKT, r.Violation, r.Iterations, r.Values, r.Gradients)
		if r.Status != Converged {
			t.Errorf("%s: %v at %v", c.name, r.Status, r.X)
		}
		if math.Abs(r.F-c.f) > c.digits*max(1, math.Abs(c.f)) {
			t.Errorf("%s: f = %.15g, published %.15g", c.name, r.F, c.f)
		}
		for j, x := range c.x {
			if math.Abs(r.X[j]-x) > minimiserDigits {
				t.Errorf("%s: x[%d] = %.10g, published %.10g", c.name, j, r.X[j], x)
			}
		}
		checkConditions(t, c.name, &c.program, r, 1e-8)
	}
}

func TestPublishedGradientsAgreeWithDifferences(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for _, c := range allPublished() {
		n, m := c.program.Dimension(), c.program.Constraints()
		numeric := Differenced(c.program)
		for range 20 {
			x := make([]float64, n)
			for j := range x {
				x[j] = 1 + 2*random.Float64()
			}
			g, jac := make([]float64, n), make([]float64, m*n)
			c.program.Gradient(x, g, jac)
			dg, djac := make([]float64, n), make([]float64, m*n)
			numeric.Gradient(x, dg, djac)
			for i, v := range append(g, jac...) {
				if d := append(dg, djac...)[i]; math.Abs(d-v) > 1e-7*max(1, math.Abs(v)) {
					t.Fatalf("%s: derivative %d is %g, differences say %g", c.name, i, v, d)
				}
			}
		}
	}
}

// failer is what testing and rapid share.
type failer interface {
	Helper()
	Errorf(format string, args ...any)
}

// checkConditions recomputes the first-order conditions of the result from the
// program alone.
func checkConditions(t failer, name string, p *Program, r *Result, tolerance float64) {
	t.Helper()
	n, m := p.Dimension(), p.Constraints()
	g, jac, c := make([]float64, n), make([]float64, m*n), make([]float64, m)
	p.Value(r.X, c)
	p.Gradient(r.X, g, jac)
	scale := 1.0
	for _, v := range g {
		scale = max(scale, math.Abs(v))
	}
	for j := range n {
		sum := g[j] + r.FaceHigh[j] - r.FaceLow[j]
		for i, l := range r.Multipliers {
			sum += l * jac[i*n+j]
		}
		for i, l := range r.RowsAtMost {
			sum += l * p.AtMost.A[i*n+j]
		}
		for i, l := range r.RowsEqual {
			sum += l * p.Equal.A[i*n+j]
		}
		if math.Abs(sum) > tolerance*scale {
			t.Errorf("%s: dL/dx[%d] = %g", name, j, sum)
		}
		if r.X[j] < p.Low[j] || r.X[j] > p.High[j] {
			t.Errorf("%s: x[%d] = %g leaves [%g, %g]", name, j, r.X[j], p.Low[j], p.High[j])
		}
		checkPair(t, name, r.FaceLow[j], p.Low[j]-r.X[j], tolerance*scale)
		checkPair(t, name, r.FaceHigh[j], r.X[j]-p.High[j], tolerance*scale)
	}
	for i, v := range c {
		if i < p.Equalities {
			if math.Abs(v) > tolerance {
				t.Errorf("%s: equality %d = %g", name, i, v)
			}
			continue
		}
		checkPair(t, name, r.Multipliers[i], v, tolerance*scale)
	}
	for i, b := range p.AtMost.B {
		checkPair(t, name, r.RowsAtMost[i], floats.Dot(p.AtMost.A[i*n:(i+1)*n], r.X)-b, tolerance*scale)
	}
	for i, b := range p.Equal.B {
		if v := floats.Dot(p.Equal.A[i*n:(i+1)*n], r.X) - b; math.Abs(v) > tolerance*max(1, math.Abs(b)) {
			t.Errorf("%s: linear equality %d misses by %g", name, i, v)
		}
	}
}

// checkPair checks multiplier >= 0, residual <= 0 and their product 0.
func checkPair(t failer, name string, multiplier, residual, tolerance float64) {
	t.Helper()
	if multiplier < 0 {
		t.Errorf("%s: multiplier %g", name, multiplier)
	}
	if residual > tolerance {
		t.Errorf("%s: residual %g above 0", name, residual)
	}
	if multiplier > 0 && math.Abs(multiplier*residual) > tolerance {
		t.Errorf("%s: multiplier %g with residual %g", name, multiplier, residual)
	}
}
