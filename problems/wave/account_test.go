package wave

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/gas"
)

// Reflections along a slip line are sent out late and together, but none is lost:
// what was sent and what is owed add up to what was due.
func TestAccountLosesNothing(t *testing.T) {
	sentWaves, gathered := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		s := newSide(gas.Air, drawState(t, "stream"))
		m := merging{
			wavelet:   degree,
			threshold: math.Exp(rapid.Float64Range(-9, -6).Draw(t, "ln threshold")),
			reach:     rapid.Float64Range(0, 2).Draw(t, "reach"),
		}
		account := blank.born(0).down
		const carrier = 0.1
		due, sent := 0.0, 0.0
		for m.x = 0.1; m.x < 5; m.x += 0.1 {
			// Weaker than what is sent at once, a share of dominance.
			q := rapid.Float64Range(-0.3, 1).Draw(t, "reflection") * 0.9 * dominance * carrier
			chain, l := s.wave(nil, s.log+q, -1, math.Inf(1))
			chain, kept := account.settle(&s, chain, &l, -1, carrier, m)
			due += q
			if !kept {
				continue
			}
			sentWaves++
			wave := math.Log(chain[0].Pressure) - s.log
			near(t, "strength of the limb", l.strength, math.Abs(wave), 1e-12)
			if math.Abs(wave-q) > 1e-9 {
				gathered++
			}
			if math.Abs(wave) < waveThreshold*m.threshold {
				t.Fatalf("a wave of %g was sent, threshold %g", wave, m.threshold)
			}
			sent += wave
		}
		near(t, "sent and owed", sent+account.owed, due, 1e-12)
	})
	if sentWaves < 100 || gathered < 50 {
		t.Errorf("%d waves, %d gathered: too few", sentWaves, gathered)
	}
}
