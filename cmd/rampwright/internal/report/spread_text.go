package report

import (
	"fmt"
	"io"
	"math"
	"slices"

	"rampwright/cmd/rampwright/internal/chart"
)

// Text returns the document for a terminal of that width.
func (d *SpreadDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.cautions(d.Cautions)
	p.heading("Tolerances")
	p.wrap("", d.answer(), "")
	p.WriteByte('\n')
	d.inputs(p)
	d.limits(p)
	d.quantities(p)
	d.sensitivity(p)
	d.reasons(p)
	d.surrogates(p)
	p.WriteByte('\n')
	p.wrap("", d.GeometryAsBuilt, "")
	p.assumptions(d.Assumptions)
	return p.String()
}

// answer is the result in one sentence.
func (d *SpreadDocument) answer() string {
	return fmt.Sprintf("Of %d inlets built to this drawing and flown, %s %% (standard error %s) hold every limit; the surrogates say %s %%.",
		d.study.Draws, sharePercent(d.PassProbability), percentError(d.PassError), sharePercent(d.SurrogatePass))
}

func percentError(v Number) string { return fixed([]float64{100 * float64(v)}, 2)[0] }

func (d *SpreadDocument) inputs(p *page) {
	t := &table{columns: []column{{head: "input"}, {head: "standard\ndeviation"}, {head: "", left: true}}}
	for _, in := range d.Inputs {
		t.add(in.Name, plain(float64(in.Deviation)), in.Unit)
	}
	p.table(t)
	p.WriteByte('\n')
	p.wrap("", fmt.Sprintf("Normal, independent, truncated at %d standard deviations.", d.TruncatedAt), "")
}

// limits writes how often each limit holds, the rarest of each point first.
func (d *SpreadDocument) limits(p *page) {
	p.heading("How often each limit holds, per cent")
	t := &table{columns: []column{{head: "limit"}, {head: "bound"}, {head: "margin\nas drawn", drop: 1}, {head: "exact"}, {head: "error", drop: 2}, {head: "surrogate"}}}
	for _, point := range d.points() {
		t.section(point)
		for _, l := range d.sorted(point) {
			cells := []string{l.Quantity, bounds(l.low, l.high), l.nominalText(), sharePercent(l.Probability), percentError(l.Error), sharePercent(l.Surrogate)}
			note := ""
			switch {
			case !l.Affected:
				cells[3], cells[4], cells[5] = "not affected", "", ""
				if l.Probability < 1 {
					note = "and not met"
				}
			case l.Unanswered > 0:
				note = fmt.Sprintf("%d draws without an answer", l.Unanswered)
			}
			t.add(cells...)
			t.annotate(note)
		}
	}
	if len(t.rows) == 0 {
		p.wrap(indent, "none that the draws could break", indent)
		return
	}
	p.table(t)
	if d.study.Quiet > 0 {
		p.WriteByte('\n')
		p.wrap(indent, fmt.Sprintf("%d limits of the model itself hold in every draw.", d.study.Quiet), indent)
	}
}

// nominalText is the margin as drawn.
func (l *SpreadLimit) nominalText() string {
	if l.Active {
		return "0"
	}
	return significant(float64(l.Nominal))
}

// points lists the places of the limits in their order.
func (d *SpreadDocument) points() []string {
	var list []string
	for i := range d.PerLimit {
		if at := d.PerLimit[i].At; !slices.Contains(list, at) {
			list = append(list, at)
		}
	}
	return list
}

// sorted lists the limits of a point, the rarest held first, those that nothing
// moves last.
func (d *SpreadDocument) sorted(point string) []*SpreadLimit {
	var list []*SpreadLimit
	for i := range d.PerLimit {
		if l := &d.PerLimit[i]; point == "" || l.At == point {
			list = append(list, l)
		}
	}
	slices.SortStableFunc(list, func(a, b *SpreadLimit) int {
		switch {
		case a.Affected != b.Affected && a.Affected:
			return -1
		case a.Affected != b.Affected:
			return 1
		case a.Probability != b.Probability && a.Probability < b.Probability:
			return -1
		case a.Probability != b.Probability:
			return 1
		case a.Nominal/a.Margin.Deviation < b.Nominal/b.Margin.Deviation:
			return -1
		}
		return 0
	})
	return list
}

