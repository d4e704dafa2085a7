package inlet

import (
	"fmt"
	"math"

	"rampwright/problems"
	"rampwright/problems/ramp"
)

const radian = math.Pi / 180

// SmallestLipTurning keeps a searched cowl from passing through the aligned
// cowl, where the length of the inlet jumps, degrees.
const SmallestLipTurning = 0.1

// Design is one set of numbers for everything a definition leaves open, in
// radians.
type Design struct {
	Ramps      int
	Turning    [ramp.MaxRamps]float64
	Cowl       float64 // inner cowl surface to the x axis, phi_c
	LipTurning float64 // kappa = phi_n - phi_c
	Wedge      float64 // outer minus inner cowl angle
	ShockOnLip float64 // Mach number
	Setback    float64 // fraction of capture height
	// Given is phi_n of a given outline, which has no ramp settings.
	Given float64
}

// Outer returns the angle of the outer cowl surface, rad.
func (d *Design) Outer() float64 { return d.Cowl + d.Wedge }

// TotalTurning returns phi_n, the sum of the ramp turnings, rad.
func (d *Design) TotalTurning() float64 {
	sum := d.Given
	for _, theta := range d.Turning[:d.Ramps] {
		sum += theta
	}
	return sum
}

// named is a setting with the name and unit it has as a variable.
type named struct {
	name    string
	unit    string
	setting Setting
}

// settings lists every number of a design in the order of the search variables.
func (d *Definition) settings() []named {
	var list []named
	for i, s := range d.RampAngle {
		list = append(list, named{fmt.Sprintf("ramp_%d_angle_deg", i+1), "deg", s})
	}
	if d.CowlAngle != nil {
		list = append(list, named{"cowl_angle_deg", "deg", *d.CowlAngle})
	}
	if d.LipTurning != nil {
		list = append(list, named{"lip_turning_deg", "deg", *d.LipTurning})
	}
	return append(list,
		named{"cowl_wedge_deg", "deg", d.CowlWedge},
		named{"shock_on_lip_mach", "", d.ShockOnLip},
		named{"lip_setback", "", d.LipSetback})
}

// variables lists the searched settings as search variables.
func (d *Definition) variables() []problems.Variable {
	var list []problems.Variable
	for _, s := range d.settings() {
		if s.setting.Searched {
			list = append(list, problems.Variable{Name: s.name, Unit: s.unit, Low: s.setting.Low, High: s.setting.High})
		}
	}
	return list
}

// alignedWithin is the lip turning, rad, that is a fixed cowl's rounding of zero:
// 8.1 is not quite 2.7 + 2.7 + 2.7.
const alignedWithin = 1e-9 * radian

// resolve puts x, one value a searched setting in the order of variables, into
// the open places of the definition.
func (d *Definition) resolve(x []float64) Design {
	next := 0
	take := func(s Setting) float64 {
		if !s.Searched {
			return s.Value
		}
		next++
		return x[next-1]
	}
	if d.Outline != nil {
		return Design{} // see closure.take
	}
	design := Design{Ramps: len(d.RampAngle)}
	total := 0.0
	for i, s := range d.RampAngle {
		design.Turning[i] = take(s) * radian
		total += design.Turning[i]
	}
	if d.CowlAngle != nil {
		design.Cowl = take(*d.CowlAngle) * radian
		design.LipTurning = total - design.Cowl
	} else {
		design.LipTurning = take(*d.LipTurning) * radian
		design.Cowl = total - design.LipTurning
	}
	if math.Abs(design.LipTurning) < alignedWithin {
		design.Cowl, design.LipTurning = total, 0
	}
	design.Wedge = take(d.CowlWedge) * radian
	design.ShockOnLip = take(d.ShockOnLip)
	design.Setback = take(d.LipSetback)
	return design
}
