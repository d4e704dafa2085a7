package gpr

import "math"

// Kernel is a correlation function c(r) of the scaled distance
// r^2 = sum_j ((x_j - x'_j)/l_j)^2, one length l_j an input (automatic
// relevance determination).
//
//	RBF       exp(-r^2/2)
//	Matern52  (1 + a + a^2/3) exp(-a),  a = sqrt(5) r
//	Matern32  (1 + a) exp(-a),          a = sqrt(3) r
//	Matern12  exp(-r)
//
// Source: Rasmussen & Williams 2006, equations 4.9, 4.14, 4.17.
type Kernel int

const (
	// RBF is infinitely smooth; the default.
	RBF Kernel = iota
	// Matern52 is twice differentiable.
	Matern52
	// Matern32 is once differentiable.
	Matern32
	// Matern12 is continuous only.
	Matern12
)

// String returns the name used in tables.
func (k Kernel) String() string {
	switch k {
	case RBF:
		return "RBF"
	case Matern52:
		return "Matern 5/2"
	case Matern32:
		return "Matern 3/2"
	default:
		return "Matern 1/2"
	}
}

var root3, root5 = math.Sqrt(3), math.Sqrt(5)

// correlation returns c from the squared scaled distance.
func (k Kernel) correlation(squared float64) float64 {
	switch k {
	case RBF:
		return math.Exp(-0.5 * squared)
	case Matern52:
		a := root5 * math.Sqrt(squared)
		return (1 + a + a*a/3) * math.Exp(-a)
	case Matern32:
		a := root3 * math.Sqrt(squared)
		return (1 + a) * math.Exp(-a)
	default:
		return math.Exp(-math.Sqrt(squared))
	}
}

// complement returns 1 - c, for RBF without cancellation.
func (k Kernel) complement(squared float64) float64 {
	if k == RBF {
		return -math.Expm1(-0.5 * squared)
	}
	return 1 - k.correlation(squared)
}

// sensitivity returns the factor s(r) of the derivatives
//
//	dc/d(log l_j) = s(r) (x_j - x'_j)^2/l_j^2
//	dc/dx_j       = -s(r) (x_j - x'_j)/l_j^2
//
// that is -(dc/dr)/r: RBF c; Matern52 (5/3)(1+a)exp(-a); Matern32 3 exp(-a);
// Matern12 exp(-r)/r, which is unbounded at r = 0 and 0 is returned there (the
// derivatives by the lengths vanish; the one by x does not exist).
func (k Kernel) sensitivity(squared float64) float64 {
	switch k {
	case RBF:
		return math.Exp(-0.5 * squared)
	case Matern52:
		a := root5 * math.Sqrt(squared)
		return 5.0 / 3 * (1 + a) * math.Exp(-a)
	case Matern32:
		return 3 * math.Exp(-root3*math.Sqrt(squared))
	default:
		if squared == 0 {
			return 0
		}
		r := math.Sqrt(squared)
		return math.Exp(-r) / r
	}
}
