package robust

import (
	"context"
	"math"
	"slices"

	"rampwright/surrogate"
	"rampwright/surrogate/crossval"
	"rampwright/surrogate/doe"
	"rampwright/surrogate/gpr"
	"rampwright/surrogate/pce"
)

// Fit is the surrogate of one quantity in the space of the offsets.
type Fit struct {
	Quantity int // in the problem's quantities
	Samples  int // with a value
	Choice   crossval.Choice
	Err      error // why there is no surrogate
}

// kinds compete for every quantity. Expansions find smooth responses exactly, the
// rough process follows the kinks where shocks begin to pass inside the lip.
func kinds(seed int64) []surrogate.Model {
	return []surrogate.Model{pce.OLS{}, pce.Ridge{}, gpr.Config{Seed: seed}, gpr.Config{Kernel: gpr.Matern52, Seed: seed}}
}

// toCube scales a deviate to the unit interval surrogates are fitted on.
func toCube(dst, deviates []float64, truncation float64) {
	for j, z := range deviates {
		dst[j] = 0.5 + z/(2*truncation)
	}
}

// sampled evaluates the samples of the surrogates: a Latin hypercube of the
// distribution of the offsets, so that the fits know best where most draws lie.
func (b *built) sampled(ctx context.Context, s Settings) (*Draws, error) {
	points := doe.LatinHypercube(s.Samples, len(b.scatter), doe.Stream(s.Seed, "tolerance samples"))
	for _, u := range points {
		for j, p := range u {
			u[j] = truncated(p)
		}
	}
	return b.evaluate(ctx, "samples", points, s.Jobs)
}

// fit chooses a surrogate for each quantity listed that the samples move.
func (b *built) fit(ctx context.Context, samples *Draws, quantities []int, nominal []float64, s Settings) ([]Fit, error) {
	var list []Fit
	for _, q := range quantities {
		if slices.ContainsFunc(samples.column(q), func(v float64) bool { return differs(v, nominal[q]) }) {
			list = append(list, Fit{Quantity: q})
		}
	}
	share(s.Jobs, len(list), b.tell(ctx, "fits", len(list)), func() func(i int) {
		return func(i int) { list[i].choose(ctx, samples, s.Seed) }
	})
	return list, ctx.Err()
}

func (f *Fit) choose(ctx context.Context, samples *Draws, seed int64) {
	var x [][]float64
	var y []float64
	for i, row := range samples.Values {
		if v := row[f.Quantity]; !math.IsNaN(v) && !math.IsInf(v, 0) {
			u := make([]float64, len(samples.Deviates[i]))
			toCube(u, samples.Deviates[i], span)
			x, y = append(x, u), append(y, v)
		}
	}
	f.Samples = len(y)
	f.Choice, f.Err = crossval.Settings{Candidates: kinds(seed), Transforms: []crossval.Transform{crossval.Identity}}.Choose(ctx, x, y)
}

// predict fills the draws by the surrogates: quantities that no sample moved keep
// their nominal value, those without a surrogate are missing.
func predict(fits []Fit, deviates [][]float64, needed []int, nominal []float64, jobs int) [][]float64 {
	width := len(nominal)
	block := make([]float64, len(deviates)*width)
	rows := make([][]float64, len(deviates))
	still := make([]float64, width)
	for q := range still {
		still[q] = math.NaN()
	}
	for _, q := range needed {
		still[q] = nominal[q]
	}
	share(jobs, len(deviates), nil, func() func(i int) {
		u := make([]float64, len(deviates[0]))
		return func(i int) {
			row := block[i*width : (i+1)*width : (i+1)*width]
			copy(row, still)
			toCube(u, deviates[i], span)
			for k := range fits {
				if f := &fits[k]; f.Err != nil {
					row[f.Quantity] = math.NaN()
				} else {
					row[f.Quantity] = f.Choice.Mean(u)
				}
			}
			rows[i] = row
		}
	})
	return rows
}
