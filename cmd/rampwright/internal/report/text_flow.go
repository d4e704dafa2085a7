package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"rampwright/problems"
)

// Text returns the document for a terminal of that width.
func (d *FlowDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.cautions(d.Cautions)
	p.heading("Flow")
	p.wrap("", d.answer(), "")
	p.contour(&d.Inlet)
	p.stations(d.Points)
	p.traces(d.Points)
	p.balances(d.Points)
	p.walls(d.Points)
	p.quantities(d.readings, d.Points)
	p.assumptions(d.Assumptions)
	return p.String()
}

// answer is the flow in one sentence.
func (d *FlowDocument) answer() string {
	var broken []string
	for _, point := range d.Points {
		if point.Status != attachedStatus {
			broken = append(broken, point.Name+": "+point.Status)
		}
	}
	first := d.Points[0].Name
	if broken != nil {
		return "The stream is not attached from free stream to throat at " + strings.Join(broken, "; ") + "."
	}
	where := fmt.Sprintf("at %s:", first)
	if len(d.Points) > 1 {
		where = fmt.Sprintf("at all %d points; at %s", len(d.Points), first)
	}
	far := ""
	if slices.ContainsFunc(d.Points, func(p Point) bool { return p.Trace != nil && p.Trace.BehindThroat != nil }) {
		far = "as far as the throat plane "
	}
	read := func(name string) string { return significant(find(d.readings, name, first).value) }
	return fmt.Sprintf("The stream is attached "+far+"%s the recovery is %s, the capture %s and the throat Mach number %s.",
		where, read("recovery"), read("capture"), read("throat_mach"))
}

const attachedStatus = "attached"

// cautions writes what the result raises.
func (p *page) cautions(list []Caution) {
	if len(list) == 0 {
		return
	}
	p.heading("Cautions")
	for i, c := range list {
		first := fmt.Sprintf("%2d. ", i+1)
		p.wrap(first, c.Text, strings.Repeat(" ", len(first)))
	}
}

func (p *page) assumptions(list []string) {
	p.heading("What these numbers rest on")
	for _, text := range list {
		p.wrap("  - ", text, "    ")
	}
}

// contour writes the settings and named points of the geometry.
func (p *page) contour(s *Shape) {
	p.heading("Geometry")
	if s.Lip == nil {
		reason, _ := s.Missing.Get("lip_m")
		p.wrap(indent, "The contour does not close: "+reason+".", indent)
		return
	}
	var names []string
	var x, y, angle []float64
	add := func(name string, at [2]Number, surface float64) {
		names = append(names, name)
		x, y, angle = append(x, float64(at[0])), append(y, float64(at[1])), append(angle, surface)
	}
	surface := 0.0
	for i, corner := range s.Corners {
		surface += float64(s.RampAngleDeg[i])
		name := "leading edge"
		if i > 0 {
			name = fmt.Sprintf("corner %d", i+1)
		}
		add(name, corner, surface)
	}
	cowl, _ := s.Quantities.Get("cowl_angle_deg")
	if s.Outline == nil {
		add("shoulder", *s.Shoulder, float64(cowl))
		add("cowl lip", *s.Lip, float64(cowl))
	} else {
		s.Outline.walls(len(s.Corners), add)
	}
	t := &table{columns: []column{{head: "point"}, {head: "x m"}, {head: "y m"}, {head: "surface behind, deg"}}}
	xs, ys, angles := fixed(x, 4), fixed(y, 4), fixed(angle, 3)
	for i, name := range names {
		t.add(name, xs[i], ys[i], angles[i])
	}
	p.table(t)
}

// stations writes the state at each station, point by point.
func (p *page) stations(points []Point) {
	p.heading("Stations")
	for i := range points {
		point := &points[i]
		if i > 0 {
			p.WriteByte('\n')
		}
		p.wrap(indent, pointLine(point), indent)
		t := &table{columns: []column{
			{head: "station"}, {head: "Mach"}, {head: "flow\ndeg"}, {head: "wave\ndeg"}, {head: "wave to x\ndeg", drop: 4}, {head: "normal\nMach", drop: 1},
			{head: "p/p0", drop: 2}, {head: "T/T0", drop: 3}, {head: "pt/pt0"}, {head: "p\nkPa"}, {head: "T\nK"},
		}}
		cells := make([][]string, 0, len(stationColumns))
		for _, c := range stationColumns {
			column := make([]float64, len(point.Stations))
			for k := range point.Stations {
				column[k] = float64(c.read(&point.Stations[k]))
			}
			cells = append(cells, fixed(column, c.decimals))
		}
		for k := range point.Stations {
			row := []string{point.Stations[k].Name}
			for _, column := range cells {
				row = append(row, column[k])
			}
			t.add(row...)
		}
		p.table(t)
	}
}

