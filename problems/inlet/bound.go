package inlet

import (
	"math"

	"rampwright/problems"
	"rampwright/problems/wave"
)

// boundTrace tells, for every quantity of a traced point from index next on, how
// far the traces of search and of verification may lie apart: the error bounds of
// both, carried to the quantity by moving each number of the view within them, and
// summed.
func (p *Problem) boundTrace(a *analysis, dst *problems.Evaluation, next, point int) {
	settings := SearchTrace()
	settings.WithoutError = false
	searched, err := a.tracing(settings)
	if err != nil {
		return // the trace of verification says the same
	}
	finer, err := a.tracing(wave.Settings{WithoutError: true})
	if err != nil {
		return
	}
	seen := a.view
	widths := widths(a.trace, searched, look(searched, a.shape, false), look(finer, a.shape, false))
	defer a.adopt(seen)
	for k, width := range widths.numbers() {
		if !(*width > 0) {
			continue
		}
		for _, sign := range []float64{-1, 1} {
			moved := seen.clone()
			*moved.numbers()[k] += sign * *width
			a.adopt(moved)
			p.widen(a, dst, next, point)
		}
	}
}

// widen adds to the bounds of one point what the quantities of an analysis differ
// from their values: half of it, because each number is moved both ways.
func (p *Problem) widen(a *analysis, dst *problems.Evaluation, next, point int) {
	for i := next; i < len(p.readers) && p.readers[i].point == point; i++ {
		if dst.Reasons[i] != nil {
			continue
		}
		value, err := p.readers[i].read(a)
		switch {
		case err == nil:
			dst.Widen(i, math.Abs(value-dst.Values[i])/2)
		default:
			dst.Widen(i, math.Inf(1))
		}
	}
}

// widths is the view whose numbers are error bounds: those that both traces report
// where they do, for the rest twice the change from the trace of the search to one
// of default settings, and twice the threshold of the search where waves upstream
// are not exact.
func widths(fine, searched *wave.Trace, coarse, middle view) view {
	capture := fine.Error.Capture + searched.Error.Capture
	open := fine.OpenMomentum + searched.OpenMomentum
	station := relative(fine) + relative(searched)
	ahead, inside := 0.0, 0.0
	if searched.Error.Capture > 0 {
		ahead = 2 * searched.Threshold
	}
	if station > 0 {
		inside = 2 * searched.Threshold
	}
	change := func(a, b, blur float64) float64 { return 2*math.Abs(a-b) + blur*(1+math.Abs(a)) }

	w := coarse.clone()
	for i := range w.corners {
		w.corners[i] = cornerView{mach: change(coarse.corners[i].mach, middle.corners[i].mach, 0)}
	}
	w.lipMach = change(coarse.lipMach, middle.lipMach, ahead)
	w.lipFlow = change(coarse.lipFlow, middle.lipFlow, ahead)
	w.capture = capture
	w.spillage = fine.Error.Spillage + searched.Error.Spillage + open
	for i := range w.clearance {
		w.clearance[i] = math.NaN()
		if len(middle.clearance) > i {
			w.clearance[i] = change(coarse.clearance[i], middle.clearance[i], ahead)
		}
	}
	w.miss = change(coarse.miss, middle.miss, inside)
	w.recovery, w.mach = station*coarse.recovery, station*coarse.mach
	w.pressure, w.temperature = station*coarse.pressure, station*coarse.temperature
	return w
}

// relative is the error bound of the averages of the throat plane over their
// values; 0 where the plane was not reached and there are none.
func relative(t *wave.Trace) float64 {
	if t.Stations[0].Err != nil || len(t.Error.Stations) == 0 {
		return 0
	}
	return t.Error.Stations[0].Recovery / t.Stations[0].Recovery
}

// numbers lists every number of the view by its place, in a fixed order.
func (v *view) numbers() []*float64 {
	list := []*float64{
		&v.lipMach, &v.lipFlow, &v.capture, &v.spillage, &v.miss,
		&v.recovery, &v.mach, &v.pressure, &v.temperature,
	}
	for i := range v.corners {
		list = append(list, &v.corners[i].mach)
	}
	for i := range v.clearance {
		list = append(list, &v.clearance[i])
	}
	return list
}

func (v view) clone() view {
	v.corners = append([]cornerView(nil), v.corners...)
	v.clearance = append([]float64(nil), v.clearance...)
	return v
}
