package pce

import (
	"math"
	"sort"
)

// lassoSolver solves the lasso for falling alpha, each from the last solution,
// in covariance form (Friedman, Hastie & Tibshirani 2010, section 2.2): with the
// slope q = c - G b kept up to date, one coefficient follows from
//
//	b_j <- S(q_j + G_jj b_j, alpha)/G_jj,  S(z, a) = sign(z) max(|z| - a, 0)
//
// and only a coefficient that moves costs a pass over a column of G.
type lassoSolver struct {
	v     *covariance
	b     []float64
	slope []float64 // q
	inUse []int     // columns swept
	used  []bool
}

const (
	// The tolerances are on the optimality conditions, relative to the largest
	// |c_j|: |q_j| <= alpha, and q_j = alpha sign b_j where b_j is not 0.
	pathTolerance = 1e-11
	foldTolerance = 1e-5
	sweepLimit    = 4000
	sweepsPerTry  = 5 // sweeps between direct solutions on the support
)

func newLassoSolver(v *covariance) *lassoSolver {
	return &lassoSolver{v: v, b: make([]float64, v.p), slope: append([]float64(nil), v.moment...), used: make([]bool, v.p)}
}

// solve moves to the solution at alpha; false when it was not reached to the
// tolerance (dependent columns at a tiny alpha).
func (s *lassoSolver) solve(alpha, tolerance float64) bool {
	limit := tolerance * largestSize(s.v.moment)
	for sweep := 1; sweep <= sweepLimit; sweep++ {
		if s.sweep(alpha) > limit {
			if sweep%sweepsPerTry == 0 {
				s.solveSupport(alpha)
			}
			continue
		}
		if s.admit(alpha+limit) == 0 && s.violation(alpha) <= limit {
			return true
		}
		s.solveSupport(alpha)
	}
	return false
}

// sweep updates every column in use once and returns the largest violation of
// its condition found on the way.
func (s *lassoSolver) sweep(alpha float64) float64 {
	worst := 0.0
	for _, j := range s.inUse {
		own := s.v.gram[j*s.v.p+j]
		target := soften(s.slope[j]+own*s.b[j], alpha) / own
		if step := target - s.b[j]; step != 0 {
			worst = math.Max(worst, math.Abs(step)*own)
			s.move(j, step)
		}
	}
	return worst
}

func soften(z, alpha float64) float64 {
	switch {
	case z > alpha:
		return z - alpha
	case z < -alpha:
		return z + alpha
	default:
		return 0
	}
}

// move changes one coefficient and the slopes with it.
func (s *lassoSolver) move(j int, step float64) {
	s.b[j] += step
	for k, g := range s.v.gram[j*s.v.p : (j+1)*s.v.p] {
		s.slope[k] -= step * g
	}
}

// admit takes into use the columns whose slope exceeds the limit.
func (s *lassoSolver) admit(limit float64) int {
	count := 0
	for j, q := range s.slope {
		if !s.used[j] && math.Abs(q) > limit && s.v.gram[j*s.v.p+j] > 0 {
			s.used[j] = true
			s.inUse = append(s.inUse, j)
			count++
		}
	}
	return count
}

// violation returns the largest departure from the optimality conditions.
func (s *lassoSolver) violation(alpha float64) float64 {
	worst := 0.0
	for j, q := range s.slope {
		if s.b[j] != 0 {
			worst = math.Max(worst, math.Abs(q-math.Copysign(alpha, s.b[j])))
		} else {
			worst = math.Max(worst, math.Abs(q)-alpha)
		}
	}
	return worst
}

// solveSupport minimises over the coefficients on the support with their signs
// kept, where sweeps would creep: it solves
//
//	G_AA step_A = q_A - alpha sign(b_A)
//
// goes along the step to the first coefficient that vanishes, drops that, and
// repeats until a whole step is taken. Columns that depend on earlier ones of
// the support keep their coefficient.
func (s *lassoSolver) solveSupport(alpha float64) {
	for {
		columns, factor := s.independentSupport()
		right := make([]float64, len(columns))
		for i, j := range columns {
			right[i] = s.slope[j] - math.Copysign(alpha, s.b[j])
		}
		step := factor.solve(right)
		length, vanishing := 1.0, -1
		for i, j := range columns {
			if s.b[j]*step[i] < 0 && -s.b[j]/step[i] < length {
				length, vanishing = -s.b[j]/step[i], j
			}
		}
		for i, j := range columns {
			if j == vanishing {
				s.move(j, -s.b[j])
			} else {
				s.move(j, length*step[i])
			}
		}
		if vanishing < 0 {
			return
		}
	}
}

// independentSupport returns the columns with a coefficient, but for those that
// depend on earlier ones, and the factor of their products.
func (s *lassoSolver) independentSupport() (columns []int, factor *growingFactor) {
	factor = &growingFactor{}
	products := make([]float64, 0, s.v.p)
	for j, b := range s.b {
		if b == 0 {
			continue
		}
		products = products[:0]
		for _, k := range columns {
			products = append(products, s.v.gram[j*s.v.p+k])
		}
		if factor.add(products, s.v.gram[j*s.v.p+j]) {
			columns = append(columns, j)
		}
	}
	return columns, factor
}

// size returns the number of coefficients that are not 0.
func (s *lassoSolver) size() int {
	count := 0
	for _, b := range s.b {
		if b != 0 {
			count++
		}
	}
	return count
}

// support returns the columns with a coefficient (numbered as in the design),
// the largest coefficients first.
func (s *lassoSolver) support() []int {
	var columns []int
	for j, b := range s.b {
		if b != 0 {
			columns = append(columns, j+1)
		}
	}
	sort.SliceStable(columns, func(i, k int) bool {
		return math.Abs(s.b[columns[i]-1]) > math.Abs(s.b[columns[k]-1])
	})
	return columns
}
