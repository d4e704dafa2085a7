package handoff

import "io"

// ProfilePoint is a point of the mold line, in metres: x downstream and y
// toward the cowl from the leading edge of the first ramp.
type ProfilePoint struct {
	Surface string // "ramp", "cowl inner", "cowl outer", ..
	Name    string // "corner 2", "lip", ..; may be empty
	X, Y    float64
}

// WriteProfile writes profile.csv: the named points of the mold line in the
// order given, one row a point, under the header
//
//	surface,point,x_m,y_m
//
// Decimals are the shortest that read back exactly. It returns *Incomplete for
// a point on no surface and *NotFinite for a coordinate that is no number; then
// nothing is written.
func WriteProfile(w io.Writer, points []ProfilePoint) error {
	t := newTable("profile", "surface", "point", "x_m", "y_m")
	for i, p := range points {
		if p.Surface == "" {
			return &Incomplete{t.name, i + 1, "surface"}
		}
		if err := t.add([]string{p.Surface, p.Name}, []float64{p.X, p.Y}, 2); err != nil {
			return err
		}
	}
	return t.writeTo(w)
}
