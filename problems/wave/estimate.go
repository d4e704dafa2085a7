package wave

import "math"

// Error bounds how far a trace is from the exact flow: twice the change to a
// companion trace with wavelets twice and a threshold four times as large, and
// twice the threshold where wavelets or merged fronts lie upstream. A bound
// is 0, but for rounding, where every front upstream is an exact shock or slip
// line; +Inf where either trace did not reach the place. Without an estimate
// Stations is empty and the rest NaN.
//
// The error of a trace falls with the threshold and with the square of the
// wavelet, so that the change is about three times the error; the largest relative
// change of a station counts for all its averages. It is an estimate, no proof: of
// 966 stations of 600 random inlets one, at Mach 1.57, differed by more from the fine
// trace: there wavelets of 1 and of 2 deg agreed by chance.
type Error struct {
	Capture  float64
	Spillage float64
	Stations []StationError
}

// StationError bounds the error of the averages of one station.
type StationError struct {
	Recovery, Mach, Pressure float64
}

const (
	changeFactor = 2
	blurFactor   = 2
)

func (t *Trace) estimate(coarse *Trace, blur blur) {
	capture := blur.ahead + changeFactor*change(t.Captured.Capture, coarse.Captured.Capture)
	t.Error.Capture = capture
	t.Error.Spillage = capture + changeFactor*change(t.Captured.Spillage, coarse.Captured.Spillage)
	for i := range t.Stations {
		a, b := &t.Stations[i], &coarse.Stations[i]
		if a.Err != nil || b.Err != nil {
			t.Error.Stations = append(t.Error.Stations, StationError{math.Inf(1), math.Inf(1), math.Inf(1)})
			continue
		}
		relative := max(change(a.Recovery, b.Recovery)/a.Recovery, change(a.Mach, b.Mach)/a.Mach, change(a.Pressure, b.Pressure)/a.Pressure)
		relative = blur.upstream + changeFactor*relative
		t.Error.Stations = append(t.Error.Stations, StationError{relative * a.Recovery, relative * a.Mach, relative * a.Pressure})
	}
}

// change is |a - b|, +Inf where either is missing.
func change(a, b float64) float64 {
	if math.IsNaN(a) || math.IsNaN(b) {
		return math.Inf(1)
	}
	return math.Abs(a - b)
}

// blur is the part of the threshold that counts as error ahead of the lip, and
// ahead of a station in the duct.
type blur struct{ ahead, upstream float64 }

func (c *core) blur() blur {
	var b blur
	for i := range c.fronts {
		f := &c.fronts[i]
		switch {
		case f.kind != Wavelet && !f.merged:
		case i < c.before:
			b.ahead, b.upstream = blurFactor*c.blurAhead, blurFactor*c.coarsest
		case f.duct:
			b.upstream = blurFactor * c.coarsest
		}
	}
	return b
}
