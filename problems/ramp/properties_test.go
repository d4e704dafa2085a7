package ramp

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/contour"
	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

func anyGas(t *rapid.T) gas.Perfect {
	gamma := rapid.OneOf(rapid.SampledFrom([]float64{1.4, 1.4, 1.3, 1.05, 5.0 / 3}), rapid.Float64Range(1.05, 5.0/3)).Draw(t, "gamma")
	return gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}
}

// anyChain draws a chain of attached shocks: each turning is a share of the
// largest attached one, at most `most`, and the flow stays supersonic.
func anyChain(t *rapid.T, g gas.Perfect, ramps int, most float64) (mach float64, turning []float64) {
	mach = rapid.OneOf(rapid.SampledFrom([]float64{1.5, 2, 10}), rapid.Float64Range(1.5, 10)).Draw(t, "mach")
	ahead := mach
	for range ramps {
		// The least of detachment and sonic flow behind, less a little.
		largest, _ := shock.SonicTurning(g, ahead)
		share := rapid.OneOf(rapid.SampledFrom([]float64{1e-9, 1e-3, most}), rapid.Float64Range(1e-3, most)).Draw(t, "share")
		theta := share * largest
		wave, err := shock.WeakBracketed(g, ahead, theta)
		if err != nil || wave.Mach2 < 1.02 {
			break
		}
		turning = append(turning, theta)
		ahead = wave.Mach2
	}
	return mach, turning
}

func within(t *rapid.T, what string, got, want, tolerance float64) {
	if !(math.Abs(got-want) <= tolerance) {
		t.Fatalf("%s: %v, want %v within %g (off by %.3g)", what, got, want, tolerance, got-want)
	}
}

// The chain is the product of single shocks of the second route.
func TestChainIsTheProductOfItsShocks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := anyGas(t)
		mach, turning := anyChain(t, g, rapid.IntRange(1, MaxRamps).Draw(t, "ramps"), 0.95)
		waves := make([]shock.Oblique, len(turning))
		if attached, err := March(g, mach, turning, waves); err != nil || attached != len(turning) {
			t.Fatalf("%d attached, %v", attached, err)
		}
		product, ahead := 1.0, mach
		for i, theta := range turning {
			wave, err := shock.WeakBracketed(g, ahead, theta)
			if err != nil {
				t.Fatal(err)
			}
			within(t, "wave angle", waves[i].WaveAngle, wave.WaveAngle, 1e-10)
			within(t, "Mach number behind", waves[i].Mach2, wave.Mach2, 1e-10*wave.Mach2)
			product *= wave.Jump.TotalPressure
			ahead = wave.Mach2
		}
		recovery, behind, ok := Recovery(g, mach, turning)
		if !ok {
			t.Fatal("chain detached")
		}
		within(t, "recovery", recovery, product, 1e-10*product)
		within(t, "Mach number behind the chain", behind, ahead, 1e-10*ahead)
	})
}

// Rounding of the power 1/(g-1) grows with it: four units in the last place for
// gamma 1.4, times 0.4/(g-1) for others, a shock.
func TestRecoveryNeverAboveOne(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := anyGas(t)
		mach, turning := anyChain(t, g, rapid.IntRange(1, MaxRamps).Draw(t, "ramps"), 0.95)
		recovery, behind, ok := Recovery(g, mach, turning)
		// Rounding of the ratios of pressure and density, raised to g/(g-1) and 1/(g-1);
		// at 1.4 square roots take the place of powers.
		powers := 6.0
		if g.Gamma != 1.4 {
			powers = 2 * (g.Gamma + 1) / (g.Gamma - 1)
		}
		slack := powers * 2.220446049250313e-16 * float64(len(turning))
		if !ok || !(recovery > 0) || !(recovery <= 1+slack) || !(behind <= mach) {
			t.Fatalf("recovery %v, Mach number behind %v", recovery, behind)
		}
	})
}

