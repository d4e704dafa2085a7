package brief

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"slices"

	"rampwright/problems/contour"
	"rampwright/problems/inlet"
	"rampwright/problems/wave"
)

// Bounds on the corners of one wall.
const (
	leastPoints = 2
	mostPoints  = 200
)

// readOutline reads the walls of an existing inlet.
func (r *reader) readOutline(inletNode *node) {
	d := &r.brief.Definition
	number := func(part *node, section, name string) float64 {
		k := known(section, name)
		return r.number(part, k, k.Path())
	}
	d.Width = number(inletNode, inletPart, "width_m")
	d.CowlLength = number(inletNode, inletPart, "cowl_length")
	d.TerminalShock = r.truth(inletNode, known(inletPart, "terminal_shock"))
	d.DuctFactor = number(inletNode, inletPart, "duct_factor")
	part := r.child(inletNode, outlinePart)
	if part == nil {
		return
	}
	r.brief.place["inlet.outline"] = part
	before := len(r.problems)
	r.brief.outerDeg = number(part, outlinePart, "cowl_outer_angle_deg")
	o := &inlet.Outline{
		Body: r.wall(part, "body_m"), CowlInner: r.wall(part, "cowl_inner_m"),
		OuterAngle: r.brief.outerDeg * (math.Pi / 180),
		ThroatX:    number(part, outlinePart, "throat_x_m"),
	}
	d.Outline = o
	if len(r.problems) > before || len(o.Body) == 0 || len(o.CowlInner) == 0 || math.IsNaN(o.OuterAngle+o.ThroatX) {
		return
	}
	r.checkOutline(part, o)
	if len(r.problems) == before {
		r.checkDuct(part, o)
	}
	d.CaptureHeight = o.CowlInner[0].Y
}

// wall reads the corners of one wall; nil where something is wrong.
func (r *reader) wall(part *node, name string) []contour.Point {
	k := known(outlinePart, name)
	n := part.get(name)
	switch {
	case n == nil:
		return nil
	case n.shape != sequence:
		r.wrongShape(n, name, sequence)
		return nil
	case len(n.items) < leastPoints && !n.partial || len(n.items) > mostPoints:
		r.add(n, Problem{Message: name + " has too few or too many points", Value: fmt.Sprint(len(n.items)), Allowed: k.Allowed()})
		return nil
	}
	points, sound := make([]contour.Point, len(n.items)), !n.partial
	for i, item := range n.items {
		p, ok := r.point(item, k, fmt.Sprintf("point %d of %s", i+1, name))
		if ok && sound && i > 0 && !(p.X > points[i-1].X) {
			r.add(item, Problem{
				Message: fmt.Sprintf("point %d of %s does not lie downstream of the one before", i+1, name),
				Value:   "x " + exactNumber(p.X), Allowed: "above " + exactNumber(points[i-1].X),
				Hint: "list the corners in the order of the flow",
			})
			ok = false
		}
		points[i], sound = p, sound && ok
	}
	if !sound {
		return nil
	}
	last := len(points) - 1
	r.record(k.Path(), fmt.Sprintf("%d points, %s to %s", len(points), pointText(points[0]), pointText(points[last])), k.Unit, n)
	return points
}

// point reads [x, y].
func (r *reader) point(n *node, k Key, name string) (p contour.Point, ok bool) {
	if n.shape != sequence || len(n.items) != 2 && !n.partial {
		r.add(n, Problem{Message: name + " is no pair of coordinates", Value: n.shown(), Allowed: "[x, y], metres"})
		return p, false
	}
	ok = !n.partial
	k.Form = Number
	for i, to := range []*float64{&p.X, &p.Y} {
		if i >= len(n.items) {
			return p, false
		}
		item := n.items[i]
		if item.shape != scalar {
			r.wrongShape(item, name, scalar)
			ok = false
			continue
		}
		v, fine := r.decimalOf(item, k, name)
		*to, ok = v, ok && fine
	}
	return p, ok
}