// quantities writes both routes of what aim and limits depend on and draws move.
func (d *SpreadDocument) quantities(p *page) {
	p.heading("Quantities of aim and limits, by the exact model and by surrogates")
	t := &table{columns: []column{{head: "quantity"}, {head: "mean"}, {head: "deviation"}, {head: "p05"}, {head: "p50", drop: 1}, {head: "p95"}}}
	at := ""
	for i := range d.Quantities {
		q := &d.Quantities[i]
		if !q.Affected || !d.study.judged(q.Quantity, q.At) {
			continue
		}
		if q.At != at {
			at = q.At
			t.section(at)
		}
		name := q.Quantity
		if q.Route == SpreadSurrogate {
			name = "  by surrogates"
		}
		t.add(name, significant(float64(q.Mean)), significant(float64(q.Deviation)),
			significant(float64(q.P05)), significant(float64(q.P50)), significant(float64(q.P95)))
	}
	p.table(t)
	p.WriteByte('\n')
	p.wrap(indent, "Surrogates are fitted in the space of the tolerances and judge the same draws. Draws without an answer are left out of the moments. Every quantity is in the JSON document and the CSV table.", indent)
}

// shownIndex is the total index from which an input is shown.
const shownIndex = 0.05

// sensitivity writes the inputs that matter for each quantity of aim and limits.
func (d *SpreadDocument) sensitivity(p *page) {
	p.heading("Sensitivity: share of the variance by input")
	t := &table{columns: []column{{head: "quantity"}, {head: "input", left: true}, {head: "first\norder"}, {head: "error"}, {head: "total"}, {head: "error"}}}
	at := ""
	for i := 0; i < len(d.Sensitivity); {
		end := i
		for end < len(d.Sensitivity) && d.Sensitivity[end].Quantity == d.Sensitivity[i].Quantity && d.Sensitivity[end].At == d.Sensitivity[i].At {
			end++
		}
		list := slices.Clone(d.Sensitivity[i:end])
		i = end
		if !d.study.judged(list[0].Quantity, list[0].At) || !finite(float64(list[0].Total)) {
			continue
		}
		if list[0].At != at {
			at = list[0].At
			t.section(at)
		}
		slices.SortStableFunc(list, func(a, b SpreadIndex) int {
			switch {
			case a.Total > b.Total:
				return -1
			case a.Total < b.Total:
				return 1
			}
			return 0
		})
		for k, s := range list {
			if k > 0 && s.Total < shownIndex {
				break
			}
			name := s.Quantity
			if k > 0 {
				name = ""
			}
			t.add(name, s.Input, hundredths(s.FirstOrder), hundredths(s.FirstOrderError), hundredths(s.Total), hundredths(s.TotalError))
		}
	}
	p.table(t)
	p.WriteByte('\n')
	p.wrap(indent, fmt.Sprintf("%s; inputs with a total below %g are left out. Errors are standard errors.", sentenceCase(d.SensitivityBy), shownIndex), indent)
}

func hundredths(v Number) string { return fixed([]float64{float64(v)}, 2)[0] }

// reasons writes why draws have no answer.
func (d *SpreadDocument) reasons(p *page) {
	if len(d.Unanswered) == 0 {
		return
	}
	p.heading("Draws without a flow as far as the throat")
	t := &table{columns: []column{{head: "at"}, {head: "reason", left: true}, {head: "draws"}, {head: "per cent"}}}
	for _, r := range d.Unanswered {
		t.add(r.At, r.Reason, fmt.Sprint(r.Draws), sharePercent(Number(float64(r.Draws)/float64(d.study.Draws))))
	}
	p.table(t)
}

// surrogates writes the poorest fits: where both routes differ, look here first.
func (d *SpreadDocument) surrogates(p *page) {
	worst := math.Inf(1)
	var poor string
	n := 0
	for i := range d.Fits {
		f := &d.Fits[i]
		if f.Error != "" {
			continue
		}
		n++
		if q2 := float64(f.Q2); q2 < worst {
			worst, poor = q2, aimPhrase(f.Quantity, f.At)
			if f.Member != "" {
				poor += " (" + f.Member + ")"
			}
		}
	}
	if n == 0 {
		return
	}
	p.WriteByte('\n')
	p.wrap("", fmt.Sprintf("%d surrogates, each fitted to up to %d exact samples; the poorest, of %s, explains %.3f of the variance in leave-one-out prediction.",
		n, d.Evaluations.Samples, poor, worst), "")
}

