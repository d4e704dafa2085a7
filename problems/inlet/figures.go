package inlet

import (
	"math"

	"rampwright/problems/atmosphere"
)

func (a *analysis) totalPressure() float64 {
	return a.point.Pressure * a.def.Gas.TotalPressureRatio(a.point.Mach)
}

// kineticEnergyEfficiency is 1 - 2/((g-1) M0^2) (pi^(-(g-1)/g) - 1) (Van Wie in
// Curran & Murthy 2000; Heiser & Pratt 1994; from memory): the kinetic energy
// left after expanding the throat state to free-stream pressure, over that of
// the free stream.
func (a *analysis) kineticEnergyEfficiency() float64 {
	gamma, mach := a.def.Gas.Gamma, a.point.Mach
	return 1 - 2/((gamma-1)*mach*mach)*a.entropyHeat()
}

// entropyHeat is pi^(-(g-1)/g) - 1, the heating by entropy at constant pressure.
func (a *analysis) entropyHeat() float64 {
	gamma := a.def.Gas.Gamma
	return math.Expm1(-math.Log(a.shockRecovery) * (gamma - 1) / gamma)
}

// compressionEfficiency is (psi - pi^(-(g-1)/g))/(psi - 1) (Heiser & Pratt 1994,
// from memory), not defined without compression.
func (a *analysis) compressionEfficiency() (float64, error) {
	switch {
	case a.throatErr != nil:
		return 0, a.throatErr
	case !(a.temperatureRatio > 1):
		return 0, notApplicable("no static temperature rise")
	}
	rise := a.temperatureRatio - 1
	return (rise - a.entropyHeat()) / rise, nil
}

func (a *analysis) terminalMachNumber() (float64, error) {
	if !a.def.TerminalShock {
		return 0, notApplicable("no terminal shock")
	}
	return a.terminalMach, a.throatErr
}

func (a *analysis) lipMachNumber() (float64, error) {
	if a.trace != nil {
		return a.lipMach, a.lipErr
	}
	return a.lipMach, a.rampErr
}

func (a *analysis) rampMargin(i int) (float64, error) {
	if a.trace != nil {
		return a.view.corners[i].margin / radian, a.view.corners[i].err
	}
	if i >= a.margins {
		return 0, a.rampErr
	}
	return a.margin[i] / radian, nil
}

func (a *analysis) lipMargin() (float64, error) {
	if a.lipErr != nil {
		return 0, a.lipErr
	}
	return (a.route.largestTurning(a.def.Gas, a.lipMach) - a.lipTurning) / radian, nil
}

// separationMargin is 1 - (p2/p1)/limit at the corner of ramp i+2, or at the lip
// shock for the last member.
func (a *analysis) separationMargin(i int) (float64, error) {
	if a.trace != nil {
		return a.tracedSeparation(i)
	}
	if i+1 < a.design.Ramps {
		if i+1 >= a.attached {
			return 0, a.rampErr
		}
		wave := &a.waves[i+1]
		return 1 - wave.Jump.Pressure/SeparationPressureRatio(wave.Mach), nil
	}
	if a.throatErr != nil && a.throatErr != error(errSonic) {
		return 0, a.throatErr
	}
	return 1 - a.lipRise/SeparationPressureRatio(a.lipMach), nil
}

func (a *analysis) lipClearance(i int) (float64, error) {
	switch {
	case a.trace != nil:
		return a.tracedClearance(i)
	case a.rampErr != nil:
		return 0, a.rampErr
	case a.shape.err != nil:
		return 0, a.shape.err
	}
	return a.clearance[i], nil
}

func (a *analysis) lipShockMiss() (float64, error) {
	switch {
	case a.trace != nil:
		return a.tracedMiss()
	case a.throatErr != nil:
		return 0, a.throatErr
	case a.shape.err != nil:
		return 0, a.shape.err
	case a.design.LipTurning == 0:
		return 0, notApplicable("aligned cowl: no lip shock")
	}
	return a.miss, nil
}

// massFlow is rho0 u0 A0, kg/s.
func (a *analysis) massFlow() float64 {
	g, p := a.def.Gas, a.point
	return g.Density(p.Pressure, p.Temperature) * p.Mach * g.SoundSpeed(p.Temperature) *
		a.capture * a.shape.height * a.def.Width
}

func (a *analysis) rampLength(i int) (float64, error) {
	if a.shape.err != nil {
		return 0, a.shape.err
	}
	return a.shape.RampLength(i), nil
}

// selfStartLimit is the largest internal contraction behind a normal shock at
// the lip Mach number (Kantrowitz & Donaldson, NACA ACR L5D20): the flow behind
// the shock just chokes in the throat,
//
//	limit = (A/A*)(M_n) pt2/pt1(M_n)
func (a *analysis) selfStartLimit() float64 {
	if a.lipErr != nil {
		return 0
	}
	_, jump := a.route.normal(a.def.Gas, a.lipMach)
	return a.route.areaRatio(a.def.Gas, a.lipMach) * jump.TotalPressure
}

// isentropicCeiling is (A/A*)(M_n): a contraction beyond it chokes even without
// loss.
func (a *analysis) isentropicCeiling() float64 { return a.route.areaRatio(a.def.Gas, a.lipMach) }

// contractionOverStarted compares captured over throat area with the empirical
// ceiling of inlets that started, At/A0 >= 0.05 - 0.52/M0 + 3.65/M0^2,
// 2.5 < M0 < 10 (Van Wie et al., from memory).
func (a *analysis) contractionOverStarted() (float64, error) {
	mach := a.point.Mach
	switch {
	case !(mach > 2.5 && mach < 10):
		return 0, notApplicable("empirical ceiling holds for Mach 2.5 to 10")
	case a.captureErr != nil:
		return 0, a.captureErr
	}
	return a.capture * a.shape.height / a.shape.Throat * (0.05 - 0.52/mach + 3.65/(mach*mach)), nil
}

func (a *analysis) unitReynolds() float64 {
	g, p := a.def.Gas, a.point
	return g.Density(p.Pressure, p.Temperature) * p.Mach * g.SoundSpeed(p.Temperature) /
		atmosphere.Viscosity(p.Temperature)
}

// StandardRecovery is the recovery of MIL-E-5007D: 1 up to Mach 1,
// 1 - 0.075 (M-1)^1.35 up to Mach 5, 800/(M^4 + 935) above.
func StandardRecovery(mach float64) float64 {
	switch {
	case mach <= 1:
		return 1
	case mach <= 5:
		return 1 - 0.075*math.Pow(mach-1, 1.35)
	default:
		return 800 / (math.Pow(mach, 4) + 935)
	}
}

// SeparationPressureRatio is the pressure ratio p2/p1 at which a turbulent
// boundary layer separates (Korkegi 1975, from memory): 1 + 0.3 M^2 up to where
// it meets 0.17 M^2.5, near Mach 4.324, and that branch above. Below Mach 2 it is
// an extrapolation.
func SeparationPressureRatio(mach float64) float64 {
	low, high := 1+0.3*mach*mach, 0.17*mach*mach*math.Sqrt(mach)
	if mach < separationBranches {
		return low
	}
	return high
}

// separationBranches is the Mach number where the branches of
// SeparationPressureRatio cross: the root of 0.17 M^2.5 = 1 + 0.3 M^2.
const separationBranches = 4.3237359785289
