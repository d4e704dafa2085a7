package report

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"

	"rampwright/cmd/rampwright/internal/chart"
)

// Text returns the document for a terminal of that width.
func (d *FitsDocument) Text(width int) string {
	p := newPage(width)
	p.wrap("", d.Title, "")
	p.heading("Advice")
	for _, text := range d.Advice {
		p.wrap("  - ", text, "    ")
	}
	for i := range d.study.Curves {
		d.curveTables(p, i)
	}
	d.momentsTable(p)
	p.heading("How this was measured")
	p.wrap("", d.how(), "")
	return p.String()
}

// how says what was compared.
func (d *FitsDocument) how() string {
	s := &d.Setup
	text := fmt.Sprintf("%d Latin hypercubes for each number of samples in %d inputs, seed %d; every kind, each on the output transform its leave-one-out error prefers, and the choice among all, against exact values at %d fresh random points of the box (intervals at %d of them); %d exact evaluations. Errors are medians over the designs of the median absolute error over the points; the band holds 10 to 90 %% of the designs.",
		s.Designs, len(s.Inputs)+s.InertInputs, d.Seed, s.TestPoints, s.IntervalsOn, d.ModelRuns)
	if by := d.disturbance(); by != "" {
		text += " Added to the problem: " + by + "; the loss compares with the problem alone."
	}
	if d.study.Stopped {
		text += " The study was stopped early: some designs are missing."
	}
	return text
}

// curveTables writes error against samples by kind, then the figures at the
// largest number of samples.
func (d *FitsDocument) curveTables(p *page, curve int) {
	c := &d.study.Curves[curve]
	unit := ""
	if c.Quantity.Unit != "" {
		unit = ", " + c.Quantity.Unit
	}
	p.heading(fmt.Sprintf("Median absolute error of %s%s (spread %s)", responseName(c.Quantity), unit, significant(c.Spread)))
	if c.Missing > 0 {
		p.wrap(indent, fmt.Sprintf("%d test points have no exact value and are left out.", c.Missing), indent)
	}
	kinds := append(slices.Clone(d.Setup.Kinds), "")
	t := &table{columns: []column{{head: "kind \\ samples"}}}
	for _, n := range d.Setup.Counts {
		t.columns = append(t.columns, column{head: fmt.Sprint(n)})
	}
	for _, kind := range kinds {
		row := []string{kindName(kind)}
		for _, n := range d.Setup.Counts {
			row = append(row, errorText(d.row(c, kind, n).MedianAbsError))
		}
		t.add(row...)
	}
	p.table(t)
	p.WriteByte('\n')
	most := d.Setup.Counts[len(d.Setup.Counts)-1]
	t = &table{columns: []column{
		{head: fmt.Sprintf("at %d samples", most)}, {head: "median"}, {head: "band", drop: 1}, {head: "rmse"}, {head: "largest"},
		{head: "Q2"}, {head: "in 95 %"}, {head: "loss"}, {head: "fit s", drop: 2},
	}}
	for _, kind := range kinds {
		r := d.row(c, kind, most)
		t.add(kindName(kind), errorText(r.MedianAbsError), errorText(r.MedianAbsErrorP10)+" .. "+errorText(r.MedianAbsErrorP90),
			errorText(r.RMSE), errorText(r.MaxAbsError), q2Text(r.Q2), percent(r.Coverage), lossText(r.Loss), secondsText(r.FitSeconds))
		if kind == "" {
			t.annotate(takenText(r.Taken))
		}
	}
	if d.study.Plain == nil {
		t.columns = without(t.columns, 7)
		for i := range t.rows {
			t.rows[i] = without(t.rows[i], 7)
		}
	}
	p.table(t)
}

// row finds a row; one that is not there has no figures.
func (d *FitsDocument) row(c *FitsCurve, kind string, samples int) FitsRow {
	for i := range c.Cells {
		if cell := &c.Cells[i]; cell.Kind == kind && cell.Samples == samples {
			for _, r := range d.Rows {
				if r.Quantity == c.Quantity.Name && r.Member == c.Quantity.Member && r.At == c.Quantity.Point &&
					r.Samples == samples && r.Chosen == (kind == "") && (r.Chosen || r.Kind == kind) {
					return r
				}
			}
		}
	}
	none := Number(math.NaN())
	return FitsRow{MedianAbsError: none, MedianAbsErrorP10: none, MedianAbsErrorP90: none, RMSE: none, MaxAbsError: none, Q2: none, Coverage: none, Loss: none, FitSeconds: none}
}

func kindName(kind string) string {
	if kind == "" {
		return FitsChoice
	}
	return kind
}

// numberText writes a finite number in a format, else a dash.
func numberText(n Number, format string, scale float64) string {
	if !finite(float64(n)) {
		return none
	}
	return shortExponent(fmt.Sprintf(format, scale*float64(n)))
}

func errorText(n Number) string   { return numberText(n, "%.1e", 1) }
func percent(n Number) string     { return numberText(n, "%.0f %%", 100) }
func lossText(n Number) string    { return numberText(n, "%.3g", 1) }
func secondsText(n Number) string { return numberText(n, "%.2g", 1) }

