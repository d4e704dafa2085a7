package local

import (
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/floats"
)

// quadratic is the elastic quadratic program
//
//	minimise  1/2 p'Bp + g'p + sum_i w_i max(0, a_i'p + c_i)    (rows held at most 0)
//	                         + sum_i w_i |a_i'p + c_i|          (rows held at 0)
//	subject to  below <= p <= above
//
// solved through its dual, in which row i carries a multiplier in
// [least_i, most_i]: [0, w_i] for an inequality, [-w_i, w_i] for an equality. An
// infinite w_i makes the row hard. This is Goldfarb & Idnani's dual active-set
// method (from memory) with one more event: a multiplier that reaches its upper
// end leaves the active set saturated, its row violated at the price w_i. With
// finite weights the program always has a solution.
//
// Multipliers are indexed: 0..m-1 the rows, m+j the face p_j >= below_j,
// m+n+j the face p_j <= above_j.
type quadratic struct {
	n, m         int
	hessian      []float64 // B, n x n, positive definite
	gradient     []float64 // g
	normal       []float64 // a, m x n
	offset       []float64 // c
	least, most  []float64 // range of the multiplier, one a row
	reach        []float64 // sum_j |a_ij| width_j: change of row i across the box
	width        []float64 // scale of each variable
	below, above []float64

	step       []float64 // solution p
	multiplier []float64 // m + 2n

	state     []rowState // m + 2n
	active    []int      // rows of the active set, in factor order
	factor    factor
	residuals []float64 // of every row at p
	image     []float64 // d = J'a of that row
	move      []float64 // dp for a unit of its multiplier
	shift     []float64 // change of the active multipliers for the same
	scratch   []float64
}

type rowState int8

const (
	idle    rowState = iota // multiplier 0, row not held
	held                    // in the active set
	capped                  // multiplier at most_i
	floored                 // multiplier at least_i < 0 (an equality)
)

type outcome int

const (
	solved outcome = iota
	inconsistent
	broken // B not positive definite, or the step budget ran out
)

// Named tolerances of the quadratic program.
const (
	// rowSlack is the violation, relative to the change of the row across the
	// box, below which a row counts as met: a thousand roundings.
	rowSlack = 1e-13
	// dependent is |d2|/|d| below which a row is a combination of the active ones.
	dependent = 1e-11
)

func (q *quadratic) resize(n, m int) {
	q.n, q.m = n, m
	q.hessian = resize(q.hessian, n*n)
	q.gradient = resize(q.gradient, n)
	q.normal = resize(q.normal, m*n)
	q.offset = resize(q.offset, m)
	q.residuals = resize(q.residuals, m)
	q.least = resize(q.least, m)
	q.most = resize(q.most, m)
	q.reach = resize(q.reach, m)
	q.width = resize(q.width, n)
	q.below = resize(q.below, n)
	q.above = resize(q.above, n)
	q.step = resize(q.step, n)
	q.multiplier = resize(q.multiplier, m+2*n)
	q.state = resize(q.state, m+2*n)
	q.active = resize(q.active, n)[:0]
	q.image = resize(q.image, n)
	q.move = resize(q.move, n)
	q.shift = resize(q.shift, n)
	q.scratch = resize(q.scratch, n)
	q.factor.resize(n)
}

// resize returns a slice of length n, reusing the memory of s where it fits.
func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	s = s[:n]
	clear(s)
	return s
}

// measureRows refreshes the reach of each row.
func (q *quadratic) measureRows() {
	for i := range q.reach {
		q.reach[i] = reach(q.normal[i*q.n:(i+1)*q.n], q.width)
	}
}

// reach is the change of a row across the box, sum_j |a_j| width_j.
func reach(normal, width []float64) float64 {
	sum := 0.0
	for j, a := range normal {
		sum += math.Abs(a) * width[j]
	}
	return sum
}

