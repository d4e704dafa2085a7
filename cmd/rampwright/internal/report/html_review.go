package report

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"rampwright/constraints"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// Review is what the page shows beyond the result: values that only the fitted
// surrogates and the exact model can give. It is stored beside the result, so
// that the page can be written again from the folder alone.
type Review struct {
	Format    int              `json:"format"`
	Program   string           `json:"program"`
	BriefHash string           `json:"brief_hash"`
	Variables []ReviewVariable `json:"variables"`
	Parity    []Parity         `json:"parity"`
	Maps      []Map            `json:"maps"`
	Pairs     int              `json:"pairs"` // of variables there are; maps show the first of them
	OffDesign *OffDesign       `json:"off_design"`
}

// ReviewVariable is a searched value with its range.
type ReviewVariable struct {
	Name string `json:"name"`
	Unit string `json:"unit"`
	Low  Number `json:"low"`
	High Number `json:"high"`
}

// Parity sets the leave-one-out predictions of one surrogate against the exact
// values at its samples.
type Parity struct {
	Quantity  string   `json:"quantity"`
	Member    string   `json:"member"`
	At        string   `json:"at"`
	Unit      string   `json:"unit"`
	Exact     []Number `json:"exact"`
	Predicted []Number `json:"predicted"`
	Deviation []Number `json:"deviation"`
}

// Map is the aim over two variables, the others as in the best design.
type Map struct {
	X         string   `json:"x"`
	Y         string   `json:"y"`
	Cells     int      `json:"cells"` // along each side; values row by row from the low end of y, at the middle of cells
	Surrogate MapField `json:"surrogate"`
	Exact     MapField `json:"exact"`
}

// MapField is the aim by one model, six digits; Forbidden has a 1 for each cell
// that breaks a limit and a 0 for each that does not.
type MapField struct {
	Aim       []Number `json:"aim"`
	Forbidden string   `json:"forbidden"`
}

// OffDesign is the frozen inlet over Mach number at the incidence of the design
// point.
type OffDesign struct {
	IncidenceDeg Number    `json:"incidence_deg"`
	Traced       bool      `json:"traced,omitempty"` // at every Mach number
	Mach         []Number  `json:"mach"`
	Recovery     []Number  `json:"recovery"`
	Capture      []Number  `json:"capture"`
	Status       []string  `json:"status"`
	Own          []OwnMach `json:"points"` // flight points at that incidence, by index into Mach
}

// OwnMach says that a flight point flies at the Mach number of an index.
type OwnMach struct {
	Name  string `json:"name"`
	Index int    `json:"index"`
}

const (
	mapCells   = 32
	mostMaps   = 6
	sweepSteps = 40
	sameMach   = 1e-9
)

// NewReview evaluates what the page shows, on the model itself: nothing of it
// feeds a search or a ledger.
func NewReview(ctx context.Context, head Head, study Study) (*Review, error) {
	r := &Review{
		Format: format, Program: head.Program, BriefHash: head.BriefHash,
		Variables: []ReviewVariable{}, Parity: study.parities(), Maps: []Map{},
	}
	for _, v := range study.model().Variables() {
		r.Variables = append(r.Variables, ReviewVariable{v.Name, v.Unit, Number(v.Low), Number(v.High)})
	}
	pairs := study.pairs()
	r.Pairs = len(pairs)
	for _, pair := range pairs[:min(len(pairs), mostMaps)] {
		m, err := study.mapOver(ctx, pair)
		if err != nil {
			return nil, err
		}
		r.Maps = append(r.Maps, *m)
	}
	var err error
	r.OffDesign, err = study.offDesign(ctx)
	return r, err
}

// JSON returns the review as indented JSON.
func (r *Review) JSON() []byte { return compact(r) }