// traces writes what the traces say, point by point.
func (p *page) traces(points []Point) {
	headed := false
	for i := range points {
		if points[i].Trace == nil {
			continue
		}
		if !headed {
			p.heading("Wave by wave")
			headed = true
		}
		p.wrap(indent+points[i].Name+": ", points[i].Trace.text(&points[i]), indent+indent)
	}
}

var stationColumns = []struct {
	read     func(*Station) Number
	decimals int
}{
	{func(s *Station) Number { return s.Mach }, 4},
	{func(s *Station) Number { return s.FlowAngleDeg }, 3},
	{func(s *Station) Number { return s.WaveAngleDeg }, 3},
	{func(s *Station) Number { return s.WaveAngleAbsoluteDeg }, 3},
	{func(s *Station) Number { return s.NormalMach }, 4},
	{func(s *Station) Number { return s.StaticPressureRatio }, 4},
	{func(s *Station) Number { return s.StaticTemperatureRatio }, 4},
	{func(s *Station) Number { return s.TotalPressureRatio }, 4},
	{func(s *Station) Number { return s.PressureKPa }, 3},
	{func(s *Station) Number { return s.TemperatureK }, 2},
}

func pointLine(point *Point) string {
	text := fmt.Sprintf("%s: Mach %s", point.Name, plain(float64(point.Mach)))
	if point.IncidenceDeg != 0 {
		text += fmt.Sprintf(", incidence %s deg", plain(float64(point.IncidenceDeg)))
	}
	return text + fmt.Sprintf(", %s kPa, %s K, %s", plain(float64(point.PressureKPa)), plain(float64(point.TemperatureK)), point.Status)
}

// quantityGroups gives the name of the quantity at which a group starts, in the
// order of the catalogue.
var quantityGroups = map[string]string{
	"recovery":                   "compression",
	"ramp_attachment_margin_deg": "margins",
	"capture":                    "captured stream and drag",
	"self_start_limit":           "starting",
	"standard_recovery":          "free stream and standard",
	"total_turning_deg":          "geometry",
}

// quantities writes every quantity: of the flight points as columns, of the
// geometry alone, and why values are missing.
func (p *page) quantities(list []reading, points []Point) {
	p.heading("Quantities")
	for len(points) > 0 {
		abreast := len(points)
		for abreast > 1 && !quantityTable(list, points[:abreast]).fits(p) {
			abreast--
		}
		p.table(quantityTable(list, points[:abreast]))
		points = points[abreast:]
		p.WriteByte('\n')
	}
	geometry := at(list, problems.Geometry)
	t := &table{columns: []column{{head: "geometry"}, {}, {left: true}}}
	for _, r := range geometry {
		t.add(r.name, significant(r.value), r.member)
	}
	p.table(t)
	p.reasons(list)
}

// widestName is the most of a flight point's name at the head of a column.
const widestName = 14

func shorten(name string) string {
	if len(name) <= widestName {
		return name
	}
	return name[:widestName-2] + ".."
}

// quantityTable has one column a flight point.
func quantityTable(list []reading, points []Point) *table {
	t := &table{columns: []column{{}}}
	for i := range points {
		t.columns = append(t.columns, column{head: shorten(points[i].Name)})
	}
	for _, r := range at(list, points[0].Name) {
		if group, starts := quantityGroups[r.name]; starts {
			t.section(group)
		}
		row := []string{r.name}
		for i := range points {
			row = append(row, significant(find(list, r.name, points[i].Name).value))
		}
		t.add(row...)
	}
	return t
}

// reasons writes why values are missing, one line a reason and point.
func (p *page) reasons(list []reading) {
	var names grouped
	for _, r := range list {
		if math.IsNaN(r.value) {
			names.add(fmt.Sprintf("%s, %s", r.point, reasonText(r.reason)), r.name)
		}
	}
	if names.keys != nil {
		p.WriteString("\n" + indent + "no value (" + none + ")\n")
	}
	for _, key := range names.keys {
		p.wrap(indent, key+": "+strings.Join(names.items[key], ", "), indent+indent)
	}
}
