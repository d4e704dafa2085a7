package shock

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"rampwright/problems/gas"
)

// ulp4 is four units in the last place of 1.
const ulp4 = 4 * 2.220446049250313e-16

// anyGas draws gamma in (1, 5/3], edges on purpose.
func anyGas(t *rapid.T) gas.Perfect {
	gamma := rapid.OneOf(
		rapid.SampledFrom([]float64{1.4, 1.3, 5.0 / 3, 1.01, 1.001}),
		rapid.Float64Range(1.001, 5.0/3),
	).Draw(t, "gamma")
	return gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}
}

// anyMach draws from [low, 10], edges on purpose.
func anyMach(t *rapid.T, low float64) float64 {
	return rapid.OneOf(rapid.SampledFrom([]float64{low, low + 1e-6, low + 1e-3, 2, 10}), rapid.Float64Range(low, 10)).Draw(t, "mach")
}

// anyTurning draws a share of the largest turning, edges on purpose.
func anyTurning(t *rapid.T, g gas.Perfect, mach, most float64) float64 {
	share := rapid.OneOf(
		rapid.SampledFrom([]float64{0, 1e-12, 1e-9, 1e-6, 1e-3, most}),
		rapid.Float64Range(0, most),
	).Draw(t, "share of the largest turning")
	largest, _ := LargestTurning(g, mach)
	return share * largest
}

// onBothRoutes runs a property once a route.
func onBothRoutes(t *testing.T, property func(t *rapid.T, by int)) {
	for by, route := range routes {
		t.Run(route.name, func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) { property(t, by) })
		})
	}
}

func drawWeak(t *rapid.T, by int, g gas.Perfect, mach, turning float64) Oblique {
	s, err := routes[by].weak(g, mach, turning)
	if err != nil {
		t.Fatalf("gamma %v, Mach %v: %v", g.Gamma, mach, err)
	}
	return s
}

func within(t *rapid.T, what string, got, want, tolerance float64) {
	if !(math.Abs(got-want) <= tolerance) {
		t.Fatalf("%s: %v, want %v within %g (off by %.3g)", what, got, want, tolerance, got-want)
	}
}

func TestEveryShockConservesMassMomentumEnergy(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1)
		s := drawWeak(t, by, g, mach, anyTurning(t, g, mach, 0.9999))
		within(t, "residual", Residual(g, s), 0, 1e-12)
		behind, jump := routes[by].normal(g, mach)
		normal := Oblique{Mach: mach, WaveAngle: math.Pi / 2, NormalMach: mach, Mach2: behind, Jump: jump}
		within(t, "residual of the normal shock", Residual(g, normal), 0, 1e-12)
	})
}

func TestResidualSeesEachWrongNumber(t *testing.T) {
	wrong := map[string]func(*Oblique){
		"wave angle":  func(s *Oblique) { s.WaveAngle *= 1.0001 },
		"turning":     func(s *Oblique) { s.Turning *= 1.0001 },
		"Mach ahead":  func(s *Oblique) { s.Mach *= 1.0001 },
		"Mach behind": func(s *Oblique) { s.Mach2 *= 1.0001 },
		"pressure":    func(s *Oblique) { s.Jump.Pressure *= 1.0001 },
		"density":     func(s *Oblique) { s.Jump.Density *= 1.0001 },
		"temperature": func(s *Oblique) { s.Jump.Temperature *= 1.0001 },
		// Mirrored at the shock: only the tangential momentum is wrong.
		"direction behind": func(s *Oblique) { s.Turning = 2*s.WaveAngle - s.Turning - math.Pi },
	}
	for name, spoil := range wrong {
		s, err := Weak(gas.Air, 5, 10*degree)
		if err != nil {
			t.Fatal(err)
		}
		spoil(&s)
		if residual := Residual(gas.Air, s); !(residual > 1e-6) {
			t.Errorf("a wrong %s leaves a residual of %v", name, residual)
		}
	}
}

func TestTotalPressureNeverRises(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1)
		s := drawWeak(t, by, g, mach, anyTurning(t, g, mach, 0.9999))
		_, normal := routes[by].normal(g, mach)
		for _, jump := range []Jump{s.Jump, normal} {
			if !(jump.TotalPressure <= 1+ulp4) || !(jump.TotalPressure > 0) {
				t.Fatalf("total-pressure ratio %v", jump.TotalPressure)
			}
		}
	})
}

