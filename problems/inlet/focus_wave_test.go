package inlet

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/contour"
)

// At shock-on-lip all ramp shocks cross in the focus, and one wave leaves it
// toward the body, at the Mach angle of the flow of the last ramp. A lip set
// back stands in that flow just where the wave does not descend below it:
// phi_n >= asin(1/M_n). One ramp has no crossing.
func TestSetBackLipAndTheFocusWave(t *testing.T) {
	var closed share
	rapid.Check(t, func(t *rapid.T) {
		d := anyDefinition(t)
		d.LipSetback = Fixed(rapid.Float64Range(1e-4, 0.01).Draw(t, "setback"))
		a := flowAt(t, d, first{}, 0)
		n := a.design.Ramps
		lift := a.design.TotalTurning() - math.Asin(1/a.lipMach)
		if !closed.count(a.shape.err == nil && math.Abs(lift) > 1e-4) {
			return // no duct, or the wave runs along the lip level
		}
		stands := n == 1 || lift > 0
		if (a.placeErr == nil) != stands || (a.placeErr != nil && phrase(a.placeErr) != errFocusWave.Phrase) {
			t.Fatalf("%d ramps, flow angle %v, Mach angle %v: status %v", n, a.design.TotalTurning(), math.Asin(1/a.lipMach), a.placeErr)
		}
	})
	closed.atLeast(t, 0.8)
}

// Three equal ramps at Mach 4, either side of the bound: 18.9 deg against a Mach
// angle of 20.7 deg behind them, and 22.5 deg against 22.2 deg. (Behind two ramps
// of 7.5 deg the Mach angle is 19.3 deg: a bound on them would be wrong.)
func TestFocusWaveByExample(t *testing.T) {
	for turning, want := range map[float64]string{6.3: errFocusWave.Phrase, 7.5: ""} {
		d := veyric().at(4, 0).lipTurned(5)
		d.RampAngle = []Setting{Fixed(turning), Fixed(turning), Fixed(turning)}
		d.ShockOnLip, d.LipSetback = Fixed(4), Fixed(0.005)
		a := flowAt(t, d, first{}, 0)
		if got := phrase(a.placeErr); got != want {
			t.Errorf("three ramps of %v deg, Mach angle %v deg: status %q, want %q", turning, math.Asin(1/a.lipMach)/radian, got, want)
		}
	}
}

// Away from shock-on-lip the wave of each crossing is followed in small steps,
// at the Mach angle of the flow it is in: the lip is behind it where it has sunk
// below the lip level on arrival.
func TestWavesOfCrossingShocksFollowedInSteps(t *testing.T) {
	var reached, behindLip share
	rapid.Check(t, func(t *rapid.T) {
		d := anyDefinition(t)
		for _, slower := range []float64{1, 0.999, 0.99, 0.97, 0.94, 0.9} {
			for _, setback := range []float64{0, 0.002, 0.01} {
				d.LipSetback, d.Points[0].Mach = Fixed(setback), slower*d.ShockOnLip.Value
				a := flowAt(t, d, first{}, 0)
				behind := phrase(a.placeErr) == errFocusWave.Phrase
				if !reached.count(a.placeErr == nil || behind) {
					continue
				}
				behindLip.count(behind)
				lowest := a.lowestWave()
				if math.Abs(lowest) > 1e-4 && behind != (lowest < 0) {
					t.Fatalf("%+v: status %v, the lowest wave passes the lip at %v capture heights above it", d, a.placeErr, lowest)
				}
			}
		}
	})
	reached.atLeast(t, 0.8)
	behindLip.atLeast(t, 0.05)
}

// lowestWave is the least height above the lip, in capture heights, at which a
// wave from a crossing ahead of the lip passes it.
func (a *analysis) lowestWave() float64 {
	lowest := math.Inf(1)
	for i := 1; i < a.design.Ramps; i++ {
		crossing, ok := contour.Meet(a.shockLine(i-1), a.shockLine(i))
		if ok && crossing.X < a.shape.Lip.X {
			lowest = math.Min(lowest, (a.stepped(crossing, i)-a.shape.Lip.Y)/a.shape.height)
		}
	}
	return lowest
}

// stepped follows the Mach wave that leaves place toward the body in the flow of
// ramp i or further, in steps, and returns its height at the lip's x.
func (a *analysis) stepped(place contour.Point, i int) float64 {
	step := (a.shape.Lip.X - place.X) / 500
	for range 500 {
		region := i
		for k := i + 1; k < a.design.Ramps; k++ {
			if a.shockLine(k).Height(place) <= 0 {
				region = k
			}
		}
		slope := math.Tan(a.shape.Angles[region] - math.Asin(1/a.waves[region].Mach2))
		place.X += step
		place.Y += slope * step
	}
	return place.Y
}
