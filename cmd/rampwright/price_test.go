package main

import (
	"math"
	"slices"
	"testing"

	"rampwright/optimize"
)

// leastPriceAgreement is how far a price may be from what loosening gains.
const leastPriceAgreement = 0.02

// The price of every limit a starter stands on is what recovery gains for each
// unit by which the limit is loosened and the inlet searched anew; a limit without
// a price gains nothing. Over its range the price of the outer cowl, which falls
// fastest of all on halcyre-45, tells the gain to a tenth.
func TestStarterPricesAreTheGainOfLoosening(t *testing.T) {
	for _, name := range starters {
		t.Run(name, func(t *testing.T) {
			var result struct {
				Best struct {
					Limits []struct {
						Quantity, At, Drives string
						Low, High            *float64
						Value, Price         float64
						Active               bool
						PriceRange           *float64 `json:"price_range"`
					}
				}
			}
			decode(t, designStarter(t, name).out, &result)
			study, active := starterStudy(t, name), 0
			best := study.loosened(t, "", "", false, 0)
			for _, l := range result.Best.Limits {
				if !l.Active {
					continue
				}
				active++
				upper := l.Low == nil || l.High != nil && math.Abs(l.Value-*l.High) < math.Abs(l.Value-*l.Low)
				step := 1e-6 * math.Max(1, math.Abs(l.Value))
				gain := (study.loosened(t, l.Quantity, l.At, upper, step) - best) / step
				t.Logf("%s at %s: price %.6g, gain %.6g, holds %s", l.Quantity, l.At, l.Price, gain, l.Drives)
				if !(math.Abs(l.Price-gain) <= leastPriceAgreement*math.Max(gain, 1e-4)) || (l.Price > 0) != (l.Drives != "") {
					t.Errorf("%s at %s: price %.6g, the aim gains %.6g; holds %q", l.Quantity, l.At, l.Price, gain, l.Drives)
				}
				if (l.Price > 0) != (l.PriceRange != nil) {
					t.Errorf("%s at %s: price %.6g, range %v", l.Quantity, l.At, l.Price, l.PriceRange)
				} else if l.PriceRange != nil && l.Quantity == "cowl_outer_angle_deg" {
					step := *l.PriceRange
					gain := (study.loosened(t, l.Quantity, l.At, upper, step) - best) / step
					t.Logf("over %.3g, gain %.6g", step, gain)
					if !(math.Abs(l.Price-gain) <= 0.12*l.Price) {
						t.Errorf("%s: price %.6g, over %.3g the aim gains %.6g", l.Quantity, l.Price, step, gain)
					}
				}
			}
			if active < 2 {
				t.Errorf("%d active limits", active)
			}
		})
	}
}

// loosened is the best aim with one side of a limit loosened by step.
func (s *study) loosened(t *testing.T, quantity, at string, upper bool, step float64) float64 {
	t.Helper()
	limits := slices.Clone(s.limits)
	for i := range limits {
		switch l := &limits[i]; {
		case l.Quantity != quantity || l.Point != at:
		case upper:
			l.High += step
		default:
			l.Low -= step
		}
	}
	task := optimize.Task{Problem: s.problem, Limits: limits, Aim: s.brief.Aim}
	found, err := optimize.SearchExact(t.Context(), task, optimize.Settings{Jobs: 2})
	if err != nil || !found.Feasible {
		t.Fatal(err, found)
	}
	return found.Aim
}
