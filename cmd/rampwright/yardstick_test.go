package main

import (
	"cmp"
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"
	"testing"

	gonum "gonum.org/v1/gonum/optimize"

	"rampwright/problems"
)

const (
	// leastShare of the independent optimum a design must reach.
	leastShare = 0.9999
	// yardstickStarts are random starts of the independent search, fewer where a
	// flight point has to be traced.
	yardstickStarts       = 200
	yardstickTracedStarts = 60
	// yardstickAgain are the best of them searched again.
	yardstickAgain = 10
	// yardstickRounds is how often.
	yardstickRounds = 20
)

// Every starter design is verified, and as good as the best point an independent
// search finds on the exact model.
func TestStartersReachTheIndependentOptimum(t *testing.T) {
	for _, name := range starters {
		t.Run(name, func(t *testing.T) {
			var result yardstickResult
			d := designStarter(t, name)
			decode(t, d.out, &result)
			if string(d.out) != string(d.files["result.json"]) {
				t.Error("the document printed is not result.json")
			}
			result.check(t)
			target := newPenalty(starterStudy(t, name))
			best := target.search(t)
			t.Logf("design %.10f, independent search %.10f, ratio %.8f", result.Best.Aim.Exact, best, result.Best.Aim.Exact/best)
			if share := result.Best.Aim.Exact / best; !(share >= leastShare) {
				t.Errorf("the design reaches %.6f of the independent optimum %.8f", share, best)
			}
			// A yardstick that falls short itself measures nothing.
			if !(best >= leastShare*result.Best.Aim.Exact) {
				t.Errorf("the independent search found %.8f only, the design %.8f", best, result.Best.Aim.Exact)
			}
		})
	}
}

type yardstickResult struct {
	Status string
	Best   struct {
		Feasible bool
		Evidence struct {
			RouteGap       *float64 `json:"route_gap"`
			SurrogateError *float64 `json:"surrogate_error"`
		}
		Aim    struct{ Exact float64 }
		Limits []struct {
			Quantity, Member, At string
			Margin               *float64
		}
	}
}

func (r *yardstickResult) check(t *testing.T) {
	t.Helper()
	if r.Status != "verified" || !r.Best.Feasible {
		t.Errorf("status %s, feasible %t", r.Status, r.Best.Feasible)
	}
	if gap := r.Best.Evidence.RouteGap; gap == nil || !(*gap <= 1e-10) {
		t.Errorf("route gap %v", gap)
	}
	if e := r.Best.Evidence.SurrogateError; e == nil || !(*e <= 1e-3) {
		t.Errorf("surrogate error %v", e)
	}
	judged := 0
	for _, limit := range r.Best.Limits {
		if limit.Margin == nil {
			continue // does not apply; the status says so
		}
		judged++
		if !(*limit.Margin >= 0) {
			t.Errorf("%s %s at %s has margin %g", limit.Quantity, limit.Member, limit.At, *limit.Margin)
		}
	}
	if judged < 10 {
		t.Errorf("only %d limits were judged", judged)
	}
}

// penalty is the aim of a study with its limits as an exact l1 penalty, worked
// out from the limits themselves: it shares only the model with the design.
type penalty struct {
	problem *indexed
	limits  []indexedLimit
	parts   []indexedPart
	weights float64 // sum over the parts
	linear  []linearLimit
	traced  bool // a flight point may lie beyond shock-on-lip
}

// indexed is a problem with what a search asks again and again.
type indexed struct {
	problems.Problem
	variables []problems.Variable
	size      int // quantities
}

type indexedLimit struct {
	index     int
	low, high float64
	scale     float64
}

type indexedPart struct {
	weight float64
	index  int
}

// linearLimit is low <= a x + b <= high.
type linearLimit struct {
	a            []float64
	b, low, high float64
}

// penaltyWeight makes the penalty exact: it exceeds the largest price of the
// starters, 4.4 for one scaled unit, and not by much, for a steep kink is hard to
// walk along.
const penaltyWeight = 6

func newPenalty(s *study) *penalty {
	quantities := s.problem.Quantities()
	p := &penalty{problem: &indexed{s.problem, s.problem.Variables(), len(quantities)}}
	for _, point := range s.problem.Definition().Points {
		lip := s.problem.Definition().ShockOnLip
		p.traced = p.traced || point.Mach > lip.Low
	}
	for _, limit := range s.limits {
		for i, q := range quantities {
			if q.Name != limit.Quantity || q.Point != limit.Point {
				continue
			}
			scale := 1.0
			for _, side := range []float64{limit.Low, limit.High} {
				if !math.IsInf(side, 0) {
					scale = math.Max(scale, math.Abs(side))
				}
			}
			p.limits = append(p.limits, indexedLimit{i, limit.Low, limit.High, scale})
			if a, b, ok := s.problem.LinearForm(i); ok {
				p.linear = append(p.linear, linearLimit{a, b, limit.Low, limit.High})
			}
		}
	}
	for _, part := range s.brief.Aim.Parts {
		weight := part.Weight
		if s.brief.Aim.Aggregate == problems.Single {
			weight = 1
		}
		for i, q := range quantities {
			if q.Name == part.Reads[0].Quantity && q.Point == part.Reads[0].Point {
				p.parts = append(p.parts, indexedPart{weight, i})
				p.weights += weight
			}
		}
	}
	return p
}

// walker evaluates the penalty on one goroutine and keeps the best point that
// met every limit.
type walker struct {
	*penalty
	evaluation *problems.Evaluation
	x          []float64
	best       float64
	failed     error
}