// CSV writes spread.csv: one row a quantity and route, then one a limit.
func (d *SpreadDocument) CSV() []byte {
	rows := [][]string{{"kind", "name", "at", "unit", "route", "nominal", "mean", "standard_deviation", "p05", "p50", "p95", "mean_error", "standard_deviation_error",
		"unanswered", "not_applicable", "low", "high", "probability", "probability_error", "affected"}}
	for i := range d.Quantities {
		q := &d.Quantities[i]
		rows = append(rows, []string{"quantity", q.Quantity, q.At, q.Unit, q.Route, shortest(float64(q.Nominal)), shortest(float64(q.Mean)), shortest(float64(q.Deviation)),
			shortest(float64(q.P05)), shortest(float64(q.P50)), shortest(float64(q.P95)), shortest(float64(q.MeanError)), shortest(float64(q.DeviationError)),
			fmt.Sprint(q.Unanswered), fmt.Sprint(q.NotApplicable), "", "", "", "", fmt.Sprint(q.Affected)})
	}
	for i := range d.PerLimit {
		l := &d.PerLimit[i]
		for _, route := range []struct {
			name string
			band SpreadBand
			p, e Number
		}{{SpreadExact, l.Margin, l.Probability, l.Error}, {SpreadSurrogate, l.Fitted, l.Surrogate, Number(math.NaN())}} {
			rows = append(rows, []string{"margin", l.Quantity, l.At, "", route.name, shortest(float64(l.Nominal)), "", shortest(float64(route.band.Deviation)),
				shortest(float64(route.band.P05)), shortest(float64(route.band.P50)), shortest(float64(route.band.P95)), "", "",
				fmt.Sprint(l.Unanswered), "", shortest(float64(l.Low)), shortest(float64(l.High)), shortest(float64(route.p)), shortest(float64(route.e)), fmt.Sprint(l.Affected)})
		}
	}
	return csvBytes(rows)
}

// widestMargin is where the axis of the picture ends, in standard deviations.
const widestMargin = 6

// mostStrips is how many limits the picture shows, the rarest held first.
const mostStrips = 14

// Picture draws the margins of the limits over the draws.
func (d *SpreadDocument) Picture() ([]byte, error) {
	picture := chart.StripChart{
		Title: d.Title + ": margins of the limits as built and flown", Subtitle: []string{d.answer()},
		XLabel: "margin, in standard deviations of the quantity over the exact draws", Below: "limit broken", Above: "limit held",
		NoteHead: "holds, %", MarkName: "as drawn", BandNames: []string{"exact model, 5 to 95 % with median", "surrogates"},
		Low: -widestMargin / 2, High: widestMargin,
	}
	moved := 0
	for _, l := range d.sorted("") {
		if !l.Affected || !(l.Margin.Deviation > 0) {
			continue
		}
		if moved++; moved > mostStrips {
			continue
		}
		scale := float64(l.Margin.Deviation)
		band := func(b SpreadBand) chart.Band {
			return chart.Band{Low: float64(b.P05) / scale, Middle: float64(b.P50) / scale, High: float64(b.P95) / scale}
		}
		mark := float64(l.Nominal) / scale
		if !finite(mark) { // the limit asks nothing of the design as drawn, only of some draws
			mark = math.NaN()
		}
		picture.Rows = append(picture.Rows, chart.Strip{
			Name: aimPhrase(l.Quantity, l.At) + " " + bounds(l.low, l.high), Note: sharePercent(l.Probability),
			Mark: mark, Bands: []chart.Band{band(l.Margin), band(l.Fitted)},
		})
	}
	if len(picture.Rows) == 0 {
		picture.Rows = []chart.Strip{{Name: "no limit that a tolerance moves", Mark: math.NaN()}}
	}
	if moved > mostStrips {
		picture.Subtitle = append(picture.Subtitle, fmt.Sprintf("The %d limits that hold most rarely, of %d that tolerances move.", mostStrips, moved))
	}
	return chart.Alone(func(w io.Writer) error { return chart.WriteStripChart(w, picture) })
}
