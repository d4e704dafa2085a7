package gpr

import (
	"sync"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// tileSize is the number of points whose triangular solves run together.
const tileSize = 64

// PredictMany stores the means and standard deviations at the points in mean and
// deviation, which have their length: what Predict returns, to rounding, in about
// two thirds of its time at 500 samples. Up to jobs goroutines (0 means 1) share
// the points; the result does not depend on their number.
//
// It pays from about as many points as samples on: the correlations of the
// samples with one another are formed first.
func (p *Process) PredictMany(points [][]float64, mean, deviation []float64, jobs int) {
	if len(mean) != len(points) || len(deviation) != len(points) {
		panic("gpr: results of the wrong length")
	}
	tiles := (len(points) + tileSize - 1) / tileSize
	jobs = min(max(jobs, 1), tiles)
	correlations := p.sampleCorrelations()
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			t := p.newTile(correlations)
			for k := job; k < tiles; k += jobs {
				low, high := k*tileSize, min((k+1)*tileSize, len(points))
				t.predict(points[low:high], mean[low:high], deviation[low:high])
			}
		})
	}
	group.Wait()
}

// sampleCorrelations returns the correlations of the samples with one another,
// by rows.
func (p *Process) sampleCorrelations() []float64 {
	c := make([]float64, p.n*p.n)
	for i := range p.n {
		own := p.z[i*p.d : (i+1)*p.d]
		for k := range i + 1 {
			c[i*p.n+k] = p.config.Kernel.correlation(p.squared(own, k))
			c[k*p.n+i] = c[i*p.n+k]
		}
	}
	return c
}

// tile is the working space of one goroutine: a few points, one to a row.
type tile struct {
	*Process
	correlations []float64      // of the samples
	u            []float64      // scaled inputs of a point
	least        []float64      // scaled squared distance of each point to its nearest sample
	white        blas64.General // r, delta, L^-1 delta of Predict
	trend        blas64.General // f - F'R^-1 r
}

func (p *Process) newTile(correlations []float64) *tile {
	stride := 8 * ((p.n+7)/8 | 1) // an odd number of cache lines: columns spread over the cache
	return &tile{
		Process: p, correlations: correlations, u: make([]float64, 0, p.d), least: make([]float64, tileSize),
		white: blas64.General{Cols: p.n, Stride: stride, Data: make([]float64, tileSize*stride)},
		trend: blas64.General{Cols: p.q, Stride: max(p.q, 1), Data: make([]float64, tileSize*p.q)},
	}
}

// predict follows Predict, step by step for all points of the tile.
func (t *tile) predict(points [][]float64, mean, deviation []float64) {
	t.white.Rows, t.trend.Rows = len(points), len(points)
	for c, x := range points {
		mean[c], t.least[c] = t.relate(x, t.white.Data[c*t.white.Stride:][:t.n], t.trend.Data[c*t.q:][:t.q])
	}
	t.solve()
	if t.q > 0 {
		trended := blas64.General{Rows: t.q, Cols: t.n, Stride: t.n, Data: t.trended}
		blas64.Gemm(blas.NoTrans, blas.Trans, -1, t.white, trended, 1, t.trend)
	}
	for c := range points {
		white := vector(t.white.Data[c*t.white.Stride:][:t.n])
		deviation[c] = t.deviation(t.least[c], blas64.Dot(white, white), t.trend.Data[c*t.q:][:t.q])
	}
}

// relate stores delta and f(x) - f(x_i) of a point in white and trend and returns
// its mean and its scaled squared distance to the nearest sample, i.
func (t *tile) relate(x, white, trend []float64) (mean, least float64) {
	u := t.scaled(t.u[:0], x)
	sum, nearest, least := t.correlate(u, white)
	for k, c := range t.correlations[nearest*t.n : (nearest+1)*t.n] {
		white[k] -= c
	}
	white[nearest] = -(t.hyper.Nugget + t.config.Kernel.complement(least))
	t.trendFrom(trend, u, nearest)
	return t.scaling.Undo(t.trendAt(x) + sum), least
}

// solve overwrites each row v of white by L^-1 v, one entry of all rows at a
// time: the library's product of a matrix with a vector is faster here than its
// triangular solve.
func (t *tile) solve() {
	left := t.white
	for i := range t.n {
		row := t.factor.Data[i*t.factor.Stride : i*t.factor.Stride+i+1]
		entries := blas64.Vector{N: left.Rows, Inc: left.Stride, Data: t.white.Data[i:]}
		if left.Cols = i; i > 0 {
			blas64.Gemv(blas.NoTrans, -1, left, vector(row[:i]), 1, entries)
		}
		blas64.Scal(1/row[i], entries)
	}
}