func TestEmptyChainChangesNothing(t *testing.T) {
	recovery, behind, ok := Recovery(gas.Air, 3, nil)
	if recovery != 1 || behind != 3 || !ok {
		t.Errorf("recovery %v, Mach %v, %v", recovery, behind, ok)
	}
}

// differences is the central difference of f by x[i], extrapolated once
// (Richardson) from steps h and h/2, so that its error is of order h^4.
func differences(f func(x []float64) float64, x []float64, i int, h float64) float64 {
	slope := func(h float64) float64 {
		y := append([]float64(nil), x...)
		y[i] = x[i] + h
		up := f(y)
		y[i] = x[i] - h
		return (up - f(y)) / (2 * h)
	}
	return (4*slope(h/2) - slope(h)) / 3
}

func norm(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}

// checkGradient compares both gradients with finite differences, relative to
// their length.
func checkGradient(t interface {
	Helper()
	Fatalf(string, ...any)
}, g gas.Perfect, mach float64, turning []float64, h, tolerance float64) {
	t.Helper()
	n := len(turning)
	slope, machSlope := make([]float64, n), make([]float64, n)
	recovery, behind, ok := RecoveryGradient(g, mach, turning, slope, machSlope)
	plain, plainBehind, _ := Recovery(g, mach, turning)
	if !ok || recovery != plain || behind != plainBehind {
		t.Fatalf("value with derivatives %v %v, without %v %v", recovery, behind, plain, plainBehind)
	}
	recoveryOf := func(x []float64) float64 { value, _, _ := Recovery(g, mach, x); return value }
	machOf := func(x []float64) float64 { _, value, _ := Recovery(g, mach, x); return value }
	for i := range turning {
		if want := differences(recoveryOf, turning, i, h); !(math.Abs(slope[i]-want) <= tolerance*norm(slope)) {
			t.Fatalf("gamma %v, Mach %v, turning %v: d recovery/d turning %d is %v, differences say %v", g.Gamma, mach, turning, i, slope[i], want)
		}
		if want := differences(machOf, turning, i, h); !(math.Abs(machSlope[i]-want) <= tolerance*norm(machSlope)) {
			t.Fatalf("gamma %v, Mach %v, turning %v: d Mach/d turning %d is %v, differences say %v", g.Gamma, mach, turning, i, machSlope[i], want)
		}
	}
}

func TestGradientAgainstDifferences(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := anyGas(t)
		mach := rapid.Float64Range(2.5, 10).Draw(t, "mach")
		var turning []float64
		ahead := mach
		for range rapid.IntRange(1, 6).Draw(t, "ramps") {
			largest, _ := shock.SonicTurning(g, ahead)
			theta := rapid.Float64Range(0.02, 0.6).Draw(t, "share") * largest
			wave, err := shock.WeakBracketed(g, ahead, theta)
			if err != nil || wave.Mach2 < 1.3 {
				break
			}
			turning = append(turning, theta)
			ahead = wave.Mach2
		}
		checkGradient(t, g, mach, turning, 2e-4, 1e-7)
	})
}

// At the optimum of the chain with a terminal shock, and just inside
// detachment of the last shock, where the derivatives grow without bound.
func TestGradientAtHardPoints(t *testing.T) {
	for _, gamma := range []float64{1.2, 1.4, 5.0 / 3} {
		g := gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}
		optimum := EqualStrength(g, 3, 3)
		checkGradient(t, g, 3, optimum.Turning, 2e-4, 1e-6)

		_, behind, ok := Recovery(g, 4, []float64{0.1, 0.15})
		if !ok {
			t.Fatal("chain detached")
		}
		largest, _ := shock.LargestTurning(g, behind)
		checkGradient(t, g, 4, []float64{0.1, 0.15, 0.999 * largest}, 1e-5, 1e-6)
	}
}

