package shock

import (
	"fmt"
	"math"

	"rampwright/problems/gas"
)

// Oblique is one attached oblique shock on the weak branch.
type Oblique struct {
	Mach       float64 // ahead
	Turning    float64 // theta, rad
	WaveAngle  float64 // beta to the flow ahead, rad
	NormalMach float64 // M sin(beta)
	Mach2      float64 // behind
	Jump       Jump
}

// Detached reports a turning no attached shock can give. By is the excess over
// the largest attached turning, rad.
type Detached struct {
	Mach    float64
	Turning float64
	By      float64
}

func (e *Detached) Error() string {
	return fmt.Sprintf("no attached shock at Mach %.6g turns the flow by %.6g rad: %.3g rad too much", e.Mach, e.Turning, e.By)
}

// Weak returns the weak oblique shock that turns a flow of Mach number M >= 1
// by theta >= 0. With x = cot(beta), T = tan(theta) the relation (NACA Report
// 1135 eq. 138) is the cubic
//
//	2x^3 + T B x^2 - 2(M^2-1) x + T A = 0,  A = (g-1)M^2 + 2,  B = (g+1)M^2 + 2
//
// whose largest root is the weak shock; everything behind it is a function of
// M^2 and Mn^2 = M^2/(1 + x^2).
//
// Special cases are:
//
//	theta = 0 gives the Mach wave, all ratios 1
//	theta < 0, M < 1, or NaN gives *Detached with By NaN: no shock is defined
//	theta above the largest attached turning gives *Detached
//
// Accuracy: wave angle to 1e-12 rad up to 0.999 of the largest turning and to
// 1e-6 deg at 0.9999 of it.
func Weak(g gas.Perfect, mach, turning float64) (Oblique, error) {
	if !(turning >= 0) || !(mach >= 1) || turning >= math.Pi/2 {
		return Oblique{}, notAttached(g, mach, turning)
	}
	cotangent, ok := WeakCotangent(g.Gamma, mach*mach, math.Tan(turning))
	if !ok {
		return Oblique{}, notAttached(g, mach, turning)
	}
	square := mach * mach
	// Mn^2 - 1 = (M^2 - 1 - x^2)/(1 + x^2), where a weak shock keeps its digits.
	excess := math.Max(0, ((mach-1)*(mach+1)-cotangent*cotangent)/(1+cotangent*cotangent))
	return Oblique{
		Mach:       mach,
		Turning:    turning,
		WaveAngle:  math.Atan2(1, cotangent),
		NormalMach: math.Sqrt(1 + excess),
		Mach2:      math.Sqrt(squareBehind(g.Gamma, square, 1+excess)),
		Jump:       acrossExcess(g.Gamma, excess),
	}, nil
}

// WeakCotangent returns cot(beta) of the weak shock for M^2 >= 1 and
// T = tan(theta) >= 0, and whether the shock is attached. It is the kernel of
// every chain: no trigonometry, no allocation, one division a step.
//
// The cubic f of Weak has one negative root (f(0) = T A > 0); attached means
// that the other two are real, the weak one the largest. Halley's iteration,
// f1 and f2 the derivatives of f,
//
//	x <- x - 2 f f1 / (2 f1^2 - f f2)
//
// starts at the positive root of 2x^2 + T B x - 2(M^2-1), where f = T A > 0,
// and approaches a real largest root r1 from above: with a_i = (x-r1)/(x-r_i)
// in (0, 1], S and Q the sums of a_i and a_i^2, the step is 2S/(S^2 + Q) times
// x - r1, and 2S <= S^2 + Q because a_1 = 1. On that way f1 > 0 and
// f f2 <= 2/3 f1^2, so that f1 <= 0 or f f2 >= 2 f1^2 proves that no positive
// root is real: detached. A detached iteration that jumps past both ends at the
// negative root.
//
// With u = f f2/f1^2 the error left by a step is u^2/4 of it while u is small,
// and never above 7u^2, which tells when to stop; at a double root each step
// still gains a factor of three. Accuracy: a few units of rounding in x, divided
// by the root of the distance from detachment 1 - theta/theta_max; from
// M = 1.01 up attached and detached are told apart to 1e-12 of the largest
// tangent, nearer to 1 to the rounding of M^2 - 1.
func WeakCotangent(gamma, machSquare, tangent float64) (cotangent float64, attached bool) {
	c1 := 2 * (machSquare - 1)
	if tangent == 0 {
		return math.Sqrt(machSquare - 1), true
	}
	c2 := tangent * ((gamma+1)*machSquare + 2)
	c0 := tangent * ((gamma-1)*machSquare + 2)
	x := (math.Sqrt(c2*c2+8*c1) - c2) / 4
	for range maxIterations {
		value := ((2*x+c2)*x-c1)*x + c0
		slope := (6*x+2*c2)*x - c1
		bend := value * (12*x + 2*c2)
		square := slope * slope
		below := 2*square - bend
		if !(slope > 0 && below > 0) {
			return 0, false
		}
		step := 2 * value * slope / below
		x -= step
		if math.Abs(step)*bend*bend <= converged*x*square*square {
			break
		}
	}
	return x, x > 0
}

const (
	// maxIterations bounds the linear convergence at a double root, where each
	// step gains at least a factor of three: 40 steps exhaust the mantissa.
	maxIterations = 40
	// converged is four times the relative error that the last step may leave in
	// x: half a unit of rounding.
	converged = 4 * 1.1102230246251565e-16
)

func notAttached(g gas.Perfect, mach, turning float64) error {
	by := math.NaN()
	if mach >= 1 && turning >= 0 {
		largest, _ := LargestTurning(g, mach)
		by = turning - largest
	}
	return &Detached{Mach: mach, Turning: turning, By: by}
}

// Turning returns theta of a shock at wave angle beta (NACA Report 1135
// eq. 138):
//
//	tan(theta) = 2 cot(beta) (M^2 sin^2(beta) - 1) / (M^2 (g + cos(2 beta)) + 2)
//
// It is 0 at the Mach angle and at pi/2, negative outside.
func Turning(g gas.Perfect, mach, waveAngle float64) float64 {
	sin, cos := math.Sincos(waveAngle)
	square := mach * mach
	// M^2 (g + cos 2b) + 2 with cos 2b = 1 - 2 sin^2 b.
	return math.Atan2(2*cos*(square*sin*sin-1), sin*(square*(g.Gamma+1-2*sin*sin)+2))
}
