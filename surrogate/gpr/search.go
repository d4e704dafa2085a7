package gpr

import (
	"context"
	"fmt"
	"math"
	"sync"

	"rampwright/surrogate"
	"rampwright/surrogate/doe"
)

// search looks for the hyperparameters of one data set.
type search struct {
	config   Config
	sample   *sample
	estimate bool    // the nugget is searched too
	forced   bool    // .. because samples at one point differ
	jitter   float64 // nugget floor in use
}

// found is the outcome of a search: logarithms of the lengths, then of the
// nugget if estimated.
type found struct {
	minimum
	lengths []float64
	nugget  float64
}

// effort says when a descent ends. The tolerance on the gradient of the log
// posterior by a logarithm and the gain that counts as none are a sample: the
// curvature grows with the samples too, so both mean the same step in the
// lengths, about 1e-3 of them for fine. Smaller gains drown in the rounding of
// the likelihood (0.01 at 500 smooth samples).
type effort struct {
	tolerance  float64
	flat       float64
	iterations int
}

var (
	rough = effort{tolerance: 2e-3, flat: 1e-4, iterations: 25}
	fine  = effort{tolerance: 1e-4, flat: 2e-6, iterations: 60}
)

// run searches on a subset from every start, then polishes the best on all
// samples. When no start has a likelihood in floating point the jitter is
// raised tenfold, up to its limit.
func (s *search) run(ctx context.Context, constant bool) (found, error) {
	if constant || s.config.Fixed {
		return s.asGiven(), nil
	}
	starts := s.starts()
	for ; s.jitter <= mostJitter; s.jitter *= 10 {
		best, err := s.multistart(ctx, starts, s.config.curvature)
		if err != nil {
			return found{}, err
		}
		if math.IsInf(best.f, 1) {
			continue
		}
		best = s.descend(ctx, newSolver(s.sample), best.x, best.curvature, fine)
		if err := ctx.Err(); err != nil {
			return found{}, err
		}
		if !math.IsInf(best.f, 1) {
			return s.unpack(best), nil
		}
	}
	return found{}, &surrogate.DataError{What: "the samples do not determine the process (collinear inputs under a linear trend?)", Row: -1, Column: -1}
}

// asGiven returns the hyperparameters of the configuration, or lengths of 1
// for a constant.
func (s *search) asGiven() found {
	lengths := make([]float64, s.sample.d)
	for j := range lengths {
		lengths[j] = 1
	}
	out := found{lengths: lengths, nugget: s.config.Nugget}
	if s.config.Start != nil {
		copy(lengths, s.config.Start.Lengths)
		out.nugget = s.config.Start.Nugget
	}
	return out
}

// bounds returns the box of the search variables.
func (s *search) bounds() (low, high []float64) {
	for range s.sample.d {
		low, high = append(low, math.Log(shortestLength)), append(high, math.Log(longestLength))
	}
	if s.estimate {
		low, high = append(low, math.Log(leastNugget)), append(high, math.Log(mostNugget))
	}
	return low, high
}

// starts lists the starting points. Long lengths alone are not enough: on many
// samples of a function with features the likelihood falls from its optimum at
// short lengths into a valley where R has lost its digits, and rises behind it to
// a poor one; the third start stands on the short side, scaled with the dimension
// because distances grow with it.
func (s *search) starts() [][]float64 {
	var starts [][]float64
	c, d := s.config, s.sample.d
	add := func(length func(j int) float64, nugget float64) {
		var start []float64
		for j := range d {
			start = append(start, math.Log(length(j)))
		}
		if s.estimate {
			start = append(start, math.Log(math.Max(nugget, leastNugget)))
		}
		starts = append(starts, start)
	}
	restarts := c.Restarts
	if c.Start != nil {
		add(func(j int) float64 { return c.Start.Lengths[j] }, math.Max(c.Start.Nugget, 1e-8))
	} else {
		add(func(int) float64 { return 0.5 }, 1e-3)
		add(func(int) float64 { return 1.5 }, 1e-6)
		add(func(int) float64 { return 0.07 * math.Sqrt(float64(d)) }, 1e-6)
		if restarts == 0 {
			restarts = 2
		}
	}
	hypercube := doe.RandomLatinHypercube(restarts, d+1, doe.Stream(c.Seed, "Gaussian process starts"))
	for _, u := range hypercube {
		add(func(j int) float64 { return 0.15 * math.Pow(40, u[j]) }, math.Pow(10, -10+9*u[d]))
	}
	return starts
}

