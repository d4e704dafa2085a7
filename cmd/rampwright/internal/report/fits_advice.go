package report

import (
	"fmt"
	"math"
	"strings"
)

// Bounds of what the advice remarks on.
const (
	leastCoverage = 0.85  // of 95 % intervals
	muchWorse     = 1.2   // of the choice over the best kind
	hurts         = 1.5   // loss by inert inputs or noise
	levelledOff   = 1.3   // fall of the error below which more samples no longer help
	exactFit      = 1e-10 // of the spread: errors below it are rounding, and equal
)

// advise draws from the run what a user should do about one quantity.
func (d *FitsDocument) advise(curve int) []string {
	c := &d.study.Curves[curve]
	choice := c.of("")
	if len(choice) == 0 {
		return nil
	}
	about := responseName(c.Quantity)
	advice := []string{about + ": " + d.whichKind(c), about + ": " + d.howMany(c, choice)}
	for _, text := range []string{d.levelling(c, choice), coverageAdvice(choice), d.disturbed(curve)} {
		if text != "" {
			advice = append(advice, about+": "+text)
		}
	}
	return advice
}

// fitsPoint is the summary at one number of samples.
type fitsPoint struct {
	samples int
	fitsSummary
}

// of returns the points of a kind that have a fit.
func (c *FitsCurve) of(kind string) []fitsPoint {
	var points []fitsPoint
	for i := range c.Cells {
		if cell := &c.Cells[i]; cell.Kind == kind {
			if s := summarise(cell); s.designs > 0 {
				points = append(points, fitsPoint{cell.Samples, s})
			}
		}
	}
	return points
}

// seen lifts an error to the least that is told from rounding.
func (c *FitsCurve) seen(median float64) float64 { return math.Max(median, exactFit*c.Spread) }

// best returns the kind of least median error at a number of samples, the first
// of equals.
func (c *FitsCurve) best(samples int) (kind string, least float64) {
	least = math.Inf(1)
	for i := range c.Cells {
		cell := &c.Cells[i]
		if cell.Kind == "" || cell.Samples != samples {
			continue
		}
		if s := summarise(cell); s.designs > 0 && c.seen(s.median) < least {
			kind, least = cell.Kind, c.seen(s.median)
		}
	}
	return kind, least
}

// whichKind names the best kind at each number of samples and how the choice by
// leave-one-out compares.
func (d *FitsDocument) whichKind(c *FitsCurve) string {
	var order grouped
	worst, where := 0.0, 0
	for _, p := range c.of("") {
		kind, least := c.best(p.samples)
		order.add(kind, fmt.Sprint(p.samples))
		if ratio := ratioOf(c.seen(p.median), least); ratio > worst {
			worst, where = ratio, p.samples
		}
	}
	var parts []string
	for _, kind := range order.keys {
		parts = append(parts, fmt.Sprintf("%s at %s", kind, strings.Join(order.items[kind], ", ")))
	}
	text := "the kind of least error is " + strings.Join(parts, "; ") + " samples."
	switch {
	case worst <= 1:
		return text + " The choice by leave-one-out is as good at every number of samples: leave it to the choice."
	case worst <= muchWorse:
		return text + fmt.Sprintf(" The choice by leave-one-out stays within %.3g times the best kind: leave it to the choice.", worst)
	default:
		return text + fmt.Sprintf(" The choice by leave-one-out is up to %.3g times worse (at %d samples): name the kind with --kinds where that matters.", worst, where)
	}
}

// howMany says how many samples the error asked for takes, between two numbers
// of samples by a straight line in logarithms.
func (d *FitsDocument) howMany(c *FitsCurve, choice []fitsPoint) string {
	wanted := float64(d.Setup.Accuracy) * c.Spread
	asked := fmt.Sprintf("a median error of %s (%s of the spread)", significant(wanted), plain(float64(d.Setup.Accuracy)))
	last := choice[len(choice)-1]
	for i, p := range choice {
		if p.median > wanted {
			continue
		}
		if i == 0 {
			return fmt.Sprintf("%s is met with %d samples already.", asked, p.samples)
		}
		return fmt.Sprintf("%s takes about %d samples.", asked, crossing(choice[i-1], p, wanted))
	}
	if len(choice) > 1 {
		if more := crossing(choice[len(choice)-2], last, wanted); more > last.samples && more <= 4*last.samples {
			return fmt.Sprintf("%s is not reached with %d samples; the curve carried on reaches it near %d.", asked, last.samples, more)
		}
	}
	return fmt.Sprintf("%s is out of reach: %s with %d samples.", asked, significant(last.median), last.samples)
}

