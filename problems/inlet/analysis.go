package inlet

import (
	"math"

	"rampwright/problems"
	"rampwright/problems/contour"
	"rampwright/problems/ramp"
	"rampwright/problems/shock"
	"rampwright/problems/wave"
)

// placeTolerance is how far, in capture heights, a shock or streamline may miss
// a point and still count as meeting it.
const placeTolerance = 1e-9

// analysis is the exact flow of one frozen contour at one flight point. Each
// group of numbers has the reason why it is missing beside it, nil if present.
type analysis struct {
	def    *Definition
	route  route
	shape  *closure
	design *Design
	point  *Point

	waves    [ramp.MaxRamps]shock.Oblique
	attached int
	// margin of ramp i is defined one ramp past the attached ones, unless the
	// flow there is subsonic or expands.
	margin  [ramp.MaxRamps]float64
	margins int
	rampErr error // nothing behind the ramps

	clearance [ramp.MaxRamps]float64
	placeErr  error // lip not in ramp n's undisturbed flow, or contour not closed

	capture, spillage float64
	captureErr        error

	lipMach    float64
	reflection float64 // largest turning of regular reflection
	lipErr     error   // no flow known at the lip
	lipTurning float64 // of the flow at the lip
	lip        shock.Oblique
	lipRise    float64 // p2/p1 at the lip
	miss       float64
	throatErr  error // no flow known behind the lip shock

	terminal         shock.Jump
	terminalMach     float64
	throatMach       float64
	pressureRatio    float64
	temperatureRatio float64
	shockRecovery    float64

	cowlMargin float64
	cowlDrag   float64
	cowlErr    error

	trace *wave.Trace // what stands above was read off it; nil where the chain tells the flow
	view  view
}

// fly is run, and a trace by the settings given where the chain of straight shocks
// has no answer or the point asks for the trace.
func (a *analysis) fly(settings wave.Settings) {
	a.run()
	if a.beyondChain() {
		a.follow(settings)
	}
}

// run is the chain of straight shocks.
func (a *analysis) run() {
	a.trace = nil
	if a.def.Outline != nil {
		a.unknown()
		return
	}
	a.marchRamps()
	a.placeLip()
	a.meetLip()
	a.crossLipShock()
	a.enterThroat()
	a.capturedStream()
	a.outerCowl()
}

// marchRamps finds the ramp shocks and their attachment margins.
func (a *analysis) marchRamps() {
	n := a.design.Ramps
	a.attached, a.rampErr = march(a.route, a.def.Gas, a.point.Mach, a.point.Incidence, a.design, a.waves[:n])
	a.margins = a.attached
	if _, ok := a.rampErr.(*problems.Detached); ok {
		a.margins++
	}
	mach := a.point.Mach
	for i := range a.margins {
		a.margin[i] = a.route.largestTurning(a.def.Gas, mach) - a.design.flowTurning(i, a.point.Incidence)
		mach = a.waves[i].Mach2
	}
}

// shockLine is the straight line of ramp shock i (from 0).
func (a *analysis) shockLine(i int) contour.Line {
	return contour.Line{Through: a.shape.Corners[i], Angle: a.flowAngle(i) + a.waves[i].WaveAngle}
}

// flowAngle is the direction of the flow behind i ramp shocks.
func (a *analysis) flowAngle(i int) float64 {
	if i == 0 {
		return -a.point.Incidence
	}
	return a.shape.Angles[i-1]
}

