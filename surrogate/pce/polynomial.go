package pce

import "math"

// Input is the distribution of one input on the scaled axis, which decides its
// orthogonal polynomials (Askey scheme, Xiu & Karniadakis 2002). The zero value
// is uniform on [0,1]: Legendre. With Normal set it is a normal distribution of
// the given Mean and Deviation (> 0) on that axis: Hermite.
type Input struct {
	Normal    bool
	Mean      float64
	Deviation float64
}

// polynomials stores in dst the orthonormal polynomials psi_0..psi_p at u,
// p = len(dst)-1.
//
// Legendre on [0,1], from t = 2u - 1:
//
//	psi_k(u) = sqrt(2k+1) P_k(t),  (k+1) P_{k+1} = (2k+1) t P_k - k P_{k-1}
//
// Hermite, from z = (u - mean)/deviation:
//
//	psi_k(u) = He_k(z)/sqrt(k!),  sqrt(k+1) psi_{k+1} = z psi_k - sqrt(k) psi_{k-1}
//
// Source: Abramowitz & Stegun 22.7 (from memory); Xiu & Karniadakis 2002.
func (in Input) polynomials(dst []float64, u float64) {
	if in.Normal {
		hermite(dst, (u-in.Mean)/in.Deviation)
		return
	}
	legendre(dst, 2*u-1)
}

func legendre(dst []float64, t float64) {
	before, now := 0.0, 1.0
	for k := range dst {
		dst[k] = rootOdd[k] * now
		before, now = now, (float64(2*k+1)*t*now-float64(k)*before)*reciprocal[k+1]
	}
}

func hermite(dst []float64, z float64) {
	before, now := 0.0, 1.0
	for k := range dst {
		dst[k] = now
		before, now = now, (z*now-root[k]*before)/root[k+1]
	}
}

// slopes stores in dst the derivatives d psi_k/du, given psi = psi_0..psi_p at u.
//
// Legendre: P'_{k+1} = P'_{k-1} + (2k+1) P_k, so that
//
//	psi'_{k+1}/sqrt(2k+3) = psi'_{k-1}/sqrt(2k-1) + 2 sqrt(2k+1) psi_k
//
// (the 2 is dt/du), valid at the ends of the interval too. Hermite:
// psi'_k = sqrt(k) psi_{k-1}/deviation. Source: Abramowitz & Stegun 22.8, from
// memory.
func (in Input) slopes(dst, psi []float64) {
	dst[0] = 0
	for k := 1; k < len(dst); k++ {
		if in.Normal {
			dst[k] = root[k] * psi[k-1] / in.Deviation
			continue
		}
		slope := 2 * rootOdd[k-1] * psi[k-1]
		if k >= 2 {
			slope += dst[k-2] / rootOdd[k-2]
		}
		dst[k] = rootOdd[k] * slope
	}
}

// degreeCap bounds the degree in one input; beyond it the recurrences are still
// stable, but no sample of a size met here supports them.
const degreeCap = 30

// square roots of k and 2k+1, and reciprocals of k, for the recurrences
var root, rootOdd, reciprocal = func() (r, odd, inverse [degreeCap + 2]float64) {
	for k := range r {
		r[k] = math.Sqrt(float64(k))
		odd[k] = math.Sqrt(float64(2*k + 1))
		inverse[k] = 1 / math.Max(1, float64(k))
	}
	return
}()
