// Package gpr fits Gaussian processes (kriging): a prediction with a standard
// deviation, exact or nearly so at the samples, with one correlation length an
// input found by maximum likelihood.
package gpr

import (
	"fmt"
	"math"

	"rampwright/surrogate"
)

// Noise says what is known about scatter in the outputs.
type Noise int

const (
	// Interpolate is for exact outputs: the nugget stays at its floor. The
	// default. Where samples at one point differ, Estimate is used instead, and
	// the description says so.
	Interpolate Noise = iota
	// Estimate finds the nugget with the lengths.
	Estimate
	// Given uses Config.Nugget.
	Given
)

// Hyper holds the hyperparameters of a process: one correlation length an input
// on the scaled axes, the nugget as a ratio to the process variance, and the
// process standard deviation in the output's unit.
type Hyper struct {
	Lengths   []float64
	Nugget    float64
	Deviation float64
}

// Config is a Gaussian-process configuration. The zero value is an
// interpolating RBF process with a constant trend.
type Config struct {
	Kernel Kernel
	Trend  Trend
	Noise  Noise
	Nugget float64 // with Given: noise variance over process variance, 0..1
	// Start holds the hyperparameters of an earlier fit to begin from. With
	// Restarts 0 nothing else is tried: a refit after one more sample then costs
	// a few likelihoods.
	Start *Hyper
	// Fixed uses Start as it is, at the cost of one factorisation. A positive
	// Start.Deviation is then used too; otherwise it is estimated.
	Fixed bool
	// Restarts is the number of starts from a Latin hypercube in the logarithms
	// of the lengths. Without Start, three more at lengths 0.5, 1.5 and 0.07
	// sqrt(inputs) come first, and 0 means 2.
	Restarts int
	// SubsetAbove is the number of samples above which the starts run on a
	// space-filling subset of 150, and only the best is polished on all; 0 means
	// 180. A negative value always searches on all samples.
	SubsetAbove int
	// Seed feeds the restarts.
	Seed int64
	// Jobs is the number of starts run side by side; 0 means 1. The result does
	// not depend on it.
	Jobs int

	curvature []float64 // of the search behind Start; set by Process.Warm
}

// Kind returns "Gaussian process", with the kernel when it is not RBF.
func (c Config) Kind() string {
	if c.Kernel == RBF {
		return "Gaussian process"
	}
	return "Gaussian process, " + c.Kernel.String()
}

const (
	shortestLength = 0.03  // of the unit cube
	longestLength  = 30.0  // of the unit cube
	leastNugget    = 1e-12 // of the process variance, when estimated
	mostNugget     = 0.1   // of the process variance, when estimated
	nuggetFloor    = 1e-12 // added always, for the factorisation
	mostJitter     = 2e-6  // the floor is raised tenfold up to here
	subsetSize     = 150
)

// Validate returns nil or a *surrogate.SettingsError for d inputs.
func (c Config) Validate(d int) error {
	var problems []string
	add := func(format string, values ...any) { problems = append(problems, fmt.Sprintf(format, values...)) }
	if c.Kernel < RBF || c.Kernel > Matern12 {
		add("kernel %d is unknown", int(c.Kernel))
	}
	if c.Trend < Constant || c.Trend > None {
		add("trend %d is unknown", int(c.Trend))
	}
	if c.Noise < Interpolate || c.Noise > Given {
		add("noise %d is unknown", int(c.Noise))
	}
	if !(c.Nugget >= 0 && c.Nugget <= 1) {
		add("nugget %g is not within 0..1", c.Nugget)
	}
	if c.Restarts < 0 || c.Jobs < 0 {
		add("restarts %d and jobs %d must not be negative", c.Restarts, c.Jobs)
	}
	if c.Fixed && c.Start == nil {
		add("fixed hyperparameters without a start")
	}
	if c.Start != nil {
		problems = append(problems, c.Start.problems(d)...)
	}
	if problems == nil {
		return nil
	}
	return &surrogate.SettingsError{Of: c.Kind(), Problems: problems}
}

func (h Hyper) problems(d int) []string {
	var problems []string
	if len(h.Lengths) != d {
		problems = append(problems, fmt.Sprintf("%d lengths for %d inputs", len(h.Lengths), d))
	}
	for j, l := range h.Lengths {
		if !(l > 0) || math.IsInf(l, 0) {
			problems = append(problems, fmt.Sprintf("length %d is %g", j, l))
		}
	}
	if !(h.Nugget >= 0 && h.Nugget <= 1) {
		problems = append(problems, fmt.Sprintf("nugget %g of the start is not within 0..1", h.Nugget))
	}
	if !(h.Deviation >= 0) || math.IsInf(h.Deviation, 0) {
		problems = append(problems, fmt.Sprintf("deviation %g of the start", h.Deviation))
	}
	return problems
}

var _ surrogate.Model = Config{}