// placeLip decides whether the lip stands in ramp n's undisturbed flow: behind
// every ramp shock, which meet the lip streamline in order, and ahead of the
// wave that their crossing sends toward the body.
func (a *analysis) placeLip() {
	a.placeErr = a.rampErr
	if a.placeErr == nil {
		a.placeErr = a.shape.err
	}
	if a.placeErr != nil {
		return
	}
	height := a.shape.height
	lipLevel := contour.Line{Through: a.shape.Lip}
	inside := false
	for i := range a.design.Ramps {
		distance, ok := lipLevel.Reach(a.shockLine(i))
		a.clearance[i] = -distance / height
		if !ok || a.clearance[i] < -placeTolerance {
			inside = true
		}
	}
	switch {
	case inside:
		a.placeErr = errInside
	case !a.inOrder():
		a.placeErr = errCross
	case a.behindFocusWave():
		a.placeErr = errFocusWave
	}
}

var (
	errInside    = &problems.Status{Phrase: "shocks inside the lip"}
	errCross     = &problems.Status{Phrase: "ramp shocks cross ahead of the lip"}
	errFocusWave = &problems.Status{Phrase: "lip behind the focus wave"}
	errLipOff    = &problems.Status{Phrase: "cowl turns away from the flow at the lip"}
	errSonic     = &problems.Status{Phrase: "flow subsonic behind the lip shock"}
)

// inOrder reports whether the lip streamline, followed upstream, meets the
// shocks of ramps n..1 one after another.
func (a *analysis) inOrder() bool {
	place := a.shape.Lip
	for i := a.design.Ramps - 1; i >= 0; i-- {
		back, ok := a.streamline(place, i).Reach(a.shockLine(i))
		if !ok || back > placeTolerance*a.shape.height {
			return false
		}
		place = a.upstream(place, i, back)
	}
	return a.shockLine(0).Along(place) >= -placeTolerance*a.shape.height
}

// streamline is the line of the stream through place in the region of ramp i.
func (a *analysis) streamline(place contour.Point, i int) contour.Line {
	return contour.Line{Through: place, Angle: a.shape.Angles[i]}
}

// upstream moves place by the signed distance along the flow of ramp i.
func (a *analysis) upstream(place contour.Point, i int, distance float64) contour.Point {
	sin, cos := math.Sincos(a.shape.Angles[i])
	return contour.Point{X: place.X + distance*cos, Y: place.Y + distance*sin}
}

// behindFocusWave reports whether a wave that leaves the crossing of two
// neighbouring shocks toward the body reaches the lip's stream ahead of the lip.
// At the focus it is the condition phi_n >= asin(1/M_n).
func (a *analysis) behindFocusWave() bool {
	for i := 1; i < a.design.Ramps; i++ {
		crossing, ok := contour.Meet(a.shockLine(i-1), a.shockLine(i))
		if !ok || crossing.X > a.shape.Lip.X-placeTolerance*a.shape.height {
			continue
		}
		if a.bodyWave(crossing, i).Height(a.shape.Lip) > placeTolerance*a.shape.height {
			return true
		}
	}
	return false
}

// bodyWave is the last leg of the Mach wave that leaves place toward the body in
// the flow of ramp i (from 0): it turns where it passes the shocks of further
// ramps, and ends in the flow of the last.
func (a *analysis) bodyWave(place contour.Point, i int) contour.Line {
	wave := contour.Line{Through: place, Angle: a.shape.Angles[i] - math.Asin(1/a.waves[i].Mach2)}
	for k := i + 1; k < a.design.Ramps; k++ {
		if ahead, ok := wave.Reach(a.shockLine(k)); ok && ahead > 0 {
			wave.Through, _ = contour.Meet(wave, a.shockLine(k))
		}
		wave.Angle = a.shape.Angles[k] - math.Asin(1/a.waves[k].Mach2)
	}
	return wave
}

// meetLip is the state ahead of the lip and what it allows.
func (a *analysis) meetLip() {
	a.lipErr, a.lipTurning = a.rampErr, a.design.LipTurning
	if a.lipErr == nil && a.shape.err == nil {
		a.lipErr = a.placeErr
	}
	if a.rampErr == nil {
		a.lipMach = a.waves[a.design.Ramps-1].Mach2
	}
	if a.lipErr == nil {
		a.reflection = a.route.regularReflection(a.def.Gas, a.lipMach)
	}
}

