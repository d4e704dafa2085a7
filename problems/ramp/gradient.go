package ramp

import (
	"math"

	"rampwright/problems/gas"
)

// RecoveryGradient returns what Recovery returns and stores the derivatives by
// each turning, 1/rad: of the recovery in dRecovery and of the Mach number
// behind the chain in dMach (either may be nil). Both must otherwise be as long
// as turning. The cubic F(x; M^2, T) = 0 of shock.WeakCotangent is
// differentiated implicitly, dx = -(F_m dM^2 + F_T dT)/F_x, and the chain is
// swept backward once: two adjoints, one of ln(pi) and one of M^2 behind.
func RecoveryGradient(g gas.Perfect, mach float64, turning, dRecovery, dMach []float64) (recovery, machBehind float64, ok bool) {
	var steps [MaxRamps]step
	n := len(turning)
	square := mach * mach
	density, pressure := 1.0, 1.0
	for i, theta := range turning {
		s := &steps[i]
		if !s.cross(g.Gamma, square, tangent(theta)) {
			return math.NaN(), math.NaN(), false
		}
		density *= s.density
		pressure *= s.pressure
		square = s.behind
	}
	recovery = totalPressure(g.Gamma, density, pressure)
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

func (s *step) differentiate(gamma float64) slopes {
	x, m, t := s.cotangent, s.ahead, s.tangent
	a, b := (gamma-1)*m+2, (gamma+1)*m+2
	byX := (6*x+2*t*b)*x - 2*(m-1)
	xByMach := -((t*(gamma+1)*x-2)*x + t*(gamma-1)) / byX
	xByTurning := -(b*x*x + a) / byX * (1 + t*t)

	// Mn^2 = m/(1+x^2).
	share := 1 / (1 + x*x)
	normalByX := -2 * x * s.normal * share
	normalByMach := share + normalByX*xByMach
	normalByTurning := normalByX * xByTurning

	// Logarithmic slopes of density, pressure by Mn^2.
	low := (gamma-1)*s.normal + 2
	high := 2*gamma*s.normal - (gamma - 1)
	lnDensity := 2 / (s.normal * low)
	lnPressure := 2 * gamma / high
	loss := (gamma*lnDensity - lnPressure) / (gamma - 1)

	// M2^2 + 2/(g-1) = (m + 2/(g-1)) rho2rho1/p2p1.
	total := s.behind + 2/(gamma-1)
	ratio := lnDensity - lnPressure
	return slopes{
		lossByTurning: loss * normalByTurning,
		lossByMach:    loss * normalByMach,
		machByTurning: total * ratio * normalByTurning,
		machByMach:    total/(m+2/(gamma-1)) + total*ratio*normalByMach,
	}
}
