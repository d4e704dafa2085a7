package wave

import "math"

// unsolved says why a steady Riemann problem has no supersonic solution.
type unsolved int8

const (
	solved    unsolved = iota
	beyond             // more turning than any attached shock gives
	subsonic           // solved by shocks, but the flow behind one is subsonic
	evacuated          // an expansion past vacuum
	leaning            // solved, but a wave leans upstream of the sweep
	tangled            // solved, but its fronts do not spread in order
)

// meet solves the steady Riemann problem of two streams, lower and upper, that
// meet in a point: the ln(p/p0) and flow angle of the slip line between them,
//
//	theta_lower - turning_lower(q) = theta_upper + turning_upper(q)
//
// because a shock running down into the lower stream turns it down and one
// running up into the upper stream turns it up.
func meet(lower, upper *side) (q float64, why unsolved) {
	return balance(lower, upper, lower.state.FlowAngle-upper.state.FlowAngle)
}

// alongWall solves the same problem for one stream turned into itself by angle:
// positive compresses.
func alongWall(s *side, angle float64) (q float64, why unsolved) { return balance(s, nil, angle) }

// balance finds q with turning_a(q) + turning_b(q) = angle, b absent for a wall.
// The sum rises in q up to the first sonic shock. Newton's iteration from
// linearised theory finds the solution of most problems in three steps; bracket
// takes the rest. Accuracy: a few units of rounding in q over the softness of the
// waves.
func balance(a, b *side, angle float64) (q float64, why unsolved) {
	q = a.log + angle/a.softness()
	if b != nil {
		softA, softB := a.softness(), b.softness()
		q = (softA*a.log + softB*b.log + angle) / (softA + softB)
	}
	start := q
	for range easyNewton {
		if !(a.easy(q) && (b == nil || b.easy(q))) {
			break
		}
		turned, slope := total(a, b, q)
		step := (angle - turned) / slope
		q += step
		// The next step would be of the order of this one squared.
		if math.Abs(step) <= 1e-9 {
			if a.easy(q) && (b == nil || b.easy(q)) {
				return q, solved
			}
			break
		}
	}
	return bracket(a, b, angle, start)
}

// easy reports whether a wave to ln(p2/p0) = q is far from vacuum and no more than
// sonic (NACA Report 1135 eq. 167), without a logarithm.
func (s *side) easy(q float64) bool {
	rise := q - s.log
	if rise <= 0 {
		return rise > -2 && s.square < 1e4
	}
	// p2/p1 <= e^rise bound: 1 + rise + rise^2/2 + rise^3/3 holds up to rise = 1.
	gamma := s.gas.Gamma
	excess := rise * (1 + rise*(0.5+rise/3)) * (gamma + 1) / (2 * gamma)
	return rise < 1 && excess < s.sonicSquare()-1
}

// bracket solves balance by Newton's iteration from q, kept between vacuum and the
// first sonic shock.
func bracket(a, b *side, angle, q float64) (float64, unsolved) {
	low, high := a.vacuum(), a.sonic()
	if b != nil {
		low, high = math.Min(low, b.vacuum()), math.Min(high, b.sonic())
	}
	floor := low
	if turned, _ := total(a, b, high); turned < angle {
		return math.NaN(), classify(a, b, angle)
	}
	for range maxNewton {
		if !(q > low && q < high) {
			q = low + (high-low)/2
		}
		turned, slope := total(a, b, q)
		if turned < angle {
			low = q
		} else {
			high = q
		}
		step := (angle - turned) / slope
		q += step
		if math.Abs(step) <= 2e-16*(1+math.Abs(q)) || high-low <= 1e-16*(1+math.Abs(q)) {
			break
		}
	}
	if q <= floor+evacuatedWithin {
		return math.NaN(), evacuated
	}
	return math.Min(q, high), solved
}

const (
	// evacuatedWithin is how near, in ln p, a solution may come to vacuum.
	evacuatedWithin = 1e-3
	// maxNewton exhausts the mantissa even where every step bisects.
	maxNewton = 80
	// easyNewton is enough for waves that linearised theory puts nearly right.
	easyNewton = 6
)

// total is the turning of both waves and its slope in q.
func total(a, b *side, q float64) (turned, slope float64) {
	turned, slope = a.turning(q)
	if b != nil {
		turnedB, slopeB := b.turning(q)
		turned, slope = turned+turnedB, slope+slopeB
	}
	return turned, slope
}

// classify says why the turnings up to the first sonic shock do not add up to
// angle.
func classify(a, b *side, angle float64) unsolved {
	limit := a.detachment()
	if b != nil {
		limit = math.Min(limit, b.detachment())
	}
	if turned, _ := total(a, b, limit); turned < angle {
		return beyond
	}
	return subsonic
}
