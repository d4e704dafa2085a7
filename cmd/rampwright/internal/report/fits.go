package report

import (
	"math"
	"sort"

	"rampwright/problems"
)

// FitsStudy is a finished study of learning curves with everything a document
// tells of it.
type FitsStudy struct {
	Setup  FitsSetup
	Curves []FitsCurve // one a quantity
	// Plain are the same curves without inert inputs and noise, in the same
	// order; nil where there were none to leave out.
	Plain     []FitsCurve
	Moments   []FitsMoments
	ModelRuns int
	Stopped   bool // the time ran out or the user stopped it: some designs are missing
}

// FitsSetup is what a study compared.
type FitsSetup struct {
	Counts      []int    `json:"counts"`
	Designs     int      `json:"designs"` // replicates of each count
	TestPoints  int      `json:"test_points"`
	Kinds       []string `json:"kinds"`
	Inputs      []string `json:"inputs"`
	InertInputs int      `json:"inert_inputs"`
	Noise       Number   `json:"noise"`    // standard deviation added to the samples
	Accuracy    Number   `json:"accuracy"` // error asked for, as a fraction of the spread
	IntervalsOn int      `json:"interval_points"`
}

// FitsCurve is the learning curve of one quantity.
type FitsCurve struct {
	Quantity problems.Quantity
	Spread   float64 // standard deviation of the exact values over the test points
	Missing  int     // test points without an exact value
	Cells    []FitsCell
}

// FitsCell is one kind, or the choice, at one number of samples: one score a
// design that was finished.
type FitsCell struct {
	Kind    string // empty for the choice
	Samples int
	Scores  []FitsScore
}

// FitsScore is one fit against fresh exact values.
type FitsScore struct {
	Err              error // why there is no fit; the figures are then void
	Kind             string
	Median, P10, P90 float64 // quantiles of the absolute error over the test points
	RMSE, Max, Q2    float64
	Inside, Judged   int // test points inside the 95 % interval, of those judged
	Seconds          float64
}

// FitsMoments is mean and standard deviation of a quantity for inputs spread
// evenly over the box, by one route.
type FitsMoments struct {
	Quantity problems.Quantity
	Route    string // one of the routes below
	Kind     string // empty for the exact model; FitsChoice for the choice
	Samples  int
	// Medians over the designs; the errors are medians of the absolute error that
	// the fit makes.
	Mean, Deviation           float64
	MeanError, DeviationError float64
	// What the draws leave: standard errors; NaN where nothing was drawn.
	MeanSampling, DeviationSampling float64
}

// FitsChoice names the choice among the kinds in tables.
const FitsChoice = "choice"

// Routes to the moments.
const (
	ExactDraws       = "exact model, draws"
	PublishedMoments = "exact, published"
	ByCoefficients   = "coefficients"
	BySurrogateDraws = "surrogate, draws"
)

// FitsDocument is a study of learning curves as a document.
type FitsDocument struct {
	Format    int              `json:"format"`
	Program   string           `json:"program"`
	Title     string           `json:"title"`
	Seed      int64            `json:"seed"`
	BriefHash string           `json:"brief_hash"`
	Status    string           `json:"status"` // "done" or "stopped"
	Setup     FitsSetup        `json:"setup"`
	Rows      []FitsRow        `json:"rows"`
	Moments   []FitsMomentsRow `json:"moments"`
	Advice    []string         `json:"advice"`
	ModelRuns int              `json:"model_runs"`

	study FitsStudy
}

