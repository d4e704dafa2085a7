package wave

import (
	"math"

	"rampwright/problems/gas"
	"rampwright/problems/shock"
)

// State is the uniform flow of one region. Pressures are over those of the free
// stream, the flow angle is to the x axis, rad.
type State struct {
	Mach          float64
	FlowAngle     float64
	Pressure      float64
	TotalPressure float64
}

// flux is the momentum flux density rho u^2 = g p M^2, over p0.
func (s *State) flux(g gas.Perfect) float64 { return g.Gamma * s.Pressure * s.Mach * s.Mach }

// massFlux is rho u over sqrt(g/(R Tt)) p0: p M sqrt(1 + (g-1)/2 M^2). The total
// temperature is that of the free stream in every region of an adiabatic flow.
func (s *State) massFlux(g gas.Perfect) float64 {
	return s.Pressure * s.Mach * math.Sqrt(g.TotalTemperatureRatio(s.Mach))
}

// temperature is T/T0 in a stream of free-stream Mach number mach.
func (s *State) temperature(g gas.Perfect, mach float64) float64 {
	return g.TotalTemperatureRatio(mach) / g.TotalTemperatureRatio(s.Mach)
}

// side is the flow on one side of a steady Riemann problem: what a wave into it
// does as a function of the pressure behind, q = ln(p2/p0).
type side struct {
	gas    gas.Perfect
	state  State
	log    float64 // ln(p1/p0)
	square float64 // M1^2
	total  float64 // Tt/T1
}

func newSide(g gas.Perfect, s State) side {
	return side{
		gas: g, state: s, log: math.Log(s.Pressure), square: s.Mach * s.Mach,
		total: g.TotalTemperatureRatio(s.Mach),
	}
}

// softness is d(theta)/d(ln p) of a weak wave, sqrt(M^2-1)/(g M^2): linearised
// theory (Ackeret).
func (s *side) softness() float64 { return math.Sqrt(s.square-1) / (s.gas.Gamma * s.square) }

// turning returns the turning theta of a wave that brings the flow to ln(p2/p0)
// = q, and d(theta)/dq. A shock, q > ln p1, turns the flow toward the side the
// wave comes from; with u = p2/p1 - 1 (NACA Report 1135 eq. 160)
//
//	tan(theta) = u/(g M1^2 - u) sqrt( (2g(M1^2-1) - (g+1)u) / ((g+1)u + 2g) )
//
// and an expansion away from it by theta = nu(M1) - nu(M2) < 0 (eq. 171c), with
// Tt/T2 = Tt/T1 (p2/p1)^(-(g-1)/g).
//
// Range: q up to the pressure of detachment; the formula is not monotone beyond.
func (s *side) turning(q float64) (theta, slope float64) {
	gamma := s.gas.Gamma
	rise := q - s.log
	if rise <= 0 {
		gain := s.gain(rise)
		square := s.square + gain
		return -s.fanAngle(gain), math.Sqrt(square-1) / (gamma * square)
	}
	u := math.Expm1(rise)
	away := gamma*s.square - u
	left := 2*gamma*(s.square-1) - (gamma+1)*u
	crowd := (gamma+1)*u + 2*gamma
	root := math.Sqrt(math.Max(0, left)/crowd) / away
	tangent := u * root
	gradient := root * (1 + u*(1/away-(gamma+1)/2*(1/left+1/crowd)))
	return math.Atan(tangent), (1 + u) * gradient / (1 + tangent*tangent)
}

// gain is M2^2 - M1^2 behind an isentropic expansion by rise = ln(p2/p1) <= 0.
func (s *side) gain(rise float64) float64 {
	gamma := s.gas.Gamma
	return 2 / (gamma - 1) * s.total * math.Expm1(-(gamma-1)/gamma*rise)
}

// fanAngle is nu(M2) - nu(M1) for gain = M2^2 - M1^2 >= 0 (NACA Report 1135
// eq. 171c). With r = sqrt(M^2-1) and k = sqrt((g+1)/(g-1)) the differences of arc
// tangents are taken as one each, so that a weak fan keeps its digits:
//
//	k atan((r2-r1) k/(k^2 + r1 r2)) - atan((r2-r1)/(1 + r1 r2)),  r2-r1 = gain/(r1+r2)
func (s *side) fanAngle(gain float64) float64 {
	if gain == 0 {
		return 0
	}
	square := (s.gas.Gamma + 1) / (s.gas.Gamma - 1)
	k := math.Sqrt(square)
	r1, r2 := math.Sqrt(s.square-1), math.Sqrt(s.square-1+gain)
	rise := gain / (r1 + r2)
	return k*math.Atan(rise*k/(square+r1*r2)) - math.Atan(rise/(1+r1*r2))
}

