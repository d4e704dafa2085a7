package optimize

import (
	"context"
	"math"

	"rampwright/constraints"
	"rampwright/optimize/local"
)

// pricesAt stores in every active check at a sample the gain of the aim for each
// unit by which its limit is loosened: the multipliers that balance the slope of
// the aim against those of the active limits and of the faces of the box the
// design stands on,
//
//	min | sign grad(aim) + sum lambda_r grad(c_r) |^2,  lambda >= 0
//
// (first-order conditions, Nocedal & Wright thm. 12.1), with the slopes of the
// near surfaces.
func (d *designer) pricesAt(ctx context.Context, s *sample, checks []constraints.Check) error {
	land := d.plan.surrogates(d.near.fits, d.anchor)
	search := newSearcher(d.plan, land, 1)
	if search.blind = d.blind(d.near); search.blind || search.worst() {
		return nil
	}
	n := d.plan.dimension()
	slope := make([]float64, n)
	search.values(s.u)
	land.jacobian(s.u, search.rows)
	d.plan.objective.gradient(search.vector, search.rows, slope)
	for j := range slope {
		slope[j] *= d.plan.objective.sign()
	}

	var columns [][]float64 // gradients of active sides, scaled rows
	var owners []int        // check of a column, -1 for a face
	for r := range checks {
		check := &checks[r]
		if !check.Active {
			continue
		}
		sign := 1.0
		if math.Abs(check.Value-check.Low) < math.Abs(check.Value-check.High) {
			sign = -1
		}
		if column := d.plan.rowSlope(r, search); column != nil {
			columns, owners = append(columns, scaled(column, sign/check.Scale)), append(owners, r)
		}
	}
	for j, v := range s.u {
		face := make([]float64, n)
		switch {
		case v <= 0:
			face[j] = -1
		case v >= 1:
			face[j] = 1
		default:
			continue
		}
		columns, owners = append(columns, face), append(owners, -1)
	}
	multipliers, err := balance(ctx, slope, columns)
	if err != nil {
		return err
	}
	for k, r := range owners {
		if r >= 0 {
			checks[r].Price = multipliers[k] / checks[r].Scale
		}
	}
	return nil
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

// balance solves the non-negative least squares problem of pricesAt.
func balance(ctx context.Context, slope []float64, columns [][]float64) ([]float64, error) {
	m := len(columns)
	if m == 0 {
		return nil, nil
	}
	low, high := make([]float64, m), make([]float64, m)
	for k := range high {
		high[k] = math.Inf(1)
	}
	residual := make([]float64, len(slope))
	result, err := local.MinimizeBox(ctx, low, high, func(x, grad []float64) float64 {
		copy(residual, slope)
		for k, column := range columns {
			addScaled(residual, x[k], column)
		}
		sum := 0.0
		for _, v := range residual {
			sum += v * v
		}
		for k, column := range columns {
			grad[k] = 0
			for j, v := range column {
				grad[k] += 2 * v * residual[j]
			}
		}
		return sum
	}, make([]float64, m), local.Settings{Tolerance: 1e-12})
	if err != nil {
		return nil, err
	}
	return result.X, nil
}