// parities tells every fit at its own samples, which need not be all there are.
// The exact values are those the figures of the fit keep: the prediction plus the
// standardised error times its deviation.
func (s *Study) parities() []Parity {
	list := []Parity{}
	for i := range s.Result.Fits {
		f := &s.Result.Fits[i]
		if f.Err != nil || f.Choice.Fitted == nil {
			continue
		}
		q := s.model().Quantities()[f.Quantity]
		p := Parity{Quantity: q.Name, Member: q.Member, At: q.Point, Unit: q.Unit}
		predicted, deviation := f.Choice.LeaveOneOut(), f.Choice.LeaveOneOutDeviation()
		for k, standardised := range f.Choice.Quality.Standardised {
			exact := predicted[k] + standardised*deviation[k]
			if !finite(exact) || !finite(deviation[k]) {
				continue // an error without a deviation: the figures do not keep its size
			}
			p.Exact = append(p.Exact, Number(exact))
			p.Predicted = append(p.Predicted, Number(predicted[k]))
			p.Deviation = append(p.Deviation, Number(deviation[k]))
		}
		if p.Exact != nil {
			list = append(list, p)
		}
	}
	return list
}

// pairs lists the pairs of variables worth a map: of ramp angles where there are
// two, else of whatever is searched.
func (s *Study) pairs() [][2]int {
	var ramps, all []int
	for i, v := range s.model().Variables() {
		all = append(all, i)
		if strings.HasPrefix(v.Name, "ramp_") {
			ramps = append(ramps, i)
		}
	}
	if len(ramps) < 2 {
		ramps = all
	}
	var list [][2]int
	for k, i := range ramps {
		for _, j := range ramps[k+1:] {
			list = append(list, [2]int{i, j})
		}
	}
	return list
}

// mapOver evaluates aim and limits over two variables by both models.
func (s *Study) mapOver(ctx context.Context, pair [2]int) (*Map, error) {
	variables, quantities := s.model().Variables(), s.model().Quantities()
	x := slices.Clone(s.Result.Best.X)
	exact := problems.NewEvaluation(len(quantities))
	foreseen := s.newForesight()
	aim := newAimReader(quantities, s.Aim)
	m := &Map{X: variables[pair[0]].Name, Y: variables[pair[1]].Name, Cells: mapCells}
	for row := range mapCells {
		for column := range mapCells {
			for k, cell := range [2]int{column, row} {
				v := variables[pair[k]]
				x[pair[k]] = v.Low + (float64(cell)+0.5)/mapCells*(v.High-v.Low)
			}
			if err := s.model().Evaluate(ctx, x, exact); err != nil {
				return nil, err
			}
			m.Exact.add(aim.value(exact.Values), constraints.Assess(s.Result.Rows, exact).Feasible)
			predicted := foreseen.at(x)
			m.Surrogate.add(aim.value(predicted.Values), constraints.Assess(s.Result.Rows, predicted).Feasible)
		}
	}
	return m, nil
}

func (f *MapField) add(aim float64, allowed bool) {
	f.Aim = append(f.Aim, sixDigits(aim))
	mark := "1"
	if allowed {
		mark = "0"
	}
	f.Forbidden += mark
}

// sixDigits rounds to what a colour can show.
func sixDigits(v float64) Number {
	if !finite(v) {
		return Number(math.NaN())
	}
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 6, 64), 64)
	if err != nil {
		return Number(v) // a number just below the largest, rounded up
	}
	return Number(rounded)
}

// foresight predicts every quantity that has a surrogate, and computes those of
// the geometry; the others do not apply, so that their limits ask nothing.
type foresight struct {
	study    *Study
	explicit problems.Explicit // nil where the problem has none
	u        []float64
	e        *problems.Evaluation
}

var errNoSurrogate = &problems.NotApplicable{Why: "it has no surrogate"}

func (s *Study) newForesight() *foresight {
	f := &foresight{study: s, u: make([]float64, len(s.model().Variables())), e: problems.NewEvaluation(len(s.model().Quantities()))}
	f.explicit, _ = s.model().(problems.Explicit)
	return f
}

// at predicts at x; the evaluation is overwritten by the next call.
func (f *foresight) at(x []float64) *problems.Evaluation {
	for i := range f.e.Values {
		f.e.Miss(i, errNoSurrogate)
	}
	if f.explicit != nil {
		f.explicit.EvaluateExplicit(x, f.e)
	}
	for i, v := range f.study.model().Variables() {
		f.u[i] = (x[i] - v.Low) / (v.High - v.Low)
	}
	for i := range f.study.Result.Fits {
		fit := &f.study.Result.Fits[i]
		if fit.Err == nil && fit.Choice.Fitted != nil {
			f.e.Set(fit.Quantity, fit.Choice.Mean(f.u))
		}
	}
	return f.e
}

