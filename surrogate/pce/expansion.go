// Package pce fits polynomial chaos expansions: sums of products of polynomials
// orthonormal under the distribution of the inputs, whose coefficients give
// mean, variance and Sobol' indices in closed form.
package pce

import (
	"fmt"
	"math"

	"rampwright/surrogate"
)

// Expansion is a fitted polynomial chaos expansion
//
//	f(x) = sum over a of c_a psi_{a_1}(x_1) .. psi_{a_d}(x_d)
//
// with polynomials psi_k orthonormal under each input's distribution. It is
// safe for concurrent use.
type Expansion struct {
	basis        *basis
	scaled       []float64 // coefficients for standardised outputs
	scaling      surrogate.Scaling
	spread       spread
	loo          []float64
	looDeviation []float64
	active       int // terms with a coefficient
	rank         int // complexity between kinds
	summary      string
	warm         surrogate.Model
	regression   *regression // nil unless plain least squares
}

// spread is the standardised predictive deviation at a point whose products
// are in s.values.
type spread interface {
	deviation(s *scratch) float64
}

// Mean returns the expansion at x.
func (e *Expansion) Mean(x []float64) float64 { return e.scaling.Undo(e.basis.mean(e.scaled, x)) }

// Predict returns the expansion at x and its standard deviation there.
func (e *Expansion) Predict(x []float64) (mean, deviation float64) {
	s := e.basis.pool.Get().(*scratch)
	defer e.basis.pool.Put(s)
	e.basis.evaluate(s, x)
	for t, c := range e.scaled {
		mean += c * s.values[t]
	}
	return e.scaling.Undo(mean), e.scaling.Scale * e.spread.deviation(s)
}

// Gradient stores the derivatives of the expansion in dst and returns its value.
func (e *Expansion) Gradient(dst, x []float64) float64 {
	value := e.basis.gradient(dst, e.scaled, x)
	for j := range dst {
		dst[j] *= e.scaling.Scale
	}
	return e.scaling.Undo(value)
}

// LeaveOneOut returns the closed-form leave-one-out predictions.
func (e *Expansion) LeaveOneOut() []float64 { return e.loo }

// LeaveOneOutDeviation returns their standard deviations.
func (e *Expansion) LeaveOneOutDeviation() []float64 { return e.looDeviation }

// Offsets of the complexity between kinds; Gaussian processes lie beyond.
const (
	sparseRank = 500_000
	ridgeRank  = 1_000_000
)

// Complexity orders least squares before sparse and penalised fits, fewer terms
// before more.
func (e *Expansion) Complexity() int { return e.rank + e.active }

// Describe returns degree and number of terms, and what else the fit chose.
func (e *Expansion) Describe() string { return e.summary }

// Warm returns the configuration that refits this structure.
func (e *Expansion) Warm() surrogate.Model { return e.warm }

// Term is one product of an expansion: the degree in each input, and its
// coefficient in the unit of the output.
type Term struct {
	Degrees     []int
	Coefficient float64
}

// Terms returns the products with a coefficient, the constant first.
func (e *Expansion) Terms() []Term {
	var terms []Term
	for t, a := range e.basis.terms {
		c := e.scaling.Scale * e.scaled[t]
		if t == 0 {
			c = e.scaling.Undo(e.scaled[0])
		} else if c == 0 {
			continue
		}
		degrees := make([]int, len(a))
		for j, k := range a {
			degrees[j] = int(k)
		}
		terms = append(terms, Term{degrees, c})
	}
	return terms
}

// setLeaveOneOut stores predictions and deviations from standardised residuals
// y_i - y_-i and deviations.
func (e *Expansion) setLeaveOneOut(y, residual, deviation []float64) {
	e.loo, e.looDeviation = make([]float64, len(y)), make([]float64, len(y))
	for i := range y {
		e.loo[i] = y[i] - e.scaling.Scale*residual[i]
		e.looDeviation[i] = e.scaling.Scale * deviation[i]
	}
}

// largestDegree returns the largest total degree among terms with a coefficient.
func (e *Expansion) largestDegree() int {
	degree := 0
	for t, a := range e.basis.terms {
		if e.scaled[t] != 0 {
			degree = max(degree, a.total())
		}
	}
	return degree
}

func termsText(degree, terms int) string {
	if terms == 1 {
		return "constant"
	}
	return fmt.Sprintf("degree %d, %d terms", degree, terms)
}

// asFitted keeps a failed fit from becoming a fit that is not nil.
func asFitted(e *Expansion, err error) (surrogate.Fitted, error) {
	if err != nil {
		return nil, err
	}
	return e, nil
}

// resolveInputs returns one distribution an input (all uniform when none is
// given) or the reasons why that cannot be.
func resolveInputs(inputs []Input, d int) ([]Input, []string) {
	if len(inputs) == 0 {
		return make([]Input, d), nil
	}
	var problems []string
	if len(inputs) != d {
		problems = append(problems, fmt.Sprintf("%d input distributions for %d inputs", len(inputs), d))
	}
	for j, in := range inputs {
		if in.Normal && !(in.Deviation > 0 && !math.IsInf(in.Deviation, 0) && !math.IsNaN(in.Mean) && !math.IsInf(in.Mean, 0)) {
			problems = append(problems, fmt.Sprintf("input %d: mean %g and deviation %g do not make a normal distribution", j, in.Mean, in.Deviation))
		}
	}
	return inputs, problems
}

// problems lists what is wrong with a truncation.
func (t Truncation) problems() []string {
	var problems []string
	if t.Degree < 0 || t.Degree > degreeCap {
		problems = append(problems, fmt.Sprintf("degree %d is not within 0..%d", t.Degree, degreeCap))
	}
	if !(t.Norm >= 0 && t.Norm <= 1) {
		problems = append(problems, fmt.Sprintf("norm %g is not within 0..1", t.Norm))
	}
	if t.Interactions < 0 {
		problems = append(problems, fmt.Sprintf("%d interactions", t.Interactions))
	}
	return problems
}

// prepare checks data and settings for a fit and returns what every fit needs.
func prepare(t Truncation, inputs []Input, extra []string, x [][]float64, y []float64) (resolved []Input, scaling surrogate.Scaling, scaled []float64, err error) {
	if err = surrogate.Check(x, y, 2); err != nil {
		return
	}
	resolved, problems := resolveInputs(inputs, len(x[0]))
	problems = append(append(t.problems(), problems...), extra...)
	if len(problems) > 0 {
		err = &surrogate.SettingsError{Of: "polynomial chaos", Problems: problems}
		return
	}
	scaling, scaled, _ = surrogate.Standardise(y)
	return
}
