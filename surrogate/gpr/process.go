package gpr

import (
	"fmt"
	"math"
	"sync"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
	"rampwright/surrogate"
)

// Process is a fitted Gaussian process, safe for concurrent use.
type Process struct {
	config  Config
	scaling surrogate.Scaling
	n, d, q int
	z       []float64 // samples over lengths, by rows
	scale   []float64 // 1/l_j
	alpha   []float64 // R^-1 (y - F beta), standardised
	beta    []float64
	s2      float64 // process variance, standardised
	factor  blas64.Triangular
	trended []float64 // (L^-1 F)', q x n
	gram    blas64.Triangular

	widening     float64 // of the deviations, see widen
	hyper        Hyper
	curvature    []float64
	evidence     Evidence
	loo          []float64
	looDeviation []float64
	summary      string
	pool         sync.Pool
}

// Evidence says how a fit came about.
type Evidence struct {
	LogLikelihood float64 // profile log likelihood of the standardised outputs
	LogPosterior  float64 // with the prior on the lengths, where they were searched
	Gradient      float64 // largest free derivative of the log posterior by a log hyperparameter
	Evaluations   int     // likelihoods with gradient in the last descent
	Jitter        float64 // nugget floor that was needed for the factorisation
	AtBound       []int   // inputs whose length lies on its bound
	Widening      float64 // factor on the deviations beyond the likelihood's, 1 or more
}

// process builds the fitted process from the hyperparameters found.
func (s *search) process(f found, scaling surrogate.Scaling, y []float64) (*Process, error) {
	w := newSolver(s.sample)
	nugget, likelihood, err := s.factorise(w, f)
	if err != nil {
		return nil, err
	}
	if c := s.config; c.Fixed && c.Start.Deviation > 0 {
		ratio := c.Start.Deviation / scaling.Scale
		w.s2 = ratio * ratio
	}
	n, d, q := s.sample.n, s.sample.d, s.sample.q
	p := &Process{
		config: s.config, scaling: scaling, n: n, d: d, q: q,
		z: make([]float64, n*d), scale: make([]float64, d),
		widening: 1, alpha: w.alpha, beta: w.beta, s2: w.s2, trended: w.trended, gram: w.gram,
		curvature: f.curvature,
	}
	for j, l := range f.lengths {
		p.scale[j] = 1 / l
	}
	for i, row := range s.sample.x {
		for j, v := range row {
			p.z[i*d+j] = v * p.scale[j]
		}
	}
	p.factor = w.r
	p.factor.Data = append([]float64(nil), w.r.Data...)
	p.pool.New = func() any {
		return &scratch{white: make([]float64, n), trend: make([]float64, q)}
	}
	p.hyper = Hyper{Lengths: f.lengths, Nugget: nugget, Deviation: math.Sqrt(w.s2) * scaling.Scale}
	p.evidence = Evidence{LogLikelihood: likelihood, LogPosterior: -f.f, Gradient: f.slope, Evaluations: f.evaluations, Jitter: s.jitter, AtBound: f.atBound(), Widening: 1}
	scatter := p.leaveOneOut(w, y)
	if !s.config.Fixed {
		p.widen(scatter)
	}
	p.summary = p.describe(s.forced)
	return p, nil
}

// factorise leaves factor, trend and variance in w, raising the jitter tenfold
// until there is a factor.
func (s *search) factorise(w *solver, f found) (nugget, likelihood float64, err error) {
	for ; s.jitter <= mostJitter; s.jitter *= 10 {
		nugget = math.Max(f.nugget, s.jitter)
		if likelihood = w.value(f.lengths, nugget); !math.IsInf(likelihood, -1) {
			return nugget, likelihood, nil
		}
	}
	return 0, 0, &surrogate.DataError{What: "the samples do not determine the trend (collinear inputs?)", Row: -1, Column: -1}
}

// atBound returns the inputs whose searched length lies on its bound.
func (f found) atBound() []int {
	var inputs []int
	for j, l := range f.lengths {
		if f.x != nil && (l <= shortestLength*(1+1e-9) || l >= longestLength*(1-1e-9)) {
			inputs = append(inputs, j)
		}
	}
	return inputs
}

