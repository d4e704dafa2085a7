package optimize

import (
	"fmt"
	"math"
	"slices"

	"rampwright/constraints"
	"rampwright/surrogate/doe"
)

// scouts are up to n points near the center that the surrogates know least.
func (d *designer) scouts(center *sample, n int, radius float64) []*proposal {
	reach := make([]float64, len(center.u))
	for j := range reach {
		reach[j] = radius
	}
	return d.scoutsIn(&cloud{at: center.u, reach: reach, purpose: fmt.Sprintf("scouts %d", d.counts.Infill)}, n)
}

// cloud is where scouts are looked for.
type cloud struct {
	at      []float64
	reach   []float64   // by variable
	purpose string      // of the random stream
	beside  []*proposal // of the round already
}

// scoutsIn are up to n points of a cloud with the largest scaled deviation over aim
// and limits, each worth what the model may fail to give there, that keep the linear
// rows and stand half the reach apart.
func (d *designer) scoutsIn(c *cloud, n int) []*proposal {
	points := doe.RandomLatinHypercube(scoutCloud, len(c.at), doe.Stream(d.settings.Seed, c.purpose))
	doubts := make([]float64, len(points))
	for i, u := range points {
		for j := range u {
			u[j] = math.Min(1, math.Max(0, c.at[j]+(2*u[j]-1)*c.reach[j]))
		}
		if d.plan.insideLinear(u) && d.fresh(u) && !d.amongFailures(u) && !slices.ContainsFunc(c.beside, func(p *proposal) bool { return c.near(u, p.u) }) {
			doubts[i] = d.doubt(u) * d.success.at(u)
		}
	}
	var chosen []*proposal
	for len(chosen) < n {
		best := -1
		for i, doubt := range doubts {
			if doubt > 0 && (best < 0 || doubt > doubts[best]) {
				best = i
			}
		}
		if best < 0 {
			break
		}
		p := d.proposal(points[best], d.near)
		p.purpose, p.radius = scouting, slices.Max(c.reach)
		chosen = append(chosen, p)
		for i, u := range points {
			if c.near(u, p.u) {
				doubts[i] = 0
			}
		}
	}
	return chosen
}

// near reports whether two scouts would tell much the same.
func (c *cloud) near(a, b []float64) bool {
	sum := 0.0
	for j, reach := range c.reach {
		sum += (a[j] - b[j]) * (a[j] - b[j]) / (reach * reach)
	}
	return sum < 0.25 || distance(a, b) < apart
}

const (
	scoutCloud  = 64
	leastScout  = 4 * apart
	scoutRadius = 0.1
)

// doubt is the largest scaled deviation of the surrogates at u.
func (d *designer) doubt(u []float64) float64 {
	most := 0.0
	for k := range d.near.fits {
		fit := &d.near.fits[k]
		if !fit.usable() {
			continue
		}
		most = math.Max(most, fit.deviation(u)/d.unit(fit.Quantity))
	}
	return most
}

// unit is the scale of a quantity: of the first row on it, or the aim's. A limit
// at 0 has no scale of its own; what is usual stands in.
func (d *designer) unit(quantity int) float64 {
	for _, r := range d.plan.curved {
		row := &d.plan.rows[r]
		if row.Index != quantity {
			continue
		}
		if slices.ContainsFunc(row.Bounds(), func(b constraints.Bound) bool { return b.At != 0 }) {
			return row.Scale
		}
		return d.penalty.usual[r]
	}
	return d.penalty.aimScale
}
