package shock

import (
	"math"
	"testing"

	"rampwright/problems/gas"
)

const degree = math.Pi / 180

func BenchmarkWeakCotangent(b *testing.B) {
	square, tangent := 25.0, math.Tan(8*degree)
	b.ReportAllocs()
	for b.Loop() {
		WeakCotangent(1.4, square, tangent)
	}
}

func BenchmarkWeak(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		Weak(gas.Air, 5, 8*degree)
	}
}

func BenchmarkWeakBracketed(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		WeakBracketed(gas.Air, 5, 8*degree)
	}
}

func BenchmarkLargestTurning(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		LargestTurning(gas.Air, 5)
	}
}

func BenchmarkRegularReflection(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		RegularReflection(gas.Air, 4)
	}
}

func BenchmarkRegularReflectionBelowEquilibrium(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		RegularReflection(gas.Air, 2)
	}
}

func BenchmarkRegularReflectionBracketed(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		RegularReflectionBracketed(gas.Air, 4)
	}
}

func BenchmarkExpand(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		Expand(gas.Air, 5, 8*degree)
	}
}
