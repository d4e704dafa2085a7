package report

import (
	"fmt"
	"math"
	"strings"

	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// TracedPoint is what verification says of a flight point that the search traced:
// both settings, the quantities of the finer trace, and how far each may lie from
// that of the search by the error bounds of both.
type TracedPoint struct {
	Point        string         `json:"point"`
	Search       TraceSettings  `json:"search"`
	Verification TraceSettings  `json:"verification"`
	Quantities   Object[Number] `json:"quantities"`
	Bounds       Object[Number] `json:"bounds"`
}

// TraceSettings is the resolution of a trace.
type TraceSettings struct {
	WaveletDeg Number `json:"wavelet_deg"`
	Threshold  Number `json:"threshold"`
}

func traceSettings(s wave.Settings) TraceSettings {
	return TraceSettings{Number(degrees(s.Wavelet)), Number(s.Threshold)}
}

// tracedPoints lists the traced flight points of the best design.
func (s *Study) tracedPoints() []TracedPoint {
	second := s.Result.Best.Second
	if s.Flow == nil || second == nil {
		return nil
	}
	var list []TracedPoint
	verified := readings(s.model().Quantities(), second)
	for i := range s.Flow.Points {
		p := &s.Flow.Points[i]
		if !p.Traced {
			continue
		}
		t := TracedPoint{
			Point: p.Point.Name, Search: traceSettings(inlet.SearchTrace()), Verification: traceSettings(inlet.VerifyTrace()),
			Quantities: Object[Number]{}, Bounds: Object[Number]{},
		}
		for _, r := range at(verified, p.Point.Name) {
			t.Quantities = append(t.Quantities, Field[Number]{r.name, Number(r.value)})
			if bound := s.widest(r.name, r.point); bound > 0 {
				t.Bounds = append(t.Bounds, Field[Number]{r.name, Number(bound)})
			}
		}
		list = append(list, t)
	}
	return list
}

// searchedTrace says which trace the quantities of a design are of; "" where none of
// its flight points is traced.
func searchedTrace(traced []TracedPoint) string {
	if len(traced) == 0 {
		return ""
	}
	var names []string
	for _, t := range traced {
		names = append(names, t.Point)
	}
	return fmt.Sprintf("At %s the quantities are of the trace of the search, stations and waves of the finer one of verification.", strings.Join(names, ", "))
}

// widest is the largest bound of the members of a quantity.
func (s *Study) widest(name, point string) float64 {
	largest := 0.0
	for i, q := range s.model().Quantities() {
		if q.Name == name && q.Point == point {
			largest = math.Max(largest, s.Result.Best.Second.Bound(i))
		}
	}
	return largest
}

// tracedNotes sets the traces of search and verification side by side.
func (s *Study) tracedNotes() []string {
	var notes []string
	for _, t := range s.tracedPoints() {
		var parts []string
		for _, name := range []string{"recovery", "throat_mach", "throat_pressure_kPa", "capture"} {
			searched, verified := s.exactly(name, t.Point), math.NaN()
			if v, ok := t.Quantities.Get(name); ok {
				verified = float64(v)
			}
			bound, _ := t.Bounds.Get(name)
			if finite(searched) && finite(verified) {
				parts = append(parts, fmt.Sprintf("%s %s and %s (bound %.1g)", name, significant(searched), significant(verified), roundUp(float64(bound))))
			}
		}
		if parts == nil {
			continue
		}
		notes = append(notes, fmt.Sprintf("The flow at %s is traced wave by wave, in the search in expansion wavelets of %s deg, in verification of %s deg: %s.",
			t.Point, plain(float64(t.Search.WaveletDeg)), plain(float64(t.Verification.WaveletDeg)), strings.Join(parts, ", ")))
	}
	return notes
}

// withinBounds says how the routes agree at traced points, "" without any.
func withinBounds(points []TracedPoint) string {
	var names []string
	for _, p := range points {
		names = append(names, p.Point)
	}
	if names == nil {
		return ""
	}
	whose := "their traces"
	if len(names) == 1 {
		whose = "its traces"
	}
	return " (at " + strings.Join(names, ", ") + " within the error bounds of " + whose + ")"
}