// leaveOneOut stores the closed-form predictions
//
//	y_-i = y_i - (Q y)_i/Q_ii,  s_-i^2 = s2/Q_ii,
//	Q = R^-1 - R^-1 F (F'R^-1 F)^-1 F'R^-1
//
// (Dubrule 1983; without trend Rasmussen & Williams 2006, equation 5.12); Q y is
// alpha. The hyperparameters stay those of the whole sample. It returns the mean
// square of the standardised residuals and uses up the factor of w.
func (p *Process) leaveOneOut(w *solver, y []float64) (scatter float64) {
	n, q := p.n, p.q
	lapack64.Potri(w.r)
	solved := append([]float64(nil), p.trended...) // (R^-1 F)'
	if q > 0 {
		blas64.Trsm(blas.Right, blas.NoTrans, 1, p.factor, blas64.General{Rows: q, Cols: n, Stride: n, Data: solved})
	}
	p.loo, p.looDeviation = make([]float64, n), make([]float64, n)
	row := make([]float64, q)
	for i := range n {
		diagonal := w.r.Data[i*w.r.Stride+i]
		if q > 0 {
			for j := range row {
				row[j] = solved[j*n+i]
			}
			forward(p.gram, row)
			diagonal -= dot(row, row)
		}
		diagonal = math.Max(diagonal, smallestVariance)
		p.loo[i] = y[i] - p.scaling.Scale*p.alpha[i]/diagonal
		p.looDeviation[i] = p.scaling.Scale * math.Sqrt(p.s2/diagonal)
		if p.s2 > 0 {
			scatter += p.alpha[i] * p.alpha[i] / (p.s2 * diagonal) / float64(n)
		}
	}
	return scatter
}

// widen multiplies the deviations of a searched fit. Maximum likelihood takes
// its lengths for certain and is overconfident on few samples; the factor is
//
//	sqrt(max(1, scatter) n/(n - d - q)),
//
// scatter the mean square of the standardised leave-one-out residuals: the
// larger of the likelihood's scale and that of leave-one-out, with a degree of
// freedom for each length and trend coefficient (our rule; the tests show that
// 95 % intervals then cover fresh points at 85 % or more).
func (p *Process) widen(scatter float64) {
	n := float64(p.n)
	p.widening = math.Sqrt(math.Max(1, scatter) * n / math.Max(n-float64(p.d+p.q), 1))
	for i := range p.looDeviation {
		p.looDeviation[i] *= p.widening
	}
	p.evidence.Widening = p.widening
}

// LeaveOneOut returns the closed-form leave-one-out predictions.
func (p *Process) LeaveOneOut() []float64 { return p.loo }

// LeaveOneOutDeviation returns their standard deviations, noise included.
func (p *Process) LeaveOneOutDeviation() []float64 { return p.looDeviation }

// Hyper returns the hyperparameters found.
func (p *Process) Hyper() Hyper {
	h := p.hyper
	h.Lengths = append([]float64(nil), h.Lengths...)
	return h
}

// Trend returns the trend coefficients in the output's unit: level, slopes.
func (p *Process) Trend() []float64 {
	trend := make([]float64, p.q)
	for j, b := range p.beta {
		trend[j] = p.scaling.Scale * b
	}
	if p.q > 0 {
		trend[0] = p.scaling.Undo(p.beta[0])
	}
	return trend
}

// Evidence returns how the fit came about.
func (p *Process) Evidence() Evidence { return p.evidence }

// Complexity orders Gaussian processes after the expansions.
func (p *Process) Complexity() int { return 2_000_000 + p.n }

// Describe names kernel, lengths and nugget.
func (p *Process) Describe() string { return p.summary }

func (p *Process) describe(forced bool) string {
	if p.s2 == 0 {
		return "constant"
	}
	text := p.config.Kernel.String() + ", lengths"
	for _, l := range p.hyper.Lengths {
		text += fmt.Sprintf(" %.3g", l)
	}
	switch {
	case forced:
		text += fmt.Sprintf(", nugget %.1e estimated because samples at one point differ", p.hyper.Nugget)
	case p.config.Noise != Interpolate:
		text += fmt.Sprintf(", nugget %.1e", p.hyper.Nugget)
	}
	if p.evidence.Jitter > nuggetFloor {
		text += fmt.Sprintf(", jitter %.0e", p.evidence.Jitter)
	}
	return text
}

// Warm returns the configuration that refits from these hyperparameters alone.
func (p *Process) Warm() surrogate.Model {
	c := p.config
	h := p.Hyper()
	c.Start, c.Restarts, c.curvature = &h, 0, p.curvature
	return c
}
