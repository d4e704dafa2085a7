package optimize

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"

	"rampwright/constraints"
)

// holding is what holds an optimum u: the active sides and faces with a positive
// multiplier, which depend on each other by no more than rounding.
type holding struct {
	columns     [][]float64 // gradients of the scaled sides in the unit cube
	owners      []int       // check of a column, -1-j for the face of variable j
	multipliers []float64
}

// priceChange is the share by which a gain may differ from price times loosening
// within the range of the price.
const priceChange = 0.1

// ranges stores in every priced check how far its limit can be loosened before its
// price no longer tells the gain, and what ends it: sensitivity ranging. Loosened
// by t, in scaled units, the limit k moves optimum and multipliers along t (d, l),
//
//	[ H   A ] [ d ]   [  0  ]
//	[ A'  0 ] [ l ] = [ e_k ]
//
// with the columns A of what holds the optimum and the Hessian H of the Lagrangian
// there (Fiacco, Introduction to Sensitivity and Stability Analysis, 1983, ch. 3;
// from memory). Where A pins a vertex d follows from A alone; elsewhere directions in
// which the Lagrangian is not convex beyond rounding are left alone, so that d is the
// shortest. The range ends at the first t > 0 where, to first order, another limit
// or face is met, a multiplier vanishes, or the price has changed by twice
// priceChange: the mean over the range by priceChange.
//
// Where the model has no value nearby, H counts as zero. What comes beyond first
// order in d, and borders of the model that no limit marks, are not foreseen. The
// slopes of traced quantities are rough, the curvature of their Lagrangian more so:
// with them a range is good to its size only.
func (s *searcher) ranges(u []float64, checks []constraints.Check, held holding) {
	slopes := make([][]float64, len(checks))
	for r := range checks {
		if column := s.plan.rowSlope(r, s); column != nil {
			slopes[r] = scaled(column, 1)
		}
	}
	hessian := s.hessian(u, checks, held)
	basis := newBasis(held.columns, hessian)
	for k, r := range held.owners {
		if r < 0 {
			continue
		}
		move, change := basis.loosen(k)
		far, end := held.firstChange(k, change)
		if t, other := s.firstMet(u, checks, slopes, held, move); t < far {
			far, end = t, other
		}
		checks[r].PriceRange, checks[r].PriceEnd = far*checks[r].Scale, end
	}
}

// firstChange is the loosening of column k at which another multiplier vanishes or
// its own has changed too far.
func (h *holding) firstChange(k int, change []float64) (far float64, end constraints.PriceEnd) {
	far = math.Inf(1)
	take := func(t float64, kind constraints.PriceEndKind, index int) {
		if t < far {
			far, end = t, constraints.PriceEnd{Kind: kind, Index: index}
		}
	}
	for i, rate := range change {
		owner, multiplier := h.owners[i], h.multipliers[i]
		switch {
		case i == k && rate < 0:
			take(2*priceChange*multiplier/-rate, constraints.PriceFalls, owner)
		case i == k && rate > 0:
			take(2*priceChange*multiplier/rate, constraints.PriceRises, owner)
		case rate < 0 && owner >= 0:
			take(multiplier/-rate, constraints.LimitReleased, owner)
		case rate < 0:
			take(multiplier/-rate, constraints.BoundReleased, -1-owner)
		}
	}
	return far, end
}

// firstMet is how far u can go along move until it meets a limit or face that does
// not hold it yet.
func (s *searcher) firstMet(u []float64, checks []constraints.Check, slopes [][]float64, held holding, move []float64) (far float64, end constraints.PriceEnd) {
	far = math.Inf(1)
	take := func(margin, rate, size float64, kind constraints.PriceEndKind, index int) {
		if !(rate > leastRate*size) {
			return
		}
		if t := math.Max(0, margin) / rate; t < far {
			far, end = t, constraints.PriceEnd{Kind: kind, Index: index}
		}
	}
	holds := map[int]bool{}
	for _, owner := range held.owners {
		holds[owner] = true
	}
	length := norm(move)
	for r := range checks {
		if holds[r] || slopes[r] == nil {
			continue
		}
		rate, size := floats.Dot(slopes[r], move), norm(slopes[r])*length
		for _, bound := range checks[r].Bounds() {
			take(bound.Sign*(bound.At-checks[r].Value), bound.Sign*rate, size, constraints.LimitMet, r)
		}
	}
	for j, rate := range move {
		if !holds[-1-j] {
			take(1-u[j], rate, length, constraints.UpperEndMet, j)
			take(u[j], -rate, length, constraints.LowerEndMet, j)
		}
	}
	return far, end
}

// leastRate is the cosine below which a move counts as along a limit.
const leastRate = 1e-7

// hessianStep, in the unit cube, balances the truncation of a difference of slopes
// against their error, about 1e-9.
const hessianStep = 1e-4

