package wave

import (
	"math"

	"rampwright/problems/gas"
)

// limb is one front of a fan before it is placed.
type limb struct {
	angle    float64 // of a shock or slip line to the x axis
	strength float64 // |ln(p2/p1)| of a shock or one wavelet, |ln(pt2/pt1)| of a slip line
	slope    float64
	kind     Kind
	family   int8
	merged   bool   // carries the jump of limbs that were merged into it
	ledger   ledger // of a slip line
}

// fan is everything that leaves one event, bottom to top: limbs[i] lies between
// states[i] and states[i+1]. Its slices are scratch that a sweep reuses.
type fan struct {
	states  []State
	limbs   []limb
	down    []State // behind each front of the wave into the lower stream, outermost first
	up      []State // the same into the upper stream
	dropped Dropped

	downLimb, slipLimb, upLimb limb // of a crossing
	keep                       kept
}

// kept says which fronts of a crossing are sent out; the others are merged.
type kept struct{ down, slip, up bool }

// Dropped counts the waves and slip lines that crossings did not send out but
// merged into a neighbour because they were weaker than the threshold.
type Dropped struct {
	Waves    int
	Slips    int
	Strength float64 // sum of the merged strengths
}

// wave stores in chain the states behind the wave that takes a stream to ln(p/p0)
// = q, and returns how its fronts look: one shock, or wavelets of equal pressure
// ratio.
func (s *side) wave(chain []State, q float64, family int8, wavelet float64) ([]State, limb) {
	if q > s.log {
		behind, waveAngle := s.shocked(q, family)
		return append(chain[:0], behind), limb{
			kind: Shock, family: family, strength: q - s.log,
			angle: s.state.FlowAngle + float64(family)*waveAngle,
		}
	}
	parts := s.parts(q, wavelet)
	step := (q - s.log) / float64(parts)
	chain = chain[:0]
	for i := 1; i < parts; i++ {
		chain = append(chain, s.expanded(s.log+step*float64(i), family))
	}
	chain = append(chain, s.expanded(q, family)) // to the last bit, see inherit
	return chain, limb{kind: Wavelet, family: family, strength: -step}
}

// parts is the number of wavelets of an expansion to ln(p2/p0) = q: one for each
// `wavelet` of turning, or of half the angle that the fan spreads over, whichever
// is more. Near Mach 1 a fan spreads over several times its turning.
func (s *side) parts(q, wavelet float64) int {
	gain := s.gain(q - s.log)
	turned := s.fanAngle(gain)
	if turned < wavelet/4 {
		return 1
	}
	spread := turned + math.Asin(1/s.state.Mach) - math.Asin(1/math.Sqrt(s.square+gain))
	return max(1, int(math.Round(max(turned, spread/2)/wavelet)))
}

// offWall builds the fan that leaves a wall below (family +1) or above the stream.
func (f *fan) offWall(s *side, q float64, family int8, wavelet float64) {
	f.limbs = f.limbs[:0]
	var l limb
	if family < 0 {
		f.down, l = s.wave(f.down, q, family, wavelet)
		f.states = append(f.states[:0], s.state)
		f.addDown(l)
		return
	}
	f.up, l = s.wave(f.up, q, family, wavelet)
	f.states = append(f.states[:0], f.up[len(f.up)-1])
	f.addUp(l, s.state)
}

func (f *fan) addDown(l limb) {
	for _, state := range f.down {
		f.add(l, state)
	}
}

func (f *fan) addUp(l limb, stream State) {
	for i := len(f.up) - 2; i >= 0; i-- {
		f.add(l, f.up[i])
	}
	f.add(l, stream)
}

func (f *fan) add(l limb, next State) {
	f.limbs = append(f.limbs, l)
	f.states = append(f.states, next)
}

// crossing builds the fan between two streams joined at q: a wave down, a slip
// line, a wave up. A weak wave that the slip line does not send out yet (account),
// and a slip line below the threshold, are merged into the stronger of the two
// waves: the streams that enter the event and the other wave stay as they are, and
// the strong wave carries the sum of the jumps. Nothing is lost: the next event of
// that wave solves for the whole jump again, so that entropy steps gather until
// they pass the threshold.
func (f *fan) crossing(lower, upper *side, q float64, came ledger, m merging) {
	f.solve(lower, upper, q, m.wavelet)
	down, up, slip := &f.downLimb, &f.upLimb, &f.slipLimb
	upCarries := up.strength >= down.strength
	carrier := max(up.strength, down.strength)
	f.keep = kept{down: true, slip: slip.strength >= min(m.threshold, dominance*carrier), up: true}
	if upCarries {
		f.down, f.keep.down = came.down.settle(lower, f.down, down, -1, carrier, m)
	} else {
		f.up, f.keep.up = came.up.settle(upper, f.up, up, 1, carrier, m)
	}
	low, high := lower.state, upper.state // next to the slip line
	if f.keep.down {
		low = f.down[len(f.down)-1]
	}
	if f.keep.up {
		high = f.up[len(f.up)-1]
	}
	if upCarries {
		high, up.merged = inherit(lower.gas, high, low, f.keep.slip)
	} else {
		low, down.merged = inherit(lower.gas, low, high, f.keep.slip)
	}
	f.down[len(f.down)-1], f.up[len(f.up)-1] = low, high
	slip.ledger = came.born(m.x)
	f.assemble(lower, upper)
}

