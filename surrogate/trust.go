package surrogate

import (
	"fmt"
	"math"
)

// Domain is the region where a fit has seen the truth: the unit cube and the
// samples in it. It is safe for concurrent use.
type Domain struct {
	samples [][]float64
	spacing float64 // largest distance of a sample to its nearest neighbour
}

// NewDomain keeps the samples and measures their spacing.
func NewDomain(samples [][]float64) *Domain {
	d := &Domain{samples: samples}
	for i, p := range samples {
		nearest := math.Inf(1)
		for k, q := range samples {
			if k != i {
				nearest = math.Min(nearest, distance(p, q))
			}
		}
		if !math.IsInf(nearest, 1) {
			d.spacing = math.Max(d.spacing, nearest)
		}
	}
	return d
}

// Trust says how far a prediction at one point can be trusted.
type Trust struct {
	Nearest  int     // nearest sample, -1 without samples
	Distance float64 // to it, in the unit cube
	Relative float64 // Distance over the largest nearest-neighbour distance among the samples
	Outside  []int   // inputs outside [0,1]
}

// loneliest is the relative distance beyond which a point counts as
// extrapolated: a maximin design leaves holes of at most about its spacing.
const loneliest = 1.5

// Judge returns the trust at a point. Relative is infinite for fewer than two
// samples, or when all of them coincide, unless the point is a sample.
func (d *Domain) Judge(u []float64) Trust {
	t := Trust{Nearest: -1, Distance: math.Inf(1)}
	for i, p := range d.samples {
		if r := distance(p, u); r < t.Distance {
			t.Nearest, t.Distance = i, r
		}
	}
	if t.Distance > 0 {
		t.Relative = t.Distance / d.spacing
	}
	for j, v := range u {
		if v < 0 || v > 1 {
			t.Outside = append(t.Outside, j)
		}
	}
	return t
}

// Extrapolated reports a point outside the cube or farther from every sample
// than 1.5 times their largest spacing.
func (t Trust) Extrapolated() bool { return len(t.Outside) > 0 || t.Relative > loneliest }

// Warning returns "" for a point that can be trusted, else the reason.
func (t Trust) Warning() string {
	switch {
	case len(t.Outside) > 0:
		return fmt.Sprintf("extrapolated: input %d lies outside its range", t.Outside[0])
	case t.Relative > loneliest:
		return fmt.Sprintf("extrapolated: %.2g from the nearest sample, %.2g times the spacing of the samples", t.Distance, t.Relative)
	default:
		return ""
	}
}

func distance(a, b []float64) float64 {
	sum := 0.0
	for j, v := range a {
		sum += (v - b[j]) * (v - b[j])
	}
	return math.Sqrt(sum)
}