// The total derivative of recovery with a terminal shock vanishes at the
// optimum: d ln(pi) + d ln(pt2/pt1)/dM dM = 0.
func TestGradientVanishesAtTheOptimum(t *testing.T) {
	for n := 1; n <= 4; n++ {
		optimum := EqualStrength(gas.Air, 3, n)
		slope, machSlope := make([]float64, n), make([]float64, n)
		recovery, behind, _ := RecoveryGradient(gas.Air, 3, optimum.Turning, slope, machSlope)
		terminal := func(x []float64) float64 { _, jump := shock.Normal(gas.Air, x[0]); return jump.TotalPressure }
		_, jump := shock.Normal(gas.Air, behind)
		byMach := differences(terminal, []float64{behind}, 0, 1e-4)
		for i := range slope {
			if total := slope[i]*jump.TotalPressure + recovery*byMach*machSlope[i]; math.Abs(total) > 1e-6 {
				t.Errorf("%d ramps: slope %v by turning %d at the optimum", n, total, i+1)
			}
		}
	}
}

// Either gradient alone equals both together.
func TestGradientsOneByOne(t *testing.T) {
	n := len(fourRamps)
	both, bothMach := make([]float64, n), make([]float64, n)
	RecoveryGradient(gas.Air, 7, fourRamps, both, bothMach)
	alone := make([]float64, n)
	RecoveryGradient(gas.Air, 7, fourRamps, alone, nil)
	for i := range alone {
		if alone[i] != both[i] {
			t.Errorf("recovery slope %d alone %v, with the other %v", i, alone[i], both[i])
		}
	}
	RecoveryGradient(gas.Air, 7, fourRamps, nil, alone)
	for i := range alone {
		if alone[i] != bothMach[i] {
			t.Errorf("Mach slope %d alone %v, with the other %v", i, alone[i], bothMach[i])
		}
	}
}

func TestBrokenChainsSayWhere(t *testing.T) {
	waves := make([]shock.Oblique, 3)
	attached, err := March(gas.Air, 3, []float64{0.1, 0.2, 0.6}, waves)
	var broken *Broken
	var detached *shock.Detached
	if attached != 2 || !errors.As(err, &broken) || broken.Ramp != 3 || !errors.As(err, &detached) || !(detached.By > 0) {
		t.Errorf("%d attached, %v", attached, err)
	}
	if _, _, ok := Recovery(gas.Air, 3, []float64{0.1, 0.2, 0.6}); ok {
		t.Error("recovery of a detached chain")
	}
	if _, _, ok := RecoveryGradient(gas.Air, 3, []float64{0.1, 0.2, 0.6}, nil, nil); ok {
		t.Error("gradient of a detached chain")
	}
	// Between sonic and largest turning the flow behind is subsonic.
	sonic, _ := shock.SonicTurning(gas.Air, 2)
	largest, _ := shock.LargestTurning(gas.Air, 2)
	attached, err = March(gas.Air, 2, []float64{(sonic + largest) / 2, 0.01}, waves)
	if attached != 1 || !errors.As(err, &broken) || broken.Ramp != 2 || broken.Err != nil || !(broken.Mach < 1) {
		t.Errorf("subsonic flow ahead of ramp 2: %d attached, %v", attached, err)
	}
	for _, theta := range []float64{-0.1, -3, math.Pi / 2, math.NaN(), math.Inf(1)} {
		if _, _, ok := Recovery(gas.Air, 3, []float64{theta}); ok {
			t.Errorf("a turning of %v has a shock", theta)
		}
	}
	for _, mach := range []float64{math.NaN(), -7, 0.9} {
		if _, _, ok := Recovery(gas.Air, mach, fourRamps); ok {
			t.Errorf("Mach number %v has a chain", mach)
		}
		if _, _, ok := RecoveryGradient(gas.Air, mach, fourRamps, nil, nil); ok {
			t.Errorf("Mach number %v has a chain with derivatives", mach)
		}
	}
}