func TestTurningOfTheWaveIsTheTurningAsked(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1.001)
		turning := anyTurning(t, g, mach, 0.9999)
		s := drawWeak(t, by, g, mach, turning)
		within(t, "turning", Turning(g, mach, s.WaveAngle), turning, 1e-12)
	})
}

// The wave angle is drawn, so that the weak shock of its turning must give it
// back: to 1e-12 rad up to 0.999 of the largest turning, to 1e-6 deg up to
// 0.9999 of it, where the turning hardly depends on the wave angle any more.
func TestWaveOfTheTurningIsTheWaveAsked(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1.01)
		largest, top := LargestTurning(g, mach)
		machAngle := math.Asin(1 / mach)
		share := rapid.OneOf(rapid.SampledFrom([]float64{0, 1e-9, 0.96, 0.989}), rapid.Float64Range(0, 0.989)).Draw(t, "share of the wave angles")
		wave := machAngle + share*(top-machAngle)
		turning := math.Max(0, Turning(g, mach, wave))
		tolerance := 1e-12
		if turning > 0.999*largest {
			tolerance = 1e-6 * degree
		}
		within(t, "wave angle", drawWeak(t, by, g, mach, turning).WaveAngle, wave, tolerance)
	})
}

func TestWaveNearDetachment(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.01)
		largest, _ := LargestTurning(g, mach)
		first := drawWeak(t, 0, g, mach, 0.9999*largest)
		second := drawWeak(t, 1, g, mach, 0.9999*largest)
		within(t, "wave angle", first.WaveAngle, second.WaveAngle, 1e-6*degree)
	})
}

func TestRoutesAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.001)
		turning := anyTurning(t, g, mach, 0.999)
		a, b := drawWeak(t, 0, g, mach, turning), drawWeak(t, 1, g, mach, turning)
		agree := func(what string, a, b float64) { within(t, what, a, b, 1e-10*math.Max(math.Abs(a), math.Abs(b))) }
		agree("wave angle", a.WaveAngle, b.WaveAngle)
		agree("normal Mach number", a.NormalMach, b.NormalMach)
		agree("Mach number behind", a.Mach2, b.Mach2)
		agreeJumps(agree, a.Jump, b.Jump)
		behind, jump := Normal(g, mach)
		behindByPrandtl, jumpByPrandtl := NormalByPrandtl(g, mach)
		agree("Mach number behind a normal shock", behind, behindByPrandtl)
		agreeJumps(agree, jump, jumpByPrandtl)
		largest, _ := LargestTurning(g, mach)
		searched, _ := LargestTurningSearched(g, mach)
		agree("largest turning", largest, searched)
	})
}

func agreeJumps(agree func(what string, a, b float64), a, b Jump) {
	agree("pressure ratio", a.Pressure, b.Pressure)
	agree("density ratio", a.Density, b.Density)
	agree("temperature ratio", a.Temperature, b.Temperature)
	agree("total-pressure ratio", a.TotalPressure, b.TotalPressure)
}

func TestNoTurningIsTheMachWave(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1)
		s := drawWeak(t, by, g, mach, 0)
		within(t, "wave angle", s.WaveAngle, math.Asin(1/mach), 1e-7*math.Sqrt(mach-1)+1e-14)
		within(t, "normal Mach number", s.NormalMach, 1, ulp4)
		within(t, "Mach number behind", s.Mach2, mach, 1e-13*mach)
		for _, ratio := range []float64{s.Jump.Pressure, s.Jump.Density, s.Jump.Temperature, s.Jump.TotalPressure} {
			within(t, "ratio", ratio, 1, ulp4)
		}
	})
}

// A slight turning raises the pressure by g M^2 theta/sqrt(M^2-1) (Ackeret).
func TestWeakLimitIsLinearTheory(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1.2)
		const turning = 1e-6
		linear := g.Gamma * mach * mach * turning / math.Sqrt(mach*mach-1)
		rise := drawWeak(t, by, g, mach, turning).Jump.Pressure - 1
		within(t, "pressure rise over linear theory", rise/linear, 1, 1e-3)
	})
}

