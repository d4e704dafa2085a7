package main

import (
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"testing"

	gonum "gonum.org/v1/gonum/optimize"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// statedSide is one side of a limit as result.json states it.
type statedSide struct {
	Quantity, At, Side string
	Bound              float64
}

func (s statedSide) limit(bound float64) problems.Limit {
	limit := problems.Limit{Quantity: s.Quantity, Point: s.At, Low: bound, High: math.Inf(1)}
	if s.Side == "at_most" {
		limit.Low, limit.High = math.Inf(-1), bound
	}
	return limit
}

// explainedResult is what result.json says of a brief that cannot be met.
type explainedResult struct {
	Status    string
	Best      struct{ Feasible bool }
	Conflicts []struct{ Members []statedSide }
	// Enough is null where loosening this side alone is not enough.
	Relaxation []struct {
		statedSide
		Enough    *float64
		Variables map[string]float64
	}
}

// Every conflict set a design prints is proved by another method than the one
// that found it: the limits of the model with the set cannot be met, with each
// proper subset that leaves out one member they can. So is every relaxation: the
// design given meets it, and a little less is not enough.
func TestConflictsAndRelaxationsAreProved(t *testing.T) {
	for _, c := range []struct {
		name  string
		brief []byte
		sets  [][]string // quantities, in any order
		// The least contraction over self-start veyric-6 reaches with all else held
		// is 1.341, recomputed independently.
		enough map[string]float64
		within float64
	}{
		{
			"veyric-6 that starts by itself", tightBrief(t),
			[][]string{
				{"cowl_outer_angle_deg", "internal_contraction_over_self_start", "length_m"},
				{"internal_contraction_over_self_start", "throat_pressure_kPa"},
				{"internal_contraction_over_self_start", "throat_temperature_K"},
			},
			map[string]float64{"internal_contraction_over_self_start": 1.341}, 0.002,
		},
		{
			"three limits", readCase(t, filepath.Join(cliCases, "three-limits.txtar")).file(t, "three.yaml"),
			[][]string{{"cowl_outer_angle_deg", "length_ratio", "recovery"}},
			map[string]float64{"cowl_outer_angle_deg": 12.1328, "length_ratio": 2.91325, "recovery": 0.816536}, 1e-4,
		},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := t.TempDir()
			file := filepath.Join(dir, "brief.yaml")
			if err := os.WriteFile(file, c.brief, 0o600); err != nil {
				t.Fatal(err)
			}
			got := command("design", file, "--json", "--quiet", "-o", filepath.Join(dir, "result"), "--samples", "20", "--infill", "4")
			if got.code != exitNotMet {
				t.Fatalf("code %d:\n%s", got.code, got.messages)
			}
			var result explainedResult
			decode(t, got.out, &result)
			if result.Status != "infeasible" || result.Best.Feasible {
				t.Errorf("status %s, feasible %t", result.Status, result.Best.Feasible)
			}
			p := &prover{t, studyOf(t, file, c.brief)}
			if len(result.Conflicts) != len(c.sets) {
				t.Errorf("%d conflict sets, want %d", len(result.Conflicts), len(c.sets))
			}
			for _, set := range result.Conflicts {
				p.conflict(set.Members, c.sets)
			}
			enough := 0
			for _, r := range result.Relaxation {
				if r.Enough == nil {
					continue
				}
				enough++
				if want, ok := c.enough[r.Quantity]; !ok || !(math.Abs(*r.Enough-want) <= c.within) {
					t.Errorf("relaxation of %s to %g, want %g", r.Quantity, *r.Enough, want)
				}
				p.relaxation(r.statedSide, *r.Enough, r.Variables)
			}
			if enough != len(c.enough) {
				t.Errorf("%d relaxations are enough, want %d", enough, len(c.enough))
			}
		})
	}
}

