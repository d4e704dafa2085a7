package ramp

import (
	"math"
	"testing"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

// fourRamps is a chain of typical turnings at Mach 7.
var fourRamps = []float64{4 * degree, 5 * degree, 6 * degree, 7 * degree}

const degree = math.Pi / 180

func BenchmarkRecovery(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, _, ok := Recovery(gas.Air, 7, fourRamps); !ok {
			b.Fatal("detached")
		}
	}
}

func BenchmarkRecoveryGammaOther(b *testing.B) {
	g := gas.Perfect{Gamma: 1.3, R: 287}
	b.ReportAllocs()
	for b.Loop() {
		if _, _, ok := Recovery(g, 7, fourRamps); !ok {
			b.Fatal("detached")
		}
	}
}

func BenchmarkRecoveryGradient(b *testing.B) {
	b.ReportAllocs()
	var slope, machSlope [4]float64
	for b.Loop() {
		if _, _, ok := RecoveryGradient(gas.Air, 7, fourRamps, slope[:], machSlope[:]); !ok {
			b.Fatal("detached")
		}
	}
}

func BenchmarkMarch(b *testing.B) {
	b.ReportAllocs()
	var waves [4]shock.Oblique
	for b.Loop() {
		if _, err := March(gas.Air, 7, fourRamps, waves[:]); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkEqualStrength(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		EqualStrength(gas.Air, 3, 3)
	}
}
