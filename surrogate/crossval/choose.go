// Package crossval chooses among surrogate kinds and output transforms by
// leave-one-out error, blends the good ones where none explains the data, and
// keeps every kind's figures.
package crossval

import (
	"context"
	"errors"
	"math"
	"sync"

	"rampwright/surrogate"
)

// Settings says what to choose among. The zero value has no candidates; see
// Choose for the usual call.
type Settings struct {
	// Candidates in the order of the table.
	Candidates []surrogate.Model
	// Transforms tried with each, where valid; none means Identity, Log, Logit.
	Transforms []Transform
	// Tie is the relative excess of error up to which a simpler fit is
	// preferred; 0 means 0.01.
	Tie float64
	// Alone keeps the best fit by itself where none explains the data, instead of
	// a weighted mean of the good ones.
	Alone bool
	// Jobs is the number of fits run side by side; 0 means 1. The result does
	// not depend on it.
	Jobs int
}

// Figure is one line of the table of figures.
type Figure struct {
	Kind        string
	Transform   Transform
	Description string
	Q2          float64
	RMSE        float64 // of leave-one-out, in the output's unit
	Coverage    float64 // of 95 % intervals
	Candidate   int     // place in Settings.Candidates
	Chosen      bool
	Weight      float64 // in the weighted mean; 1 for a fit chosen alone
	Err         error   // why there is no fit; the figures are then NaN
}

// Choice is the fit with the least leave-one-out error, or a weighted mean of
// good ones led by it, and the figures of all.
type Choice struct {
	surrogate.Fitted
	Kind      string // of the leading fit
	Transform Transform
	Widening  float64 // factor on the deviations, see widening and blendWidening
	Quality   surrogate.Quality
	Figures   []Figure
}

// Choose fits every candidate on every valid transform and returns the best.
func Choose(ctx context.Context, candidates []surrogate.Model, x [][]float64, y []float64) (Choice, error) {
	return Settings{Candidates: candidates}.Choose(ctx, x, y)
}

const (
	defaultTie = 0.01
	// exactTie is the leave-one-out error, relative to the spread of the data,
	// below which all fits count as exact.
	exactTie = 1e-9
)

// Choose fits every candidate on every valid transform and returns the one with
// the least root mean square leave-one-out error, in the output's unit; among
// those within Tie of it, the simplest: least complexity, then the earliest
// transform. Where even that leaves more than 3 % of the spread of the data
// unexplained, it leads a weighted mean of all fits of similar error (see
// Settings.Alone). Transforms whose domain the outputs leave are left out. A candidate
// that cannot be fitted keeps its error in the table; when none can, the first
// error is returned.
func (s Settings) Choose(ctx context.Context, x [][]float64, y []float64) (Choice, error) {
	if err := surrogate.Check(x, y, 1); err != nil {
		return Choice{}, err
	}
	if len(s.Candidates) == 0 {
		return Choice{}, errors.New("no candidate surrogate kinds")
	}
	figures, fits := s.fitAll(ctx, x, y)
	if len(figures) == 0 {
		return Choice{}, s.transforms()[0].Valid(y)
	}
	if err := ctx.Err(); err != nil {
		return Choice{}, err
	}
	best := s.pick(figures, fits, y)
	if best < 0 {
		return Choice{}, figures[0].Err
	}
	figures[best].Chosen = true
	s.weigh(figures, fits, best, y)
	c := Choice{Kind: figures[best].Kind, Transform: figures[best].Transform, Figures: figures}
	if figures[best].Weight == 1 {
		c.Widening = widening(figures, best)
	} else {
		c.Widening = blendWidening(len(x), len(x[0]))
	}
	return c.with(c.combine(fits), y), nil
}

// combine returns the only fit with a weight, or the weighted mean of several.
func (c Choice) combine(fits []surrogate.Fitted) surrogate.Fitted {
	var members []surrogate.Fitted
	var weights []float64
	for i, f := range c.Figures {
		if f.Weight > 0 {
			members, weights = append(members, fits[i]), append(weights, f.Weight)
		}
	}
	if len(members) == 1 {
		return members[0]
	}
	return newBlend(members, weights)
}

