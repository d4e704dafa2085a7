package report

import (
	"bytes"
	"cmp"
	"html/template"
	"io"
	"math"
	"slices"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
	"rampwright/problems"
)

// drawn is a picture written into the page, or the reason why it is not there.
func drawn(write func(w io.Writer) error) template.HTML {
	var b bytes.Buffer
	if err := write(&b); err != nil {
		return template.HTML("<p>" + template.HTMLEscapeString("Not drawn: "+err.Error()) + "</p>")
	}
	return template.HTML(b.String())
}

// fromThePast says what a folder without review.json lacks.
const fromThePast = "The folder holds no review.json, which this part is made of: design the brief again to have it."

func (r *result) sideViewSection() chapter {
	s := chapter{ID: "side-view", Head: "Side view"}
	if r.sideView == nil {
		if r.Inlet != nil {
			s.say(words("The contour does not close; there is nothing to draw."))
		}
		return s
	}
	s.figures(false, htmlFigure{Picture: foreign("inlet", r.sideView), Caption: []cell{words(
		"The inlet to scale at the design point, lengths in metres: shocks, the streamline that meets the lip, and where each station lies.")}})
	return s
}

// marginSection shows every limit that the design or the brief asks for as a bar;
// of a group the member with the least margin, of the model's own those that bind.
func (r *result) marginSection() chapter {
	s := chapter{ID: "margins", Head: "Margins"}
	shown, quiet := r.shownLimits()
	t := &htmlTable{Head: append(columnHeads(3, "limit", "member", "at", "at least", "at most", "value", "margin", "price", "price holds for"), words("then"), cell{Bar: drawn(chart.WriteMarginScale)}, words("standing"))}
	for _, i := range shown {
		t.Rows = append(t.Rows, r.marginRow(i))
	}
	s.table(t)
	if quiet > 0 {
		s.say(words("Limits of the model itself that hold as well are left out."))
	}
	if len(shown) == 0 {
		s.say(words("Nothing is asked beyond the search box."))
		return s
	}
	s.say(words("Margins are in the unit of the quantity, positive inside. The price is what the aim gains for each unit by which a limit is loosened; only a limit the design stands on has one. It tells the gain to a tenth while the limit is loosened by no more than it holds for; then what stands beside it takes over, or the price itself changes."))
	return s
}

// shownLimits chooses and orders the rows: unmet, active, then by margin.
func (r *result) shownLimits() (shown []int, quiet int) {
	limits := r.Best.Limits
	least := map[[3]string]int{} // the row shown of a group that does not bind
	for i := range limits {
		l := &limits[i]
		binds := !l.Met || l.Active
		key := [3]string{l.Quantity, l.At, l.Kind}
		other, seen := least[key]
		switch {
		case !finite(float64(l.Low)) && !finite(float64(l.High)):
		case l.Kind == problems.Hard.String() && !binds:
			quiet++
		case binds:
			shown = append(shown, i)
		case !seen:
			least[key] = len(shown)
			shown = append(shown, i)
		case l.share() < limits[shown[other]].share() || !finite(float64(limits[shown[other]].Margin)):
			shown[other] = i
		}
	}
	urgency := func(i int) int {
		switch l := &limits[i]; {
		case !l.Met:
			return 0
		case l.Active:
			return 1
		case finite(float64(l.Margin)):
			return 2
		}
		return 3
	}
	slices.SortStableFunc(shown, func(a, b int) int {
		if order := cmp.Compare(urgency(a), urgency(b)); order != 0 {
			return order
		}
		return cmp.Compare(limits[a].share(), limits[b].share())
	})
	return shown, quiet
}

func (r *result) marginRow(i int) []cell {
	l := &r.Best.Limits[i]
	at := func(key string) []any { return []any{"best", "limits", i, key} }
	bar := chart.MarginBar{Name: responseTitle(l.Quantity, l.Member, l.At), Share: l.share()}
	price, reach, end := cell{Text: none, Number: true}, cell{Text: none, Number: true}, words("")
	if l.Active {
		price = number(l.Price, "result", at("price")...)
	}
	if l.PriceEnd != nil {
		reach, end = number(l.PriceRange, "result", at("price_range")...), quoted(*l.PriceEnd, "result", at("price_end")...)
	}
	return []cell{
		quoted(l.Quantity, "result", at("quantity")...), quoted(l.Member, "result", at("member")...), quoted(l.At, "result", at("at")...),
		number(l.Low, "result", at("low")...), number(l.High, "result", at("high")...),
		number(l.Value, "result", at("value")...), number(l.Margin, "result", at("margin")...),
		price, reach, end, {Bar: drawn(func(w io.Writer) error { return chart.WriteMarginBar(w, bar) })}, r.standing(i, bar),
	}
}

