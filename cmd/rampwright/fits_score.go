package main

import (
	"context"
	"math"
	"slices"
	"time"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/pce"
)

// fitsOutcome is what became of the fits of one quantity on one design: a score
// and moments a kind, those of the choice last.
type fitsOutcome struct {
	scores  []report.FitsScore
	moments []fitsMoments
}

// fitsMoments are mean and deviation of one fit by the two routes.
type fitsMoments struct{ coefficients, draws fitsMoment }

// fitsMoment is one route; NaN where it is not to be had. The errors are those of
// the fit alone.
type fitsMoment struct{ mean, deviation, meanError, deviationError float64 }

var noMoment = fitsMoment{math.NaN(), math.NaN(), math.NaN(), math.NaN()}

// fit fits every kind alone, each on the output transform its leave-one-out
// error prefers, and then lets them compete. No fit is made twice.
func (r *fitsRun) fit(ctx context.Context, c *fitsCell, quantity int) *fitsOutcome {
	x, y := present(c.x, c.y[quantity])
	kinds := make([]*remembered, len(r.kinds))
	candidates := make([]surrogate.Model, len(r.kinds))
	for i, kind := range r.kinds {
		kinds[i] = &remembered{Model: r.noisy(kind)}
		candidates[i] = kinds[i]
	}
	outcome := &fitsOutcome{}
	all := 0.0
	for i, candidate := range candidates {
		choice, err := crossval.Choose(ctx, []surrogate.Model{candidate}, x, y)
		if ctx.Err() != nil {
			return nil
		}
		outcome.add(r.judge(choice, err, quantity, kinds[i].seconds), r.momentsOf(choice, err, kinds[i], y, quantity))
		all += kinds[i].seconds
	}
	choice, err := crossval.Choose(ctx, candidates, x, y)
	var taken *remembered
	for i := range r.kinds {
		if err == nil && r.kinds[i].Kind() == choice.Kind {
			taken = kinds[i]
		}
	}
	outcome.add(r.judge(choice, err, quantity, all), r.momentsOf(choice, err, taken, y, quantity))
	return outcome
}

func (o *fitsOutcome) add(score report.FitsScore, moments fitsMoments) {
	o.scores, o.moments = append(o.scores, score), append(o.moments, moments)
}

// remembered keeps the fits of one kind to one set of points, so that a kind
// that was fitted alone is not fitted again when all compete. It serves one
// goroutine.
type remembered struct {
	surrogate.Model
	fits    []rememberedFit
	seconds float64 // spent fitting
}

type rememberedFit struct {
	y      []float64
	fitted surrogate.Fitted
	err    error
}

// Fit implements surrogate.Model; the outputs tell the fits apart.
func (m *remembered) Fit(ctx context.Context, x [][]float64, y []float64) (surrogate.Fitted, error) {
	for _, f := range m.fits {
		if slices.Equal(f.y, y) {
			return f.fitted, f.err
		}
	}
	began := time.Now()
	fitted, err := m.Model.Fit(ctx, x, y)
	m.seconds += time.Since(began).Seconds()
	m.fits = append(m.fits, rememberedFit{slices.Clone(y), fitted, err})
	return fitted, err
}

// judge compares a fit with the exact values at the test points.
func (r *fitsRun) judge(choice crossval.Choice, err error, quantity int, seconds float64) report.FitsScore {
	if err != nil {
		return report.FitsScore{Err: err}
	}
	score := report.FitsScore{Kind: choice.Kind, Seconds: seconds}
	points, exact := present(r.tests, r.exact[quantity])
	if len(points) == 0 {
		return report.FitsScore{Err: errNoTruth}
	}
	predicted, errors := make([]float64, len(points)), make([]float64, len(points))
	for i, u := range points {
		predicted[i] = choice.Mean(u)
		errors[i] = math.Abs(predicted[i] - exact[i])
	}
	score.RMSE, score.Q2 = surrogate.RMSE(exact, predicted), surrogate.Q2(exact, predicted)
	score.Median, score.P10, score.P90 = report.Quantile(errors, 0.5), report.Quantile(errors, 0.1), report.Quantile(errors, 0.9)
	score.Max = report.Quantile(errors, 1)
	score.Judged = min(len(points), intervalPoints)
	mean, deviation := make([]float64, score.Judged), make([]float64, score.Judged)
	choice.PredictMany(points[:score.Judged], mean, deviation, 1)
	for i, s := range deviation {
		if math.Abs(mean[i]-exact[i]) <= normal95*s {
			score.Inside++
		}
	}
	return score
}

var errNoTruth = &problems.Status{Phrase: "no test point has an exact value"}

// normal95 is the two-sided 95 % point of the normal distribution.
const normal95 = 1.96

// momentsOf returns the moments of a fit: over the test points, which are draws
// of the distribution of the inputs, and from the coefficients of the kind's fit
// to the quantity itself, where it has them. The error of a fit is that of its
// draws against the exact model on the same ones, so that what the draws leave
// cancels; of coefficients it is that of the fit they belong to.
func (r *fitsRun) momentsOf(choice crossval.Choice, err error, kind *remembered, y []float64, quantity int) fitsMoments {
	m := fitsMoments{noMoment, noMoment}
	if err != nil {
		return m
	}
	points, exact := present(r.tests, r.exact[quantity])
	truth := surrogate.Sampled(func(v []float64) float64 { return v[0] }, columnOf(exact))
	m.draws = drawn(choice.Mean, points, truth)
	for _, f := range kind.fits {
		if expansion, ok := f.fitted.(*pce.Expansion); ok && slices.Equal(f.y, y) {
			mean, variance := expansion.Moments()
			m.coefficients = drawn(expansion.Mean, points, truth)
			m.coefficients.mean, m.coefficients.deviation = mean, math.Sqrt(variance)
		}
	}
	return m
}

// drawn returns the moments of a fit over the points and their errors.
func drawn(mean func(u []float64) float64, points [][]float64, truth surrogate.Moments) fitsMoment {
	s := surrogate.Sampled(mean, points)
	return fitsMoment{s.Mean, s.Deviation, math.Abs(s.Mean - truth.Mean), math.Abs(s.Deviation - truth.Deviation)}
}
