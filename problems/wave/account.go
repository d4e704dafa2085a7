package wave

import "math"

// merging is the resolution at one crossing.
type merging struct {
	wavelet   float64 // turning of a wavelet, rad
	threshold float64 // of |ln(pt2/pt1)| of a slip line
	reach     float64 // distance over which reflections are gathered
	x         float64 // of the crossing, in the frame of the sweep
}

const (
	// waveThreshold is the threshold of a wave over that of a slip line. What an
	// account owes is sent out sooner or later; a merged entropy step runs along a
	// shock until that ends.
	waveThreshold = 2
	// gathering is the reach of an account over capture height, for a threshold of 1.
	gathering = 25
	// farthest is the most that the reach may raise the threshold of a wave.
	farthest = 8
	// dominance is the most that a merged front may have of the strength of the front
	// that carries it, so that the carrier still runs nearly as it would alone.
	dominance = 0.3
)

// account is what crossings along a slip line should have sent out as waves of one
// family and did not: a fan that crosses a slip line is reflected from it wavelet
// by wavelet, each reflection below the threshold though their sum is not. One
// wave that carries the sum stands for them.
type account struct {
	owed  float64 // ln(p2/p1)
	since float64 // x of the last wave, or the birth of the slip line
}

// settle decides whether a crossing sends out its weak wave, chain, into the stream
// s, and returns the wave changed to what is due and what is owed together. The sum
// is sent once it exceeds
//
//	waveThreshold threshold max(1, min(farthest, reach/(x - since)))
//
// so that many reflections in little space, behind a thin layer at a wall, become
// few. A wave that would be no small part of its carrier is sent as it is.
func (a *account) settle(s *side, chain []State, l *limb, family int8, carrier float64, m merging) ([]State, bool) {
	if len(chain) > 1 || l.strength >= dominance*carrier {
		return chain, true
	}
	sum := a.owed + math.Log(chain[0].Pressure) - s.log
	limit := waveThreshold * m.threshold * max(1, min(farthest, m.reach/(m.x-a.since)))
	if size := math.Abs(sum); size < limit || size >= dominance*carrier {
		a.owed = sum
		return chain, false
	}
	if a.owed != 0 {
		chain, *l = s.wave(chain, s.log+sum, family, math.Inf(1))
	}
	*a = account{since: m.x}
	return chain, true
}

// ledger holds the accounts of a slip line for waves that leave it down and up.
type ledger struct{ down, up account }

// blank is the ledger of a crossing without slip lines.
var blank = ledger{account{since: math.Inf(-1)}, account{since: math.Inf(-1)}}

// plus joins the ledgers of slip lines that meet in one crossing.
func (l ledger) plus(other ledger) ledger {
	return ledger{l.down.plus(other.down), l.up.plus(other.up)}
}

func (a account) plus(b account) account {
	return account{a.owed + b.owed, max(a.since, b.since)}
}

// born is the ledger of the slip line that leaves a crossing at x.
func (l ledger) born(x float64) ledger {
	for _, a := range []*account{&l.down, &l.up} {
		if math.IsInf(a.since, -1) {
			a.owed, a.since = 0, x
		}
	}
	return l
}
