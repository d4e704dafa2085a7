package shock

import (
	"math"
	"strings"
	"testing"

	"rampwright/problems/gas"
)

// proofs computes the values a published row prints, in its order, by route
// `by` where two routes exist.
var proofs = map[string]func(t *testing.T, r row, by int) []float64{
	"NS":    normalRow,
	"PM":    prandtlMeyerRow,
	"AR":    areaRow,
	"PM-ex": expansionRow,
	"MD":    detachmentRow,
	"OS":    obliqueRow,
	"CH":    doubleWedgeRow,
	"RR":    reflectionRow,
	"CHART": wedgeRow,
	"MR":    machReflectionRow,
	"MR-C":  criteriaMeetRow,
}

func normalRow(t *testing.T, r row, by int) []float64 {
	g, mach := r.gas(t), r.input(t, "M1")
	behind, jump := routes[by].normal(g, mach)
	return r.named(t, map[string]float64{
		"M2": behind, "p2/p1": jump.Pressure, "rho2/rho1": jump.Density, "T2/T1": jump.Temperature,
		"pt2/pt1": jump.TotalPressure, "pt2/p1": jump.TotalPressure * g.TotalPressureRatio(mach),
	})
}

func prandtlMeyerRow(t *testing.T, r row, _ int) []float64 {
	r.only(t, "nu")
	var list []float64
	for _, mach := range r.list(t, "M") {
		list = append(list, PrandtlMeyer(gas.Air, mach)/degree)
	}
	return list
}

func areaRow(t *testing.T, r row, _ int) []float64 {
	r.only(t, "A/A*")
	var list []float64
	for _, mach := range r.list(t, "M") {
		list = append(list, gas.Air.AreaRatio(mach))
	}
	return list
}

func expansionRow(t *testing.T, r row, _ int) []float64 {
	r.only(t, "M2")
	behind, _, err := Expand(gas.Air, r.input(t, "M1"), r.input(t, "turn")*degree)
	if err != nil {
		t.Fatal(err)
	}
	return []float64{behind}
}

func detachmentRow(t *testing.T, r row, by int) []float64 {
	mach := r.input(t, "M")
	if by == 1 && math.IsInf(mach, 1) {
		mach = 1e7 // the search needs a finite Mach number; 1/M^2 is below the printed digits
	}
	turning, wave := routes[by].largest(gas.Air, mach)
	return r.named(t, map[string]float64{"max deflection": turning / degree, "wave angle at it": wave / degree})
}

// obliqueRow takes the strong branch, which no inlet uses, as the root of the
// turning beyond its maximum.
func obliqueRow(t *testing.T, r row, by int) []float64 {
	mach, turning := r.input(t, "M1"), r.input(t, "theta")*degree
	var s Oblique
	switch {
	case strings.HasSuffix(r.inputs, " weak"):
		s = mustWeak(t, by, mach, turning)
	case strings.HasSuffix(r.inputs, " strong"):
		_, largest := routes[by].largest(gas.Air, mach)
		wave := bisect(func(beta float64) float64 { return Turning(gas.Air, mach, beta) - turning }, largest, math.Pi/2)
		normal := mach * math.Sin(wave)
		behind, jump := routes[by].normal(gas.Air, normal)
		s = Oblique{WaveAngle: wave, Mach2: behind / math.Sin(wave-turning), Jump: jump}
	default:
		t.Fatalf("%s: unknown branch in %q", r.id, r.inputs)
	}
	return r.named(t, map[string]float64{
		"beta": s.WaveAngle / degree, "M2": s.Mach2, "p2/p1": s.Jump.Pressure, "rho2/rho1": s.Jump.Density,
		"T2/T1": s.Jump.Temperature, "pt2/pt1": s.Jump.TotalPressure,
	})
}

func mustWeak(t *testing.T, by int, mach, turning float64) Oblique {
	t.Helper()
	s, err := routes[by].weak(gas.Air, mach, turning)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// doubleWedgeRow takes the second shock at the printed Mach number 2.8482, as
// the source does: its wave angle is printed to more digits than that.
func doubleWedgeRow(t *testing.T, r row, by int) []float64 {
	r.only(t, "M after 3", "beta", "pt", "M after 3+3", "beta", "pt", "M after 6", "beta", "pt")
	if r.inputs != "M1=3 turns 3 then 3; or 6" {
		t.Fatalf("%s: unknown inputs %q", r.id, r.inputs)
	}
	first := mustWeak(t, by, 3, 3*degree)
	second := mustWeak(t, by, 2.8482, 3*degree)
	single := mustWeak(t, by, 3, 6*degree)
	var list []float64
	for _, s := range []Oblique{first, second, single} {
		list = append(list, s.Mach2, s.WaveAngle/degree, s.Jump.TotalPressure)
	}
	return list
}

func reflectionRow(t *testing.T, r row, by int) []float64 {
	mach := r.input(t, "M1")
	var turning float64
	if strings.Contains(r.inputs, "shock angle=35 ") {
		turning = Turning(gas.Air, mach, 35*degree)
	} else {
		turning = r.input(t, "theta") * degree
	}
	incident := mustWeak(t, by, mach, turning)
	reflected := mustWeak(t, by, incident.Mach2, turning)
	toWall := (reflected.WaveAngle - turning) / degree
	return r.named(t, map[string]float64{
		"deflection": turning / degree, "M2": incident.Mach2, "beta1": incident.WaveAngle / degree,
		"beta2": reflected.WaveAngle / degree, "reflected angle to wall": toWall, "phi": toWall,
		"Mn1": incident.NormalMach, "Mn2": reflected.NormalMach, "M3": reflected.Mach2,
		"p3/p1": incident.Jump.Pressure * reflected.Jump.Pressure,
	})
}

// wedgeRow is a symmetric wedge with free-stream pressure on its base, drag on
// its chord: cd = 2 (p2-p1) tan(theta)/q1.
func wedgeRow(t *testing.T, r row, by int) []float64 {
	if !strings.HasPrefix(r.inputs, "M1=3 wedge 15") {
		t.Fatalf("%s: unknown inputs %q", r.id, r.inputs)
	}
	s := mustWeak(t, by, 3, 15*degree)
	return r.named(t, map[string]float64{
		"beta": s.WaveAngle / degree, "p2/p1": s.Jump.Pressure,
		"wave drag coefficient": 2 * (s.Jump.Pressure - 1) * math.Tan(15*degree) / gas.Air.DynamicPressure(1, 3),
	})
}

func machReflectionRow(t *testing.T, r row, by int) []float64 {
	r.only(t, "mechanical-equilibrium and detachment wave angles")
	var list []float64
	for _, mach := range r.list(t, "M") {
		equilibrium := routes[by].reflection(gas.Air, mach)
		detachment := ReflectionDetachment(gas.Air, mach)
		list = append(list, mustWeak(t, by, mach, equilibrium).WaveAngle/degree, mustWeak(t, by, mach, detachment).WaveAngle/degree)
	}
	return list
}

// criteriaMeetRow finds the Mach number above which the mechanical equilibrium
// lies below detachment.
func criteriaMeetRow(t *testing.T, r row, by int) []float64 {
	r.only(t, "Mach where both criteria meet")
	meet := bisect(func(mach float64) float64 {
		if by == 0 {
			if _, exists := MechanicalEquilibrium(gas.Air, mach); exists {
				return 1
			}
		} else if RegularReflectionBracketed(gas.Air, mach) < ReflectionDetachment(gas.Air, mach)*(1-1e-11) {
			return 1
		}
		return -1
	}, 2, 2.5)
	return []float64{meet}
}
