package optimize

import (
	"container/heap"
	"context"
	"fmt"
	"math"

	"rampwright/constraints"
	"rampwright/problems"
)

// Rounded is the design nearest to another whose angles are whole multiples of a
// step and which still keeps every limit exactly.
type Rounded struct {
	X           []float64 // nil where none was found among the nearest
	Aim         float64
	Evaluations int
}

// mostRounded bounds the grid points tried.
const mostRounded = 20000

// Round looks for the nearest design on the grid: every variable measured in
// degrees a multiple of step, the others as they are. Grid points are tried in
// the order of their distance, on the exact model, until one keeps every limit.
func Round(ctx context.Context, task Task, x []float64, step float64) (*Rounded, error) {
	plan, err := newPlan(task)
	if err != nil {
		return nil, err
	}
	grid := newGrid(plan.variables, x, step)
	out := &Rounded{Aim: math.NaN()}
	evaluation := problems.NewEvaluation(len(plan.quantities))
	for range mostRounded {
		at, ok := grid.next()
		if !ok {
			break
		}
		u := plan.normal(at)
		if !plan.insideExplicit(at, evaluation) {
			continue
		}
		if err := plan.problem.Evaluate(ctx, at, evaluation); err != nil {
			return nil, err
		}
		out.Evaluations++
		if s := plan.judge(u, evaluation.Clone()); s.feasible {
			out.X, out.Aim = at, s.aim
			break
		}
	}
	return out, nil
}

// insideExplicit judges the explicit quantities alone, which cost no run.
func (p *plan) insideExplicit(x []float64, evaluation *problems.Evaluation) bool {
	if p.explicit == nil {
		return true
	}
	evaluation.Clear()
	p.explicit.EvaluateExplicit(x, evaluation)
	for r := range p.rows {
		if row := &p.rows[r]; row.Quantity.Explicit && !(row.Margin(evaluation.Values[row.Index]) >= -constraints.Rounding*row.Scale) {
			return false
		}
	}
	return true
}

// grid walks grid points by increasing distance: a heap of index vectors, where
// index k of a variable is its k-th nearest grid value.
type grid struct {
	x      []float64
	values [][]float64 // by variable, nearest first
	heap   gridHeap
	seen   map[string]bool
}

type gridPoint struct {
	index    []int
	distance float64
}

type gridHeap []gridPoint

func (h gridHeap) Len() int           { return len(h) }
func (h gridHeap) Less(i, j int) bool { return h[i].distance < h[j].distance }
func (h gridHeap) Swap(i, j int)      { h[i], h[j] = h[j], h[i] }
func (h *gridHeap) Push(p any)        { *h = append(*h, p.(gridPoint)) }
func (h *gridHeap) Pop() any {
	old := *h
	last := old[len(old)-1]
	*h = old[:len(old)-1]
	return last
}

// gridReach is how many steps a variable may move either way.
const gridReach = 15

func newGrid(variables []problems.Variable, x []float64, step float64) *grid {
	g := &grid{x: x, seen: map[string]bool{}}
	for j, v := range variables {
		if v.Unit != "deg" {
			g.values = append(g.values, []float64{x[j]})
			continue
		}
		g.values = append(g.values, gridValues(v, x[j], step))
	}
	g.push(make([]int, len(x)))
	return g
}

// gridValues lists the grid values of a variable within its bounds, nearest
// first. Decimals come from whole numbers, so that 8.1 is 8.1.
func gridValues(v problems.Variable, x, step float64) []float64 {
	perUnit := math.Round(1 / step)
	middle := math.Round(x * perUnit)
	var values []float64
	for away := 0.0; away <= gridReach; away++ {
		first, second := middle+away, middle-away
		if x*perUnit < middle {
			first, second = second, first
		}
		for _, k := range []float64{first, second} {
			if value := k / perUnit; value >= v.Low && value <= v.High && (len(values) == 0 || value != values[len(values)-1]) {
				values = append(values, value)
			}
		}
	}
	return values
}

func (g *grid) push(index []int) {
	key := fmt.Sprint(index)
	if g.seen[key] {
		return
	}
	g.seen[key] = true
	sum := 0.0
	for j, k := range index {
		if k >= len(g.values[j]) {
			return
		}
		sum += (g.values[j][k] - g.x[j]) * (g.values[j][k] - g.x[j])
	}
	heap.Push(&g.heap, gridPoint{index, sum})
}

// next returns the nearest point not yet returned.
func (g *grid) next() (x []float64, ok bool) {
	if len(g.heap) == 0 {
		return nil, false
	}
	p := heap.Pop(&g.heap).(gridPoint)
	x = make([]float64, len(p.index))
	for j, k := range p.index {
		x[j] = g.values[j][k]
		further := append([]int(nil), p.index...)
		further[j]++
		g.push(further)
	}
	return x, true
}
