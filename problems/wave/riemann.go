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
// The sum rises in q up to the first sonic shock, so that Newton's iteration from
// linearised theory, kept inside a bracket, finds the only supersonic solution.
// Accuracy: a few units of rounding in q over the softness of the waves.
func balance(a, b *side, angle float64) (q float64, why unsolved) {
	low, high := a.vacuum(), a.sonic()
	q = a.log + angle/a.softness()
	if b != nil {
		softA, softB := a.softness(), b.softness()
		q = (softA*a.log + softB*b.log + angle) / (softA + softB)
		low, high = math.Min(low, b.vacuum()), math.Min(high, b.sonic())
	}
	floor := low
	if total(a, b, high) < angle {
		return math.NaN(), classify(a, b, angle)
	}
	for range maxNewton {
		if !(q > low && q < high) {
			q = low + (high-low)/2
		}
		turned, slope := a.turning(q)
		if b != nil {
			turnedB, slopeB := b.turning(q)
			turned, slope = turned+turnedB, slope+slopeB
		}
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
)

func total(a, b *side, q float64) float64 {
	turned, _ := a.turning(q)
	if b != nil {
		turnedB, _ := b.turning(q)
		turned += turnedB
	}
	return turned
}

// classify says why the turnings up to the first sonic shock do not add up to
// angle.
func classify(a, b *side, angle float64) unsolved {
	limit := a.detachment()
	if b != nil {
		limit = math.Min(limit, b.detachment())
	}
	if total(a, b, limit) < angle {
		return beyond
	}
	return subsonic
}
