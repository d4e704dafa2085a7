package optimize

import (
	"context"
	"math"

	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/gpr"
	"rampwright/surrogate/pce"
)

// Fit is the surrogate of one quantity and the figures it was chosen by.
type Fit struct {
	Quantity int // index in the problem's quantities
	Samples  int // with a value
	Choice   crossval.Choice
	// Err is why there is no surrogate: too few samples with a value. Limits on
	// the quantity are then judged on exact values only.
	Err    error
	window window // the part of the cube that Choice sees; the zero value is all of it
	exact  bool   // an expansion that reproduces the quantity, see polynomials
	// never is a quantity that applied nowhere.
	never bool
}

// wideKinds compete for every quantity over the whole box; the sparse expansion
// is there for sums of functions of few variables, which it finds exactly. Around
// an optimum it and the weighted one gave nothing or lost.
func wideKinds(seed int64) []surrogate.Model {
	return []surrogate.Model{pce.OLS{}, pce.Ridge{}, gpr.Config{Seed: seed}, pce.LeastAngle{}}
}

// nearKinds compete around an optimum, where a kind must follow the samples it is
// given closely.
func nearKinds(seed int64) []surrogate.Model {
	return []surrogate.Model{gpr.Config{Seed: seed}, gpr.Config{Kernel: gpr.Matern52, Seed: seed}}
}

// transforms of the outputs that compete.
var transforms = []crossval.Transform{crossval.Identity, crossval.Log}

// fitAll chooses a surrogate for every fitted quantity. Earlier fits, where
// given, are refitted warm instead of chosen again; those known already, by place,
// are taken as they are. With zoom the others see the smallest window that holds
// the samples, where that is small.
func (p *plan) fitAll(ctx context.Context, jobs int, kinds []surrogate.Model, samples []*sample, earlier []Fit, known []*Fit, zoom bool) ([]Fit, error) {
	fits := make([]Fit, len(p.fitted))
	failures := make([]error, len(p.fitted))
	inSlots(jobs, len(p.fitted), func(k int) {
		if known != nil && known[k] != nil {
			fits[k] = *known[k]
			return
		}
		var before *Fit
		if earlier != nil && earlier[k].Err == nil && !earlier[k].never {
			before = &earlier[k]
		}
		fits[k] = fitOne(ctx, p.fitted[k], kinds, samples, before, zoom)
		failures[k] = ctx.Err()
	})
	for _, err := range failures {
		if err != nil {
			return nil, err
		}
	}
	return fits, nil
}

func fitOne(ctx context.Context, quantity int, kinds []surrogate.Model, samples []*sample, before *Fit, zoom bool) Fit {
	fit := Fit{Quantity: quantity}
	var x [][]float64
	var y []float64
	never := true
	for _, s := range samples {
		v := s.values[quantity]
		never = never && math.IsInf(v, 1)
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			x, y = append(x, s.u), append(y, v)
		}
	}
	fit.Samples = len(y)
	if never {
		fit.never = true
		return fit
	}
	if before != nil {
		if choice, err := before.Choice.Refit(ctx, before.window.all(x), y); err == nil {
			fit.Choice, fit.window = choice, before.window
			return fit
		}
	}
	if zoom {
		fit.window = closeWindow(x)
	}
	fit.Choice, fit.Err = crossval.Settings{Candidates: kinds, Transforms: transforms}.Choose(ctx, fit.window.all(x), y)
	return fit
}

// surrogateLandscape is the fitted quantities, each shifted so that it equals the
// exact value at the anchor and tilted by what earlier steps near it have shown,
// and the explicit quantities themselves.
type surrogateLandscape struct {
	explicit *explicitPart
	fits     []Fit
	anchor   *anchor // nil: plain surrogates
	calls    int
}

// anchor is an exact evaluation that corrects the surrogates near it (additive
// model management, first-order consistent in the limit: Alexandrov et al.
// 1998): m(u) = s(u) + shift + tilt (u - anchor).
type anchor struct {
	sample *sample
	shift  []float64   // by fit
	tilt   [][]float64 // by fit
}

func (p *plan) surrogates(fits []Fit, at *anchor) *surrogateLandscape {
	return &surrogateLandscape{explicit: newExplicitPart(p), fits: fits, anchor: at}
}

// newAnchor shifts the fits onto the exact values of a sample; a tilt may be
// handed on from an earlier anchor.
func newAnchor(s *sample, fits []Fit, tilt [][]float64) *anchor {
	a := &anchor{sample: s, shift: make([]float64, len(fits)), tilt: tilt}
	if a.tilt == nil {
		a.tilt = make([][]float64, len(fits))
		for k := range a.tilt {
			a.tilt[k] = make([]float64, len(s.u))
		}
	}
	for k := range fits {
		if exact := s.values[fits[k].Quantity]; fits[k].usable() && !math.IsNaN(exact) && !math.IsInf(exact, 0) {
			a.shift[k] = exact - fits[k].mean(s.u)
		}
	}
	return a
}

// usable reports whether the fit predicts a number.
func (f *Fit) usable() bool { return f.Err == nil && !f.never }

// mean is the prediction at u.
func (f *Fit) mean(u []float64) float64 { return f.Choice.Mean(f.window.of(u)) }

// gradient stores the slopes at u.
func (f *Fit) gradient(dst, u []float64) {
	f.Choice.Gradient(dst, f.window.of(u))
	for j, width := range f.window.width {
		dst[j] /= width
	}
}

// deviation is the standard deviation of the prediction at u.
func (f *Fit) deviation(u []float64) float64 {
	_, deviation := f.Choice.Predict(f.window.of(u))
	return deviation
}

// learn updates the tilt so that the corrected model also meets the exact values
// of another sample (Broyden's rank-one update, Nocedal & Wright eq. 11.7).
func (a *anchor) learn(s *sample, fits []Fit) {
	length := 0.0
	for j := range s.u {
		length += (s.u[j] - a.sample.u[j]) * (s.u[j] - a.sample.u[j])
	}
	if length == 0 {
		return
	}
	for k := range fits {
		exact := s.values[fits[k].Quantity]
		if !fits[k].usable() || math.IsNaN(exact) || math.IsInf(exact, 0) {
			continue
		}
		residual := exact - fits[k].mean(s.u) - a.at(k, s.u)
		for j := range s.u {
			a.tilt[k][j] += residual * (s.u[j] - a.sample.u[j]) / length
		}
	}
}

// at is the correction of fit k at u.
func (a *anchor) at(k int, u []float64) float64 {
	sum := a.shift[k]
	for j, slope := range a.tilt[k] {
		sum += slope * (u[j] - a.sample.u[j])
	}
	return sum
}

func (l *surrogateLandscape) values(u, dst []float64) {
	l.calls++
	for k := range l.fits {
		fit := &l.fits[k]
		if !fit.usable() {
			dst[fit.Quantity] = math.Inf(1) // asks nothing until it can be fitted
			continue
		}
		v := fit.mean(u)
		if l.anchor != nil {
			v += l.anchor.at(k, u)
		}
		dst[fit.Quantity] = v
	}
	l.explicit.values(u, dst)
}

func (l *surrogateLandscape) jacobian(u []float64, rows [][]float64) {
	for k := range l.fits {
		fit := &l.fits[k]
		row := rows[fit.Quantity]
		if !fit.usable() {
			clear(row)
			continue
		}
		fit.gradient(row, u)
		if l.anchor != nil {
			addScaled(row, 1, l.anchor.tilt[k])
		}
	}
	l.explicit.jacobian(u, rows)
}
