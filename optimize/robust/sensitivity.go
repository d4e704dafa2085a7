package robust

import (
	"context"
	"math"
	"slices"
)

// Index is the sensitivity of a response to one input: shares of its variance,
// with their standard errors. NaN where the response does not vary or has too few
// values.
type Index struct {
	FirstOrder, FirstOrderError float64
	Total, TotalError           float64
}

// replaced are the draws of the sensitivity: base draws a and b, and for each input
// the draws of a with that input taken from b.
type replaced struct {
	a, b [][]float64
	ab   [][][]float64 // by input
}

// replace evaluates the base draws of a study once more with each input exchanged:
// the first n draws are a, the next n are b.
func (b *built) replace(ctx context.Context, draws *Draws, n, jobs int) (*replaced, error) {
	r := &replaced{a: draws.Values[:n], b: draws.Values[n : 2*n]}
	var mixed [][]float64
	for j := range b.scatter {
		for i := range n {
			row := append([]float64(nil), draws.Deviates[i]...)
			row[j] = draws.Deviates[n+i][j]
			mixed = append(mixed, row)
		}
	}
	exchanged, err := b.evaluate(ctx, "sensitivity", mixed, jobs)
	if err != nil {
		return nil, err
	}
	r.ab = slices.Collect(slices.Chunk(exchanged.Values, n))
	return r, nil
}

// indices returns the sensitivity of a response to every input,
//
//	S_j  = mean(f_B (f_ABj - f_A)) / V        (Saltelli et al. 2010, eq. 16 / table 2 (b))
//	ST_j = mean((f_A - f_ABj)^2) / (2 V)      (Jansen 1999; Saltelli et al. 2010, eq. 19)
//
// with f less its mean, V the variance over a and b; equation numbers from memory.
// Triples with a missing value are left out. The errors are those of the means.
func (r *replaced) indices(response *Response) []Index {
	a, b := response.column(r.a), response.column(r.b)
	list := make([]Index, len(r.ab))
	mean, variance := spreadOf(a, b)
	for j := range list {
		ab := response.column(r.ab[j])
		var first, total tally
		for i := range a {
			if v := a[i] + b[i] + ab[i]; math.IsNaN(v) || math.IsInf(v, 0) {
				continue
			}
			first.add((b[i] - mean) * (ab[i] - a[i]) / variance)
			total.add((a[i] - ab[i]) * (a[i] - ab[i]) / (2 * variance))
		}
		list[j].FirstOrder, list[j].FirstOrderError = first.mean()
		list[j].Total, list[j].TotalError = total.mean()
	}
	return list
}

// spreadOf is mean and variance of the finite values of two columns.
func spreadOf(a, b []float64) (mean, variance float64) {
	var all tally
	for _, column := range [][]float64{a, b} {
		for _, v := range column {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				all.add(v)
			}
		}
	}
	if n := float64(all.n); n > 1 && all.squares > still*still*all.center*all.center*n {
		return all.center, all.squares / (n - 1)
	}
	return all.center, math.NaN()
}

// tally sums values by the recurrence of Welford (1962).
type tally struct {
	n       int
	center  float64
	squares float64 // of the distances from the mean
}

func (t *tally) add(v float64) {
	t.n++
	step := v - t.center
	t.center += step / float64(t.n)
	t.squares += step * (v - t.center)
}

// mean returns the mean and its standard error, NaN for fewer than two values.
func (t *tally) mean() (mean, err float64) {
	if t.n < 2 {
		return math.NaN(), math.NaN()
	}
	return t.center, math.Sqrt(t.squares / float64(t.n-1) / float64(t.n))
}