// solve fills step and multiplier. It returns inconsistent when the hard rows
// and faces have no common point.
func (q *quadratic) solve() outcome {
	if !q.factor.start(q.hessian) {
		return broken
	}
	q.startUnconstrained()
	budget := 100 + 20*(q.m+2*q.n)
	for budget > 0 {
		row, sign := q.mostViolated()
		if row < 0 {
			q.refine()
			return solved
		}
		for settled := false; !settled; budget-- {
			var possible bool
			if settled, possible = q.raise(row, sign); !possible {
				return inconsistent
			}
			if budget == 0 {
				return broken
			}
		}
	}
	return broken
}

// startUnconstrained sets p = -B^-1 g with every row idle.
func (q *quadratic) startUnconstrained() {
	q.active = q.active[:0]
	clear(q.state)
	clear(q.multiplier)
	q.factor.image(q.image, q.gradient)
	clear(q.step)
	q.factor.combine(q.step, q.image, 0, -1)
}

// multiplierRange returns the ends of the multiplier of any row or face.
func (q *quadratic) multiplierRange(row int) (least, most float64) {
	if row < q.m {
		return q.least[row], q.most[row]
	}
	return 0, math.Inf(1)
}

// value returns a'p + c of any row or face.
func (q *quadratic) value(row int) float64 {
	switch {
	case row < q.m:
		return q.offset[row] + floats.Dot(q.normal[row*q.n:(row+1)*q.n], q.step)
	case row < q.m+q.n:
		j := row - q.m
		return q.below[j] - q.step[j]
	default:
		j := row - q.m - q.n
		return q.step[j] - q.above[j]
	}
}

// mostViolated returns the row whose state contradicts its residual by the
// largest fraction of its reach, and the direction its multiplier must take;
// -1 when there is none.
func (q *quadratic) mostViolated() (worst int, sign float64) {
	worst, most := -1, rowSlack
	consider := func(row int, value, scale float64) {
		if size := math.Abs(value); size > most*scale && q.state[row] != held && q.contradicts(row, value) {
			worst, most, sign = row, size/scale, math.Copysign(1, value)
		}
	}
	q.fillResiduals()
	for row, value := range q.residuals {
		consider(row, value, q.reach[row])
	}
	for j, p := range q.step {
		consider(q.m+j, q.below[j]-p, q.width[j])
		consider(q.m+q.n+j, p-q.above[j], q.width[j])
	}
	return worst, sign
}

// fillResiduals stores a_i'p + c_i of every row.
func (q *quadratic) fillResiduals() {
	copy(q.residuals, q.offset)
	if q.m > 0 {
		rows := blas64.General{Rows: q.m, Cols: q.n, Stride: q.n, Data: q.normal}
		step := blas64.Vector{N: q.n, Inc: 1, Data: q.step}
		blas64.Gemv(blas.NoTrans, 1, rows, step, 1, blas64.Vector{N: q.m, Inc: 1, Data: q.residuals})
	}
}

// contradicts tells whether residual value is wrong for the state of the row.
func (q *quadratic) contradicts(row int, value float64) bool {
	switch q.state[row] {
	case capped:
		return value < 0
	case floored:
		return value > 0
	default:
		return value > 0 || (row < q.m && q.least[row] < 0)
	}
}

// raise moves the multiplier of row in direction sign until its residual
// vanishes, a multiplier meets an end of its range, or nothing limits it. It
// returns settled when the row needs no more moves.
func (q *quadratic) raise(row int, sign float64) (settled, possible bool) {
	curvature := q.direction(row, sign)
	full := math.Inf(1)
	if curvature > 0 {
		full = math.Abs(q.value(row)) / curvature
	}
	own := q.room(row, sign)
	leaving, partial := q.firstToLeave()
	length := min(full, own, partial)
	if math.IsInf(length, 1) {
		return false, false
	}

	for j := range q.step {
		q.step[j] += length * q.move[j]
	}
	for k, r := range q.active {
		q.multiplier[r] += length * q.shift[k]
	}
	q.multiplier[row] += sign * length

	switch length {
	case partial:
		q.release(leaving)
		return false, true
	case full:
		q.factor.add(q.image, len(q.active))
		q.active = append(q.active, row)
		q.state[row] = held
	default:
		q.pin(row, sign)
	}
	return true, true
}