// FitsRow is one kind, or the choice, at one number of samples: medians over the
// replicated designs.
type FitsRow struct {
	Quantity string `json:"quantity"`
	Member   string `json:"member"`
	At       string `json:"at"`
	Kind     string `json:"kind"` // of the choice: the kind taken most often
	Chosen   bool   `json:"chosen"`
	Samples  int    `json:"samples"`
	Designs  int    `json:"designs"` // that gave a fit

	MedianAbsError Number `json:"median_abs_error"`
	// The band of the median over the designs, and the band of the error over the
	// test points.
	MedianAbsErrorP10 Number         `json:"median_abs_error_p10"`
	MedianAbsErrorP90 Number         `json:"median_abs_error_p90"`
	AbsErrorP10       Number         `json:"abs_error_p10"`
	AbsErrorP90       Number         `json:"abs_error_p90"`
	RMSE              Number         `json:"rmse"`
	MaxAbsError       Number         `json:"max_abs_error"`
	Q2                Number         `json:"q2"`
	Coverage          Number         `json:"coverage"` // of 95 % intervals, pooled over the designs
	Loss              Number         `json:"loss"`     // median error over that without inert inputs and noise
	FitSeconds        Number         `json:"fit_seconds"`
	Taken             Object[int]    `json:"taken,omitzero"` // of the choice: designs by kind
	Missing           Object[string] `json:"missing,omitzero"`
}

// FitsMomentsRow is one route to the moments.
type FitsMomentsRow struct {
	Quantity          string         `json:"quantity"`
	Member            string         `json:"member"`
	At                string         `json:"at"`
	Route             string         `json:"route"`
	Kind              string         `json:"kind"`
	Samples           int            `json:"samples"`
	Mean              Number         `json:"mean"`
	Deviation         Number         `json:"standard_deviation"`
	MeanError         Number         `json:"mean_abs_error"`
	DeviationError    Number         `json:"standard_deviation_abs_error"`
	MeanSampling      Number         `json:"mean_standard_error"`
	DeviationSampling Number         `json:"standard_deviation_standard_error"`
	Missing           Object[string] `json:"missing,omitzero"`
}

// NewFits describes a finished study.
func NewFits(head Head, study FitsStudy) *FitsDocument {
	d := &FitsDocument{
		Format: format, Program: head.Program, Title: head.Title, Seed: head.Seed, BriefHash: head.BriefHash,
		Status: "done", Setup: study.Setup, Rows: []FitsRow{}, Moments: []FitsMomentsRow{}, Advice: []string{},
		ModelRuns: study.ModelRuns, study: study,
	}
	if study.Stopped {
		d.Status = "stopped"
	}
	for i := range study.Curves {
		for k := range study.Curves[i].Cells {
			row := newFitsRow(study.Curves[i].Quantity, &study.Curves[i].Cells[k])
			if study.Plain != nil {
				plain := summarise(&study.Plain[i].Cells[k])
				row.Loss = Number(ratioOf(float64(row.MedianAbsError), plain.median))
			}
			row.Missing = row.whyMissing(study.Plain != nil, &study.Curves[i].Cells[k])
			d.Rows = append(d.Rows, row)
		}
	}
	for _, m := range study.Moments {
		d.Moments = append(d.Moments, newFitsMomentsRow(m))
	}
	for i := range study.Curves {
		d.Advice = append(d.Advice, d.advise(i)...)
	}
	return d
}

// JSON returns the document as indented JSON.
func (d *FitsDocument) JSON() []byte { return document(d) }

// fitsSummary are the medians of a cell.
type fitsSummary struct {
	designs                 int
	median, low, high       float64
	p10, p90, rmse, max, q2 float64
	coverage, seconds       float64
	taken                   map[string]int
	failure                 error
}

func summarise(c *FitsCell) fitsSummary {
	var sound []FitsScore
	s := fitsSummary{taken: map[string]int{}}
	inside, judged := 0, 0
	for _, score := range c.Scores {
		if score.Err != nil {
			s.failure = score.Err
			continue
		}
		sound = append(sound, score)
		s.taken[score.Kind]++
		inside, judged = inside+score.Inside, judged+score.Judged
	}
	s.designs = len(sound)
	over := func(p float64, of func(FitsScore) float64) float64 {
		values := make([]float64, len(sound))
		for i, score := range sound {
			values[i] = of(score)
		}
		return Quantile(values, p)
	}
	median := func(s FitsScore) float64 { return s.Median }
	s.median, s.low, s.high = over(0.5, median), over(0.1, median), over(0.9, median)
	s.p10 = over(0.5, func(s FitsScore) float64 { return s.P10 })
	s.p90 = over(0.5, func(s FitsScore) float64 { return s.P90 })
	s.rmse = over(0.5, func(s FitsScore) float64 { return s.RMSE })
	s.max = over(0.5, func(s FitsScore) float64 { return s.Max })
	s.q2 = over(0.5, func(s FitsScore) float64 { return s.Q2 })
	s.seconds = over(0.5, func(s FitsScore) float64 { return s.Seconds })
	s.coverage = math.NaN()
	if judged > 0 {
		s.coverage = float64(inside) / float64(judged)
	}
	return s
}

