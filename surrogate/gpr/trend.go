package gpr

// Trend is the mean the process varies about; its coefficients are estimated by
// generalised least squares along with the rest.
type Trend int

const (
	// Constant is one unknown level; the default.
	Constant Trend = iota
	// Linear is an unknown level and one unknown slope an input.
	Linear
	// None is a mean of zero in the caller's unit.
	None
)

// terms returns the number of trend coefficients for d inputs.
func (t Trend) terms(d int) int {
	switch t {
	case None:
		return 0
	case Linear:
		return d + 1
	default:
		return 1
	}
}

// functions stores the trend functions 1, x_1.. at x in dst.
func (t Trend) functions(dst, x []float64) {
	if t == None {
		return
	}
	dst[0] = 1
	if t == Linear {
		copy(dst[1:], x)
	}
}