// crossLipShock turns the flow by the lip turning; an aligned cowl has no shock.
func (a *analysis) crossLipShock() {
	a.throatErr = a.lipErr
	if a.throatErr != nil {
		return
	}
	if a.design.LipTurning < 0 {
		a.throatErr = errLipOff
		return
	}
	wave, err := a.route.weak(a.def.Gas, a.lipMach, a.design.LipTurning)
	if err != nil {
		a.throatErr = detached("lip shock", a.lipMach, err)
		return
	}
	a.lip, a.lipRise = wave, wave.Jump.Pressure
	if a.shape.err == nil && a.design.LipTurning > 0 {
		a.miss = contour.Distance(a.shape.Shoulder, a.lipFoot()) / a.shape.height
	}
	if !(wave.Mach2 > 1) {
		a.throatErr = errSonic
	}
}

// lipFoot is where the lip shock meets ramp n or, downstream of the shoulder, the
// throat wall.
func (a *analysis) lipFoot() contour.Point {
	lipShock := contour.Line{Through: a.shape.Lip, Angle: a.flowAngle(a.design.Ramps) - a.lip.WaveAngle}
	ramp := contour.Line{Through: a.shape.Shoulder, Angle: a.flowAngle(a.design.Ramps)}
	if along, ok := ramp.Reach(lipShock); ok && along <= 0 {
		foot, _ := contour.Meet(ramp, lipShock)
		return foot
	}
	foot, ok := contour.Meet(a.shape.throatWall(), lipShock)
	if !ok {
		return contour.Point{X: math.Inf(1), Y: math.Inf(1)}
	}
	return foot
}

// enterThroat ends the compression behind the lip shock, or behind a terminal
// normal shock where one stands in the throat.
func (a *analysis) enterThroat() {
	if a.throatErr != nil {
		return
	}
	a.terminal, a.throatMach = shock.Jump{Pressure: 1, Density: 1, Temperature: 1, TotalPressure: 1}, a.lip.Mach2
	a.terminalMach = a.lip.Mach2
	if a.def.TerminalShock {
		a.throatMach, a.terminal = a.route.normal(a.def.Gas, a.terminalMach)
	}
	a.pressureRatio = a.lip.Jump.Pressure * a.terminal.Pressure
	a.temperatureRatio = a.lip.Jump.Temperature * a.terminal.Temperature
	for _, wave := range a.waves[:a.design.Ramps] {
		a.pressureRatio *= wave.Jump.Pressure
		a.temperatureRatio *= wave.Jump.Temperature
	}
	a.shockRecovery = a.route.recovery(a)
}

// outerCowl is the free stream on the outer cowl wedge: an attached shock, or an
// expansion where the surface turns away.
func (a *analysis) outerCowl() {
	g, turning := a.def.Gas, a.design.Outer()+a.point.Incidence
	a.cowlMargin = a.route.largestTurning(g, a.point.Mach) - turning
	a.cowlErr = nil
	var pressure float64
	if turning > 0 {
		wave, err := a.route.weak(g, a.point.Mach, turning)
		if err != nil {
			a.cowlErr = detached("outer cowl", a.point.Mach, err)
			return
		}
		pressure = wave.Jump.Pressure
	} else {
		_, ratio, err := shock.Expand(g, a.point.Mach, -turning)
		if err != nil {
			a.cowlErr = &problems.Status{Phrase: "outer cowl expands past vacuum"}
			return
		}
		pressure = ratio
	}
	a.cowlDrag = (pressure - 1) * a.def.CowlLength * math.Tan(a.design.Outer()) / g.DynamicPressure(1, a.point.Mach)
}

// status is the first reason along the flow why the captured stream is not
// known, nil when it is attached from free stream to throat.
func (a *analysis) status() error {
	if a.throatErr != nil {
		return a.throatErr
	}
	return a.placeErr
}
