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
	merged   bool // carries the jump of limbs that were merged into it
}

// fan is everything that leaves one event, bottom to top: limbs[i] lies between
// states[i] and states[i+1]. Its slices are scratch that a sweep reuses.
type fan struct {
	states  []State
	limbs   []limb
	down    []State // behind each front of the wave into the lower stream, outermost first
	up      []State // the same into the upper stream
	dropped Dropped
}

// Dropped counts the waves and slip lines that crossings did not send out but
// merged into a neighbour because they were weaker than the threshold.
type Dropped struct {
	Waves    int
	Slips    int
	Strength float64 // sum of the merged strengths
}

// incoming says which families already run into a crossing.
type incoming struct{ down, slip, up bool }

// slipThreshold is the threshold of a slip line over that of a wave: half a step
// of total pressure gathers on average before it is let go.
const slipThreshold = 2

// lingering is the part of a threshold below which a family that came in is merged
// on its way out.
const lingering = 0.5

// dominance is the most that a merged front may have of the strength of the front
// that carries it, so that the carrier still runs nearly as it would alone.
const dominance = 0.3

// wave stores in chain the states behind the wave that takes a stream to ln(p/p0)
// = q, and returns how its fronts look: one shock, or round(turning/wavelet)
// wavelets of equal pressure ratio.
func (s *side) wave(chain []State, q float64, family int8, wavelet float64) ([]State, limb) {
	if q > s.log {
		behind, waveAngle := s.shocked(q, family)
		return append(chain[:0], behind), limb{
			kind: Shock, family: family, strength: q - s.log,
			angle: s.state.FlowAngle + float64(family)*waveAngle,
		}
	}
	turned, _ := s.turning(q)
	parts := max(1, int(math.Round(-turned/wavelet)))
	step := (q - s.log) / float64(parts)
	chain = chain[:0]
	for i := 1; i <= parts; i++ {
		chain = append(chain, s.expanded(s.log+step*float64(i), family))
	}
	return chain, limb{kind: Wavelet, family: family, strength: -step}
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
// line, a wave up. What is weaker than the threshold is merged into the stronger
// of the two waves: the streams that enter the event and the other wave stay as
// they are, and the strong wave carries the sum of the jumps. Nothing is lost: the
// next event of that wave solves for the whole jump again, so that small
// reflections and entropy steps gather until they pass the threshold.
func (f *fan) crossing(lower, upper *side, q float64, came incoming, wavelet, threshold float64) {
	var down, up limb
	f.down, down = lower.wave(f.down, q, -1, wavelet)
	f.up, up = upper.wave(f.up, q, 1, wavelet)
	under, over := &f.down[len(f.down)-1], &f.up[len(f.up)-1]
	slip := limb{kind: Slip, angle: under.FlowAngle, strength: math.Abs(math.Log(over.TotalPressure / under.TotalPressure))}

	upCarries := up.strength >= down.strength
	carrier := max(up.strength, down.strength)
	weak := func(l limb, limit float64, came bool) bool {
		if came {
			limit *= lingering
		}
		return l.strength < min(limit, dominance*carrier)
	}
	keepSlip := !weak(slip, slipThreshold*threshold, came.slip)
	keepDown := !upCarries || len(f.down) > 1 || !weak(down, threshold, came.down)
	keepUp := upCarries || len(f.up) > 1 || !weak(up, threshold, came.up)
	low, high := lower.state, upper.state // next to the slip line
	if keepDown {
		low = *under
	}
	if keepUp {
		high = *over
	}
	if upCarries {
		high, up.merged = inherit(lower.gas, high, low, keepSlip, keepDown)
		*over = high
	} else {
		low, down.merged = inherit(lower.gas, low, high, keepSlip, keepUp)
		*under = low
	}

	f.limbs, f.states = f.limbs[:0], append(f.states[:0], lower.state)
	if keepDown {
		f.addDown(down)
	}
	if keepSlip {
		slip.angle = low.FlowAngle
		f.add(slip, high)
	}
	if keepUp {
		f.addUp(up, upper.state)
	}
	f.count(slip, keepSlip)
	f.count(down, keepDown)
	f.count(up, keepUp)
}

// inherit returns the state behind the carrying wave once the jumps between it and
// `other`, the state across the slip line, are merged into that wave: the other
// state itself where the slip line goes, its pressure and direction where the
// wave beyond it goes.
func inherit(g gas.Perfect, own, other State, keepSlip, keepWave bool) (state State, merged bool) {
	switch {
	case !keepSlip:
		return other, true
	case !keepWave:
		return own.moved(g, other.Pressure, other.FlowAngle), true
	}
	return own, false
}

func (f *fan) count(l limb, kept bool) {
	switch {
	case kept || l.strength < nothing:
		return
	case l.kind == Slip:
		f.dropped.Slips++
	default:
		f.dropped.Waves++
	}
	f.dropped.Strength += l.strength
}

// nothing is the strength of a wave that is only rounding.
const nothing = 1e-12

// aim sets the slope of every limb: a pure shock or slip line its own angle, a
// wavelet and whatever carries a merged jump the angle that closes mass, unless
// that strays from the wave by more than closingReach. It fails where a front would
// lean upstream of the sweep, or two would cross at birth.
func (f *fan) aim(g gas.Perfect) unsolved {
	for i := range f.limbs {
		if !f.slope(g, i) {
			return leaning
		}
		if i > 0 && f.limbs[i-1].slope > f.limbs[i].slope {
			return tangled
		}
	}
	return solved
}

func (f *fan) slope(g gas.Perfect, i int) bool {
	l, below, above := &f.limbs[i], &f.states[i], &f.states[i+1]
	angle := l.angle
	if l.kind == Wavelet { // the Mach line halfway, the limit of a closing wavelet
		angle = (below.FlowAngle+above.FlowAngle)/2 + float64(l.family)*math.Asin(2/(below.Mach+above.Mach))
	}
	if !(math.Abs(angle) < steepest) {
		return false
	}
	l.slope = math.Tan(angle)
	if l.kind == Wavelet || l.merged {
		if slope, ok := closing(g, below, above); ok && math.Abs(math.Atan(slope)-angle) < closingReach {
			l.slope = slope
		}
	}
	return true
}

const (
	// steepest is the steepest front of a sweep, rad.
	steepest = math.Pi/2 - 0.01
	// closingReach is how far a merged jump may lean a front away from its wave, rad.
	closingReach = 0.3
)
