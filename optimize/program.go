package optimize

import (
	"context"
	"math"
	"slices"

	"rampwright/optimize/global"
	"rampwright/optimize/local"
	"rampwright/problems"
)

// searcher states a plan on a landscape as a program for the local optimizer:
// aim to minimise in units of its scale, limits as scaled rows c <= 0. The worst
// of several parts is raised through one more variable t with part >= t.
type searcher struct {
	plan      *plan
	land      landscape
	aimScale  float64
	blind     bool       // the aim cannot be predicted: look for feasibility alone
	scale     []float64  // of each curved row, in the quantity's unit
	cuts      local.Rows // linear rows beside those of the plan, one a failure
	failures  []*sample  // that cut the search short
	avoid     *success   // of the model: explore keeps out of where it is likely to fail
	inside    []float64  // extra back-off of each curved row, in units of its Row.Scale
	vector    []float64  // values by quantity index
	rows      [][]float64
	workspace local.Workspace
}

func newSearcher(p *plan, land landscape, aimScale float64) *searcher {
	s := &searcher{
		plan: p, land: land, aimScale: aimScale,
		inside: make([]float64, len(p.curved)),
		vector: make([]float64, len(p.quantities)),
		rows:   make([][]float64, len(p.quantities)),
	}
	for _, r := range p.curved {
		s.scale = append(s.scale, p.rows[r].Scale)
	}
	for _, list := range [][]int{p.fitted, p.exact} {
		for _, i := range list {
			s.rows[i] = make([]float64, p.dimension())
		}
	}
	return s
}

// solution is the end of a local search.
type solution struct {
	u         []float64
	values    []float64 // of the landscape, by quantity index
	aim       float64
	violation float64   // sum of scaled violations on the landscape
	excess    []float64 // scaled violation by row
	prices    []float64 // aim gained for each unit a row is loosened, by row
	status    local.Status
}

// worst reports whether the aim needs the extra variable.
func (s *searcher) worst() bool {
	return !s.blind && s.plan.objective.aim.Aggregate == problems.Worst
}

// polish searches from start inside the box given.
func (s *searcher) polish(ctx context.Context, start, low, high []float64, settings local.Settings) (*solution, error) {
	program, begin := s.program(start, low, high)
	result, err := s.workspace.Minimize(ctx, &program, begin, settings)
	if err != nil {
		return nil, err
	}
	out := s.at(append([]float64(nil), result.X[:s.plan.dimension()]...))
	out.status, out.prices = result.Status, s.prices(result)
	return out, nil
}

// at is a point as a solution, without prices.
func (s *searcher) at(u []float64) *solution {
	out := &solution{u: u, values: make([]float64, len(s.vector))}
	s.values(out.u)
	copy(out.values, s.vector)
	out.aim = s.plan.objective.value(out.values)
	out.violation = s.violation()
	out.excess = s.excess()
	return out
}

// tight returns settings whose feasibility lies within the back-off of every row:
// a row whose quantity is usually far from its limit has a scale beside which the
// back-off is small.
func (s *searcher) tight(settings local.Settings) local.Settings {
	least := 1.0
	for q, r := range s.plan.curved {
		least = math.Min(least, s.plan.rows[r].Scale/s.scale[q])
	}
	settings.Feasibility = math.Max(leastFeasibility, 0.1*backoff*least)
	return settings
}

// leastFeasibility is above the rounding of scaled rows.
const leastFeasibility = 1e-14

// explore runs the evolution search over the whole box and returns the distinct
// good points of its last population, best first.
func (s *searcher) explore(ctx context.Context, seeds [][]float64, seed uint64, generations int) ([][]float64, error) {
	p := s.plan
	result, err := global.Minimize(ctx, p.dimension(), func(u []float64) (f, violation float64) {
		s.values(u)
		violation = p.linearViolation(u) + s.violation() + math.Max(0, leastSuccess-s.avoid.at(u))
		if s.blind {
			return 0, violation
		}
		return p.objective.sign() * p.objective.value(s.vector), violation
	}, global.Settings{Seed: seed, Seeds: seeds, Generations: generations})
	if err != nil {
		return nil, err
	}
	starts := [][]float64{result.X}
	for _, point := range result.Points {
		if distance(point.X, result.X) > 1e-6 {
			starts = append(starts, point.X)
		}
	}
	return starts, nil
}

func (s *searcher) values(u []float64) { s.land.values(u, s.vector) }

