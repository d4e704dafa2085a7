package wave_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
	"time"

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

// latency times one trace each of 200 random inlets through two reflections in the
// duct, of the lip shock at the shoulder and then at the cowl, and reports how the
// milliseconds and events of a condition are spread. Measured in processor time of one
// core, with the error companion: at default settings 0.5 ms in the median, 6 at the
// ninth decile, 11 at 95 %; fine 1.8 ms, 50 and 80.
func latency(b *testing.B, settings wave.Settings) {
	rng := rand.New(rand.NewPCG(77, 2))
	var milliseconds, events []float64
	for b.Loop() {
		for range 200 {
			s := sampleOf(b, rng)
			mach := s.flown("throat_mach")
			if !(mach > 1) {
				mach = 2
			}
			g := s.geometry(0, 1.01*math.Sqrt(mach*mach-1)) // one Mach line across the throat
			start := time.Now()
			r := fly(b, g, s.mach, s.incidence, settings)
			milliseconds = append(milliseconds, 1e3*time.Since(start).Seconds())
			events = append(events, float64(r.Events))
		}
	}
	slices.Sort(milliseconds)
	slices.Sort(events)
	for name, share := range map[string]float64{"p50": 0.5, "p75": 0.75, "p90": 0.9, "p95": 0.95, "max": 1} {
		i := min(len(events)-1, int(share*float64(len(events))))
		b.ReportMetric(milliseconds[i], name+"-ms")
		b.ReportMetric(events[i], name+"-events")
	}
}

func BenchmarkLatency(b *testing.B) { latency(b, wave.Settings{}) }

func BenchmarkLatencyFine(b *testing.B) { latency(b, wave.Fine()) }

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
