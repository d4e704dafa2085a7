package optimize

import (
	"context"
	"math"

	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/pce"
)

// A quantity that is a polynomial of the variables needs no process around an
// optimum: an expansion over all samples reproduces it everywhere. Leave-one-out
// prediction tells: no other function is met to exactFit of its spread at points
// the fit has not seen.

// exactFit is the leave-one-out error of an exact fit, relative to the spread of
// the data, and exactSamples how many samples a term it needs: a single one more
// than terms would do to tell.
const (
	exactFit     = 1e-8
	exactSamples = 1.2
)

// polynomials returns, by place among the fitted quantities, the expansions over
// all training samples but one that reproduce their quantity exactly; nil where
// there is none.
func (d *designer) polynomials(ctx context.Context, without *sample) []*Fit {
	known := make([]*Fit, len(d.plan.fitted))
	inSlots(d.settings.Jobs, len(known), func(k int) {
		known[k] = d.polynomial(ctx, k, without)
	})
	return known
}

func (d *designer) polynomial(ctx context.Context, k int, without *sample) *Fit {
	fit := &Fit{Quantity: d.plan.fitted[k], exact: true}
	var x [][]float64
	var y []float64
	for _, s := range d.training {
		v := s.values[fit.Quantity]
		if math.IsNaN(v) || math.IsInf(v, 0) {
			if math.IsInf(v, 0) {
				return nil
			}
			continue
		}
		if s != without {
			x, y = append(x, s.u), append(y, v)
		}
	}
	if len(y) <= d.plan.dimension()+2 {
		return nil
	}
	fit.Samples = len(y)
	if d.wide != nil && d.wide.fits[k].usable() && exact(d.wide.fits[k].Choice, y) {
		if choice, err := d.wide.fits[k].Choice.Refit(ctx, x, y); err == nil && exact(choice, y) {
			fit.Choice = choice
			return fit
		}
	}
	choice, err := crossval.Settings{Candidates: []surrogate.Model{pce.OLS{SamplesPerTerm: exactSamples}}, Transforms: identity, Alone: true}.Choose(ctx, x, y)
	if err != nil || !exact(choice, y) {
		return nil
	}
	fit.Choice = choice
	return fit
}

var identity = []crossval.Transform{crossval.Identity}

// exact reports whether the leave-one-out predictions of a choice meet the data.
func exact(choice crossval.Choice, y []float64) bool {
	scaling, _, constant := surrogate.Standardise(y)
	return !constant && choice.Quality.RMSE <= exactFit*scaling.Scale
}