// hessian is that of the Lagrangian of price at u, by differences of its slope:
// 4n^2 runs of an exact landscape. Zero where a slope is missing.
func (s *searcher) hessian(u []float64, checks []constraints.Check, held holding) *mat.SymDense {
	n := len(u)
	factor := make(map[int]float64) // of the slopes of curved rows
	for _, r := range s.plan.curved {
		for k, owner := range held.owners {
			if owner == r {
				factor[r] = held.multipliers[k] * activeSign(&checks[r]) / checks[r].Scale
			}
		}
	}
	slope := func(v []float64) []float64 {
		out := make([]float64, n)
		s.values(v)
		s.land.jacobian(v, s.rows)
		s.plan.objective.gradient(s.vector, s.rows, out)
		floats.Scale(s.plan.objective.sign(), out)
		for _, r := range s.plan.curved {
			if f := factor[r]; f != 0 {
				addScaled(out, f, s.rows[s.plan.rows[r].Index])
			}
		}
		return out
	}
	full, probe := mat.NewDense(n, n, nil), append([]float64(nil), u...)
	for j := range u {
		high, low := math.Min(1, u[j]+hessianStep), math.Max(0, u[j]-hessianStep)
		probe[j] = high
		up := slope(probe)
		probe[j] = low
		down := slope(probe)
		probe[j] = u[j]
		for i := range up {
			full.Set(i, j, (up[i]-down[i])/(high-low))
		}
	}
	out := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			v := (full.At(i, j) + full.At(j, i)) / 2
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return mat.NewSymDense(n, nil)
			}
			out.SetSym(i, j, v)
		}
	}
	return out
}

// basis solves the system of ranges for one loosened column after another.
type basis struct {
	n, m    int
	along   *mat.Dense // orthonormal, the span of the columns
	right   *mat.Dense // triangular: columns = along * right
	free    *mat.Dense // orthonormal, what the columns leave free; nil at a vertex
	hessian *mat.SymDense
}

func newBasis(columns [][]float64, hessian *mat.SymDense) *basis {
	b := &basis{n: hessian.SymmetricDim(), m: len(columns), hessian: hessian}
	matrix := mat.NewDense(b.n, b.m, nil)
	for k, column := range columns {
		matrix.SetCol(k, column)
	}
	var qr mat.QR
	qr.Factorize(matrix)
	var q, r mat.Dense
	qr.QTo(&q)
	qr.RTo(&r)
	b.along, b.right = mat.DenseCopyOf(q.Slice(0, b.n, 0, b.m)), mat.DenseCopyOf(r.Slice(0, b.m, 0, b.m))
	if b.m < b.n {
		b.free = mat.DenseCopyOf(q.Slice(0, b.n, b.m, b.n))
	}
	return b
}

// loosen is the movement of the optimum, and the change of every multiplier, for
// each scaled unit by which column k is loosened.
func (b *basis) loosen(k int) (move, change []float64) {
	unit, share := mat.NewVecDense(b.m, nil), mat.NewVecDense(b.m, nil)
	unit.SetVec(k, 1)
	triangle := mat.NewTriDense(b.m, mat.Upper, nil)
	for i := range b.m {
		for j := i; j < b.m; j++ {
			triangle.SetTri(i, j, b.right.At(i, j))
		}
	}
	if err := share.SolveVec(triangle.T(), unit); err != nil {
		share.Zero()
	}
	var d mat.VecDense
	d.MulVec(b.along, share)
	b.follow(&d)
	var pull, inside mat.VecDense
	pull.MulVec(b.hessian, &d)
	inside.MulVec(b.along.T(), &pull)
	inside.ScaleVec(-1, &inside)
	l := mat.NewVecDense(b.m, nil)
	if err := l.SolveVec(triangle, &inside); err != nil {
		l.Zero()
	}
	return d.RawVector().Data, l.RawVector().Data
}

// leastCurvature is the share of the largest curvature below which a direction
// counts as flat.
const leastCurvature = 1e-6

// follow adds to d the movement in the free directions that keeps the Lagrangian
// stationary, in those where it is convex.
func (b *basis) follow(d *mat.VecDense) {
	if b.free == nil {
		return
	}
	var pull, force mat.VecDense
	pull.MulVec(b.hessian, d)
	force.MulVec(b.free.T(), &pull)
	var product, reduced mat.Dense
	product.Mul(b.hessian, b.free)
	reduced.Mul(b.free.T(), &product)
	size := b.n - b.m
	symmetric := mat.NewSymDense(size, nil)
	for i := range size {
		for j := range i + 1 {
			symmetric.SetSym(i, j, reduced.At(i, j))
		}
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(symmetric, true) {
		return
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	least := leastCurvature * mat.Norm(b.hessian, 2)
	for i, value := range eigen.Values(nil) {
		if value <= least {
			continue
		}
		var direction mat.VecDense
		direction.MulVec(b.free, vectors.ColView(i))
		d.AddScaledVec(d, -mat.Dot(vectors.ColView(i), &force)/value, &direction)
	}
}
