package doe

import (
	"math"
	"math/rand/v2"
)

// LatinHypercube returns n points of [0,1)^d, one in each of the n slices of
// every axis (McKay, Beckman & Conover 1979), improved for distance: pairs of
// points exchange one coordinate whenever that lowers the criterion phi_p of
// Morris & Mitchell (1995),
//
//	phi_p^p = sum over pairs of 1/dist^p,  p = 16,
//
// which for large p orders designs by their smallest distance. The exchanges
// keep the hypercube Latin. Their number is fixed by n, so the result depends
// on the source alone.
func LatinHypercube(n, d int, source *rand.Rand) [][]float64 {
	points := RandomLatinHypercube(n, d, source)
	if n > 2 && d > 1 {
		improve(points, exchanges(n), source)
	}
	return points
}

// RandomLatinHypercube returns a Latin hypercube without improvement, each
// point uniform in its cell.
func RandomLatinHypercube(n, d int, source *rand.Rand) [][]float64 {
	points := matrix(n, d)
	for j := range d {
		for i, slice := range source.Perm(n) {
			points[i][j] = (float64(slice) + source.Float64()) / float64(n)
		}
	}
	return points
}

// exchanges is the number of tried exchanges: the gain has levelled off at
// about 150 a point, and the cap bounds the time of large designs.
func exchanges(n int) int { return min(150*n, 30000) }

// improve tries random coordinate exchanges and keeps those that lower phi_p.
// An exchange of coordinate j between points a and b changes the squared
// distances of each to a third point by the same amount, up or down, so a try
// costs O(n) whatever the dimension.
func improve(points [][]float64, tries int, source *rand.Rand) {
	n, d := len(points), len(points[0])
	pairs := newPairs(points)
	for range tries {
		a, b, j := source.IntN(n), source.IntN(n-1), source.IntN(d)
		if b >= a {
			b++
		}
		if pairs.exchanged(points, a, b, j) < pairs.crowding(a, b) {
			points[a][j], points[b][j] = points[b][j], points[a][j]
			pairs.measure(points, a)
			pairs.measure(points, b)
		}
	}
}

// pairs holds the squared distance of every pair of points and its 1/dist^16.
type pairs struct {
	squared   [][]float64
	repulsion [][]float64
}

func newPairs(points [][]float64) *pairs {
	p := &pairs{matrix(len(points), len(points)), matrix(len(points), len(points))}
	for i := range points {
		p.measure(points, i)
	}
	return p
}

// measure refreshes the pairs of point i; its pair with itself has no repulsion.
func (p *pairs) measure(points [][]float64, i int) {
	for k, other := range points {
		if k == i {
			continue
		}
		squared := squaredDistance(points[i], other)
		p.squared[i][k], p.squared[k][i] = squared, squared
		p.repulsion[i][k] = repulsion(squared, squared) / 2
		p.repulsion[k][i] = p.repulsion[i][k]
	}
}

// crowding returns the part of phi_p^p that points a and b have with the others.
func (p *pairs) crowding(a, b int) float64 {
	sum := 0.0
	ofB := p.repulsion[b]
	for i, v := range p.repulsion[a] {
		if i != a && i != b {
			sum += v + ofB[i]
		}
	}
	return sum
}

// exchanged returns the same part after an exchange of coordinate j.
func (p *pairs) exchanged(points [][]float64, a, b, j int) float64 {
	sum := 0.0
	atA, atB, ofB := points[a][j], points[b][j], p.squared[b]
	for i, squared := range p.squared[a] {
		if i == a || i == b {
			continue
		}
		toA, toB := atA-points[i][j], atB-points[i][j]
		shift := toB*toB - toA*toA
		sum += repulsion(squared+shift, ofB[i]-shift)
	}
	return sum
}

// repulsion returns 1/dist^16 summed over two squared distances; a floor of
// 1e-6 on the distance keeps coincident points finite.
func repulsion(x, y float64) float64 {
	x, y = max(x, 1e-12), max(y, 1e-12)
	x, y = x*x, y*y
	x, y = x*x, y*y
	x, y = x*x, y*y
	return (x + y) / (x * y)
}

func squaredDistance(a, b []float64) float64 {
	sum := 0.0
	for j, v := range a {
		sum += (v - b[j]) * (v - b[j])
	}
	return sum
}

// SmallestDistance returns the least distance between two of the points, which
// a maximin design makes large; it is infinite for fewer than two.
func SmallestDistance(points [][]float64) float64 {
	least := math.Inf(1)
	for i, p := range points {
		for _, q := range points[:i] {
			least = math.Min(least, squaredDistance(p, q))
		}
	}
	return math.Sqrt(least)
}

// matrix returns n rows of d numbers in one block.
func matrix(n, d int) [][]float64 {
	block := make([]float64, n*d)
	rows := make([][]float64, n)
	for i := range rows {
		rows[i] = block[i*d : (i+1)*d : (i+1)*d]
	}
	return rows
}