// q2Text writes 1 - 1e-7 as such: its zeros are what matters.
func q2Text(n Number) string {
	if rest := 1 - float64(n); rest > 0 && rest < 1e-3 {
		return "1 - " + shortExponent(fmt.Sprintf("%.0e", rest))
	}
	return numberText(n, "%.4f", 1)
}

func takenText(taken Object[int]) string {
	var parts []string
	for _, t := range taken {
		parts = append(parts, fmt.Sprintf("%d %s", t.Value, t.Name))
	}
	return strings.Join(parts, ", ")
}

// momentsTable sets the routes to the moments side by side.
func (d *FitsDocument) momentsTable(p *page) {
	if len(d.Moments) == 0 {
		return
	}
	p.heading("Mean and standard deviation over the box, by route")
	t := &table{columns: []column{
		{head: "route"}, {head: "kind", left: true}, {head: "mean"}, {head: "error"}, {head: "of draws", drop: 1}, {head: "deviation"}, {head: "error"}, {head: "of draws", drop: 2},
	}}
	place := ""
	for i, m := range d.Moments {
		if here := responseName(d.study.Moments[i].Quantity); here != place {
			place = here
			t.section(place)
		}
		t.add(m.Route, m.Kind, significant(float64(m.Mean)), errorText(m.MeanError), errorText(m.MeanSampling),
			significant(float64(m.Deviation)), errorText(m.DeviationError), errorText(m.DeviationSampling))
	}
	p.table(t)
	p.WriteByte('\n')
	p.wrap(indent, d.momentsVerdict(), indent)
}

// momentsVerdict says what limits each route.
func (d *FitsDocument) momentsVerdict() string {
	text := "Medians over the designs at the largest number of samples. The error is the share of the fit, measured on the same draws as the exact model; beside it what so many draws leave by themselves."
	for i, m := range d.Moments {
		if m.Route != BySurrogateDraws || m.Kind != FitsChoice || !finite(float64(m.MeanError)) {
			continue
		}
		limits := "the draws limit the answer, not the fit: take the coefficients where the kind has them, or more draws"
		if m.MeanError > m.MeanSampling {
			limits = "the fit limits the answer, by either route: more samples, not more draws"
		}
		text += fmt.Sprintf(" %s: the fit of the choice moves the mean by %s, the draws leave %s; %s.",
			responseName(d.study.Moments[i].Quantity), errorText(m.MeanError), errorText(m.MeanSampling), limits)
	}
	return text
}

// CSV returns the rows as fits.csv.
func (d *FitsDocument) CSV() []byte {
	rows := [][]string{{
		"quantity", "member", "at", "kind", "chosen", "samples", "designs", "median_abs_error", "median_abs_error_p10",
		"median_abs_error_p90", "abs_error_p10", "abs_error_p90", "rmse", "max_abs_error", "q2", "coverage", "loss", "fit_seconds",
	}}
	for _, r := range d.Rows {
		row := []string{r.Quantity, r.Member, r.At, r.Kind, strconv.FormatBool(r.Chosen), strconv.Itoa(r.Samples), strconv.Itoa(r.Designs)}
		for _, v := range []Number{
			r.MedianAbsError, r.MedianAbsErrorP10, r.MedianAbsErrorP90, r.AbsErrorP10, r.AbsErrorP90,
			r.RMSE, r.MaxAbsError, r.Q2, r.Coverage, r.Loss, r.FitSeconds,
		} {
			row = append(row, shortest(float64(v)))
		}
		rows = append(rows, row)
	}
	var b bytes.Buffer
	if err := csv.NewWriter(&b).WriteAll(rows); err != nil {
		panic("report: writing to memory: " + err.Error())
	}
	return b.Bytes()
}

// Picture returns the learning curves as an SVG drawing.
func (d *FitsDocument) Picture() ([]byte, error) {
	picture := chart.LearningCurves{
		Title: "Learning curves: " + d.Title,
		Subtitle: []string{fmt.Sprintf("Median absolute error at %d fresh points, %d Latin hypercubes for each number of samples; shade and bars hold 10 to 90 %% of the designs.",
			d.Setup.TestPoints, d.Setup.Designs)},
	}
	if by := d.disturbance(); by != "" {
		picture.Subtitle = append(picture.Subtitle, "With "+by+".")
	}
	for i := range d.study.Curves {
		c := &d.study.Curves[i]
		unit := ""
		if c.Quantity.Unit != "" {
			unit = ", " + c.Quantity.Unit
		}
		panel := chart.LearningPanel{
			Title: responseName(c.Quantity), XLabel: "samples", YLabel: "median absolute error" + unit,
			Target: float64(d.Setup.Accuracy) * c.Spread, TargetName: plain(float64(d.Setup.Accuracy)) + " of the spread",
		}
		for _, kind := range append(slices.Clone(d.Setup.Kinds), "") {
			curve := chart.LearningCurve{Name: kindName(kind), Lead: kind == ""}
			for _, at := range c.of(kind) {
				curve.Points = append(curve.Points, chart.LearningPoint{X: float64(at.samples), Low: at.low, Middle: at.median, High: at.high})
			}
			if curve.Points != nil {
				panel.Curves = append(panel.Curves, curve)
			}
		}
		if panel.Curves != nil {
			picture.Panels = append(picture.Panels, panel)
		}
	}
	return chart.Alone(func(w io.Writer) error { return chart.WriteLearningCurves(w, picture) })
}
