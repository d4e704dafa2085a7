package main

import (
	"math"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems/analytic"
	"rampwright/surrogate"
)

// moments sets the routes to mean and deviation side by side, for inputs spread
// evenly over the box, at the largest number of samples.
func (r *fitsRun) moments() []report.FitsMoments {
	var list []report.FitsMoments
	none := math.NaN()
	for k, q := range r.quantities {
		quantity := r.model.Quantities()[q]
		_, values := present(r.tests, r.exact[k])
		draws := surrogate.Sampled(func(v []float64) float64 { return v[0] }, columnOf(values))
		list = append(list, report.FitsMoments{
			Quantity: quantity, Route: report.ExactDraws, Mean: draws.Mean, Deviation: draws.Deviation,
			MeanError: none, DeviationError: none, MeanSampling: draws.MeanError, DeviationSampling: draws.DeviationError,
		})
		if p, ok := r.model.(*analytic.Problem); ok && p.Moments != nil && quantity.Name == analytic.Value {
			list = append(list, report.FitsMoments{
				Quantity: quantity, Route: report.PublishedMoments, Mean: p.Moments.Mean, Deviation: math.Sqrt(p.Moments.Variance),
				MeanError: none, DeviationError: none, MeanSampling: none, DeviationSampling: none,
			})
		}
		for kind := range len(r.kinds) + 1 {
			if m := r.route(k, kind, func(m fitsMoments) fitsMoment { return m.coefficients }); !math.IsNaN(m.Mean) {
				m.Route, m.MeanSampling, m.DeviationSampling = report.ByCoefficients, none, none
				list = append(list, m)
			}
			m := r.route(k, kind, func(m fitsMoments) fitsMoment { return m.draws })
			m.Route, m.MeanSampling, m.DeviationSampling = report.BySurrogateDraws, draws.MeanError, draws.DeviationError
			list = append(list, m)
		}
	}
	return list
}

// route takes medians over the designs of one route of a kind, the choice coming
// after the last kind.
func (r *fitsRun) route(quantity, kind int, of func(fitsMoments) fitsMoment) report.FitsMoments {
	most := r.counts[len(r.counts)-1]
	var mean, deviation, meanError, deviationError []float64
	for i := range r.cells {
		outcome := r.cells[i].done[quantity]
		if r.cells[i].count != most || outcome == nil {
			continue
		}
		if m := of(outcome.moments[kind]); !math.IsNaN(m.mean) {
			mean, deviation = append(mean, m.mean), append(deviation, m.deviation)
			meanError, deviationError = append(meanError, m.meanError), append(deviationError, m.deviationError)
		}
	}
	name := report.FitsChoice
	if kind < len(r.kinds) {
		name = r.kinds[kind].Kind()
	}
	return report.FitsMoments{
		Quantity: r.model.Quantities()[r.quantities[quantity]], Kind: name, Samples: most,
		Mean: report.Quantile(mean, 0.5), Deviation: report.Quantile(deviation, 0.5),
		MeanError: report.Quantile(meanError, 0.5), DeviationError: report.Quantile(deviationError, 0.5),
	}
}
