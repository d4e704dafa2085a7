package gpr

import (
	"slices"
	"sync"
)

// PredictMany stores the means and standard deviations at the points in mean and
// deviation, which have their length: what Predict returns, to rounding, in a
// third of its time at 500 samples. Up to jobs goroutines (0 means 1) share
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
	shared := p.forTiles()
	var group sync.WaitGroup
	for job := range jobs {
		group.Go(func() {
			t := shared.newTile()
			for k := job; k < tiles; k += jobs {
				low, high := k*tileSize, min((k+1)*tileSize, len(points))
				t.predict(points[low:high], mean[low:high], deviation[low:high])
			}
		})
	}
	group.Wait()
}

// forTiles is a process with what the prediction of many points shares.
type forTiles struct {
	*Process
	correlations []float64 // of the samples with one another, by rows
	factor       triangle
	trended      panels // F'L^-T
}

func (p *Process) forTiles() *forTiles {
	f := &forTiles{Process: p, correlations: make([]float64, p.n*p.n), factor: newTriangle(p.factor)}
	for i := range p.n {
		own := p.z[i*p.d : (i+1)*p.d]
		for k := range i + 1 {
			c := p.config.Kernel.correlation(p.squared(own, k))
			f.correlations[i*p.n+k], f.correlations[k*p.n+i] = c, c
		}
	}
	f.trended = newPanels(slices.Collect(slices.Chunk(p.trended, p.n)))
	return f
}

// tile is the working space of one goroutine: a few points side by side.
type tile struct {
	*forTiles
	u     []float64         // scaled inputs of a point
	r     []float64         // its correlations with the samples
	white []float64         // delta, L^-1 delta of Predict: a row a sample, a column a point
	trend []sums            // f - F'R^-1 r: a row a function
	least [tileSize]float64 // scaled squared distance of each point to its nearest sample
}

func (f *forTiles) newTile() *tile {
	return &tile{
		forTiles: f, u: make([]float64, 0, f.d), r: make([]float64, f.n),
		white: make([]float64, len(f.factor.left)*panelRows*tileSize), trend: make([]sums, len(f.trended)),
	}
}

// predict follows Predict, step by step for all points of the tile.
func (t *tile) predict(points [][]float64, mean, deviation []float64) {
	clear(t.trend)
	for c, x := range points {
		mean[c] = t.relate(c, x)
	}
	t.factor.solve(t.white)
	for b, panel := range t.trended {
		t.trend[b].subtract(panel, t.white)
	}
	var quadratic [tileSize]float64
	for k := range t.n {
		for c, v := range t.white[k*tileSize:][:tileSize] {
			quadratic[c] += v * v
		}
	}
	trend := make([]float64, t.q)
	for c := range points {
		for j := range trend {
			trend[j] = t.trend[j/panelRows][j%panelRows][c]
		}
		deviation[c] = t.deviation(t.least[c], quadratic[c], trend)
	}
}

// relate stores delta and f(x) - f(x_i), i the nearest sample, of a point in
// column c and returns its mean.
func (t *tile) relate(c int, x []float64) (mean float64) {
	u := t.scaled(t.u[:0], x)
	sum, nearest, least := t.correlate(u, t.r)
	for k, own := range t.correlations[nearest*t.n : (nearest+1)*t.n] {
		t.white[k*tileSize+c] = t.r[k] - own
	}
	t.white[nearest*tileSize+c] = -(t.hyper.Nugget + t.config.Kernel.complement(least))
	t.least[c] = least
	t.trendFrom(t.r[:t.q], u, nearest)
	for j, f := range t.r[:t.q] {
		t.trend[j/panelRows][j%panelRows][c] = f
	}
	return t.scaling.Undo(t.trendAt(x) + sum)
}
