package main

import (
	"math"
	"slices"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/constraints"
	"rampwright/optimize/robust"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// spreadStudy turns a study of tolerances into plain data.
func (s *study) spreadStudy(r *robust.Study, built *inlet.Built, x []float64, flow *inlet.Flow) report.SpreadStudy {
	out := report.SpreadStudy{
		Problem: s.problem, Flow: flow, X: x, Draws: r.Settings.Draws,
		Joint: share(r.Joint), JointFitted: share(r.FittedJoint),
		Evaluations: report.SpreadCosts{
			Draws: r.Settings.Draws, Sensitivity: r.Settings.Replaced * len(r.Scatter), Samples: r.Settings.Samples,
		},
	}
	for _, in := range r.Scatter {
		out.Inputs = append(out.Inputs, report.SpreadInput{Name: in.Name, Unit: in.Unit, Deviation: report.Number(in.Deviation)})
	}
	s.spreadQuantities(&out, r)
	s.spreadLimits(&out, r)
	s.spreadInside(&out, r, built)
	s.spreadReasons(&out, r)
	for i := range r.Fits {
		out.Fits = append(out.Fits, s.spreadFit(&r.Fits[i]))
	}
	return out
}

func share(p robust.Probability) report.SpreadShare {
	return report.SpreadShare{Share: report.Number(p.Pass), Error: report.Number(p.Error)}
}

// spreadQuantities lists every response by the exact model, and by surrogates where
// it has them, with its sensitivity.
func (s *study) spreadQuantities(out *report.SpreadStudy, r *robust.Study) {
	aimed := map[int]bool{}
	for _, i := range s.aimed() {
		aimed[i] = true
	}
	for i := range r.Responses {
		response := &r.Responses[i]
		for _, member := range response.Members {
			if aimed[member] {
				out.Judged = append(out.Judged, response.Name+"@"+response.Point)
				break
			}
		}
		nominal := response.Value(r.Nominal)
		row := func(route string, v *robust.Summary) {
			out.Quantities = append(out.Quantities, report.SpreadQuantity{
				Quantity: response.Name, At: response.Point, Unit: response.Unit, Route: route, Nominal: report.Number(nominal),
				Mean: report.Number(v.Mean), Deviation: report.Number(v.Deviation), MeanError: report.Number(v.MeanError), DeviationError: report.Number(v.DeviationError),
				P05: report.Number(v.P05), P50: report.Number(v.P50), P95: report.Number(v.P95),
				Affected: r.Exact[i].Affected, Unanswered: v.Unanswered, NotApplicable: v.NotApplicable,
			})
		}
		row(report.SpreadExact, &r.Exact[i])
		if r.HasFit(i) {
			row(report.SpreadSurrogate, &r.Fitted[i])
		}
		for j, index := range r.Sensitivity[i] {
			if !r.Exact[i].Affected {
				continue
			}
			out.Sensitivity = append(out.Sensitivity, report.SpreadIndex{
				Quantity: response.Name, At: response.Point, Input: r.Scatter[j].Name,
				FirstOrder: report.Number(index.FirstOrder), FirstOrderError: report.Number(index.FirstOrderError),
				Total: report.Number(index.Total), TotalError: report.Number(index.TotalError),
			})
		}
	}
}

// spreadLimits lists the limits. Those of the model are left out where a limit on
// the same quantity asks for more, and only counted where they hold in every draw.
func (s *study) spreadLimits(out *report.SpreadStudy, r *robust.Study) {
	for i := range r.Limits {
		p := &r.Limits[i]
		if p.Limit.Kind == problems.Hard {
			if p.Pass == 1 {
				out.Quiet++
			}
			if p.Pass == 1 || outdone(p.Limit, r.Limits) {
				continue
			}
		}
		out.Judged = append(out.Judged, p.Limit.Quantity+"@"+p.Limit.Point)
		l := report.SpreadLimit{
			Quantity: p.Limit.Quantity, At: p.Limit.Point, Kind: p.Limit.Kind.String(), Nominal: report.Number(r.NominalMargins[i]),
			Active: active(p.Limit, r.NominalMargins[i]), Affected: p.Affected, Probability: report.Number(p.Pass), Error: report.Number(p.Error),
			Surrogate: report.Number(r.FittedLimits[i].Pass), Unanswered: p.Unanswered, Reliability: report.Number(math.NaN()),
			Margin: band(&r.Margins[i]), Fitted: band(&r.FittedMargins[i]),
		}
		if r.FittedMargins[i].Draws == 0 {
			l.Surrogate = report.Number(math.NaN())
		}
		if r.Reliability[i] != nil {
			l.Reliability = report.Number(r.Reliability[i].Beta)
		}
		l.Bounds(p.Limit.Low, p.Limit.High)
		out.Limits = append(out.Limits, l)
	}
}

// outdone reports whether a limit that is not of the model asks as much.
func outdone(l problems.Limit, all []robust.Probability) bool {
	return slices.ContainsFunc(all, func(p robust.Probability) bool {
		o := p.Limit
		return o.Kind != problems.Hard && o.Quantity == l.Quantity && o.Point == l.Point && o.Low >= l.Low && o.High <= l.High
	})
}

// active reports whether a limit is met without margin as drawn.
func active(l problems.Limit, margin float64) bool {
	scale := 1.0
	for _, bound := range []float64{l.Low, l.High} {
		if !math.IsInf(bound, 0) {
			scale = math.Max(scale, math.Abs(bound))
		}
	}
	return math.Abs(margin) <= constraints.ActiveMargin*scale
}

func band(v *robust.Summary) report.SpreadBand {
	return report.SpreadBand{P05: report.Number(v.P05), P50: report.Number(v.P50), P95: report.Number(v.P95), Deviation: report.Number(v.Deviation)}
}

// onTheLip is how far, in capture heights, a shock may fall inside the lip and still
// count as on it.
const onTheLip = 1e-9

// spreadInside tells, for each flight point, how many draws have a shock inside the
// lip: run straight, and traced; of a given outline both as traced.
func (s *study) spreadInside(out *report.SpreadStudy, r *robust.Study, built *inlet.Built) {
	clearance := make([]float64, len(s.brief.Flight))
	offsets := make([]float64, len(r.Scatter))
	inside := make([]int, len(clearance))
	for _, deviates := range r.Draws.Deviates {
		for j, in := range r.Scatter {
			offsets[j] = deviates[j] * in.Deviation
		}
		built.StraightClearance(out.X, offsets, clearance)
		for i, c := range clearance {
			if c < -onTheLip {
				inside[i]++
			}
		}
	}
	for i, n := range inside {
		point := report.SpreadPoint{At: s.brief.Flight[i].Name, SpreadShare: share(robust.NewProbability(n, r.Settings.Draws)), Traced: report.Number(math.NaN())}
		if clear := response(r, "lip_clearance", point.At); clear != nil {
			traced := r.Share(func(values []float64) bool { return clear.Value(values) < -onTheLip })
			point.Traced = report.Number(traced.Pass)
			if s.problem.Definition().Outline != nil {
				point.SpreadShare = share(traced)
			}
		}
		out.Inside = append(out.Inside, point)
	}
}

// spreadReasons tells, for each flight point, why draws have no flow as far as the
// throat.
func (s *study) spreadReasons(out *report.SpreadStudy, r *robust.Study) {
	for i := range s.brief.Flight {
		point := s.brief.Flight[i].Name
		if throat := response(r, "recovery", point); throat != nil {
			for _, reason := range r.Draws.Missing[throat.Members[0]] {
				out.Reasons = append(out.Reasons, report.SpreadReason{At: point, Reason: reason.Text, Draws: reason.Draws})
			}
		}
	}
}

// response finds a quantity at a point, nil where there is none.
func response(r *robust.Study, name, point string) *robust.Response {
	for i := range r.Responses {
		if r.Responses[i].Name == name && r.Responses[i].Point == point {
			return &r.Responses[i]
		}
	}
	return nil
}

func (s *study) spreadFit(f *robust.Fit) report.SpreadFit {
	q := s.model.Quantities()[f.Quantity]
	out := report.SpreadFit{Quantity: q.Name, Member: q.Member, At: q.Point, Samples: f.Samples, Q2: report.Number(math.NaN()), RMSE: report.Number(math.NaN())}
	if f.Err != nil {
		out.Error = f.Err.Error()
		return out
	}
	out.Kind, out.Q2, out.RMSE = f.Choice.Kind, report.Number(f.Choice.Quality.Q2), report.Number(f.Choice.Quality.RMSE)
	return out
}
