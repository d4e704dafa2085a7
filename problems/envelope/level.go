package envelope

import "math"

// place is a point of the map in cells of the grid: (0, 0) the low corner, one
// unit the distance of two neighbours.
type place struct{ x, y float64 }

func (p place) plus(q place) place        { return place{p.x + q.x, p.y + q.y} }
func (p place) minus(q place) place       { return place{p.x - q.x, p.y - q.y} }
func (p place) times(k float64) place     { return place{k * p.x, k * p.y} }
func (p place) length() float64           { return math.Hypot(p.x, p.y) }
func between(p, q place, t float64) place { return p.plus(q.minus(p).times(t)) }

// level is a signed function on the map, NaN where it is not defined, whose zero
// is looked for. A value of 0 counts as positive.
type level struct {
	value     func(p place) (float64, error)
	tolerance float64 // of a root, cells
	flatness  float64 // of a chord from its line, cells
	width     float64 // of the map, cells
	height    float64
}

// vertex is a point of the zero: on the positive side, the root within tolerance,
// and the unit direction from the negative side to the positive one.
type vertex struct {
	place
	uphill place
	left   float64 // the function at the point
}

// root finds a sign change between two places of opposite sign by ITP, which
// interpolates where the function is smooth and is never slower than one step more
// than bisection, whatever the function does (Oliveira & Takahashi, ACM Trans.
// Math. Softw. 47, 2020; from memory):
//
//	x_f = (b f(a) - a f(b)) / (f(a) - f(b))            regula falsi
//	x_t = x_f + sigma min(k1 (b-a)^k2, |x_1/2 - x_f|)  truncated toward the middle
//	|x - x_1/2| <= epsilon 2^(n - j) - (b-a)/2         projected
//
// with k1 = 0.2/(b0 - a0), k2 = 2, n0 = 1. The function may jump; the sign is all
// that is asked of it. ok is false where it is not defined on the way.
func (l *level) root(p, q place, fp, fq float64) (v vertex, ok bool, err error) {
	if fp < 0 {
		p, q, fp, fq = q, p, fq, fp
	}
	length := q.minus(p).length()
	if !(length > 0) {
		return vertex{}, false, nil
	}
	a, b, epsilon := 0.0, 1.0, 0.5*l.tolerance/length
	most := max(0, math.Ceil(math.Log2(1/(2*epsilon)))) + 1
	for j := 0.0; b-a > 2*epsilon; j++ {
		middle, radius := (a+b)/2, epsilon*math.Exp2(most-j)-(b-a)/2
		falsi := (b*fp - a*fq) / (fp - fq)
		toward := math.Copysign(1, middle-falsi)
		t := middle
		if shift := 0.2 * (b - a) * (b - a); shift <= math.Abs(middle-falsi) {
			t = falsi + toward*shift
		}
		if math.Abs(t-middle) > radius {
			t = middle - toward*radius
		}
		f, err := l.value(between(p, q, t))
		if err != nil || math.IsNaN(f) {
			return vertex{}, false, err
		}
		if f >= 0 {
			a, fp = t, f
		} else {
			b, fq = t, f
		}
	}
	return vertex{between(p, q, a), p.minus(q).times(1 / length), fp}, true, nil
}

// holds reports whether a place lies on the map.
func (l *level) holds(p place) bool {
	return p.x >= 0 && p.y >= 0 && p.x <= l.width && p.y <= l.height
}

// correct finds the zero nearest a place along a direction that leads uphill, no
// farther than reach; ok is false where there is none.
func (l *level) correct(at place, uphill place, reach float64) (v vertex, ok bool, err error) {
	f, err := l.value(at)
	if err != nil || math.IsNaN(f) {
		return vertex{}, false, err
	}
	way := uphill
	if f >= 0 {
		way = uphill.times(-1)
	}
	from, ff := at, f
	for _, share := range [...]float64{1. / 64, 1. / 16, 1. / 4, 1} {
		to := at.plus(way.times(share * reach))
		if !l.holds(to) {
			return vertex{}, false, nil
		}
		ft, err := l.value(to)
		if err != nil || math.IsNaN(ft) {
			return vertex{}, false, err
		}
		if (ff >= 0) != (ft >= 0) {
			return l.root(from, to, ff, ft)
		}
		from, ff = to, ft
	}
	return vertex{}, false, nil
}

// deepest bounds the halvings of a chord.
const deepest = 6

// refine returns the points to put between two neighbours of a line so that no
// chord leaves it by more than the flatness.
func (l *level) refine(p, q vertex, depth int) ([]vertex, error) {
	chord := q.minus(p.place)
	length := chord.length()
	if depth == deepest || length < 4*l.flatness {
		return nil, nil
	}
	uphill := place{-chord.y, chord.x}.times(1 / length)
	if uphill.x*p.uphill.x+uphill.y*p.uphill.y < 0 {
		uphill = uphill.times(-1)
	}
	middle := between(p.place, q.place, 0.5)
	v, ok, err := l.correct(middle, uphill, length/2)
	if err != nil || !ok || v.minus(middle).length() < l.flatness {
		return nil, err
	}
	before, err := l.refine(p, v, depth+1)
	if err != nil {
		return nil, err
	}
	after, err := l.refine(v, q, depth+1)
	return append(append(before, v), after...), err
}

// Steps of following a line past the last edge of the grid it crosses, in cells.
const (
	longestStep  = 0.5
	shortestStep = 1. / 64
	mostSteps    = 64
)

// follow goes on from the end of a line in a direction, by steps along the line's
// own tangent, to where it leaves the map, is no longer defined, or comes to where
// the grid has it: `marched` reports that.
func (l *level) follow(from vertex, along place, marched func(place) bool) ([]vertex, error) {
	var list []vertex
	step := longestStep
	for range mostSteps {
		next, ok, err := l.step(from, along, step)
		if err != nil {
			return nil, err
		}
		if !ok {
			if step /= 2; step < shortestStep {
				break
			}
			continue
		}
		list = append(list, next)
		along = next.minus(from.place)
		along = along.times(1 / along.length())
		from = next
		if marched(from.place) {
			break
		}
	}
	return list, nil
}

// step predicts along the tangent and corrects across it.
func (l *level) step(from vertex, along place, step float64) (v vertex, ok bool, err error) {
	to := from.plus(along.times(step))
	if !l.holds(to) {
		return vertex{}, false, nil
	}
	uphill := place{-along.y, along.x}
	if uphill.x*from.uphill.x+uphill.y*from.uphill.y < 0 {
		uphill = uphill.times(-1)
	}
	v, ok, err = l.correct(to, uphill, step)
	if ok && v.minus(from.place).length() < step/4 {
		ok = false
	}
	return v, ok, err
}