// multistart descends from every start, side by side, and returns the best;
// ties go to the earlier start. The curvature learned on a subset is passed on
// scaled by the numbers of samples. A single start needs no choice.
func (s *search) multistart(ctx context.Context, starts [][]float64, learned []float64) (minimum, error) {
	if len(starts) == 1 {
		return minimum{x: starts[0], curvature: learned}, nil
	}
	stage := s.sample
	above := s.config.SubsetAbove
	if above == 0 {
		above = 180
	}
	if above > 0 && stage.n > above {
		stage = stage.subset(doe.SpreadRows(subsetSize, nil, stage.x))
	}
	results := make([]minimum, len(starts))
	jobs := min(max(s.config.Jobs, 1), len(starts))
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			workspace := newSolver(stage)
			for i := job; i < len(starts); i += jobs {
				if ctx.Err() == nil {
					results[i] = s.descend(ctx, workspace, starts[i], learned, rough)
				}
			}
		})
	}
	group.Wait()
	if err := ctx.Err(); err != nil {
		return minimum{}, fmt.Errorf("fitting a Gaussian process: %w", err)
	}
	best := results[0]
	for _, r := range results[1:] {
		if r.f < best.f {
			best = r
		}
	}
	for k := range best.curvature {
		best.curvature[k] *= float64(stage.n) / float64(s.sample.n)
	}
	return best, nil
}

// descend minimises the negative log posterior from one start.
func (s *search) descend(ctx context.Context, workspace *solver, start, learned []float64, e effort) minimum {
	low, high := s.bounds()
	lengths := make([]float64, s.sample.d)
	f := func(x, gradient []float64) float64 {
		if ctx.Err() != nil {
			return math.Inf(1)
		}
		nugget := s.nuggets(x, lengths)
		value := -workspace.value(lengths, nugget)
		if math.IsInf(value, 1) {
			return value
		}
		workspace.gradient(gradient, nugget)
		for j := range gradient {
			gradient[j] = -gradient[j]
		}
		return value + addPrior(gradient, x[:s.sample.d])
	}
	n := float64(workspace.n)
	return minimise(f, start, low, high, learned, e.tolerance*n, e.flat*n, e.iterations)
}

// nuggets stores the lengths of search variables x and returns their nugget.
func (s *search) nuggets(x, lengths []float64) float64 {
	for j := range lengths {
		lengths[j] = math.Exp(x[j])
	}
	switch {
	case s.estimate:
		return math.Max(math.Exp(x[s.sample.d]), s.jitter)
	case s.config.Noise == Given:
		return math.Max(s.config.Nugget, s.jitter)
	default:
		return s.jitter
	}
}

// addPrior returns the negative logarithm of a log-normal prior on each length,
//
//	sum_j (log l_j - log(sqrt(d)/2))^2/2,
//
// and adds its derivatives by log l_j to the gradient. Weak beside any
// informative likelihood, it keeps flat ones from running to a bound (scaling
// with the dimension after Hvarfner, Hellsten & Nardi 2024, from memory).
func addPrior(gradient, logLengths []float64) float64 {
	center := math.Log(0.5 * math.Sqrt(float64(len(logLengths))))
	sum := 0.0
	for j, v := range logLengths {
		sum += 0.5 * (v - center) * (v - center)
		gradient[j] += v - center
	}
	return sum
}

func (s *search) unpack(m minimum) found {
	out := found{minimum: m, lengths: make([]float64, s.sample.d)}
	out.nugget = s.nuggets(m.x, out.lengths)
	return out
}