// program builds the local program; with an extra variable its start is the
// worst part itself.
func (s *searcher) program(start, low, high []float64) (local.Program, []float64) {
	p := s.plan
	n, m := p.dimension(), 0
	for _, r := range p.curved {
		m += len(p.rows[r].Bounds())
	}
	program := local.Program{
		Low: low, High: high, AtMost: s.straight(), Inequalities: m,
		Value:    func(u, c []float64) float64 { return s.value(u, c) },
		Gradient: func(u, grad, jac []float64) { s.gradient(u, grad, jac) },
	}
	if !s.worst() {
		return program, start
	}
	program.Inequalities += len(p.objective.parts)
	program.Low = append(append([]float64(nil), low...), math.Inf(-1))
	program.High = append(append([]float64(nil), high...), math.Inf(1))
	program.AtMost = widen(program.AtMost, n)
	s.values(start)
	t := p.objective.value(s.vector) / s.aimScale
	if math.IsNaN(t) {
		t = 0
	}
	return program, append(append([]float64(nil), start...), t)
}

// straight are the linear rows of the plan and the cuts.
func (s *searcher) straight() local.Rows {
	if len(s.cuts.B) == 0 {
		return s.plan.linear
	}
	return local.Rows{A: slices.Concat(s.plan.linear.A, s.cuts.A), B: slices.Concat(s.plan.linear.B, s.cuts.B)}
}

// widen adds a zero column to linear rows.
func widen(rows local.Rows, n int) local.Rows {
	wide := local.Rows{B: rows.B}
	for r := range rows.B {
		wide.A = append(wide.A, rows.A[r*n:(r+1)*n]...)
		wide.A = append(wide.A, 0)
	}
	return wide
}

// value is the program's function: the aim to minimise and the rows.
func (s *searcher) value(u, c []float64) float64 {
	p := s.plan
	n := p.dimension()
	s.values(u[:n])
	k := 0
	for q, r := range p.curved {
		row := &p.rows[r]
		v, inside := s.vector[row.Index], (backoff+s.inside[q])*row.Scale
		free := math.IsInf(v, 1) // the quantity does not apply
		for _, bound := range row.Bounds() {
			c[k] = (bound.Sign*(v-bound.At) + inside) / s.scale[q]
			if free {
				c[k] = -1
			}
			k++
		}
	}
	sign := p.objective.sign()
	switch {
	case s.blind:
		return 0
	case !s.worst():
		return sign * p.objective.value(s.vector) / s.aimScale
	}
	for i := range p.objective.parts {
		c[k] = sign * (p.objective.parts[i].value(s.vector)/s.aimScale - u[n])
		k++
	}
	return sign * u[n]
}

func (s *searcher) gradient(u, grad, jac []float64) {
	p := s.plan
	n, width := p.dimension(), len(grad)
	s.values(u[:n])
	s.land.jacobian(u[:n], s.rows)
	k := 0
	put := func(factor float64, row []float64) {
		clear(jac[k*width : (k+1)*width])
		addScaled(jac[k*width:k*width+n], factor, row)
		k++
	}
	for q, r := range p.curved {
		row := &p.rows[r]
		for _, bound := range row.Bounds() {
			if math.IsInf(s.vector[row.Index], 1) {
				put(0, nil)
				continue
			}
			put(bound.Sign/s.scale[q], s.rows[row.Index])
		}
	}
	sign := p.objective.sign()
	clear(grad)
	switch {
	case s.blind:
		return
	case !s.worst():
		p.objective.gradient(s.vector, s.rows, grad)
		for j := range grad {
			grad[j] *= sign / s.aimScale
		}
		return
	}
	for i := range p.objective.parts {
		clear(jac[k*width : (k+1)*width])
		p.objective.parts[i].addGradient(sign/s.aimScale, s.vector, s.rows, jac[k*width:k*width+n])
		jac[k*width+n] = -sign
		k++
	}
	grad[n] = sign
}

// violation sums the scaled violations of all rows at the latest values.
func (s *searcher) violation() float64 {
	sum := 0.0
	for _, r := range s.plan.curved {
		row := &s.plan.rows[r]
		if v := s.vector[row.Index]; !math.IsInf(v, 1) {
			sum += rowViolation(row.Margin(v), row.Scale)
		}
	}
	return sum
}

// excess is the scaled violation of every row at the latest values, 0 for the
// linear rows, which a search keeps.
func (s *searcher) excess() []float64 {
	out := make([]float64, len(s.plan.rows))
	for _, r := range s.plan.curved {
		row := &s.plan.rows[r]
		switch v := s.vector[row.Index]; {
		case math.IsNaN(v):
			out[r] = v
		case !math.IsInf(v, 1):
			out[r] = math.Max(0, -row.Margin(v)/row.Scale)
		}
	}
	return out
}

// prices turns multipliers into the aim gained for each unit by which a row is
// loosened.
func (s *searcher) prices(result *local.Result) []float64 {
	p := s.plan
	prices := make([]float64, len(p.rows))
	k := 0
	for q, r := range p.curved {
		for range p.rows[r].Bounds() {
			prices[r] += result.Multipliers[k] * s.aimScale / s.scale[q]
			k++
		}
	}
	k = 0
	for _, r := range p.straight {
		for range p.rows[r].Bounds() {
			prices[r] += result.RowsAtMost[k] * s.aimScale
			k++
		}
	}
	return prices
}
