package global

import (
	"context"
	"math"
	"math/rand"
	"slices"

	"github.com/MaxHalford/eaopt"
)

// Minimize searches [0,1]^n for the point of least violation and, among
// feasible ones, of least value. The error reports settings that make no sense.
func Minimize(ctx context.Context, n int, objective Objective, settings Settings) (*Result, error) {
	if err := validate(n, objective, settings); err != nil {
		return nil, err
	}
	settings = settings.withDefaults()
	random := rand.New(rand.NewSource(int64(settings.Seed)))
	e := &evolution{ctx: ctx, n: n, objective: objective, settings: settings}
	if !e.populate(random) {
		return e.result(Cancelled), nil
	}
	ga, err := eaopt.GAConfig{
		NPops:        1,
		PopSize:      uint(settings.Agents),
		NGenerations: uint(settings.Generations),
		HofSize:      1,
		Model:        e,
		EarlyStop:    func(*eaopt.GA) bool { return e.collapsed() },
		RNG:          random,
	}.NewGA()
	if err != nil {
		return nil, err
	}
	err = ga.Minimize(e.nextAgent)
	switch {
	case ctx.Err() != nil && err != nil:
		return e.result(Cancelled), nil
	case err != nil:
		return nil, err
	case e.collapsed():
		return e.result(Collapsed), nil
	default:
		return e.result(GenerationLimit), nil
	}
}

// evolution is differential evolution, DE/rand/1/bin (Storn & Price, Journal of
// Global Optimization 11, 1997, from memory), as the library's Model: the
// library keeps the population and its order and calls Apply once a generation.
type evolution struct {
	ctx       context.Context
	n         int
	objective Objective
	settings  Settings

	agents      []*agent // in the library's order
	trials      []Point
	handed      int // agents handed to the library
	generations int
	evaluations int
}

// agent is the library's Genome: a point and its place in the population's
// order, which serves as fitness. Feasibility rules order points but give no
// number; places do, without rounding and without ties.
type agent struct {
	point Point
	place int
}

// Evaluate returns the place; the objective was evaluated by the slot pool.
func (a *agent) Evaluate() (float64, error) { return float64(a.place), nil }

// Mutate does nothing: Apply makes the trials of a generation together.
func (a *agent) Mutate(*rand.Rand) {}

// Crossover does nothing: see Mutate.
func (a *agent) Crossover(eaopt.Genome, *rand.Rand) {}

// Clone returns a copy that shares no memory.
func (a *agent) Clone() eaopt.Genome {
	return &agent{point: a.point.clone(), place: a.place}
}

// populate makes and evaluates the first population: the planted points, then
// points stratified along each axis (a Latin hypercube). It returns false when
// the context ended meanwhile.
func (e *evolution) populate(random *rand.Rand) bool {
	planted, count := len(e.settings.Seeds), e.settings.Agents
	points := make([]Point, count)
	e.trials = make([]Point, count)
	e.agents = make([]*agent, count)
	for i := range points {
		points[i] = Point{X: make([]float64, e.n), F: Undefined, Violation: Undefined}
		e.trials[i].X = make([]float64, e.n)
		e.agents[i] = &agent{}
	}
	for i, x := range e.settings.Seeds {
		copy(points[i].X, x)
	}
	strata := count - planted
	for j := range e.n {
		for i, stratum := range random.Perm(strata) {
			points[planted+i].X[j] = (float64(stratum) + random.Float64()) / float64(strata)
		}
	}
	evaluated := evaluate(e.ctx, e.settings.Jobs, e.objective, points)
	e.evaluations += evaluated
	for i, p := range points {
		e.agents[i].point = p
	}
	e.order()
	return evaluated == count
}

// nextAgent hands the first population to the library in order.
func (e *evolution) nextAgent(*rand.Rand) eaopt.Genome {
	e.handed++
	return e.agents[e.handed-1]
}