// The two sides of the largest turning are told apart beyond 1e-12 of it.
func TestDetachmentIsSharp(t *testing.T) {
	onBothRoutes(t, func(t *rapid.T, by int) {
		g, mach := anyGas(t), anyMach(t, 1.01)
		largest, _ := LargestTurning(g, mach)
		margin := rapid.SampledFrom([]float64{1e-12, 1e-11, 1e-9, 1e-6, 1e-3, 0.5}).Draw(t, "margin")
		drawWeak(t, by, g, mach, largest*(1-margin))
		turning := largest * (1 + margin)
		_, err := routes[by].weak(g, mach, turning)
		var detached *Detached
		if !errors.As(err, &detached) {
			t.Fatalf("gamma %v, Mach %v, turning %v beyond the largest: attached", g.Gamma, mach, turning)
		}
		within(t, "excess turning", detached.By, turning-largest, 1e-13)
	})
}

// Far beyond detachment the kernel must not slip to the negative root.
func TestDetachedFarBeyond(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1)
		largest, _ := LargestTurning(g, mach)
		turning := rapid.Float64Range(largest*1.001+1e-9, math.Pi/2).Draw(t, "turning")
		if s, err := Weak(g, mach, turning); err == nil {
			t.Fatalf("attached: %+v", s)
		}
	})
}

func TestWeakRefusesWhatIsNoShock(t *testing.T) {
	for by, route := range routes {
		for _, c := range []struct{ mach, turning float64 }{
			{0.9, 0.1}, {2, -0.1}, {2, math.NaN()}, {math.NaN(), 0.1}, {2, math.Pi / 2}, {2, 3}, {2, math.Inf(1)},
		} {
			_, err := routes[by].weak(gas.Air, c.mach, c.turning)
			var detached *Detached
			if !errors.As(err, &detached) {
				t.Errorf("%s, Mach %v, turning %v: %v", route.name, c.mach, c.turning, err)
			}
		}
	}
}

func TestLargestTurningIsLargest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.001)
		largest, top := LargestTurning(g, mach)
		within(t, "turning at it", Turning(g, mach, top), largest, 1e-14)
		other := rapid.Float64Range(math.Asin(1/mach), math.Pi/2).Draw(t, "wave angle")
		if turning := Turning(g, mach, other); turning > largest+1e-14 {
			t.Fatalf("turning %v at %v exceeds the largest %v at %v", turning, other, largest, top)
		}
	})
}

// NACA Report 1135 eq. 168, as printed, in sin^2(beta).
func TestAngleOfLargestTurningAsPrinted(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.01)
		gamma, square := g.Gamma, mach*mach
		root := math.Sqrt((gamma + 1) * ((gamma+1)*square*square/16 + (gamma-1)/2*square + 1))
		_, wave := LargestTurning(g, mach)
		within(t, "sin^2(beta)", math.Pow(math.Sin(wave), 2), ((gamma+1)/4*square-1+root)/(gamma*square), 1e-13)
	})
}

func TestFlowBehindSonicTurningIsSonic(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.05)
		turning, wave := SonicTurning(g, mach)
		largest, _ := LargestTurning(g, mach)
		if turning > largest {
			t.Fatalf("sonic turning %v beyond the largest %v", turning, largest)
		}
		normal := mach * math.Sin(wave)
		behind, _ := Normal(g, normal)
		within(t, "Mach number behind", behind/math.Sin(wave-turning), 1, 1e-11)
	})
}

func TestPrandtlMeyerRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1)
		before := PrandtlMeyer(g, mach)
		left := PrandtlMeyer(g, math.Inf(1)) - before
		turning := left * rapid.OneOf(rapid.SampledFrom([]float64{0, 1e-9, 0.99}), rapid.Float64Range(0, 0.99)).Draw(t, "share of the turning left")
		behind, pressure, err := Expand(g, mach, turning)
		if err != nil {
			t.Fatal(err)
		}
		within(t, "turning", PrandtlMeyer(g, behind)-before, turning, 1e-12*(1+before+turning))
		if !(behind >= mach) || !(pressure <= 1) {
			t.Fatalf("expansion from Mach %v to %v, pressure ratio %v", mach, behind, pressure)
		}
		var vacuum *Vacuum
		if _, _, err := Expand(g, mach, left*1.0001); !errors.As(err, &vacuum) {
			t.Fatalf("expansion past vacuum: %v", err)
		}
	})
}