// studyOf reads a brief as the commands do.
func studyOf(t *testing.T, file string, data []byte) *study {
	t.Helper()
	b, err := brief.Read(file, data, nil)
	if err != nil {
		t.Fatal(err)
	}
	problem, err := inlet.New(b.Definition)
	if err != nil {
		t.Fatal(err)
	}
	return &study{brief: b, problem: problem, limits: b.Resolve(inlet.HardLimits(b.Definition), inlet.DefaultLimits(b.Definition))}
}

// prover looks for designs that meet limits, by the simplex method of Nelder &
// Mead from random starts on the sum of violations.
type prover struct {
	*testing.T
	study *study
}

const (
	proofStarts = 24
	// impossible is the least scaled violation that counts as one.
	impossible = 1e-5
)

// conflict proves one set of sides, which must be one of those wanted.
func (p *prover) conflict(members []statedSide, wanted [][]string) {
	var names []string
	var limits []problems.Limit
	for _, m := range members {
		names = append(names, m.Quantity)
		limits = append(limits, m.limit(m.Bound))
	}
	sorted := slices.Sorted(slices.Values(names))
	if !slices.ContainsFunc(wanted, func(set []string) bool { return slices.Equal(set, sorted) }) {
		p.Errorf("unwanted set %q", sorted)
	}
	if least := p.leastViolation(limits); !(least > impossible) {
		p.Errorf("%q can be met: violation %g", names, least)
	}
	for i := range limits {
		rest := slices.Concat(limits[:i], limits[i+1:])
		if least := p.leastViolation(rest); least != 0 {
			p.Errorf("%q without %s cannot be met: violation %g", names, names[i], least)
		}
	}
}

// relaxation proves that every other limit can be met with this side loosened to
// enough, and not with a thousandth less.
func (p *prover) relaxation(side statedSide, enough float64, variables map[string]float64) {
	var others []problems.Limit
	for _, l := range p.study.limits {
		if l.Kind != problems.Hard {
			if l.Quantity == side.Quantity && l.Point == side.At {
				if side.Side == "at_most" {
					l.High = math.Inf(1)
				} else {
					l.Low = math.Inf(-1)
				}
			}
			others = append(others, l)
		}
	}
	w := p.walker(append(others, side.limit(enough)))
	u := make([]float64, len(w.problem.variables))
	for j, v := range w.problem.variables {
		u[j] = (variables[v.Name] - v.Low) / (v.High - v.Low)
	}
	// The variables are turned into the unit cube and back: last digits differ.
	if violation := w.value(u); !(violation <= 1e-9) {
		p.Errorf("the design that relaxes %s to %g has violation %g", side.Quantity, enough, violation)
	}
	less := enough + 1e-3*(side.Bound-enough)
	if least := p.leastViolation(append(others, side.limit(less))); !(least > 0) {
		p.Errorf("%s %s %g is enough already", side.Quantity, side.Side, less)
	}
}

// walker evaluates the violation of limits and those of the model.
func (p *prover) walker(limits []problems.Limit) *walker {
	s := *p.study
	s.limits = slices.Clone(limits)
	for _, l := range p.study.limits {
		if l.Kind == problems.Hard {
			s.limits = append(s.limits, l)
		}
	}
	target := newPenalty(&s)
	target.parts = nil // no aim: the violation alone
	return target.walker()
}

// leastViolation is the least sum of scaled violations found, 0 at once where all
// limits can be met.
func (p *prover) leastViolation(limits []problems.Limit) float64 {
	w := p.walker(limits)
	random := rand.New(rand.NewPCG(3, 24))
	least := math.Inf(1)
	for range proofStarts {
		begin := make([]float64, len(w.problem.variables))
		for j := range begin {
			begin[j] = random.Float64()
		}
		end, err := gonum.Minimize(gonum.Problem{Func: w.value}, begin, &gonum.Settings{FuncEvaluations: 800}, &gonum.NelderMead{})
		if err != nil || w.failed != nil {
			p.Fatal(err, w.failed)
		}
		if least = math.Min(least, end.F); least <= 0 {
			return 0
		}
	}
	return least
}