// checkOutline holds the walls against each other and the free streams: what no
// trace can use is wrong in the brief.
func (r *reader) checkOutline(part *node, o *inlet.Outline) {
	body, cowl := part.get("body_m"), part.get("cowl_inner_m")
	if first := o.Body[0]; first.X != 0 || first.Y != 0 {
		r.add(body.items[0], Problem{Message: "the body does not start in the origin", Value: pointText(first), Allowed: "[0, 0]", Hint: "move the axes to the leading edge"})
		return
	}
	lip := o.CowlInner[0]
	if k := known(inletPart, "capture_height_m"); !k.holds(lip.Y) {
		r.add(cowl.items[0], Problem{Message: "the lip is out of range", Value: "y " + exactNumber(lip.Y), Allowed: "y, the capture height, " + k.Allowed()})
		return
	}
	if !(o.ThroatX > lip.X) {
		r.add(part.get("throat_x_m"), Problem{Message: "the throat plane does not lie behind the lip", Value: exactNumber(o.ThroatX), Allowed: "above " + exactNumber(lip.X) + " m"})
		return
	}
	if end := min(o.Body[len(o.Body)-1].X, o.CowlInner[len(o.CowlInner)-1].X); o.ThroatX > end {
		r.add(part.get("throat_x_m"), Problem{Message: "the throat plane lies behind the end of a wall", Value: exactNumber(o.ThroatX), Allowed: "up to " + exactNumber(end) + " m", Hint: "carry both walls on to the throat plane"})
		return
	}
	d := &r.brief.Definition
	if !(d.CowlLength >= 0) {
		return // wrong, and said
	}
	geometry := o.Geometry(d.CowlLength * lip.Y)
	said := map[string]bool{}
	for _, c := range d.Points {
		err := geometry.Validate(wave.FreeStream{Mach: c.Mach, Incidence: c.Incidence}, d.Gas)
		for _, fault := range faults(err) {
			if text := fault.Error(); !said[text] {
				said[text] = true
				r.add(part, Problem{Message: text, Hint: "the walls of an outline run downstream, the cowl above the body"})
			}
		}
	}
}

// checkDuct refuses walls that cross behind the throat plane: no flow leaves there,
// which a trace that ends at the plane would not notice.
func (r *reader) checkDuct(part *node, o *inlet.Outline) {
	x, corner, crossed := o.Crossing()
	if !crossed {
		return
	}
	wall, index := part.get("body_m"), slices.Index(o.Body, corner)
	if index < 0 {
		wall, index = part.get("cowl_inner_m"), slices.Index(o.CowlInner, corner)
	}
	r.add(wall.items[index], Problem{
		Message: fmt.Sprintf("body and inner cowl cross behind the throat plane, at x %.6g m", x),
		Value:   pointText(corner), Allowed: "the cowl above the body as far as both walls reach",
		Hint: "end a wall ahead of the crossing, or turn it",
	})
}

// faults takes joined errors apart.
func faults(err error) []error {
	var list interface{ Unwrap() []error }
	if !errors.As(err, &list) {
		if err == nil {
			return nil
		}
		return []error{err}
	}
	var all []error
	for _, e := range list.Unwrap() {
		all = append(all, faults(e)...)
	}
	return all
}

func pointText(p contour.Point) string {
	return "[" + exactNumber(p.X) + ", " + exactNumber(p.Y) + "]"
}

func (b *Brief) writeOutline(w *bytes.Buffer) {
	d := b.Definition
	o := d.Outline
	fmt.Fprintf(w, "inlet:\n  width_m: %s\n  cowl_length: %s\n  terminal_shock: %t\n  duct_factor: %s\n  outline:\n",
		exactNumber(d.Width), exactNumber(d.CowlLength), d.TerminalShock, exactNumber(d.DuctFactor))
	for _, wall := range []struct {
		name   string
		points []contour.Point
	}{{"body_m", o.Body}, {"cowl_inner_m", o.CowlInner}} {
		texts := make([]string, len(wall.points))
		for i, p := range wall.points {
			texts[i] = pointText(p)
		}
		fmt.Fprintf(w, "    %s: [%s]\n", wall.name, join(texts))
	}
	fmt.Fprintf(w, "    cowl_outer_angle_deg: %s\n    throat_x_m: %s\n", exactNumber(b.outerDeg), exactNumber(o.ThroatX))
}

type canonicalOutline struct {
	Body       [][2]float64 `json:"body_m"`
	CowlInner  [][2]float64 `json:"cowl_inner_m"`
	OuterAngle float64      `json:"cowl_outer_angle_deg"`
	ThroatX    float64      `json:"throat_x_m"`
}

func (b *Brief) canonicalOutline() *canonicalOutline {
	o := b.Definition.Outline
	if o == nil {
		return nil
	}
	pairs := func(points []contour.Point) [][2]float64 {
		list := make([][2]float64, len(points))
		for i, p := range points {
			list[i] = [2]float64{p.X, p.Y}
		}
		return list
	}
	return &canonicalOutline{pairs(o.Body), pairs(o.CowlInner), b.outerDeg, o.ThroatX}
}

// besideOutline returns what holds for an inlet given by its outline, and for one
// of ramps: which keys have a place.
func besideOutline() (withOutline, withRamps *schema) {
	withOutline, withRamps = &schema{}, &schema{OneOf: eachRequired("cowl_angle_deg", "lip_turning_deg")}
	for _, k := range keys {
		if k.Section != inletPart || k.Unless != outlinePart {
			continue
		}
		withOutline.Properties = append(withOutline.Properties, property{k.Name, never()})
		if k.Required {
			withRamps.Required = append(withRamps.Required, k.Name)
		}
	}
	return withOutline, withRamps
}

func wallSchema(k Key) *schema {
	point := &schema{Type: "array", Items: numberSchema(k, "number"), MinItems: 2, MaxItems: 2}
	return &schema{Type: "array", Items: point, MinItems: leastPoints, MaxItems: mostPoints}
}
