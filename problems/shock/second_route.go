package shock

import (
	"math"

	"rampwright/problems/gas"
)

// WeakBracketed is the second route to the weak shock: it shares nothing with
// Weak but the definition of a perfect gas. The wave angle is the bracketed
// root of theta(beta) - theta between the Mach angle and the angle of largest
// turning; the states then follow from the geometry of the velocity triangle
// and the conservation laws alone (Anderson, Modern Compressible Flow, ch. 4):
//
//	rho2/rho1 = tan(beta)/tan(beta - theta)              mass, tangential momentum
//	p2/p1     = 1 + g Mn^2 (1 - rho1/rho2)               normal momentum
//	M2        = M1 cos(beta)/cos(beta - theta) sqrt(T1/T2)
//	pt2/pt1   = exp(-(s2 - s1)/R)                        entropy
//
// Special cases and errors are those of Weak.
func WeakBracketed(g gas.Perfect, mach, turning float64) (Oblique, error) {
	if !(turning >= 0) || !(mach >= 1) || turning >= math.Pi/2 {
		return Oblique{}, notAttached(g, mach, turning)
	}
	machAngle := math.Asin(1 / mach)
	if turning == 0 {
		return Oblique{Mach: mach, WaveAngle: machAngle, NormalMach: 1, Mach2: mach, Jump: Jump{1, 1, 1, 1}}, nil
	}
	largest, atLargest := LargestTurningSearched(g, mach)
	if turning > largest {
		return Oblique{}, &Detached{Mach: mach, Turning: turning, By: turning - largest}
	}
	wave := bracketedRoot(func(beta float64) float64 {
		return Turning(g, mach, beta) - turning
	}, machAngle, atLargest)
	normal := mach * math.Sin(wave)
	// tan(beta)/tan(beta-theta) - 1, which keeps its digits in a weak shock.
	crowd := math.Sin(turning) / (math.Cos(wave) * math.Sin(wave-turning))
	squeeze := g.Gamma * normal * normal * crowd / (1 + crowd)
	temperature := (1 + squeeze) / (1 + crowd)
	return Oblique{
		Mach:       mach,
		Turning:    turning,
		WaveAngle:  wave,
		NormalMach: normal,
		Mach2:      mach * math.Cos(wave) / math.Cos(wave-turning) / math.Sqrt(temperature),
		Jump:       Jump{1 + squeeze, 1 + crowd, temperature, math.Exp(-entropyRise(g, crowd, squeeze))},
	}, nil
}

// NormalByPrandtl is the second route to the normal shock: Prandtl's relation
// u1 u2 = a*^2 between the critical speed ratios (NACA Report 1135 eq. 89a),
//
//	M*^2 = (g+1) M^2 / (2 + (g-1) M^2),   M*2 = 1/M*1,   rho2/rho1 = M*1^2
//
// with the pressure from normal momentum and the total pressure from entropy.
func NormalByPrandtl(g gas.Perfect, mach float64) (mach2 float64, jump Jump) {
	gamma := g.Gamma
	critical := (gamma + 1) * mach * mach / (2 + (gamma-1)*mach*mach)
	behind := 1 / critical
	mach2 = math.Sqrt(2 * behind / (gamma + 1 - (gamma-1)*behind))
	crowd := 2 * (mach - 1) * (mach + 1) / (2 + (gamma-1)*mach*mach) // M*^2 - 1
	squeeze := gamma * mach * mach * crowd / (1 + crowd)
	temperature := (1 + squeeze) / (1 + crowd)
	return mach2, Jump{1 + squeeze, 1 + crowd, temperature, math.Exp(-entropyRise(g, crowd, squeeze))}
}

// entropyRise is (s2 - s1)/R = (ln(p2/p1) - g ln(rho2/rho1))/(g-1), from
// rho2/rho1 - 1 and p2/p1 - 1.
func entropyRise(g gas.Perfect, crowd, squeeze float64) float64 {
	return (math.Log1p(squeeze) - g.Gamma*math.Log1p(crowd)) / (g.Gamma - 1)
}

// LargestTurningSearched is the second route to the largest attached turning:
// golden-section search of theta(beta) between the Mach angle and pi/2. The
// turning is accurate to rounding, the angle to 1e-7 rad (a flat maximum).
func LargestTurningSearched(g gas.Perfect, mach float64) (turning, waveAngle float64) {
	low, high := math.Asin(1/mach), math.Pi/2
	const golden = 0.6180339887498949 // (sqrt(5)-1)/2
	a, b := high-golden*(high-low), low+golden*(high-low)
	fa, fb := Turning(g, mach, a), Turning(g, mach, b)
	for high-low > 1e-9 {
		if fa < fb {
			low, a, fa = a, b, fb
			b = low + golden*(high-low)
			fb = Turning(g, mach, b)
		} else {
			high, b, fb = b, a, fa
			a = high - golden*(high-low)
			fa = Turning(g, mach, a)
		}
	}
	waveAngle = (low + high) / 2
	return math.Max(0, Turning(g, mach, waveAngle)), waveAngle
}
