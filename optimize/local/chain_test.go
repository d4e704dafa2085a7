package local

import (
	"math"
	"math/rand/v2"
	"testing"
)

// recoveryChain is the total-pressure recovery of n oblique shocks and a normal
// one (g = 1.4), stated in the normal Mach numbers of the oblique shocks:
//
//	pt2/pt1 = [6 m^2/(m^2+5)]^3.5 [6/(7 m^2-1)]^2.5           NACA Report 1135 eq. 142
//	M2^2    = (36 M^2 m^2 - 5 (m^2-1)(7 m^2+5)) / ((7 m^2-1)(m^2+5))   eq. 137, with m = M sin beta
//
// both from memory. The constraint is -1 where the flow ahead of the last shock
// would be subsonic, for which the value is undefined.
func recoveryChain(mach float64) func(m, c []float64) float64 {
	jump := func(m2 float64) float64 {
		return math.Pow(6*m2/(m2+5), 3.5) * math.Pow(6/(7*m2-1), 2.5)
	}
	return func(m, _ []float64) float64 {
		squared, recovery := mach*mach, 1.0
		for _, normal := range m {
			s := normal * normal
			recovery *= jump(s)
			squared = (36*squared*s - 5*(s-1)*(7*s+5)) / ((7*s - 1) * (s + 5))
			if squared < 1 {
				return math.NaN()
			}
		}
		return -recovery * jump(squared)
	}
}

// The equal-strength optimum of Oswatitsch (1944 = NACA TM 1140) at Mach 3:
// recoveries recomputed independently, and equal normal Mach numbers. Here the
// gradients are differences, which is what limits the residual.
func TestEqualStrengthOptimum(t *testing.T) {
	random := rand.New(rand.NewPCG(2, 3))
	for n, recovery := range []float64{0.328344, 0.581215, 0.743652, 0.836143, 0.889237} {
		if n == 0 {
			if f := recoveryChain(3)(nil, nil); math.Abs(f+recovery) > 1e-6 {
				t.Errorf("normal shock alone: %g", -f)
			}
			continue
		}
		p := Differenced(Program{Low: fill(n, 1), High: fill(n, 2), Value: recoveryChain(3)})
		for range 20 {
			start := make([]float64, n)
			for j := range start {
				start[j] = 1 + random.Float64()/float64(n)
			}
			r := solve(t, p, start)
			if r.KKT > 1e-8 || math.Abs(r.F+recovery) > 1e-6 {
				t.Errorf("%d ramps from %v: %v, recovery %.8f, kkt %.2g", n, start, r.Status, -r.F, r.KKT)
			}
			for _, m := range r.X {
				if math.Abs(m-r.X[0]) > 1e-6 {
					t.Errorf("%d ramps: normal Mach numbers %v", n, r.X)
				}
			}
		}
	}
}

// A function that is undefined beyond a face of the definition, not of the box:
// differences turn one-sided there.
func TestDifferencesStayWhereTheFunctionIsDefined(t *testing.T) {
	p := Differenced(Program{
		Low: []float64{0, 1e4}, High: []float64{1, 1e4 + 1}, Inequalities: 1,
		Value: func(x, c []float64) float64 {
			if x[0] > 0.5 || x[1] < 1e4 || x[1] > 1e4+1 {
				return math.NaN()
			}
			c[0] = x[0] * x[0] * (x[1] - 1e4)
			return math.Exp(x[0]) + (x[1]-1e4)*(x[1]-1e4)
		},
	})
	for _, x := range [][]float64{{0, 1e4}, {0.5, 1e4 + 1}, {0.3, 1e4 + 0.25}} {
		g, jac := make([]float64, 2), make([]float64, 2)
		p.Gradient(x, g, jac)
		d := x[1] - 1e4
		for k, pair := range [][2]float64{
			{g[0], math.Exp(x[0])}, {g[1], 2 * d}, {jac[0], 2 * x[0] * d}, {jac[1], x[0] * x[0]},
		} {
			if !(math.Abs(pair[0]-pair[1]) < 1e-9) {
				t.Errorf("at %v derivative %d: %.12g, exact %.12g", x, k, pair[0], pair[1])
			}
		}
	}
	g, jac := make([]float64, 2), make([]float64, 2)
	p.Gradient([]float64{0.7, 1e4}, g, jac)
	if !math.IsNaN(g[0]) || !math.IsNaN(jac[0]) {
		t.Errorf("undefined point has derivatives %v %v", g, jac)
	}
}
