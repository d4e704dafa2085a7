package robust

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Reliability is the most probable way in which a margin is lost.
type Reliability struct {
	// Beta is the distance from the origin of the standard normal space to the
	// nearest point where the margin is zero (Hasofer & Lind 1974), negative where
	// it is already lost at the origin.
	Beta  float64
	Point []float64 // that point
	// Importance is the share of each input in the direction of Point; sums to 1.
	Importance []float64
	Failure    float64 // Phi(-Beta): exact where the margin is linear
	Iterations int
}

// NoPoint reports that no point of zero margin was found.
type NoPoint struct {
	Iterations int
	Margin     float64 // where the search ended
	Distance   float64 // from the origin
}

func (e *NoPoint) Error() string {
	return fmt.Sprintf("no point of zero margin found in %d steps: margin %.3g at distance %.3g", e.Iterations, e.Margin, e.Distance)
}

const (
	formSteps     = 100
	formTolerance = 1e-9
	formHalvings  = 12
)

// FORM finds the most probable point of zero margin by the iteration of Hasofer &
// Lind (1974) and Rackwitz & Fiessler (1978),
//
//	u+ = (grad . u - g) grad / |grad|^2
//
// each step halved until the merit |u|^2/2 + c |g|, c = 2 |u|/|grad| + 10, falls
// (Zhang & Der Kiureghian 1995). From memory. margin returns g(u), positive where
// the limit holds, and stores its gradient.
//
// Special cases are: a gradient of zero or a search that does not come to rest
// gives *NoPoint.
func FORM(inputs int, margin func(u, gradient []float64) float64) (Reliability, error) {
	u, next := make([]float64, inputs), make([]float64, inputs)
	gradient, ahead := make([]float64, inputs), make([]float64, inputs)
	g := margin(u, gradient)
	start := g
	scale := math.Max(math.Abs(g), norm(gradient))
	for step := 1; step <= formSteps; step++ {
		steep := dot(gradient, gradient)
		if !(steep > 0) || math.IsInf(steep, 1) {
			return Reliability{}, &NoPoint{step, g, norm(u)}
		}
		factor := (dot(gradient, u) - g) / steep
		for j := range next {
			next[j] = factor*gradient[j] - u[j] // the step
		}
		if norm(next) <= formTolerance*math.Max(1, norm(u)) && math.Abs(g) <= formTolerance*scale {
			return newReliability(u, gradient, start, step), nil
		}
		penalty := 2*norm(u)/math.Sqrt(steep) + 10
		merit := func(u []float64, g float64) float64 { return dot(u, u)/2 + penalty*math.Abs(g) }
		before, part := merit(u, g), 1.0
		trial := make([]float64, inputs)
		for range formHalvings {
			for j := range trial {
				trial[j] = u[j] + part*next[j]
			}
			if g = margin(trial, ahead); merit(trial, g) < before {
				break
			}
			part /= 2
		}
		copy(u, trial)
		copy(gradient, ahead)
	}
	return Reliability{}, &NoPoint{formSteps, g, norm(u)}
}

// newReliability describes the point u of zero margin. It lies along the gradient
// there, which has a direction where u is the origin as well.
func newReliability(u, gradient []float64, start float64, steps int) Reliability {
	beta := norm(u)
	r := Reliability{Beta: beta, Point: u, Importance: make([]float64, len(u)), Iterations: steps}
	steep := dot(gradient, gradient)
	for j, v := range gradient {
		r.Importance[j] = v * v / steep
	}
	if start < 0 {
		r.Beta = -beta
	}
	r.Failure = Phi(-r.Beta)
	return r
}

// Breitung is the asymptotic correction of Phi(-beta) by the principal curvatures k
// of the surface of zero margin, positive where it bends away from the origin,
//
//	P = Phi(-beta) prod (1 + beta k)^(-1/2)
//
// (Breitung 1984, from memory). Range: beta > 0, beta k > -1, else NaN.
func Breitung(beta float64, curvatures []float64) float64 {
	p := Phi(-beta)
	for _, k := range curvatures {
		if !(beta > 0) || !(1+beta*k > 0) {
			return math.NaN()
		}
		p /= math.Sqrt(1 + beta*k)
	}
	return p
}

// ErrFlat is the answer to curvatures of a margin without gradient.
var ErrFlat = errors.New("the margin has no gradient there")

// Curvatures returns the principal curvatures of the surface of constant margin at
// u: the eigenvalues of the second derivatives in its tangent plane over the length
// of the gradient, from central differences of the gradient with step 1e-4.
func Curvatures(u []float64, margin func(u, gradient []float64) float64) ([]float64, error) {
	n := len(u)
	normal := make([]float64, n)
	margin(u, normal)
	length := norm(normal)
	if !(length > 0) {
		return nil, ErrFlat
	}
	const h = 1e-4
	second := mat.NewSymDense(n, nil)
	rows := make([][]float64, n)
	for j := range u {
		moved := append([]float64(nil), u...)
		up, down := make([]float64, n), make([]float64, n)
		moved[j] = u[j] + h
		margin(moved, up)
		moved[j] = u[j] - h
		margin(moved, down)
		for i := range up {
			up[i] = (up[i] - down[i]) / (2 * h)
		}
		rows[j] = up
	}
	for i := range rows {
		for j := i; j < n; j++ {
			second.SetSym(i, j, (rows[i][j]+rows[j][i])/2)
		}
	}
	return tangential(second, normal, length)
}

// tangential are the eigenvalues of (I - a a') H (I - a a') / |grad| without the
// one along the normal a, which is zero with eigenvector a.
func tangential(second *mat.SymDense, normal []float64, length float64) ([]float64, error) {
	n := len(normal)
	plane := mat.NewDense(n, n, nil)
	for i := range n {
		for j := range n {
			v := -normal[i] * normal[j] / (length * length)
			if i == j {
				v++
			}
			plane.Set(i, j, v)
		}
	}
	var projected mat.Dense
	projected.Product(plane, second, plane)
	symmetric := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			symmetric.SetSym(i, j, (projected.At(i, j)+projected.At(j, i))/(2*length))
		}
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(symmetric, true) {
		return nil, errors.New("the eigenvalues of the second derivatives were not found")
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	alongNormal, most := 0, -1.0
	for k := range n {
		along := 0.0
		for i := range n {
			along += vectors.At(i, k) * normal[i] / length
		}
		if math.Abs(along) > most {
			alongNormal, most = k, math.Abs(along)
		}
	}
	values := eigen.Values(nil)
	return append(values[:alongNormal:alongNormal], values[alongNormal+1:]...), nil
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for j, v := range a {
		sum += v * b[j]
	}
	return sum
}

func norm(v []float64) float64 { return math.Sqrt(dot(v, v)) }