// direction fills move and shift for a unit of the row's multiplier,
//
//	d = J'a,  dp = -sign J2 d2,  dlambda = -sign R^-1 d1
//
// and returns |d2|^2, the rate at which the residual closes; 0 when the row is
// a combination of the active ones.
func (q *quadratic) direction(row int, sign float64) (curvature float64) {
	q.imageOf(row)
	count := len(q.active)
	total := 0.0
	for k, d := range q.image {
		total += d * d
		if k >= count {
			curvature += d * d
		}
	}
	clear(q.move)
	if curvature <= dependent*dependent*total {
		curvature = 0
	} else {
		q.factor.combine(q.move, q.image, count, -sign)
	}
	q.factor.backSolve(q.shift, q.image, count)
	for k := range count {
		q.shift[k] *= -sign
	}
	return curvature
}

func (q *quadratic) imageOf(row int) {
	switch {
	case row < q.m:
		q.factor.image(q.image, q.normal[row*q.n:(row+1)*q.n])
	case row < q.m+q.n:
		q.factor.imageOfAxis(q.image, row-q.m, -1)
	default:
		q.factor.imageOfAxis(q.image, row-q.m-q.n, 1)
	}
}

// room is how far the multiplier of row may move in direction sign.
func (q *quadratic) room(row int, sign float64) float64 {
	least, most := q.multiplierRange(row)
	if sign > 0 {
		return max(0, most-q.multiplier[row])
	}
	return max(0, q.multiplier[row]-least)
}

// firstToLeave returns the active row whose multiplier first meets an end.
func (q *quadratic) firstToLeave() (leaving int, length float64) {
	leaving, length = -1, math.Inf(1)
	for k, row := range q.active {
		if q.shift[k] == 0 {
			continue
		}
		if t := q.room(row, q.shift[k]) / math.Abs(q.shift[k]); t < length {
			leaving, length = k, t
		}
	}
	return leaving, length
}

// release takes the active row at place k out of the active set, at the end of
// its range that it has reached.
func (q *quadratic) release(k int) {
	row := q.active[k]
	q.factor.remove(k, len(q.active))
	q.active = append(q.active[:k], q.active[k+1:]...)
	q.pin(row, q.shift[k])
}

// pin leaves a multiplier at the end of its range in direction sign.
func (q *quadratic) pin(row int, sign float64) {
	least, most := q.multiplierRange(row)
	switch {
	case sign > 0:
		q.multiplier[row], q.state[row] = most, capped
	case least < 0:
		q.multiplier[row], q.state[row] = least, floored
	default:
		q.multiplier[row], q.state[row] = 0, idle
	}
}

// refine recomputes p and the active multipliers from the final active set,
// which removes the rounding of the path: with u = J'(g + sum of pinned
// multipliers times their rows),
//
//	p = J y,  R'y1 = -c,  y2 = -u2,  R lambda = -(u1 + y1)
func (q *quadratic) refine() {
	count := len(q.active)
	copy(q.scratch, q.gradient)
	for row, multiplier := range q.multiplier[:q.m] {
		if q.state[row] == capped || q.state[row] == floored {
			for j, a := range q.normal[row*q.n : (row+1)*q.n] {
				q.scratch[j] += multiplier * a
			}
		}
	}
	q.factor.image(q.image, q.scratch)

	y := q.move
	clear(q.step)
	for k, row := range q.active {
		y[k] = -q.value(row)
	}
	q.factor.forwardSolve(y, count)
	for k := range q.n {
		if k >= count {
			y[k] = -q.image[k]
		} else {
			q.image[k] = -(q.image[k] + y[k])
		}
	}
	q.factor.backSolve(q.shift, q.image, count)
	for k, row := range q.active {
		least, most := q.multiplierRange(row)
		q.multiplier[row] = min(max(q.shift[k], least), most)
	}
	q.factor.combine(q.step, y, 0, 1)
}