// whole builds the fan of a crossing with nothing merged, where aim fails for one
// with merged fronts.
func (f *fan) whole(lower, upper *side, q float64, came ledger, m merging) {
	f.solve(lower, upper, q, m.wavelet)
	f.keep = kept{true, true, true}
	f.slipLimb.ledger = came.born(m.x)
	f.assemble(lower, upper)
}

// assemble strings the fronts of a crossing that are kept.
func (f *fan) assemble(lower, upper *side) {
	f.limbs, f.states = f.limbs[:0], append(f.states[:0], lower.state)
	if f.keep.down {
		f.addDown(f.downLimb)
	}
	if f.keep.slip {
		f.slipLimb.angle = f.states[len(f.states)-1].FlowAngle
		f.add(f.slipLimb, f.up[len(f.up)-1])
	}
	if f.keep.up {
		f.addUp(f.upLimb, upper.state)
	}
}

// solve finds both waves and the slip line between them.
func (f *fan) solve(lower, upper *side, q, wavelet float64) {
	f.down, f.downLimb = lower.wave(f.down, q, -1, wavelet)
	f.up, f.upLimb = upper.wave(f.up, q, 1, wavelet)
	under, over := &f.down[len(f.down)-1], &f.up[len(f.up)-1]
	f.slipLimb = limb{kind: Slip, strength: math.Abs(math.Log(over.TotalPressure / under.TotalPressure))}
}

// inherit returns the state behind the carrying wave once the jumps between it and
// `other`, the state across the slip line, are merged into that wave: the other
// state itself where the slip line goes, its pressure and direction where the
// wave beyond it is not the one that was solved for.
func inherit(g gas.Perfect, own, other State, keepSlip bool) (state State, merged bool) {
	switch {
	case !keepSlip:
		return other, true
	case own.Pressure != other.Pressure:
		return own.moved(g, other.Pressure, other.FlowAngle), true
	}
	return own, false
}

// count enters what a crossing merged.
func (f *fan) count() {
	f.dropped.count(f.downLimb, f.keep.down)
	f.dropped.count(f.slipLimb, f.keep.slip)
	f.dropped.count(f.upLimb, f.keep.up)
}

func (d *Dropped) count(l limb, kept bool) {
	switch {
	case kept || l.strength < nothing:
		return
	case l.kind == Slip:
		d.Slips++
	default:
		d.Waves++
	}
	d.Strength += l.strength
}

// nothing is the strength of a wave that is only rounding.
const nothing = 1e-12

// aim sets the slope of every limb: a pure shock or slip line its own angle, a
// wavelet and whatever carries a merged jump the angle that closes mass. It fails
// where a front would lean upstream of the sweep, where a merged jump would turn its
// carrier by more than closingReach, or where two fronts would cross at birth.
func (f *fan) aim(g gas.Perfect) unsolved {
	for i := range f.limbs {
		if !(f.states[i+1].Mach >= 1) {
			return leaning
		}
		if why := f.slope(g, i); why != solved {
			return why
		}
		if i > 0 && f.limbs[i-1].slope > f.limbs[i].slope {
			return tangled
		}
	}
	return solved
}

func (f *fan) slope(g gas.Perfect, i int) unsolved {
	l, below, above := &f.limbs[i], &f.states[i], &f.states[i+1]
	angle := l.angle
	if l.kind == Wavelet { // the Mach line halfway, the limit of a closing wavelet
		angle = (below.FlowAngle+above.FlowAngle)/2 + float64(l.family)*math.Asin(2/(below.Mach+above.Mach))
	}
	if !(math.Abs(angle) < steepest) {
		return leaning
	}
	l.slope = math.Tan(angle)
	if l.kind != Wavelet && !l.merged {
		return solved
	}
	closed, ok := closing(g, below, above)
	switch {
	case ok && math.Abs(math.Atan(closed)-angle) < closingReach:
		l.slope = closed
	case l.merged:
		return tangled
	}
	return solved
}

const (
	// steepest is the steepest front of a sweep, rad.
	steepest = math.Pi/2 - 0.01
	// closingReach is how far a merged jump may lean a front away from its wave, rad.
	closingReach = 0.3
)
