package optimize

import (
	"context"
	"math"
	"slices"

	"rampwright/optimize/global"
	"rampwright/surrogate"
	"rampwright/surrogate/gpr"
)

// improve looks over the whole box for the point of largest constrained expected
// improvement (Schonlau, Welch & Jones 1998; Gardner et al. 2014; from memory),
//
//	log EI(aim) + sum_r log P(row r holds) + log P(the model gives a value)
//
// or, while nothing is feasible, the last two alone. It is used where the wide
// surfaces do not explain the aim: their best point is then no better than a
// guess, and what is not known has to be weighed. It returns nil where no new
// point promises a gain.
func (d *designer) improve(ctx context.Context) (*proposal, error) {
	a, err := d.newAcquisition(ctx)
	if a == nil || err != nil {
		return nil, err
	}
	d.acquisition = a
	return d.improveOn(ctx, a, nil)
}

// improveOn is improve on an acquisition at hand, apart from points of the same round.
func (d *designer) improveOn(ctx context.Context, a *acquisition, round []*proposal) (*proposal, error) {
	reach := improveApart
	if a.best == nil { // what is believed of the aim does not keep points apart
		reach = math.Max(reach, spacing(d.training)/2)
	}
	var seeds [][]float64
	for _, s := range a.members[:min(len(a.members), improveSeeds)] {
		seeds = append(seeds, s.u)
	}
	found, err := global.Minimize(ctx, d.plan.dimension(), func(u []float64) (f, violation float64) {
		return -a.at(u), d.plan.linearViolation(u) + crowding(u, round, reach)
	}, global.Settings{Seed: uint64(d.settings.Seed) + uint64(len(d.samples)+len(round)), Seeds: seeds, Generations: improveGenerations})
	if err != nil {
		return nil, err
	}
	d.counts.Surrogate += found.Evaluations
	if found.Violation > 0 || !d.fresh(found.X) || a.best != nil && -found.F < math.Log(improveGain) {
		return nil, nil
	}
	return d.proposal(found.X, d.wide), nil
}

// crowding sums how far u lies inside the reach of points of the same round.
func crowding(u []float64, round []*proposal, reach float64) float64 {
	sum := 0.0
	for _, p := range round {
		sum += math.Max(0, reach-distance(u, p.u))
	}
	return sum
}

const (
	// improveApart is the least distance of a point from others of its round.
	improveApart       = 10 * apart
	improveSeeds       = 10
	improveGenerations = 80
	// improveGain is the expected improvement, relative to the aim of the best
	// design so far, below which it is not worth an exact evaluation.
	improveGain = 1e-4
)

// acquisition is the logarithm of the constrained expected improvement, relative
// to the aim of the best design.
type acquisition struct {
	plan    *plan
	best    *sample      // nil before the first feasible one
	members []*sample    // the best first
	aims    []*aimFit    // by quantity index; nil where the aim does not read a fitted one
	limits  map[int]*Fit // by quantity index
	land    *surrogateLandscape
	success *success
	values  []float64
}

// aimFit is the process of a quantity that the aim reads, with what it is fitted to.
type aimFit struct {
	*windowed
	kind surrogate.Model
	x    [][]float64
	y    []float64
}

// refit fits the process anew.
func (f *aimFit) refit(ctx context.Context) (err error) {
	f.windowed, err = windowAround(f.x).fit(ctx, f.kind, f.x, f.y)
	return err
}

