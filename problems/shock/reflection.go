package shock

import (
	"math"

	"rampwright/problems/gas"
)

// RegularReflection returns the largest turning, rad, at which a shock in a flow
// of Mach number M > 1 still reflects regularly at a straight wall: the lower of
// the detachment and, where it exists below that, the mechanical-equilibrium
// criterion (Ben-Dor, Shock Wave Reflection Phenomena, from memory). For
// g = 1.4 the second exists from M = 2.202 up.
func RegularReflection(g gas.Perfect, mach float64) float64 {
	m := newMirror(g, mach)
	x := m.detachment()
	if equilibrium, exists := m.equilibrium(x); exists {
		x = equilibrium
	}
	return math.Atan(m.tangent(x))
}

// ReflectionDetachment returns the turning at which the reflected shock is just
// attached: theta = theta_max(M2(M, theta)), rad.
func ReflectionDetachment(g gas.Perfect, mach float64) float64 {
	m := newMirror(g, mach)
	return math.Atan(m.tangent(m.detachment()))
}

// MechanicalEquilibrium returns the turning at which the pressure behind the
// regular reflection equals that behind a normal shock in the same flow, rad,
// and whether such a turning exists below detachment of the reflection; NaN
// where it does not.
func MechanicalEquilibrium(g gas.Perfect, mach float64) (turning float64, exists bool) {
	m := newMirror(g, mach)
	x, exists := m.equilibrium(m.detachment())
	if !exists {
		return math.NaN(), false
	}
	return math.Atan(m.tangent(x)), true
}

// mirror is the regular reflection in a flow of M^2 = square. Its unknown is
// x = cot(beta) of the incident shock, of which turning, pressure and Mach
// number behind are rational: turning falls from detachment to the Mach wave as
// x rises to sqrt(M^2-1).
type mirror struct {
	gas            gas.Perfect
	square, excess float64 // M^2, M^2 - 1
}

func newMirror(g gas.Perfect, mach float64) mirror {
	return mirror{gas: g, square: mach * mach, excess: (mach - 1) * (mach + 1)}
}

func (m *mirror) tangent(x float64) float64 {
	return turningTangent(m.gas.Gamma, m.square, m.excess, x)
}

// behind is M2^2 behind the incident shock.
func (m *mirror) behind(x float64) float64 {
	return squareBehind(m.gas.Gamma, m.square, m.square/(1+x*x))
}

// detachment returns x where the largest turning behind the incident shock
// equals that of the incident shock. The bracket runs from the largest turning
// of the incident shock, behind which the flow is subsonic, to the Mach wave.
func (m *mirror) detachment() float64 {
	gamma := m.gas.Gamma
	_, low := largestTangent(gamma, m.square, m.excess)
	return bracketedRoot(func(x float64) float64 {
		behind := m.behind(x)
		if behind <= 1 {
			return -m.tangent(x)
		}
		largest, _ := largestTangent(gamma, behind, behind-1)
		return largest - m.tangent(x)
	}, low, math.Sqrt(m.excess))
}

// equilibrium returns x where the reflected shock, which turns the flow back by
// the turning of the incident one, reaches the pressure behind a normal shock.
// That pressure rises with the turning, so that an equilibrium below detachment
// (x above it) exists where it is larger at detachment, where the reflected
// shock is that of largest turning. Halfway from there to the Mach wave it is
// always smaller (computed for g in (1, 5/3] up to M = 30).
func (m *mirror) equilibrium(detachment float64) (x float64, exists bool) {
	gamma, behind := m.gas.Gamma, m.behind(detachment)
	_, second := largestTangent(gamma, behind, behind-1)
	largest := m.incident(detachment) * pressureRatio(gamma, behind/(1+second*second))
	if !(largest > m.stem()) {
		return math.NaN(), false
	}
	return bracketedRoot(m.tangentToSpare, detachment, (detachment+math.Sqrt(m.excess))/2), true
}

// tangentToSpare is the tangent of the turning that a second shock from behind
// the incident one to the pressure of the stem would give, less that of the
// incident shock: negative where the weak reflected shock passes that pressure.
// Where even a normal shock falls short of it there is no such turning.
func (m *mirror) tangentToSpare(x float64) float64 {
	gamma, behind := m.gas.Gamma, m.behind(x)
	normalSquare := 1 + (m.stem()/m.incident(x)-1)*(gamma+1)/(2*gamma)
	square := behind/normalSquare - 1
	if !(square > 0) {
		return -m.tangent(x)
	}
	return turningTangent(gamma, behind, behind-1, math.Sqrt(square)) - m.tangent(x)
}

// incident is the pressure behind the incident shock, stem that behind a normal
// shock, over the pressure ahead.
func (m *mirror) incident(x float64) float64 {
	return pressureRatio(m.gas.Gamma, m.square/(1+x*x))
}

func (m *mirror) stem() float64 { return pressureRatio(m.gas.Gamma, m.square) }