// order sorts the agents by the feasibility rules, stably, and stores places.
func (e *evolution) order() {
	slices.SortStableFunc(e.agents, func(a, b *agent) int {
		switch {
		case a.point.Better(b.point):
			return -1
		case b.point.Better(a.point):
			return 1
		default:
			return 0
		}
	})
	for place, a := range e.agents {
		a.place = place
	}
}

// Validate is part of the library's Model; settings are checked before.
func (e *evolution) Validate() error { return nil }

// Apply is one generation: a trial for every agent, all evaluated together, each
// replacing its agent unless worse. A generation cut short by the context is
// dropped.
func (e *evolution) Apply(population *eaopt.Population) error {
	for i := range e.agents {
		e.makeTrial(i, population.RNG)
	}
	evaluated := evaluate(e.ctx, e.settings.Jobs, e.objective, e.trials)
	e.evaluations += evaluated
	if evaluated < len(e.trials) {
		return e.ctx.Err()
	}
	for i, a := range e.agents {
		if !a.point.Better(e.trials[i]) {
			a.point, e.trials[i] = e.trials[i], a.point
		}
	}
	e.generations++
	e.order()
	for i, a := range e.agents {
		population.Individuals[i].Genome = a
		population.Individuals[i].Fitness = float64(a.place)
	}
	return nil
}

// makeTrial crosses agent i with the mutant
//
//	v = x_a + F (x_b - x_c)
//
// of three other agents, reflected at the faces of the cube; at least one
// coordinate is the mutant's.
func (e *evolution) makeTrial(i int, random *rand.Rand) {
	a, b, c := e.others(i, random)
	always := random.Intn(e.n)
	trial, own := e.trials[i].X, e.agents[i].point.X
	for j := range trial {
		if draw := random.Float64(); j != always && draw >= e.settings.Crossover {
			trial[j] = own[j]
			continue
		}
		trial[j] = reflect(a[j] + e.settings.Factor*(b[j]-c[j]))
	}
}

// others draws three different agents other than i.
func (e *evolution) others(i int, random *rand.Rand) (a, b, c []float64) {
	drawn := [4]int{i}
	for k := 1; k < len(drawn); {
		candidate := random.Intn(len(e.agents))
		if !slices.Contains(drawn[:k], candidate) {
			drawn[k] = candidate
			k++
		}
	}
	return e.agents[drawn[1]].point.X, e.agents[drawn[2]].point.X, e.agents[drawn[3]].point.X
}

// reflect folds v into [0, 1] as between two mirrors.
func reflect(v float64) float64 {
	v = math.Abs(math.Mod(v, 2))
	if v > 1 {
		v = 2 - v
	}
	return v
}

// collapsed tells whether the agents all stand within Collapse of each other.
func (e *evolution) collapsed() bool {
	for j := range e.n {
		low, high := math.Inf(1), math.Inf(-1)
		for _, a := range e.agents {
			low, high = min(low, a.point.X[j]), max(high, a.point.X[j])
		}
		if high-low > e.settings.Collapse {
			return false
		}
	}
	return true
}

// result gathers the best agent, which is the best point ever seen because
// nothing replaces it but its better or its equal, and the distinct defined ones.
func (e *evolution) result(status Status) *Result {
	r := &Result{
		Point:       e.agents[0].point.clone(),
		Generations: e.generations,
		Evaluations: e.evaluations,
		Status:      status,
	}
	for _, a := range e.agents {
		wanted := len(r.Points) < e.settings.Points && a.point.Violation < Undefined
		if wanted && e.distinct(r.Points, a.point.X) {
			r.Points = append(r.Points, a.point.clone())
		}
	}
	return r
}

// distinct tells whether x stands apart from all points kept, in its largest
// coordinate difference.
func (e *evolution) distinct(kept []Point, x []float64) bool {
	for _, p := range kept {
		apart := 0.0
		for j, v := range x {
			apart = max(apart, math.Abs(v-p.X[j]))
		}
		if apart < e.settings.Separation {
			return false
		}
	}
	return true
}