// newAcquisition fits what the acquisition reads: the wide surfaces for limits,
// and for the quantities of the aim processes over the members alone. What an aim
// does where the limits are far from met says nothing of where they are. It is
// nil where there are too few values to fit.
func (d *designer) newAcquisition(ctx context.Context) (*acquisition, error) {
	if err := d.fitWide(ctx); err != nil {
		return nil, err
	}
	a := &acquisition{
		plan: d.plan, best: d.best(), members: d.promising(),
		aims: make([]*aimFit, len(d.plan.quantities)), limits: map[int]*Fit{},
		land: d.plan.surrogates(d.wide.fits, nil), success: d.success,
		values: make([]float64, len(d.plan.quantities)),
	}
	for k := range d.wide.fits {
		a.limits[d.wide.fits[k].Quantity] = &d.wide.fits[k]
	}
	for _, i := range d.plan.objective.reads {
		if !slices.Contains(d.plan.fitted, i) {
			continue
		}
		f := &aimFit{kind: gpr.Config{Kernel: gpr.Matern52, Seed: d.settings.Seed}}
		for _, s := range a.members {
			if v := s.values[i]; !math.IsNaN(v) && !math.IsInf(v, 0) {
				f.x, f.y = append(f.x, s.u), append(f.y, v)
			}
		}
		if len(f.y) < leastPromising(d.plan.dimension()) {
			return nil, nil
		}
		if err := f.refit(ctx); err != nil {
			return nil, err
		}
		a.aims[i] = f
	}
	return a, nil
}

// believe takes a point as evaluated, with the values predicted.
func (a *acquisition) believe(ctx context.Context, u []float64) error {
	for _, f := range a.aims {
		if f == nil {
			continue
		}
		mean, _ := f.predict(u)
		f.x, f.y = append(f.x, u), append(f.y, mean)
		if err := f.refit(ctx); err != nil {
			return err
		}
	}
	return nil
}

// leastPromising is how many samples an aim is fitted to at least.
func leastPromising(n int) int { return n + 2 }

// promising returns the samples an improvement is judged by, the best first: the
// feasible ones, filled up with those that violate least.
func (d *designer) promising() []*sample {
	list := slices.DeleteFunc(slices.Clone(d.training), d.plan.lacks)
	slices.SortStableFunc(list, d.plan.order)
	n := 0
	for n < len(list) && list[n].feasible {
		n++
	}
	return list[:min(len(list), max(n, leastPromising(d.plan.dimension())))]
}

// at is the acquisition at u.
func (a *acquisition) at(u []float64) float64 {
	a.land.values(u, a.values)
	sum := math.Log(a.success.at(u)) + a.feasibility(u)
	if a.best == nil {
		return sum
	}
	mean, deviation := a.aim(u)
	z := a.plan.objective.gain(mean, a.best.aim) / deviation
	return sum + logImprovement(z) + math.Log(deviation/math.Max(math.Abs(a.best.aim), tiny))
}

// tiny keeps a share of an aim at 0 finite.
const tiny = 1e-12

// feasibility is the logarithm of the probability that every row holds, taken as
// independent, at the latest values.
func (a *acquisition) feasibility(u []float64) float64 {
	sum := 0.0
	for _, r := range a.plan.curved {
		row := &a.plan.rows[r]
		margin := row.Margin(a.values[row.Index])
		if math.IsInf(margin, 0) {
			continue // does not apply, or cannot be fitted yet
		}
		deviation := backoff * row.Scale
		if fit := a.limits[row.Index]; fit != nil {
			deviation = math.Max(deviation, fit.deviation(u))
		}
		sum += logProbability(margin / deviation)
	}
	return sum
}

// aim is mean and standard deviation of the aim, to first order in those of the
// quantities it reads.
func (a *acquisition) aim(u []float64) (mean, deviation float64) {
	deviations := make([]float64, len(a.plan.objective.reads))
	for k, i := range a.plan.objective.reads {
		if a.aims[i] != nil {
			a.values[i], deviations[k] = a.aims[i].predict(u)
		}
	}
	mean = a.plan.objective.value(a.values)
	for k, i := range a.plan.objective.reads {
		a.values[i] += deviations[k]
		deviation = math.Hypot(deviation, a.plan.objective.value(a.values)-mean)
		a.values[i] -= deviations[k]
	}
	return mean, math.Max(deviation, tiny*math.Max(math.Abs(a.best.aim), tiny))
}