// standing says in words how a limit stands.
func (r *result) standing(i int, bar chart.MarginBar) cell {
	if why, ok := r.Best.Limits[i].Missing.Get("value"); ok {
		return quoted(why, "result", "best", "limits", i, "missing", "value")
	}
	return words("%s", bar.Verdict())
}

// stationSection tables the uniform states at every point.
func (r *result) stationSection() chapter {
	s := chapter{ID: "stations", Head: "Stations"}
	for i := range r.Points {
		p := &r.Points[i]
		at := func(key ...any) []any { return append([]any{"points", i}, key...) }
		t := &htmlTable{
			Caption: []cell{
				quoted(p.Name, "result", at("name")...), words(": Mach "), number(p.Mach, "result", at("mach")...),
				words(", incidence "), number(p.IncidenceDeg, "result", at("incidence_deg")...), words(" deg, "),
				quoted(p.Status, "result", at("status")...),
			},
			Head: columnHeads(1, "station", "Mach", "flow angle, deg", "wave to the flow, deg", "wave to the axis, deg", "normal Mach",
				"p/p free stream", "T/T free stream", "pt/pt free stream", "p, kPa", "T, K"),
		}
		for k := range p.Stations {
			st := &p.Stations[k]
			row := []cell{quoted(st.Name, "result", at("stations", k, "name")...)}
			for _, c := range []struct {
				key   string
				value Number
			}{
				{"mach", st.Mach}, {"flow_angle_deg", st.FlowAngleDeg}, {"wave_angle_deg", st.WaveAngleDeg},
				{"wave_angle_absolute_deg", st.WaveAngleAbsoluteDeg}, {"normal_mach", st.NormalMach},
				{"static_pressure_ratio", st.StaticPressureRatio}, {"static_temperature_ratio", st.StaticTemperatureRatio},
				{"total_pressure_ratio", st.TotalPressureRatio}, {"pressure_kPa", st.PressureKPa}, {"temperature_K", st.TemperatureK},
			} {
				row = append(row, number(c.value, "result", at("stations", k, c.key)...))
			}
			t.Rows = append(t.Rows, row)
		}
		s.table(t)
	}
	return s
}

// quantitySection tables every exact quantity: those of the flow with a column a
// point, those of the geometry by themselves.
func (r *result) quantitySection() chapter {
	s := chapter{ID: "quantities", Head: "Quantities, exact"}
	var points []string
	for _, p := range r.Best.Exact {
		if p.Name == problems.Geometry {
			continue
		}
		points = append(points, p.Name)
	}
	add := func(points []string) {
		if len(points) == 0 {
			return
		}
		t := &htmlTable{Head: heads("quantity")}
		for _, p := range points {
			t.Head = append(t.Head, cell{Text: p, Number: true})
		}
		first, _ := r.Best.Exact.Get(points[0])
		for _, q := range first {
			row := heads(q.Name)
			for _, p := range points {
				here, _ := r.Best.Exact.Get(p)
				value, _ := here.Get(q.Name)
				row = append(row, number(value, "result", "best", "exact", p, q.Name))
			}
			t.Rows = append(t.Rows, row)
		}
		s.table(t)
	}
	add(points)
	if _, ok := r.Best.Exact.Get(problems.Geometry); ok {
		add([]string{problems.Geometry})
	}
	if text := searchedTrace(r.Best.Traced); text != "" {
		s.say(words("%s", text))
	}
	s.list(r.missingReasons())
	return s
}

// missingReasons tells why values are missing, each reason once a point.
func (r *result) missingReasons() [][]cell {
	var items [][]cell
	for _, p := range r.Best.Missing {
		told := map[string]int{}
		for _, f := range p.Value {
			if strings.Contains(f.Name, "/") {
				continue // a member: its group has the reason
			}
			if k, ok := told[f.Value]; ok {
				items[k] = append(items[k], words(", %s", f.Name))
				continue
			}
			told[f.Value] = len(items)
			items = append(items, []cell{
				words("No value at %s: ", p.Name), quoted(f.Value, "result", "best", "missing", p.Name, f.Name), words(": %s", f.Name),
			})
		}
	}
	return items
}

