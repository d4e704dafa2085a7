package optimize

import (
	"context"
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"

	"rampwright/constraints"
)

// Price fills price, its range and the driven variable of every active check of a
// design from exact slopes, by central differences: 2n runs of the model, and 4n^2
// for the ranges, for models that cost little. Where the aim is the worst of several
// points it leaves them as they are.
func Price(ctx context.Context, task Task, x []float64, checks []constraints.Check) error {
	plan, err := newPlan(task)
	if err != nil {
		return err
	}
	land := newExactLandscape(ctx, plan)
	newSearcher(plan, land, 1).price(plan.normal(x), checks)
	return land.err
}

// pricesAt prices the active checks at a sample by the slopes of the near surfaces.
func (d *designer) pricesAt(s *sample, checks []constraints.Check) {
	search := newSearcher(d.plan, d.plan.surrogates(d.near.fits, d.anchor), 1)
	search.blind = d.blind(d.near)
	search.price(s.u, checks)
}

// price stores in every active check at u the gain of the aim for each unit by
// which its limit is loosened: the multipliers that balance the slope of the aim
// against those of the active limits and of the faces of the box the design stands
// on,
//
//	min | sign grad(aim) + sum lambda_r grad(c_r) |^2,  lambda >= 0
//
// (first-order conditions, Nocedal & Wright thm. 12.1). The variable it drives is
// the one whose share of a limit's term in that sum is largest, in unit-cube
// lengths.
func (s *searcher) price(u []float64, checks []constraints.Check) {
	if s.blind || s.worst() {
		return
	}
	slope := make([]float64, len(u))
	s.values(u)
	s.land.jacobian(u, s.rows)
	s.plan.objective.gradient(s.vector, s.rows, slope)
	for j := range slope {
		slope[j] *= s.plan.objective.sign()
	}
	var columns [][]float64 // gradients of active sides, scaled rows
	var owners []int        // check of a column, -1-j for the face of variable j
	for r := range checks {
		check := &checks[r]
		if !check.Active {
			continue
		}
		if column := s.plan.rowSlope(r, s); column != nil {
			columns, owners = append(columns, scaled(column, activeSign(check)/check.Scale)), append(owners, r)
		}
	}
	for j, v := range u {
		if v <= 0 || v >= 1 {
			face := make([]float64, len(u))
			face[j] = math.Copysign(1, v-0.5)
			columns, owners = append(columns, face), append(owners, -1-j)
		}
	}
	var held holding
	for k, multiplier := range balance(slope, columns) {
		r := owners[k]
		if multiplier > 0 {
			held.columns, held.owners, held.multipliers = append(held.columns, columns[k]), append(held.owners, r), append(held.multipliers, multiplier)
		}
		if r < 0 {
			continue
		}
		checks[r].Price, checks[r].Drives, checks[r].PriceRange = multiplier/checks[r].Scale, -1, math.NaN()
		if multiplier > 0 {
			checks[r].Drives = steepestSide(columns[k])
		}
	}
	if len(held.columns) > 0 {
		s.ranges(u, checks, held)
	}
}

// activeSign is +1 where a check stands on its upper side, -1 on its lower.
func activeSign(check *constraints.Check) float64 {
	if math.Abs(check.Value-check.Low) < math.Abs(check.Value-check.High) {
		return -1
	}
	return 1
}

// steepestSide is the index of the largest component by size.
func steepestSide(v []float64) int {
	most := 0
	for j := range v {
		if math.Abs(v[j]) > math.Abs(v[most]) {
			most = j
		}
	}
	return most
}

// rowSlope is the gradient of a row's quantity in the unit cube, nil where none
// is known.
func (p *plan) rowSlope(r int, search *searcher) []float64 {
	n, next := p.dimension(), 0
	for _, straight := range p.straight {
		if straight == r {
			bound := p.rows[r].Bounds()[0]
			return scaled(p.linear.A[next*n:(next+1)*n], bound.Sign)
		}
		next += len(p.rows[straight].Bounds())
	}
	return search.rows[p.rows[r].Index]
}

func scaled(v []float64, factor float64) []float64 {
	out := make([]float64, len(v))
	addScaled(out, factor, v)
	return out
}

// balance solves the non-negative least squares problem of price by the active
// set method of Lawson & Hanson (Solving Least Squares Problems, 1974, ch. 23).
// Columns that depend on those already in are left out.
func balance(slope []float64, columns [][]float64) []float64 {
	m := len(columns)
	x := make([]float64, m)
	used, refused := make([]bool, m), make([]bool, m)
	for range 3 * m {
		k := steepest(slope, columns, x, used, refused)
		if k < 0 {
			break
		}
		used[k] = true
		if !settle(slope, columns, x, used) {
			used[k], refused[k] = false, true
		}
	}
	return x
}

// steepest returns the unused column whose multiplier would lower the residual
// fastest, or -1 at the optimum.
func steepest(slope []float64, columns [][]float64, x []float64, used, refused []bool) int {
	residual := append([]float64(nil), slope...)
	for k, column := range columns {
		addScaled(residual, x[k], column)
	}
	best, most := -1, 1e-9*norm(slope)
	for k, column := range columns {
		if used[k] || refused[k] {
			continue
		}
		if gain := -floats.Dot(column, residual) / norm(column); gain > most {
			best, most = k, gain
		}
	}
	return best
}

// settle solves on the used columns, giving up those whose multiplier turns
// negative; false where the columns depend on each other.
func settle(slope []float64, columns [][]float64, x []float64, used []bool) bool {
	for {
		var list []int
		for k, in := range used {
			if in {
				list = append(list, k)
			}
		}
		if list == nil {
			return true
		}
		solution, ok := leastSquares(slope, columns, list)
		if !ok {
			return false
		}
		// Walk from x toward the solution until the first multiplier vanishes.
		reach := 1.0
		for i, k := range list {
			switch {
			case solution[i] > 0:
			case x[k] > 0:
				reach = math.Min(reach, x[k]/(x[k]-solution[i]))
			default: // just taken in, and already of no use
				reach = 0
			}
		}
		for i, k := range list {
			x[k] += reach * (solution[i] - x[k])
			if solution[i] <= 0 && x[k] <= 1e-15 {
				x[k], used[k] = 0, false
			}
		}
		if reach == 1 {
			return true
		}
	}
}

// leastSquares minimises |slope + sum x_k column_k| over the listed columns.
func leastSquares(slope []float64, columns [][]float64, list []int) (x []float64, ok bool) {
	if len(list) > len(slope) {
		return nil, false
	}
	matrix, right := mat.NewDense(len(slope), len(list), nil), mat.NewVecDense(len(slope), nil)
	lengths := make([]float64, len(list))
	for i, k := range list {
		lengths[i] = norm(columns[k])
		for j, v := range columns[k] {
			matrix.Set(j, i, v/lengths[i])
		}
	}
	for j, v := range slope {
		right.SetVec(j, -v)
	}
	var qr mat.QR
	qr.Factorize(matrix)
	if qr.Cond() > 1e8 {
		return nil, false
	}
	var solution mat.VecDense
	if err := qr.SolveVecTo(&solution, false, right); err != nil {
		return nil, false
	}
	x = make([]float64, len(list))
	for i := range x {
		x[i] = solution.AtVec(i) / lengths[i]
	}
	return x, true
}
