package inlet

import (
	"rampwright/problems/contour"
	"rampwright/problems/wave"
)

// Rise is the pressure rise of one reflection on a wall of the duct, where a traced
// shock arrives and leaves again.
type Rise struct {
	Surface wave.Surface
	Place   contour.Point // m
	Mach    float64       // ahead of the arriving shock, along the wall
	Ratio   float64       // p behind the reflection over p ahead of the arriving shock
	// Share is Ratio over SeparationPressureRatio(Mach): above 1 a turbulent boundary
	// layer separates. The separation margin judges corners and the wave at the lip
	// alone, so that nothing else counts a reflection.
	Share float64
}

// reflectionGap is how far ahead of the throat plane a reflection must lie, over the
// height of the throat: a lip shock that meets the shoulder is cancelled there.
const reflectionGap = 1e-6

// WorstRise is the reflection of the largest share on body or inner cowl, ahead of
// the throat plane or the end of the trace; ok is false without a trace or where no
// pressure rises. Corners of the body are left to the separation margin; a corner of
// the inner cowl that turns into the stream counts as a reflection does. Each arrival
// counts by itself: where several follow closely, a boundary layer feels their sum.
func (f *PointFlow) WorstRise() (worst Rise, ok bool) {
	if f.Trace == nil {
		return Rise{}, false
	}
	throat := &f.Trace.Stations[0]
	last := throat.X - reflectionGap*throat.Height
	for i := 1; i < len(f.Trace.Walls); i++ {
		ahead, behind := &f.Trace.Walls[i-1], &f.Trace.Walls[i]
		if ahead.Surface != behind.Surface || ahead.Surface == wave.CowlOuter || behind.From.X > last {
			continue
		}
		if ahead.Surface == wave.Body && ahead.Segment != behind.Segment {
			continue
		}
		from, to := &f.Trace.Regions[ahead.Region], &f.Trace.Regions[behind.Region]
		r := Rise{ahead.Surface, behind.From, from.Mach, to.Pressure / from.Pressure, 0}
		r.Share = r.Ratio / SeparationPressureRatio(r.Mach)
		if r.Ratio > 1 && r.Share > worst.Share {
			worst, ok = r, true
		}
	}
	return worst, ok
}