// agreementSection sets surrogates against the exact model: at the design, and at
// every sample left out in turn.
func (r *result) agreementSection() chapter {
	s := chapter{ID: "agreement", Head: "Surrogate against exact"}
	t := &htmlTable{Caption: heads("At the design, before its exact evaluation joined the samples"), Head: columnHeads(2, "quantity", "at", "predicted", "exact", "error")}
	t.Rows = append(t.Rows, []cell{
		words("aim"), words("%s", none), number(r.Best.Aim.Predicted, "result", "best", "aim", "predicted"), number(r.Best.Aim.Exact, "result", "best", "aim", "exact"), {Text: none, Number: true},
	})
	for _, p := range r.Best.Predicted {
		exact, _ := r.Best.Exact.Get(p.Name)
		errors, _ := r.Best.Error.Get(p.Name)
		for _, q := range p.Value {
			value, _ := exact.Get(q.Name)
			off, _ := errors.Get(q.Name)
			t.Rows = append(t.Rows, []cell{
				words("%s", q.Name), words("%s", p.Name), number(q.Value, "result", "best", "predicted", p.Name, q.Name),
				number(value, "result", "best", "exact", p.Name, q.Name), number(off, "result", "best", "error", p.Name, q.Name),
			})
		}
	}
	s.table(t)
	if r.review != nil {
		s.figures(true, r.parityFigures()...)
	} else {
		s.say(words(fromThePast))
	}
	s.table(r.fitTable())
	return s
}

// mostParities bounds the parity pictures; the table tells of every surrogate.
const mostParities = 6

// parityFigures draws the surrogates of what matters most: of limits the design
// stands on and of the aim, then those least certain.
func (r *result) parityFigures() []htmlFigure {
	list := slices.Clone(r.review.Parity)
	rank := func(p *Parity) int {
		if strings.Contains(r.Best.Aim.Text, p.Quantity) {
			return 0
		}
		for _, l := range r.Best.Limits {
			if l.Active && l.Quantity == p.Quantity && l.At == p.At && l.Member == p.Member {
				return 1
			}
		}
		return 2
	}
	slices.SortStableFunc(list, func(a, b Parity) int {
		if order := cmp.Compare(rank(&a), rank(&b)); order != 0 {
			return order
		}
		return cmp.Compare(r.q2(&a), r.q2(&b))
	})
	var figures []htmlFigure
	for _, p := range list[:min(len(list), mostParities)] {
		c := chart.ParityChart{
			Title: responseTitle(p.Quantity, p.Member, p.At), Label: withUnit(p.Quantity, p.Unit),
			Note: "bars: two-sided intervals of 95 %",
		}
		for i := range p.Exact {
			c.Points = append(c.Points, chart.ParityPoint{
				Exact: float64(p.Exact[i]), Predicted: float64(p.Predicted[i]), Reach: normal95 * float64(p.Deviation[i]),
			})
		}
		figures = append(figures, htmlFigure{Picture: drawn(func(w io.Writer) error { return chart.WriteParityChart(w, c) })})
	}
	return figures
}

// normal95 is the two-sided 95 % point of the normal distribution.
const normal95 = 1.96

func (r *result) q2(p *Parity) float64 {
	for _, f := range r.Fits {
		if f.Quantity == p.Quantity && f.Member == p.Member && f.At == p.At {
			return float64(f.Q2)
		}
	}
	return math.Inf(1)
}

func responseTitle(quantity, member, at string) string {
	title := quantity
	if member != "" {
		title += " (" + member + ")"
	}
	if at != problems.Geometry {
		title += " at " + at
	}
	return title
}

// fitTable lists every surrogate with its figures.
func (r *result) fitTable() *htmlTable {
	t := &htmlTable{
		Caption: heads("By leaving out each sample in turn"),
		Head:    columnHeads(6, "quantity", "member", "at", "kind", "transform", "structure", "samples", "Q2", "root mean square error, in its unit"),
	}
	for i, f := range r.Fits {
		at := func(key string) []any { return []any{"fits", i, key} }
		row := []cell{quoted(f.Quantity, "result", at("quantity")...), quoted(f.Member, "result", at("member")...), quoted(f.At, "result", at("at")...)}
		if f.Error != "" {
			row = append(row, words("none"), words(""), quoted(f.Error, "result", at("error")...))
		} else {
			row = append(row, quoted(f.Kind, "result", at("kind")...), quoted(f.Transform, "result", at("transform")...), quoted(f.Description, "result", at("description")...))
		}
		t.Rows = append(t.Rows, append(row, countCell(int64(f.Samples), "result", at("samples")...), number(f.Q2, "result", at("q2")...), number(f.RMSE, "result", at("rmse")...)))
	}
	return t
}