// A slight expansion is isentropic to third order: its pressure ratio continues
// that of a slight compression.
func TestSlightExpansionUndoesSlightCompression(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.2)
		const turning = 1e-4
		s := drawWeak(t, 0, g, mach, turning)
		behind, pressure, err := Expand(g, s.Mach2, turning)
		if err != nil {
			t.Fatal(err)
		}
		within(t, "Mach number", behind, mach, 1e-8*mach)
		within(t, "pressure", s.Jump.Pressure*pressure, 1, 1e-8)
	})
}

func TestReflectionRoutesAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g, mach := anyGas(t), anyMach(t, 1.05)
		a, b := RegularReflection(g, mach), RegularReflectionBracketed(g, mach)
		within(t, "largest turning of regular reflection", a, b, 1e-10)
	})
}

// The bracket of the mechanical equilibrium holds: wherever it exists, the
// reflected shock halfway to the Mach wave stays below the pressure of the stem.
func TestEquilibriumIsBracketed(t *testing.T) {
	existing := 0
	for gamma := 1.001; gamma <= 5.0/3; gamma += 0.0166 {
		for mach := 1.05; mach <= 30; mach *= 1.02 {
			m := newMirror(gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}, mach)
			detachment := m.detachment()
			if _, exists := m.equilibrium(detachment); !exists {
				continue
			}
			existing++
			if spare := m.tangentToSpare((detachment + math.Sqrt(m.excess)) / 2); !(spare > 0) {
				t.Fatalf("gamma %v, Mach %v: %v halfway", gamma, mach, spare)
			}
		}
	}
	if existing < 1000 {
		t.Errorf("only %d equilibria", existing)
	}
}

// Ben-Dor, Shock Wave Reflection Phenomena, for gamma 1.4, to the digits given
// (recomputed independently).
func TestRegularReflectionValues(t *testing.T) {
	for mach, want := range map[float64]float64{2: 12.90, 2.5: 17.57, 3: 19.66, 4: 20.85, 6: 20.60} {
		for _, route := range routes {
			if got := route.reflection(gas.Air, mach) / degree; math.Abs(got-want) > 0.005 {
				t.Errorf("%s, Mach %v: %.4f deg, want %v", route.name, mach, got, want)
			}
		}
	}
}

// At the mechanical equilibrium the reflected pressure is that of the stem; at
// detachment the reflected shock has the largest turning.
func TestReflectionCriteriaAsDefined(t *testing.T) {
	for _, gamma := range []float64{1.2, 1.4, 5.0 / 3} {
		for _, mach := range []float64{1.1, 1.5, 2, 2.5, 4, 10} {
			t.Run(fmt.Sprintf("gamma %.3g Mach %g", gamma, mach), func(t *testing.T) {
				g := gas.Perfect{Gamma: gamma, R: gas.SpecificConstantAir}
				detachment := ReflectionDetachment(g, mach)
				incident, err := WeakBracketed(g, mach, detachment)
				if err != nil {
					t.Fatal(err)
				}
				if largest, _ := LargestTurningSearched(g, incident.Mach2); math.Abs(largest-detachment) > 1e-12 {
					t.Errorf("detachment %v, largest turning behind the incident shock %v", detachment, largest)
				}
				equilibrium, exists := MechanicalEquilibrium(g, mach)
				if !exists {
					if !math.IsNaN(equilibrium) || RegularReflection(g, mach) != detachment {
						t.Errorf("no equilibrium, yet %v", equilibrium)
					}
					return
				}
				incident, err = WeakBracketed(g, mach, equilibrium)
				if err != nil {
					t.Fatal(err)
				}
				reflected, err := WeakBracketed(g, incident.Mach2, equilibrium)
				if err != nil {
					t.Fatal(err)
				}
				_, stem := NormalByPrandtl(g, mach)
				if ratio := incident.Jump.Pressure * reflected.Jump.Pressure / stem.Pressure; math.Abs(ratio-1) > 1e-10 {
					t.Errorf("reflected pressure over that of the stem %v", ratio)
				}
			})
		}
	}
}
