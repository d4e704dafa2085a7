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
	// Alone keeps the fit of least leave-one-out error by itself where none
	// explains the data, instead of a weighted mean of the good ones or the
	// simplest.
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
	Fresh       float64 // RMSE to be expected at fresh points, see freshError
	Coverage    float64 // of 95 % intervals
	Candidate   int     // place in Settings.Candidates
	Chosen      bool
	Weight      float64 // in the weighted mean; 1 for a fit chosen alone
	Err         error   // why there is no fit; the figures are then NaN
}

// Choice is the fit of least error, or a weighted mean of good ones led by it,
// and the figures of all.
type Choice struct {
	surrogate.Fitted
	Kind      string // of the leading fit
	Transform Transform
	Widening  float64 // factor on the deviations: disagreement and small samples
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
// transform.
//
// Where even that leaves more than 3 % of the spread of the data unexplained, the
// error to be expected at fresh points decides instead, and its best fit leads a
// weighted mean of all fits of similar error (see Settings.Alone); or stands back
// for the simplest fit, where it does not clearly beat the mean of the data.
//
// Deviations are widened by what small samples leave open and by the disagreement
// of fits that explain the samples about as well. Transforms whose domain the
// outputs leave are left out. A candidate that cannot be fitted keeps its error in
// the table; when none can, the first error is returned.
func (s Settings) Choose(ctx context.Context, x [][]float64, y []float64) (Choice, error) {
	if err := surrogate.Check(x, y, 1); err != nil {
		return Choice{}, err
	}
	if len(s.Candidates) == 0 {
		return Choice{}, errors.New("no candidate surrogate kinds")
	}
	t := s.try(ctx, x, y)
	if len(t.figures) == 0 {
		return Choice{}, s.transforms()[0].Valid(y)
	}
	if err := ctx.Err(); err != nil {
		return Choice{}, err
	}
	best := t.decide()
	if best < 0 {
		return Choice{}, t.figures[0].Err
	}
	t.figures[best].Chosen = true
	c := Choice{Kind: t.figures[best].Kind, Transform: t.figures[best].Transform, Figures: t.figures}
	fitted := c.combine(t.fits)
	c.Widening = t.widening(look(fitted, t.points))
	return c.with(fitted, y), nil
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

// trial is a choice under way.
type trial struct {
	Settings
	x        [][]float64
	y        []float64
	points   [][]float64        // the probes
	figures  []Figure           // one line for each candidate and valid transform
	fits     []surrogate.Fitted // line by line, nil where there is none
	outlooks []outlook
	exact    float64 // leave-one-out error up to which fits count as exact
}

// try makes every fit.
func (s Settings) try(ctx context.Context, x [][]float64, y []float64) *trial {
	t := &trial{Settings: s, x: x, y: y, points: probesAmong(x)}
	scaling, _, constant := surrogate.Standardise(y)
	t.exact = exactTie * scaling.Scale
	if constant {
		t.exact = exactTie * math.Abs(scaling.Center)
	}
	for c, model := range s.Candidates {
		for _, transform := range s.transforms() {
			if transform == Identity || transform.Valid(y) == nil {
				t.figures = append(t.figures, Figure{Kind: model.Kind(), Transform: transform, Candidate: c})
			}
		}
	}
	t.fits, t.outlooks = make([]surrogate.Fitted, len(t.figures)), make([]outlook, len(t.figures))
	jobs := min(max(s.Jobs, 1), len(t.figures))
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			for i := job; i < len(t.figures); i += jobs {
				t.fit(ctx, i)
			}
		})
	}
	group.Wait()
	return t
}

func (s Settings) transforms() []Transform {
	if len(s.Transforms) == 0 {
		return Transforms
	}
	return s.Transforms
}

// fit makes the fit of a line and fills the line.
func (t *trial) fit(ctx context.Context, i int) {
	f := &t.figures[i]
	fitted, err := Transformed{t.Candidates[f.Candidate], f.Transform}.Fit(ctx, t.x, t.y)
	if err != nil {
		f.Err, f.Q2, f.RMSE, f.Fresh, f.Coverage = err, math.NaN(), math.NaN(), math.NaN(), math.NaN()
		return
	}
	f.report(fitted, t.y)
	t.fits[i], t.outlooks[i] = fitted, look(fitted, t.points)
	f.Fresh = freshError(f.RMSE, fitted, t.outlooks[i])
}

// report fills the figures of a fit.
func (f *Figure) report(fitted surrogate.Fitted, y []float64) {
	quality := surrogate.Assess(fitted, y)
	f.Description, f.Q2, f.RMSE, f.Coverage = fitted.Describe(), quality.Q2, quality.RMSE, quality.Coverage
}

// decide gives every fit its weight and returns the place of the leading one, -1
// where there is no fit.
func (t *trial) decide() int {
	best := t.pick(func(f *Figure) float64 { return f.RMSE })
	if best >= 0 && !t.Alone && !t.explains(best) {
		best = t.pick(func(f *Figure) float64 { return f.Fresh })
		if beatsTheMean(t.y, t.fits[best]) {
			t.weigh(best)
			return best
		}
		best = t.simplest(func(*Figure) bool { return true })
	}
	if best >= 0 {
		t.figures[best].Weight = 1
	}
	return best
}

// pick returns the place of the simplest fit whose error is within the tie of the
// least, or -1.
func (t *trial) pick(size func(*Figure) float64) int {
	least := math.Inf(1)
	for i := range t.figures {
		if t.fits[i] != nil {
			least = math.Min(least, size(&t.figures[i]))
		}
	}
	tie := t.Tie
	if tie == 0 {
		tie = defaultTie
	}
	limit := math.Max(least*(1+tie), t.exact)
	return t.simplest(func(f *Figure) bool { return size(f) <= limit })
}

// simplest returns the place of the simplest fit among those eligible, or -1.
func (t *trial) simplest(eligible func(*Figure) bool) int {
	best := -1
	for i := range t.figures {
		if t.fits[i] == nil || !eligible(&t.figures[i]) {
			continue
		}
		if best < 0 || simpler(t.figures[i], t.fits[i], t.figures[best], t.fits[best]) {
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
// Weights, errors expected at fresh points, the widening and the figures of the
// other kinds are those of the choice. It returns *TransformError when a new
// output leaves the domain of the transform: choose again then.
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