// Quantile returns the p-quantile of the values by linear interpolation between
// order statistics (definition 7 of Hyndman & Fan 1996, from memory), NaN
// without values. It sorts the slice.
func Quantile(values []float64, p float64) float64 {
	if len(values) == 0 {
		return math.NaN()
	}
	sort.Float64s(values)
	place := p * float64(len(values)-1)
	low := min(int(place), len(values)-1)
	high := min(low+1, len(values)-1)
	return values[low] + (place-float64(low))*(values[high]-values[low])
}

func newFitsRow(q problems.Quantity, c *FitsCell) FitsRow {
	s := summarise(c)
	row := FitsRow{
		Quantity: q.Name, Member: q.Member, At: q.Point, Kind: c.Kind, Chosen: c.Kind == "", Samples: c.Samples, Designs: s.designs,
		MedianAbsError: Number(s.median), MedianAbsErrorP10: Number(s.low), MedianAbsErrorP90: Number(s.high),
		AbsErrorP10: Number(s.p10), AbsErrorP90: Number(s.p90), RMSE: Number(s.rmse), MaxAbsError: Number(s.max),
		Q2: Number(s.q2), Coverage: Number(s.coverage), FitSeconds: Number(s.seconds), Loss: Number(math.NaN()),
	}
	if row.Chosen {
		row.Taken = s.byFrequency()
		if len(row.Taken) > 0 {
			row.Kind = row.Taken[0].Name
		}
	}
	return row
}

// byFrequency lists the kinds taken, the most frequent first, then by name.
func (s *fitsSummary) byFrequency() Object[int] {
	var list Object[int]
	for kind, n := range s.taken {
		list = append(list, Field[int]{kind, n})
	}
	sort.Slice(list, func(i, j int) bool {
		if list[i].Value != list[j].Value {
			return list[i].Value > list[j].Value
		}
		return list[i].Name < list[j].Name
	})
	return list
}

// whyMissing gives the reason of every null of a row.
func (r *FitsRow) whyMissing(compared bool, c *FitsCell) Object[string] {
	reason := "no design was finished"
	if failure := summarise(c).failure; failure != nil {
		reason = failure.Error()
	}
	alone := "there is no study without inert inputs and noise to compare with"
	if compared {
		alone = "one of the two errors is missing or zero"
	}
	return whyNull(
		nullable{"median_abs_error", float64(r.MedianAbsError), reason},
		nullable{"q2", float64(r.Q2), reason},
		nullable{"coverage", float64(r.Coverage), reason},
		nullable{"loss", float64(r.Loss), alone})
}

func newFitsMomentsRow(m FitsMoments) FitsMomentsRow {
	row := FitsMomentsRow{
		Quantity: m.Quantity.Name, Member: m.Quantity.Member, At: m.Quantity.Point, Route: m.Route, Kind: m.Kind, Samples: m.Samples,
		Mean: Number(m.Mean), Deviation: Number(m.Deviation), MeanError: Number(m.MeanError), DeviationError: Number(m.DeviationError),
		MeanSampling: Number(m.MeanSampling), DeviationSampling: Number(m.DeviationSampling),
	}
	row.Missing = whyNull(
		nullable{"mean", m.Mean, "no fit of this kind"},
		nullable{"mean_abs_error", m.MeanError, "the exact model has no fit"},
		nullable{"mean_standard_error", m.MeanSampling, "nothing was drawn"})
	return row
}

// ratioOf returns a/b, NaN where it means nothing.
func ratioOf(a, b float64) float64 {
	if !(b > 0) || !finite(a) || !finite(b) {
		return math.NaN()
	}
	return a / b
}
