package report

import (
	"fmt"
	"math"

	"rampwright/problems/contour"
	"rampwright/problems/inlet"
)

// Outline is the walls of an existing inlet, corner by corner.
type Outline struct {
	BodyM      [][2]Number `json:"body_m"`
	CowlInnerM [][2]Number `json:"cowl_inner_m"`
	ThroatXM   Number      `json:"throat_x_m"`
}

// takeOutline describes an existing inlet: its ramps are the straight stretches of
// the body ahead of the shoulder, and nothing was placed by shocks.
func (s *Shape) takeOutline(o *inlet.Outline, flow *inlet.Flow) {
	before := 0.0
	for _, angle := range flow.Contour.Angles {
		s.RampAngleDeg = append(s.RampAngleDeg, Number(degrees(angle-before)))
		before = angle
	}
	s.ShockOnLip, s.LipSetback = Number(math.NaN()), Number(math.NaN())
	for _, name := range []string{"shock_on_lip_mach", "lip_setback"} {
		s.Missing = append(s.Missing, Field[string]{name, "not applicable: the walls are given, not placed by shocks"})
	}
	s.Outline = &Outline{pairs(o.Body), pairs(o.CowlInner), Number(o.ThroatX)}
}

func pairs(points []contour.Point) [][2]Number {
	list := make([][2]Number, len(points))
	for i, p := range points {
		list[i] = pair(p)
	}
	return list
}

// walls adds the corners that are not those of ramps: the shoulder and what is
// behind it, and the inner cowl.
func (o *Outline) walls(ramps int, add func(name string, at [2]Number, surface float64)) {
	list := func(points [][2]Number, from int, name func(i int) string) {
		for i := from; i < len(points); i++ {
			add(name(i), points[i], surfaceBehind(points, i))
		}
	}
	list(o.BodyM, ramps, func(i int) string {
		switch i {
		case ramps:
			return "shoulder"
		case len(o.BodyM) - 1:
			return "body end"
		}
		return fmt.Sprintf("corner %d", i+1)
	})
	list(o.CowlInnerM, 0, func(i int) string {
		switch i {
		case 0:
			return "cowl lip"
		case len(o.CowlInnerM) - 1:
			return "cowl end"
		}
		return fmt.Sprintf("cowl corner %d", i+1)
	})
}

// surfaceBehind is the direction of the wall behind its point i, degrees; NaN
// behind the last.
func surfaceBehind(points [][2]Number, i int) float64 {
	if i+1 >= len(points) {
		return math.NaN()
	}
	a, b := points[i], points[i+1]
	return degrees(math.Atan2(float64(b[1]-a[1]), float64(b[0]-a[0])))
}
