package inlet

import (
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// SearchTrace are the settings of a trace in a search: wavelets of 2 deg, a
// threshold of 4e-3, no more than 4000 events, no error estimate. A trace takes a
// tenth of a millisecond and is within about 0.5 % of the throat averages.
func SearchTrace() wave.Settings {
	return wave.Settings{Wavelet: 2 * radian, Threshold: 4e-3, Events: 4000, WithoutError: true}
}

// VerifyTrace are the settings of a trace in verification and of the flow of one
// fixed geometry: wave.Fine, with its error bound.
func VerifyTrace() wave.Settings { return wave.Fine() }

// beyondChain reports whether the straight shocks of the ramps do not tell the
// flow of the captured stream: they cross in it, a shock falls inside the lip, or
// the point asks for more than they tell.
func (a *analysis) beyondChain() bool {
	switch a.placeErr {
	case error(errInside), error(errCross), error(errFocusWave):
		return true
	}
	// Only a built inlet has a contour whose cowl turns away from the flow.
	return a.shape.err == nil && (a.alwaysTraced() || a.throatErr == error(errLipOff))
}

// alwaysTraced reports whether the chain is not to tell the flow: of a given outline,
// of an inlet with a part turned on its hinge, and at a point that asks for a trace.
func (a *analysis) alwaysTraced() bool {
	return a.point.Traced || a.def.Outline != nil || a.shape.moved != nil
}

// follow traces the contour and takes every quantity the trace knows from it.
func (a *analysis) follow(settings wave.Settings) {
	t, err := a.tracing(settings)
	if err != nil {
		if a.alwaysTraced() { // elsewhere the status of the chain stands
			a.fail(&problems.Status{Phrase: "cannot be traced: " + err.Error()})
		}
		return
	}
	a.trace = t
	a.adopt(look(t, a.shape, a.route.balances()))
}

// tracing runs a trace through the frozen contour.
func (a *analysis) tracing(settings wave.Settings) (*wave.Trace, error) {
	free := wave.FreeStream{Mach: a.point.Mach, Incidence: a.point.Incidence}
	return wave.Run(a.def.Gas, free, a.shape.geometry(a.def), settings)
}

// geometry is the contour as a trace takes it.
func (c *closure) geometry(d *Definition) wave.Geometry {
	if c.moved != nil {
		return *c.moved
	}
	if d.Outline != nil {
		return d.Outline.Geometry(d.CowlLength * c.height)
	}
	g := wave.FromContour(&c.Inlet, d.CowlLength*c.height)
	if c.wall != c.CowlInner { // the cowl of a built inlet has turned by itself
		length := contour.Distance(c.Lip, c.Shoulder)
		sin, cos := math.Sincos(c.wall)
		g.Body[len(g.Body)-1] = contour.Point{X: c.Shoulder.X + length*cos, Y: c.Shoulder.Y + length*sin}
	}
	return g
}

// fail leaves every number of the captured stream missing for one reason.
func (a *analysis) fail(err error) {
	a.rampErr, a.placeErr, a.lipErr, a.throatErr, a.captureErr = err, err, err, err, err
	a.attached, a.margins = 0, 0
}

// adopt derives every number of the captured stream from the view of a trace.
func (a *analysis) adopt(v view) {
	v.derive(a.route, a.def.Gas)
	a.view = v
	a.rampErr, a.placeErr = nil, nil
	a.lipErr, a.captureErr, a.throatErr = v.lipErr, v.lipErr, v.throatErr
	if a.lipErr == nil {
		a.meetTracedLip()
	}
	a.capture, a.spillage = v.capture, v.spillage
	if a.captureErr == nil && math.IsNaN(v.capture+v.spillage) {
		a.captureErr = &problems.Status{Phrase: "lip streamline lost among the waves"}
	}
	if a.throatErr == nil {
		a.enterTracedThroat()
	}
}

// meetTracedLip is the flow at the lip and the wave that turns it along the inner
// cowl: a shock, or an expansion where the cowl turns away from the flow.
func (a *analysis) meetTracedLip() {
	g := a.def.Gas
	a.lipMach = a.view.lipMach
	a.lipTurning = a.view.lipFlow - a.shape.CowlInner
	a.reflection = a.route.regularReflection(g, a.lipMach)
	a.lip, a.lipRise = shock.Oblique{}, 1
	if a.lipTurning > 0 {
		if wave, err := a.route.weak(g, a.lipMach, a.lipTurning); err == nil {
			a.lip, a.lipRise = wave, wave.Jump.Pressure
		} else {
			a.lipRise = math.NaN() // the trace ends there as well
		}
		return
	}
	if _, ratio, err := shock.Expand(g, a.lipMach, -a.lipTurning); err == nil {
		a.lipRise = ratio
	} else {
		a.lipRise = 0
	}
}

// enterTracedThroat takes the averages on the vertical plane at the shoulder as
// the throat, ahead of the terminal normal shock where one stands there: recovery,
// Mach number and temperature averaged over the mass, pressure over the area.
func (a *analysis) enterTracedThroat() {
	v := &a.view
	a.terminal, a.throatMach = shock.Jump{Pressure: 1, Density: 1, Temperature: 1, TotalPressure: 1}, v.mach
	a.terminalMach = v.mach
	if a.def.TerminalShock {
		if !(v.mach > 1) {
			a.throatErr = &problems.Status{Phrase: "throat subsonic ahead of the terminal shock"}
			return
		}
		a.throatMach, a.terminal = a.route.normal(a.def.Gas, v.mach)
	}
	a.shockRecovery = v.recovery * a.terminal.TotalPressure
	a.pressureRatio = v.pressure * a.terminal.Pressure
	a.temperatureRatio = v.temperature * a.terminal.Temperature
}

// tracedSeparation is the separation margin of the corner of ramp i+2, in the flow
// that the trace finds along the body there, or of the wave at the lip for the
// last member.
func (a *analysis) tracedSeparation(i int) (float64, error) {
	if i+1 >= len(a.view.corners) {
		if a.lipErr != nil {
			return 0, a.lipErr
		}
		if math.IsNaN(a.lipRise) {
			return 0, a.throatErr
		}
		return 1 - a.lipRise/SeparationPressureRatio(a.lipMach), nil
	}
	corner := &a.view.corners[i+1]
	if corner.err != nil {
		return 0, corner.err
	}
	wave, err := a.route.weak(a.def.Gas, corner.mach, corner.turn)
	if err != nil {
		return 0, detached(rampName(i+1), corner.mach, err)
	}
	return 1 - wave.Jump.Pressure/SeparationPressureRatio(corner.mach), nil
}

func (a *analysis) tracedClearance(i int) (float64, error) {
	switch {
	case a.lipErr != nil:
		return 0, a.lipErr
	case math.IsNaN(a.view.clearance[i]):
		return 0, notApplicable("no ramp shock reaches the lip")
	}
	return a.view.clearance[i], nil
}

func (a *analysis) tracedMiss() (float64, error) {
	switch {
	case !math.IsNaN(a.view.miss):
		return a.view.miss, nil
	case a.throatErr != nil:
		return 0, a.throatErr
	}
	return 0, notApplicable("no lip shock reaches the body")
}