// aimReader evaluates an aim over a vector of quantities.
type aimReader struct {
	aim     problems.Aim
	members [][][]int // by part and read: the members whose least is read
}

func newAimReader(quantities []problems.Quantity, aim problems.Aim) *aimReader {
	r := &aimReader{aim: aim}
	for _, part := range aim.Parts {
		var reads [][]int
		for _, read := range part.Reads {
			var members []int
			for i, q := range quantities {
				if q.Name == read.Quantity && q.Point == read.Point && (read.Member == "" || q.Member == read.Member) {
					members = append(members, i)
				}
			}
			reads = append(reads, members)
		}
		r.members = append(r.members, reads)
	}
	return r
}

// value is the aim; NaN where a quantity it reads is missing.
func (r *aimReader) value(values []float64) float64 {
	sum, weights, worst := 0.0, 0.0, math.NaN()
	for i, part := range r.aim.Parts {
		v := r.part(i, values)
		if i == 0 || (v < worst) == r.aim.Highest || math.IsNaN(v) {
			worst = v
		}
		if math.IsNaN(v) && r.aim.Aggregate != problems.Mean {
			return v
		}
		if part.Weight > 0 {
			sum, weights = sum+part.Weight*v, weights+part.Weight
		}
	}
	if r.aim.Aggregate == problems.Mean {
		return sum / weights
	}
	return worst
}

func (r *aimReader) part(i int, values []float64) float64 {
	arguments := make([]float64, len(r.members[i]))
	for k, members := range r.members[i] {
		arguments[k] = math.Inf(1)
		for _, m := range members {
			arguments[k] = math.Min(arguments[k], values[m]) // NaN wins
		}
	}
	if r.aim.Parts[i].Formula == nil {
		return arguments[0]
	}
	return r.aim.Parts[i].Formula(arguments)
}

// offDesign computes the frozen inlet between the lowest and the highest Mach
// number flown, traced at each if the brief asks for a trace at a point; nil for one
// Mach number alone, or no inlet.
func (s *Study) offDesign(ctx context.Context) (*OffDesign, error) {
	if s.Problem == nil || s.Flow == nil || s.Flow.ContourErr != nil {
		return nil, nil
	}
	definition := s.Problem.Definition()
	design, traced := definition.Points[0], definition.Traces()
	var flown []float64
	for _, p := range definition.Points {
		flown = append(flown, p.Mach)
	}
	low, high := slices.Min(flown), slices.Max(flown)
	if low == high {
		return nil, nil
	}
	machs := slices.Clone(flown)
	for k := range sweepSteps + 1 {
		machs = append(machs, low+float64(k)/sweepSteps*(high-low))
	}
	slices.Sort(machs)
	machs = slices.CompactFunc(machs, func(a, b float64) bool { return math.Abs(a-b) < sameMach })
	// The design point goes first: its incidence shapes the contour.
	definition.Points = []inlet.Point{design}
	for i, mach := range machs {
		p := design
		p.Name, p.Mach, p.Traced = fmt.Sprintf("m%d", i), mach, traced
		definition.Points = append(definition.Points, p)
	}
	problem, err := inlet.New(definition)
	if err != nil {
		return nil, err
	}
	flow, err := problem.FlowBy(ctx, s.Result.Best.X, inlet.SearchTrace())
	if err != nil {
		return nil, err
	}
	list := readings(problem.Quantities(), flow.Evaluation)
	out := &OffDesign{IncidenceDeg: Number(degrees(design.Incidence)), Traced: traced, Mach: numbers(machs), Own: []OwnMach{}}
	for i := range machs {
		p := &flow.Points[i+1]
		out.Recovery = append(out.Recovery, Number(find(list, "recovery", p.Point.Name).value))
		out.Capture = append(out.Capture, Number(find(list, "capture", p.Point.Name).value))
		out.Status = append(out.Status, p.Status())
		for _, own := range s.Problem.Definition().Points {
			if math.Abs(own.Mach-machs[i]) < sameMach && own.Incidence == design.Incidence {
				out.Own = append(out.Own, OwnMach{own.Name, i})
			}
		}
	}
	return out, nil
}
