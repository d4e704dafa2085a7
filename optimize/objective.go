package optimize

import (
	"fmt"
	"math"

	"rampwright/problems"
)

// objective is an aim over the vector of a problem's quantities.
type objective struct {
	aim   problems.Aim
	parts []part
	reads []int // every quantity index read, ascending
}

// part is the aim at one point; reads[k] are the indices of the members whose
// least is argument k of the formula.
type part struct {
	weight  float64
	reads   [][]int
	formula func([]float64) float64
}

func newObjective(quantities []problems.Quantity, aim problems.Aim) (objective, error) {
	o := objective{aim: aim}
	used := make([]bool, len(quantities))
	for _, p := range aim.Parts {
		compiled := part{weight: p.Weight, formula: p.Formula}
		for _, read := range p.Reads {
			var members []int
			for i, q := range quantities {
				if q.Name == read.Quantity && q.Point == read.Point && (read.Member == "" || q.Member == read.Member) {
					members = append(members, i)
					used[i] = true
				}
			}
			if members == nil {
				return o, fmt.Errorf("aim reads %s at %s: the problem has no such quantity", read.Quantity, read.Point)
			}
			compiled.reads = append(compiled.reads, members)
		}
		if compiled.formula == nil && len(compiled.reads) != 1 {
			return o, fmt.Errorf("aim at %s reads %d quantities without a formula", p.Point, len(compiled.reads))
		}
		o.parts = append(o.parts, compiled)
	}
	if len(o.parts) == 0 {
		return o, fmt.Errorf("the aim has no part")
	}
	for i, u := range used {
		if u {
			o.reads = append(o.reads, i)
		}
	}
	return o, nil
}

// sign turns the aim into something to minimise.
func (o *objective) sign() float64 {
	if o.aim.Highest {
		return -1
	}
	return 1
}

// better reports whether aim a beats b.
func (o *objective) better(a, b float64) bool { return o.sign()*a < o.sign()*b }

// gain is the improvement of a over b, positive when better.
func (o *objective) gain(a, b float64) float64 { return o.sign() * (b - a) }

// value is the aim of a vector of quantities; NaN where one it reads is missing
// or the formula is not finite.
func (o *objective) value(values []float64) float64 {
	v := o.aggregate(values)
	if math.IsInf(v, 0) {
		return math.NaN()
	}
	return v
}

func (o *objective) aggregate(values []float64) float64 {
	switch o.aim.Aggregate {
	case problems.Mean:
		sum, weights := 0.0, 0.0
		for i := range o.parts {
			if w := o.parts[i].weight; w > 0 {
				sum += w * o.parts[i].value(values)
				weights += w
			}
		}
		return sum / weights
	case problems.Worst:
		worst := o.parts[0].value(values)
		for i := range o.parts[1:] {
			if v := o.parts[i+1].value(values); math.IsNaN(v) || o.better(worst, v) {
				worst = v
			}
		}
		return worst
	default:
		return o.parts[0].value(values)
	}
}

// gradient stores d(aim)/du for an aim that is smooth (not Worst) from the rows
// of the quantities' jacobian.
func (o *objective) gradient(values []float64, jacobian [][]float64, dst []float64) {
	clear(dst)
	if o.aim.Aggregate == problems.Mean {
		weights := 0.0
		for i := range o.parts {
			weights += math.Max(0, o.parts[i].weight)
		}
		for i := range o.parts {
			if w := o.parts[i].weight; w > 0 {
				o.parts[i].addGradient(w/weights, values, jacobian, dst)
			}
		}
		return
	}
	o.parts[0].addGradient(1, values, jacobian, dst)
}

func (p *part) value(values []float64) float64 {
	if p.formula == nil {
		return values[least(p.reads[0], values)]
	}
	return p.formula(p.arguments(values))
}

func (p *part) arguments(values []float64) []float64 {
	arguments := make([]float64, len(p.reads))
	for k, members := range p.reads {
		arguments[k] = values[least(members, values)]
	}
	return arguments
}

// addGradient adds factor times the gradient of the part. A formula is
// differentiated by its arguments with central differences of relative step
// 1e-6: it is arithmetic on smooth functions, good to about nine digits.
func (p *part) addGradient(factor float64, values []float64, jacobian [][]float64, dst []float64) {
	if p.formula == nil {
		addScaled(dst, factor, jacobian[least(p.reads[0], values)])
		return
	}
	arguments := p.arguments(values)
	for k, members := range p.reads {
		middle := arguments[k]
		step := 1e-6 * math.Max(1e-3, math.Abs(middle))
		arguments[k] = middle + step
		up := p.formula(arguments)
		arguments[k] = middle - step
		down := p.formula(arguments)
		arguments[k] = middle
		addScaled(dst, factor*(up-down)/(2*step), jacobian[least(members, values)])
	}
}

func addScaled(dst []float64, factor float64, row []float64) {
	for j, v := range row {
		dst[j] += factor * v
	}
}

// least returns the index with the smallest value; a missing one is taken first.
func least(members []int, values []float64) int {
	best := members[0]
	for _, i := range members[1:] {
		if math.IsNaN(values[i]) || values[i] < values[best] {
			best = i
		}
	}
	return best
}