// All shocks, traced from the corners at their own wave angles, meet in the
// focus.
func TestShocksMeetInTheFocus(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := anyGas(t)
		mach, turning := anyChain(t, g, rapid.IntRange(1, MaxRamps).Draw(t, "ramps"), 0.9)
		// The steepest shock sets the scale of what rounding a corner can move.
		incidence := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(-0.05, 0.05)).Draw(t, "incidence")
		height := rapid.SampledFrom([]float64{0.01, 0.16, 1, 30}).Draw(t, "capture height")
		waves := make([]shock.Oblique, len(turning))
		if _, err := March(g, mach, turning, waves); err != nil {
			t.Fatal(err)
		}
		corners := make([]contour.Point, len(turning))
		focus, ok := Focus(corners, waves, incidence, height)
		if !ok {
			if waves[0].WaveAngle > incidence {
				t.Fatal("no focus")
			}
			return
		}
		if math.Abs(focus.Y-height) > 1e-15*height || corners[0] != (contour.Point{}) {
			t.Fatalf("focus %v, first corner %v", focus, corners[0])
		}
		flow := -incidence
		for i, wave := range waves {
			line := contour.Line{Through: corners[i], Angle: flow + wave.WaveAngle}
			if miss := line.Height(focus); math.Abs(miss) > 1e-9*height {
				t.Fatalf("shock %d misses the focus by %v", i+1, miss)
			}
			flow += wave.Turning
		}
	})
}

func TestNoFocusWhereTheFirstShockDoesNotRise(t *testing.T) {
	waves := make([]shock.Oblique, 1)
	if _, err := March(gas.Air, 10, []float64{0.01}, waves); err != nil {
		t.Fatal(err)
	}
	if _, ok := Focus(make([]contour.Point, 1), waves, waves[0].WaveAngle, 1); ok {
		t.Error("a shock along the x axis meets the lip")
	}
}

func TestKernelsDoNotAllocate(t *testing.T) {
	var slope, machSlope [4]float64
	var waves [4]shock.Oblique
	for name, kernel := range map[string]func(){
		"Recovery":         func() { Recovery(gas.Air, 7, fourRamps) },
		"RecoveryGradient": func() { RecoveryGradient(gas.Air, 7, fourRamps, slope[:], machSlope[:]) },
		"March":            func() { _, _ = March(gas.Air, 7, fourRamps, waves[:]) },
	} {
		if allocations := testing.AllocsPerRun(100, kernel); allocations != 0 {
			t.Errorf("%s allocates %v times", name, allocations)
		}
	}
}

// FuzzChain looks for a chain that panics, or that is called attached with a
// number that is not finite.
func FuzzChain(f *testing.F) {
	f.Add(1.4, 7.0, 0.07, 0.09, 0.1, 0.12)
	f.Add(1.4, 1.0, 0.0, 0.0, 0.0, 0.0)
	f.Add(5.0/3, 1e300, 0.5, 1e-300, 1.57, 1.5707963267948966)
	f.Add(1.0000001, 1.0000001, 1e-9, -1.0, math.Inf(1), math.NaN())
	f.Fuzz(func(t *testing.T, gamma, mach, a, b, c, d float64) {
		g := gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}
		if g.Validate() != nil {
			return
		}
		turning := []float64{a, b, c, d}
		var slope, machSlope [4]float64
		var waves [4]shock.Oblique
		recovery, behind, ok := RecoveryGradient(g, mach, turning, slope[:], machSlope[:])
		attached, err := March(g, mach, turning, waves[:])
		if mach > 100 || gamma < 1.001 {
			return // beyond any flow of this gas: no panic is all that is asked
		}
		if ok && !(recovery >= 0 && recovery <= 1+1e-9 && behind >= 0 && behind <= mach*(1+1e-9)) {
			t.Errorf("attached with recovery %v, Mach number behind %v", recovery, behind)
		}
		if (err == nil) != (attached == len(turning)) {
			t.Errorf("%d attached, error %v", attached, err)
		}
		for _, wave := range waves[:attached] {
			if !(wave.Jump.Pressure >= 1) || !(wave.Mach2 >= 0) || math.IsInf(wave.Mach2, 1) || !(wave.WaveAngle > 0) {
				t.Errorf("attached with %+v", wave)
			}
		}
	})
}
