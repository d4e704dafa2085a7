package ramp

import (
	"math"

	"rampwright/problems/gas"
)

// RecoveryGradient returns what Recovery returns and stores the derivatives by
// each turning, 1/rad: of the recovery in dRecovery and of the Mach number
// behind the chain in dMach (either may be nil). Both must otherwise be as long
// as turning, at most MaxRamps. The cubic F(x; M^2, T) = 0 of WeakCotangent is
// differentiated implicitly, dx = -(F_m dM^2 + F_T dT)/F_x, and the chain is
// swept backward once: two adjoints, one of ln(pi) and one of M^2 behind.
func RecoveryGradient(g gas.Perfect, mach float64, turning, dRecovery, dMach []float64) (recovery, machBehind float64, ok bool) {
	if !(mach >= 1) {
		return math.NaN(), math.NaN(), false
	}
	var steps [MaxRamps]step
	n := len(turning)
	square := mach * mach
	density, cooling := 1.0, 1.0
	for i, theta := range turning {
		s := &steps[i]
		if !s.cross(g.Gamma, square, tangent(theta)) {
			return math.NaN(), math.NaN(), false
		}
		density *= s.density
		cooling *= s.cooling
		square = s.behind
	}
	recovery = totalPressure(g.Gamma, density, cooling)
	machBehind = math.Sqrt(square)

	lossByMach, machByMach := 0.0, 1.0 // d ln(pi)/d M_i^2 and d M_end^2/d M_i^2
	for i := n - 1; i >= 0; i-- {
		s := &steps[i]
		d := s.differentiate(g.Gamma)
		if dRecovery != nil {
			dRecovery[i] = recovery * (d.lossByTurning + lossByMach*d.machByTurning)
		}
		if dMach != nil {
			dMach[i] = machByMach * d.machByTurning / (2 * machBehind)
		}
		lossByMach = d.lossByMach + lossByMach*d.machByMach
		machByMach *= d.machByMach
	}
	return recovery, machBehind, true
}

// slopes are the derivatives of ln(pt2/pt1) ("loss") and of M2^2 ("mach") of one
// shock by its turning and by M1^2.
type slopes struct {
	lossByTurning, lossByMach float64
	machByTurning, machByMach float64
}

// differentiate returns the slopes of one shock. With n = Mn^2 = m/w and the
// denominators of step,
//
//	d ln(pt2/pt1)/dn = -2g (n-1)^2/(n l h),             l = (g-1) n + 2
//	d ln(T1/T2)/dn   = -2(g-1) (g n^2+1)/(n l h),       h = 2g n - (g-1)
//
// (from the ratios of NACA Report 1135 eqs. 128-132), and M2^2 follows from the
// conserved total temperature, M2^2 + 2/(g-1) = (m + 2/(g-1)) T1/T2.
func (s *step) differentiate(gamma float64) slopes {
	x, m, t, w := s.cotangent, s.ahead, s.tangent, s.width
	a, b := (gamma-1)*m+2, (gamma+1)*m+2
	byX := (6*x+2*t*b)*x - 2*(m-1)
	reciprocal := 1 / (byX * w * m)
	perX, perWidth, perMach := w*m*reciprocal, m*byX*reciprocal, byX*w*reciprocal
	xByMach := -((t*(gamma+1)*x-2)*x + t*(gamma-1)) * perX
	xByTurning := -(b*x*x + a) * perX * (1 + t*t)

	// d ln(n) by M1^2 and by turning, times m: n = m/(1+x^2).
	lnByX := -2 * x * m * perWidth
	lnByMach := 1 + lnByX*xByMach
	lnByTurning := lnByX * xByTurning

	// n l h = n low high/w^2, so that the slopes by ln(n), over m, are these.
	common := -2 * s.inverse * perMach
	loss := gamma * common * (m - w) * (m - w)
	cool := common * (gamma*m*m + w*w) * ((gamma-1)*s.behind + 2)
	return slopes{
		lossByTurning: loss * lnByTurning,
		lossByMach:    loss * lnByMach,
		machByTurning: cool * lnByTurning,
		machByMach:    s.cooling + cool*lnByMach,
	}
}
