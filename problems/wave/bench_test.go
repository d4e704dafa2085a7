package wave_test

import (
	"math/rand/v2"
	"testing"

	"rampwright/problems/gas"
	"rampwright/problems/wave"
)

// benchmark traces 25 random inlets through two throat heights of duct, in turn.
func benchmark(b *testing.B, settings wave.Settings) {
	rng := rand.New(rand.NewPCG(1, 2))
	var samples []sample
	for range 25 {
		samples = append(samples, sampleOf(b, rng))
	}
	events := 0
	b.ReportAllocs()
	i := 0
	for b.Loop() {
		s := &samples[i%len(samples)]
		i++
		r, err := wave.Run(gas.Air, wave.FreeStream{Mach: s.mach, Incidence: s.incidence * degree}, s.geometry(0, 2), settings)
		if err != nil {
			b.Fatal(err)
		}
		events += r.Events
	}
	b.ReportMetric(float64(events)/float64(b.N), "events/op")
}

func BenchmarkRandomInlets(b *testing.B) { benchmark(b, wave.Settings{}) }

func BenchmarkRandomInletsWithoutError(b *testing.B) {
	benchmark(b, wave.Settings{WithoutError: true})
}

func BenchmarkRandomInletsFine(b *testing.B) {
	s := wave.Fine()
	s.WithoutError = true
	benchmark(b, s)
}

// BenchmarkTypical is veyric-6 at Mach 5.2 and an incidence of 1 deg: about the
// median number of events.
func BenchmarkTypical(b *testing.B) { typical(b, wave.Settings{}) }

func BenchmarkTypicalFine(b *testing.B) { typical(b, wave.Fine()) }

func typical(b *testing.B, settings wave.Settings) {
	c := chainOf(b, veyric(5.2, 1))
	g := c.geometry(0, 2)
	b.ReportAllocs()
	events := 0
	for b.Loop() {
		events = fly(b, g, 5.2, 1, settings).Events
	}
	b.ReportMetric(float64(events), "events/op")
}
