package gas

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestSpecificConstantOfAir(t *testing.T) {
	// ISO 2533: R* = 8314.32 J/(kmol K), M = 28.964420 kg/kmol.
	if want := 8314.32 / 28.964420; math.Abs(SpecificConstantAir-want) > 5e-6 {
		t.Errorf("R = %v, want %v", SpecificConstantAir, want)
	}
}

// NACA Report 1135, Table II (gamma 1.4): p/pt, T/Tt and A/A*, to the printed
// digits.
func TestIsentropicTable(t *testing.T) {
	for _, c := range []struct{ mach, pressure, temperature, area, halfPressure, halfTemperature, halfArea float64 }{
		{2, 0.1278, 0.55556, 1.688, 5e-5, 5e-6, 5e-4},
		{3, 0.02722, 0.35714, 4.235, 5e-6, 5e-6, 5e-4},
		{5, 1.890e-3, 0.16667, 25.00, 5e-7, 5e-6, 5e-3},
		{10, 2.356e-5, 0.04762, 535.9, 5e-9, 5e-6, 5e-2},
	} {
		if got := 1 / Air.TotalPressureRatio(c.mach); math.Abs(got-c.pressure) > c.halfPressure {
			t.Errorf("Mach %v: p/pt %v, want %v", c.mach, got, c.pressure)
		}
		if got := 1 / Air.TotalTemperatureRatio(c.mach); math.Abs(got-c.temperature) > c.halfTemperature {
			t.Errorf("Mach %v: T/Tt %v, want %v", c.mach, got, c.temperature)
		}
		if got := Air.AreaRatio(c.mach); math.Abs(got-c.area) > c.halfArea {
			t.Errorf("Mach %v: A/A* %v, want %v", c.mach, got, c.area)
		}
	}
}

func drawGas(t *rapid.T) Perfect {
	return Perfect{
		Gamma: rapid.OneOf(rapid.SampledFrom([]float64{1.01, 1.4, 5.0 / 3}), rapid.Float64Range(1.01, 5.0/3)).Draw(t, "gamma"),
		R:     rapid.Float64Range(50, 4500).Draw(t, "R"),
	}
}

// Mass: rho u A is the same at any Mach number of one isentropic stream.
func TestAreaRatioConservesMass(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGas(t)
		const totalPressure, totalTemperature = 3e5, 900
		flux := func(mach float64) float64 {
			temperature := totalTemperature / g.TotalTemperatureRatio(mach)
			return g.Density(totalPressure/g.TotalPressureRatio(mach), temperature) * mach * g.SoundSpeed(temperature)
		}
		mach := rapid.OneOf(rapid.SampledFrom([]float64{0.1, 1, 10}), rapid.Float64Range(0.1, 10)).Draw(t, "mach")
		if got, want := g.AreaRatio(mach), flux(1)/flux(mach); math.Abs(got/want-1) > 1e-11 {
			t.Fatalf("A/A* %v, mass says %v", got, want)
		}
		if got := g.AreaRatio(mach); got < 1-1e-12 {
			t.Fatalf("A/A* %v below 1", got)
		}
	})
}

func TestAreaRatioSpecialCases(t *testing.T) {
	if got := Air.AreaRatio(1); math.Abs(got-1) > 1e-15 {
		t.Errorf("A/A* at Mach 1 is %v", got)
	}
	if got := Air.AreaRatio(0); !math.IsInf(got, 1) {
		t.Errorf("A/A* at Mach 0 is %v", got)
	}
}

// q = rho u^2/2, and the total temperature carries the kinetic energy:
// cp (Tt - T) = u^2/2.
func TestDynamicPressureAndEnergy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := drawGas(t)
		mach := rapid.Float64Range(1e-3, 10).Draw(t, "mach")
		pressure := rapid.Float64Range(1, 1e6).Draw(t, "pressure")
		temperature := rapid.Float64Range(100, 3000).Draw(t, "temperature")
		speed := mach * g.SoundSpeed(temperature)
		want := g.Density(pressure, temperature) * speed * speed / 2
		if got := g.DynamicPressure(pressure, mach); math.Abs(got-want) > 1e-13*want {
			t.Fatalf("q = %v, rho u^2/2 = %v", got, want)
		}
		enthalpy := g.Gamma / (g.Gamma - 1) * g.R * temperature
		heat := enthalpy * (g.TotalTemperatureRatio(mach) - 1)
		if math.Abs(heat-speed*speed/2) > 1e-14*(enthalpy+heat) {
			t.Fatalf("cp (Tt-T) = %v, u^2/2 = %v", heat, speed*speed/2)
		}
	})
}

// 340.29 m/s at 288.15 K: U.S. Standard Atmosphere 1976, sea level, which has
// 1.2250 kg/m3 at 101325 Pa.
func TestSeaLevel(t *testing.T) {
	if got := Air.SoundSpeed(288.15); math.Abs(got-340.29) > 0.01 {
		t.Errorf("speed of sound %v", got)
	}
	if got := Air.Density(101325, 288.15); math.Abs(got-1.2250) > 5e-5 {
		t.Errorf("density %v", got)
	}
}

func TestValidateReportsEverything(t *testing.T) {
	if err := Air.Validate(); err != nil {
		t.Errorf("air refused: %v", err)
	}
	if err := (Perfect{Gamma: 5.0 / 3, R: 1}).Validate(); err != nil {
		t.Errorf("monatomic gas refused: %v", err)
	}
	for _, gamma := range []float64{1, 0.9, 1.7, math.NaN(), math.Inf(1)} {
		err := Perfect{Gamma: gamma, R: -1}.Validate()
		if err == nil || !strings.Contains(err.Error(), "specific heats") || !strings.Contains(err.Error(), "gas constant") {
			t.Errorf("gamma %v with R -1: %v", gamma, err)
		}
	}
	for _, r := range []float64{0, math.NaN(), math.Inf(1)} {
		if err := (Perfect{Gamma: 1.4, R: r}).Validate(); err == nil {
			t.Errorf("R %v accepted", r)
		}
	}
}

func BenchmarkTotalPressureRatio(b *testing.B) {
	for b.Loop() {
		Air.TotalPressureRatio(5)
	}
}

func BenchmarkAreaRatio(b *testing.B) {
	for b.Loop() {
		Air.AreaRatio(3)
	}
}
