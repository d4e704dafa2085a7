package shock

import (
	"math"

	"rampwright/problems/gas"
)

// Residual returns the largest relative error of the four conservation laws
// across the shock, each side rebuilt from Mach number, wave angle, turning and
// state ratios with p1 = rho1 = 1 (NACA Report 1135 eqs. 118-121):
//
//	mass                 rho u_n
//	normal momentum      p + rho u_n^2
//	tangential momentum  u_t
//	energy               g/(g-1) p/rho + u^2/2
//
// An exact shock gives rounding, below 1e-12.
func Residual(g gas.Perfect, s Oblique) float64 {
	sound1 := math.Sqrt(g.Gamma)
	sound2 := sound1 * math.Sqrt(s.Jump.Temperature)
	sin1, cos1 := math.Sincos(s.WaveAngle)
	sin2, cos2 := math.Sincos(s.WaveAngle - s.Turning)
	normal1, along1 := s.Mach*sound1*sin1, s.Mach*sound1*cos1
	normal2, along2 := s.Mach2*sound2*sin2, s.Mach2*sound2*cos2
	pressure, density := s.Jump.Pressure, s.Jump.Density
	heat := g.Gamma / (g.Gamma - 1)
	worst := relative(normal1, density*normal2)
	worst = math.Max(worst, relative(1+normal1*normal1, pressure+density*normal2*normal2))
	worst = math.Max(worst, math.Abs(along1-along2)/(s.Mach*sound1))
	return math.Max(worst, relative(
		heat+(normal1*normal1+along1*along1)/2,
		heat*pressure/density+(normal2*normal2+along2*along2)/2))
}

func relative(a, b float64) float64 { return math.Abs(a-b) / math.Max(math.Abs(a), math.Abs(b)) }