// crossing is where the line through two points, straight in logarithms, meets
// the error wanted, in whole samples; 0 where it never does.
func crossing(a, b fitsPoint, wanted float64) int {
	if !(b.median < a.median) || !(wanted > 0) {
		return 0
	}
	low := math.Max(b.median, math.SmallestNonzeroFloat64)
	share := math.Log(a.median/wanted) / math.Log(a.median/low)
	return int(math.Ceil(math.Exp(math.Log(float64(a.samples)) + share*math.Log(float64(b.samples)/float64(a.samples)))))
}

// levelling remarks on a curve that has stopped falling.
func (d *FitsDocument) levelling(c *FitsCurve, choice []fitsPoint) string {
	if len(choice) < 2 {
		return ""
	}
	a, b := choice[len(choice)-2], choice[len(choice)-1]
	if b.median <= exactFit*c.Spread {
		return ""
	}
	if fall := ratioOf(a.median, b.median); fall < levelledOff {
		cause := "a rough function, or inputs that the samples do not resolve"
		if d.Setup.Noise > 0 {
			cause = "the noise of the samples"
		}
		return fmt.Sprintf("from %d to %d samples the error falls by a factor of only %.2g: more samples help little (%s).", a.samples, b.samples, fall, cause)
	}
	return ""
}

// coverageAdvice remarks on intervals that promise too much, pooled over all
// numbers of samples.
func coverageAdvice(choice []fitsPoint) string {
	var low []string
	least := 1.0
	for _, p := range choice {
		if p.coverage < leastCoverage {
			low = append(low, fmt.Sprint(p.samples))
			least = math.Min(least, p.coverage)
		}
	}
	if low == nil {
		return "its 95 % intervals can be believed: they cover fresh exact values as they promise, 85 % or more, at every number of samples."
	}
	return fmt.Sprintf("its 95 %% intervals promise too much at %s samples (cover down to %.3g %%): take deviations there as lower bounds.", strings.Join(low, ", "), 100*least)
}

// disturbed says how each kind loses by inert inputs and noise, at the largest
// number of samples both studies have.
func (d *FitsDocument) disturbed(curve int) string {
	if d.study.Plain == nil {
		return ""
	}
	var parts []string
	worst, samples := 0.0, 0
	for _, kind := range append([]string{""}, d.Setup.Kinds...) {
		with, without := d.study.Curves[curve].of(kind), d.study.Plain[curve].of(kind)
		if len(with) == 0 || len(without) == 0 {
			continue
		}
		a, b := with[len(with)-1], without[len(without)-1]
		loss := ratioOf(a.median, b.median)
		if a.samples != b.samples || math.IsNaN(loss) {
			continue
		}
		name := kind
		if kind == "" {
			name = "the choice"
		}
		parts = append(parts, fmt.Sprintf("%s %.3g", name, loss))
		worst, samples = math.Max(worst, loss), a.samples
	}
	if parts == nil {
		return ""
	}
	verdict := "they hurt"
	if worst < hurts {
		verdict = "they do little harm"
	}
	return fmt.Sprintf("with %s %s; times the error without, at %d samples: %s.", d.disturbance(), verdict, samples, strings.Join(parts, "; "))
}

// disturbance names what was added to the problem.
func (d *FitsDocument) disturbance() string {
	var parts []string
	switch n := d.Setup.InertInputs; {
	case n == 1:
		parts = append(parts, "1 inert input")
	case n > 1:
		parts = append(parts, fmt.Sprintf("%d inert inputs", n))
	}
	if d.Setup.Noise > 0 {
		parts = append(parts, "noise of deviation "+plain(float64(d.Setup.Noise)))
	}
	return strings.Join(parts, " and ")
}