// with returns the choice with a fit of the chosen kind to the outputs y.
func (c Choice) with(fitted surrogate.Fitted, y []float64) Choice {
	c.Fitted = widen(fitted, c.Widening)
	c.Quality = surrogate.Assess(c.Fitted, y)
	return c
}

// PredictMany implements surrogate.Batch.
func (c Choice) PredictMany(points [][]float64, mean, deviation []float64, jobs int) {
	surrogate.PredictMany(c.Fitted, points, mean, deviation, jobs)
}

// fitAll fills one line and one fit for each candidate and valid transform.
func (s Settings) fitAll(ctx context.Context, x [][]float64, y []float64) ([]Figure, []surrogate.Fitted) {
	var figures []Figure
	for c, model := range s.Candidates {
		for _, t := range s.transforms() {
			if t == Identity || t.Valid(y) == nil {
				figures = append(figures, Figure{Kind: model.Kind(), Transform: t, Candidate: c})
			}
		}
	}
	fits := make([]surrogate.Fitted, len(figures))
	jobs := min(max(s.Jobs, 1), len(figures))
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			for i := job; i < len(figures); i += jobs {
				fits[i] = figures[i].fit(ctx, s.Candidates[figures[i].Candidate], x, y)
			}
		})
	}
	group.Wait()
	return figures, fits
}

func (s Settings) transforms() []Transform {
	if len(s.Transforms) == 0 {
		return Transforms
	}
	return s.Transforms
}

// fit fits the model and fills the line.
func (f *Figure) fit(ctx context.Context, model surrogate.Model, x [][]float64, y []float64) surrogate.Fitted {
	fitted, err := Transformed{model, f.Transform}.Fit(ctx, x, y)
	if err != nil {
		f.Err, f.Q2, f.RMSE, f.Coverage = err, math.NaN(), math.NaN(), math.NaN()
		return nil
	}
	f.report(fitted, y)
	return fitted
}

// report fills the figures of a fit.
func (f *Figure) report(fitted surrogate.Fitted, y []float64) {
	quality := surrogate.Assess(fitted, y)
	f.Description, f.Q2, f.RMSE, f.Coverage = fitted.Describe(), quality.Q2, quality.RMSE, quality.Coverage
}

// pick returns the place of the best fit, or -1.
func (s Settings) pick(figures []Figure, fits []surrogate.Fitted, y []float64) int {
	least := math.Inf(1)
	for i := range figures {
		if fits[i] != nil {
			least = math.Min(least, figures[i].RMSE)
		}
	}
	tie := s.Tie
	if tie == 0 {
		tie = defaultTie
	}
	scaling, _, constant := surrogate.Standardise(y)
	limit := math.Max(least*(1+tie), exactTie*scaling.Scale)
	if constant {
		limit = math.Max(least*(1+tie), exactTie*math.Abs(scaling.Center))
	}
	best := -1
	for i := range figures {
		if fits[i] == nil || !(figures[i].RMSE <= limit) {
			continue
		}
		if best < 0 || simpler(figures[i], fits[i], figures[best], fits[best]) {
			best = i
		}
	}
	return best
}

func simpler(f Figure, fit surrogate.Fitted, g Figure, other surrogate.Fitted) bool {
	if f.Transform != g.Transform && fit.Complexity() == other.Complexity() {
		return f.Transform < g.Transform
	}
	return fit.Complexity() < other.Complexity()
}

// Refit fits the chosen kind on the chosen transform again, or all members of a
// weighted mean, starting from what they found: cheap, for a few samples more.
// Weights and the figures of the other kinds are those of the choice. It returns
// *TransformError when a new output leaves the domain of the transform: choose
// again then.
func (c Choice) Refit(ctx context.Context, x [][]float64, y []float64) (Choice, error) {
	fitted, err := c.Fitted.Warm().Fit(ctx, x, y)
	if err != nil {
		return Choice{}, err
	}
	c.Figures = append([]Figure(nil), c.Figures...)
	members := []surrogate.Fitted{fitted}
	if b, ok := fitted.(*blend); ok {
		members = b.members
	}
	for i := range c.Figures {
		if f := &c.Figures[i]; f.Weight > 0 {
			f.report(members[0], y)
			members = members[1:]
		}
	}
	return c.with(fitted, y), nil
}
