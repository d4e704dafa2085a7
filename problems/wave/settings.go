package wave

import (
	"errors"
	"fmt"
	"math"
)

// Settings bound the resolution and the work of a trace. A zero field takes its
// documented default.
type Settings struct {
	// Wavelet is the turning that one wavelet of a Prandtl-Meyer fan stands for,
	// rad, or half the angle between its first and last wavelet where that is more,
	// near Mach 1. A fan has wavelets of equal pressure ratio, one at least; its error
	// falls with Wavelet squared.
	// Default 1 deg. Below 0.1 deg events multiply: a pair of fans that cross
	// costs the product of their wavelets.
	Wavelet float64
	// Threshold is the strength |ln(pt2/pt1)| below which a crossing does not send out
	// a slip line but merges it, conserved, into the stronger wave beside it; twice
	// that for |ln(p2/p1)| of a reflected wave, and up to eight times more where waves
	// would leave a slip line in quick succession. The error falls in proportion.
	// Default 6e-4. Once half the events are spent the threshold rises, see
	// Trace.Threshold.
	Threshold float64
	// Fronts is the most fronts alive at a time, default 4000; Events the most
	// events, default 40000. Beyond either the trace ends with reason FrontBudget or
	// EventBudget.
	Fronts int
	Events int
	// WithoutError leaves out the coarser trace from which errors are estimated,
	// about a fifth of the time, for a search that verifies later.
	WithoutError bool
}

// Defaults of Settings.
const (
	DefaultWavelet   = math.Pi / 180
	DefaultThreshold = 6e-4
	DefaultFronts    = 4000
	DefaultEvents    = 40000
)

// Fine returns settings for verification: wavelets of half a degree, a threshold of
// a third of the default. Against traces of a quarter degree and 3e-5, over stations
// of 100 random inlets through two reflections in the duct, recovery and Mach number
// are off by 1.8e-4 in the median and 7e-4 at most at default settings, 5e-5 and, where
// the event budget raised the threshold, 9e-4 at most at fine ones.
func Fine() Settings {
	return Settings{Wavelet: DefaultWavelet / 2, Threshold: DefaultThreshold / 3, Fronts: 20000, Events: 50000}
}

// ahead returns the settings up to the lip, where waves are few and capture is
// decided: wavelets and threshold a quarter of those in the duct.
func (s Settings) ahead() Settings {
	s.Wavelet /= 4
	s.Threshold /= 4
	return s
}

// coarser returns the settings of the companion trace that measures the error.
func (s Settings) coarser() Settings {
	s.Wavelet *= 2
	s.Threshold *= 4
	return s
}

// withDefaults fills zero fields.
func (s Settings) withDefaults() Settings {
	if s.Wavelet == 0 {
		s.Wavelet = DefaultWavelet
	}
	if s.Threshold == 0 {
		s.Threshold = DefaultThreshold
	}
	if s.Fronts == 0 {
		s.Fronts = DefaultFronts
	}
	if s.Events == 0 {
		s.Events = DefaultEvents
	}
	return s
}

// Validate reports every setting outside its range, all at once; zero fields
// stand for their defaults.
func (s Settings) Validate() error {
	s = s.withDefaults()
	var faults []error
	if !(s.Wavelet >= 1e-5 && s.Wavelet <= 0.2) {
		faults = append(faults, fmt.Errorf("wavelet size %v rad outside [1e-5, 0.2]", s.Wavelet))
	}
	if !(s.Threshold >= 1e-9 && s.Threshold <= 0.1) {
		faults = append(faults, fmt.Errorf("strength threshold %v outside [1e-9, 0.1]", s.Threshold))
	}
	if s.Fronts < 10 || s.Fronts > maxBudget {
		faults = append(faults, fmt.Errorf("front budget %d outside [10, %d]", s.Fronts, maxBudget))
	}
	if s.Events < 10 || s.Events > maxBudget {
		faults = append(faults, fmt.Errorf("event budget %d outside [10, %d]", s.Events, maxBudget))
	}
	return errors.Join(faults...)
}

// maxBudget keeps region and front numbers within 32 bits.
const maxBudget = 10_000_000