func (p *penalty) walker() *walker {
	return &walker{
		penalty: p, evaluation: problems.NewEvaluation(p.problem.size),
		x: make([]float64, len(p.problem.variables)), best: math.Inf(-1),
	}
}

// value is the negative aim plus the weighted violation at the point of the unit
// cube nearest to u.
func (w *walker) value(u []float64) float64 {
	for j, v := range w.problem.variables {
		w.x[j] = math.Min(v.High, v.Low+math.Min(1, math.Max(0, u[j]))*(v.High-v.Low))
	}
	if err := w.problem.Evaluate(context.Background(), w.x, w.evaluation); err != nil {
		w.failed = err
		return math.Inf(1)
	}
	violation := 0.0
	for i := range w.limits {
		violation += w.violation(&w.limits[i])
	}
	aim := 0.0
	for _, part := range w.parts {
		aim += part.weight * w.evaluation.Values[part.index] / w.weights
	}
	if math.IsNaN(aim) {
		return penaltyWeight * (1 + violation)
	}
	if violation == 0 {
		w.best = math.Max(w.best, aim)
	}
	return penaltyWeight*violation - aim
}

func (w *walker) violation(limit *indexedLimit) float64 {
	v := w.evaluation.Values[limit.index]
	if math.IsNaN(v) {
		var notApplicable *problems.NotApplicable
		if errors.As(w.evaluation.Reasons[limit.index], &notApplicable) {
			return 0
		}
		return 1
	}
	return math.Max(0, math.Max(limit.low-v, v-limit.high)) / limit.scale
}

// start draws a random point inside the linear limits.
func (p *penalty) start(random *rand.Rand) []float64 {
	u := make([]float64, len(p.problem.variables))
	for {
		for j := range u {
			u[j] = random.Float64()
		}
		if p.insideLinear(u) {
			return u
		}
	}
}

func (p *penalty) insideLinear(u []float64) bool {
	for _, limit := range p.linear {
		sum := limit.b
		for j, v := range p.problem.variables {
			sum += limit.a[j] * (v.Low + u[j]*(v.High-v.Low))
		}
		if !(limit.low <= sum && sum <= limit.high) {
			return false
		}
	}
	return true
}

// search runs the simplex method of Nelder & Mead from random starts, then again
// and again from the best of their ends, with simplexes of random size and
// attitude: one simplex flattens on the kinks of the penalty. It returns the best
// aim that met every limit.
func (p *penalty) search(t *testing.T) float64 {
	t.Helper()
	random := rand.New(rand.NewPCG(1, 200))
	starts := yardstickStarts
	if p.traced {
		starts = yardstickTracedStarts
	}
	begins := make([][]float64, starts)
	for i := range begins {
		begins[i] = p.start(random)
	}
	ends := p.descend(t, begins, func(i int, w *walker, u []float64) []float64 {
		return w.simplex(u, 0.1, rand.New(rand.NewPCG(uint64(i), 201)))
	})
	again := p.descend(t, ends.ordered()[:yardstickAgain], func(i int, w *walker, u []float64) []float64 {
		random := rand.New(rand.NewPCG(uint64(i), 202))
		for range yardstickRounds {
			u = w.simplex(u, math.Pow(10, -1-4*random.Float64()), random)
		}
		return u
	})
	best := math.Inf(-1)
	for _, end := range append(ends, again...) {
		best = math.Max(best, end.feasible)
	}
	return best
}

// descent is the end of one search.
type descent struct {
	u        []float64
	value    float64
	feasible float64 // best aim on the way that met every limit
}

type descents []descent

// ordered returns the ends, the best first.
func (list descents) ordered() [][]float64 {
	list = slices.Clone(list)
	slices.SortStableFunc(list, func(a, b descent) int { return cmp.Compare(a.value, b.value) })
	points := make([][]float64, len(list))
	for i, end := range list {
		points[i] = end.u
	}
	return points
}

// descend runs one search a start, side by side.
func (p *penalty) descend(t *testing.T, starts [][]float64, search func(i int, w *walker, u []float64) []float64) descents {
	t.Helper()
	ends := make(descents, len(starts))
	failures := make([]error, len(starts))
	var group sync.WaitGroup
	slots := make(chan struct{}, runtime.GOMAXPROCS(0))
	for i := range starts {
		slots <- struct{}{}
		group.Go(func() {
			w := p.walker()
			u := search(i, w, starts[i])
			ends[i] = descent{u, w.value(u), w.best}
			failures[i] = w.failed
			<-slots
		})
	}
	group.Wait()
	if err := errors.Join(failures...); err != nil {
		t.Fatal(err)
	}
	return ends
}

// simplex is one run of Nelder & Mead from a simplex of random attitude.
func (w *walker) simplex(u []float64, size float64, random *rand.Rand) []float64 {
	corners := make([][]float64, len(u)+1)
	values := make([]float64, len(corners))
	for i := range corners {
		corners[i] = append([]float64(nil), u...)
		for j := range u {
			if i > 0 {
				corners[i][j] += size * random.NormFloat64()
			}
		}
		values[i] = w.value(corners[i])
	}
	result, err := gonum.Minimize(gonum.Problem{Func: w.value}, u, &gonum.Settings{
		FuncEvaluations: 200, Converger: gonum.NeverTerminate{},
	}, &gonum.NelderMead{InitialVertices: corners, InitialValues: values})
	if err != nil {
		w.failed = err
		return u
	}
	return result.X
}
