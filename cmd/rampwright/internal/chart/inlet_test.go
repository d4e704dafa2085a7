package chart

import (
	"fmt"
	"math"
)

const radian = math.Pi / 180

// invented is an inlet made up for the tests: enough gas dynamics to put every
// line where a real one has it.
type invented struct {
	mach, incidence, height float64
	ramps                   []float64 // turning, rad
	lipTurning, wedge       float64   // rad
}

// waveAngle is the weak solution of the oblique-shock relation by bisection
// (NACA Report 1135, eq. 138 solved for the wave angle), ratio of specific
// heats 1.4; 0 when detached.
func waveAngle(mach, turning float64) float64 {
	theta := func(beta float64) float64 {
		s := math.Sin(beta)
		return math.Atan(2 / math.Tan(beta) * (mach*mach*s*s - 1) / (mach*mach*(1.4+math.Cos(2*beta)) + 2))
	}
	low, high := math.Asin(1/mach), math.Asin(1/mach)
	for ; high < 1.57 && theta(high) < turning; high += 0.002 {
		low = high
	}
	if high >= 1.57 {
		return 0
	}
	for range 60 {
		if middle := (low + high) / 2; theta(middle) < turning {
			low = middle
		} else {
			high = middle
		}
	}
	return high
}

// behind is the Mach number behind that shock (NACA Report 1135, eq. 132).
func behind(mach, turning, beta float64) float64 {
	n := mach * mach * math.Sin(beta) * math.Sin(beta)
	return math.Sqrt((n+5)/(7*n-1)) / math.Sin(beta-turning)
}

// view lays the inlet out with all ramp shocks through the lip; ok is false
// where a shock detaches or a surface vanishes.
func (n invented) view() (v SideView, ok bool) {
	mach, surface := n.mach, -n.incidence
	corner, focus := Vertex{Name: "leading edge"}, Vertex{}
	v.Body = append(v.Body, corner)
	for i, turning := range n.ramps {
		step := turning
		if i == 0 {
			step += n.incidence
		}
		beta := waveAngle(mach, step)
		if beta == 0 {
			return v, false
		}
		absolute := surface + beta
		if i == 0 {
			focus = Vertex{"lip", n.height / math.Tan(absolute), n.height}
		} else { // this ramp's line meets the shock's line through the focus
			slope, front := math.Tan(surface), math.Tan(absolute)
			x := (focus.Y - corner.Y - front*focus.X + slope*corner.X) / (slope - front)
			next := Vertex{fmt.Sprintf("corner %d", i+1), x, corner.Y + slope*(x-corner.X)}
			if !(x > corner.X) {
				return v, false
			}
			corner = next
			v.Body = append(v.Body, corner)
		}
		v.Waves = append(v.Waves, Wave{fmt.Sprintf("ramp %d shock", i+1), RampShock, corner.X, corner.Y, focus.X, focus.Y})
		mach, surface = behind(mach, step, beta), surface+step
	}
	beta := waveAngle(mach, n.lipTurning)
	if beta == 0 {
		return v, false
	}
	slope, front := math.Tan(surface), math.Tan(surface-beta)
	x := (focus.Y - corner.Y - front*focus.X + slope*corner.X) / (slope - front)
	shoulder := Vertex{"shoulder", x, corner.Y + slope*(x-corner.X)}
	if !(x > corner.X) {
		return v, false
	}
	v.Waves = append(v.Waves, Wave{"lip shock", LipShock, focus.X, focus.Y, shoulder.X, shoulder.Y})
	n.addDuct(&v, focus, shoulder, surface)
	n.addStations(&v, focus, shoulder)
	return v, true
}

func (n invented) addDuct(v *SideView, lip, shoulder Vertex, surface float64) {
	inner := surface - n.lipTurning
	outer := inner + n.wedge
	run := math.Max(1.1*n.height, 1.5*(shoulder.X-lip.X))
	v.Body = append(v.Body, shoulder, Vertex{"", lip.X + run, shoulder.Y + math.Tan(inner)*(lip.X+run-shoulder.X)})
	v.CowlInner = []Vertex{lip, {"", lip.X + run, lip.Y + math.Tan(inner)*run}}
	v.CowlOuter = []Vertex{lip, {"", lip.X + run, lip.Y + math.Tan(outer)*run}}
	v.LipStreamline = []Vertex{{"", -0.1 * lip.X, lip.Y + math.Tan(n.incidence)*1.1*lip.X}, lip}
}

func (n invented) addStations(v *SideView, lip, shoulder Vertex) {
	v.Stations = append(v.Stations, Vertex{"free stream", 0.25 * lip.X, 0.7 * lip.Y})
	ends := append(append([]Vertex(nil), v.Body[:len(n.ramps)]...), shoulder)
	for i := range n.ramps {
		x, y := (ends[i].X+ends[i+1].X+lip.X)/3, (ends[i].Y+ends[i+1].Y+lip.Y)/3
		v.Stations = append(v.Stations, Vertex{fmt.Sprintf("ramp %d", i+1), x, y})
	}
	end := v.CowlInner[1]
	v.Stations = append(v.Stations,
		Vertex{"behind lip shock", (lip.X + shoulder.X + lip.X + 0.4*(end.X-lip.X)) / 3, (lip.Y + shoulder.Y + lip.Y + 0.4*(end.Y-lip.Y)) / 3},
		Vertex{"throat", shoulder.X + 0.3*(end.X-shoulder.X), (shoulder.Y + lip.Y + (end.Y-lip.Y)*(shoulder.X-lip.X)/(end.X-lip.X)) / 2})
}

func degrees(values ...float64) []float64 {
	for i := range values {
		values[i] *= radian
	}
	return values
}