// sonic returns ln(p2/p0) behind the shock that leaves sonic flow.
func (s *side) sonic() float64 { return s.logBehind(s.sonicSquare()) }

// sonicSquare is M1^2 sin^2(beta) of that shock (NACA Report 1135 eq. 167).
func (s *side) sonicSquare() float64 {
	gamma := s.gas.Gamma
	root := math.Sqrt((gamma + 1) * ((gamma+1)*s.square*s.square/16 - (3-gamma)/8*s.square + (9+gamma)/16))
	return ((gamma+1)/4*s.square - (3-gamma)/4 + root) / gamma
}

// detachment returns ln(p2/p0) behind the shock of largest turning (NACA Report
// 1135 eq. 168 for M1^2 sin^2(beta)).
func (s *side) detachment() float64 {
	gamma := s.gas.Gamma
	root := math.Sqrt((gamma + 1) * ((gamma+1)*s.square*s.square/16 + (gamma-1)/2*s.square + 1))
	return s.logBehind(((gamma+1)/4*s.square - 1 + root) / gamma)
}

// vacuum returns the ln(p2/p0) that counts as vacuum: that of an expansion to
// vacuumMach.
func (s *side) vacuum() float64 {
	return s.log - s.gas.Gamma/(s.gas.Gamma-1)*math.Log(s.gas.TotalTemperatureRatio(vacuumMach)/s.total)
}

// vacuumMach is beyond any expansion of use: for air nu is within 0.3 deg of its
// limit there.
const vacuumMach = 1000

func (s *side) logBehind(normalSquare float64) float64 {
	gamma := s.gas.Gamma
	return s.log + math.Log1p(2*gamma/(gamma+1)*(normalSquare-1))
}

// shocked returns the state behind a shock to ln(p2/p0) = q of the family (+1
// runs up from the stream, -1 down) and its wave angle to the flow ahead. The
// Mach number follows from the total temperature.
func (s *side) shocked(q float64, family int8) (behind State, waveAngle float64) {
	gamma := s.gas.Gamma
	excess := math.Expm1(q-s.log) * (gamma + 1) / (2 * gamma) // Mn^2 - 1
	jump := shock.Across(s.gas, math.Sqrt(1+excess))
	theta, _ := s.turning(q)
	cotangent := math.Sqrt(math.Max(0, (s.square-1-excess)/(1+excess)))
	return State{
		Mach:          math.Sqrt(2 / (gamma - 1) * (s.total/jump.Temperature - 1)),
		FlowAngle:     s.state.FlowAngle + float64(family)*theta,
		Pressure:      math.Exp(q),
		TotalPressure: s.state.TotalPressure * jump.TotalPressure,
	}, math.Atan2(1, cotangent)
}

// expanded returns the state behind an isentropic expansion to ln(p2/p0) = q.
func (s *side) expanded(q float64, family int8) State {
	gain := s.gain(q - s.log)
	return State{
		Mach:          math.Sqrt(s.square + gain),
		FlowAngle:     s.state.FlowAngle - float64(family)*s.fanAngle(gain),
		Pressure:      math.Exp(q),
		TotalPressure: s.state.TotalPressure,
	}
}

// moved returns the flow brought isentropically to another pressure, p/p0, and
// direction.
func (s *State) moved(g gas.Perfect, pressure, angle float64) State {
	total := g.TotalTemperatureRatio(s.Mach) * math.Pow(s.Pressure/pressure, (g.Gamma-1)/g.Gamma)
	return State{
		Mach: math.Sqrt(2 / (g.Gamma - 1) * (total - 1)), FlowAngle: angle,
		Pressure: pressure, TotalPressure: s.TotalPressure,
	}
}

// enthalpy is ht over that of the free stream of Mach number mach: T/T0 from
// pressure and entropy times the growth of the Mach number's total temperature.
func (s *State) enthalpy(g gas.Perfect, mach float64) float64 {
	temperature := math.Pow(s.Pressure/s.TotalPressure, (g.Gamma-1)/g.Gamma)
	return temperature * g.TotalTemperatureRatio(s.Mach) / g.TotalTemperatureRatio(mach)
}
