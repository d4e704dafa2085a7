package report

import (
	"bytes"
	"encoding/csv"
	"errors"
	"slices"
	"strconv"
	"strings"

	"rampwright/optimize"
	"rampwright/problems"
)

// Sample is one exact evaluation of a study.
type Sample = optimize.Sample

// SamplesCSV writes samples.csv: one row an evaluation in the order given, under
// the header
//
//	purpose,status,reason,<variable>..,<quantity@point or quantity@point/member>..
//
// Names carry their unit. A missing value is an empty field; status is complete
// where every quantity that applies has a value, else incomplete with the
// reasons. Decimals are the shortest that read back exactly.
func SamplesCSV(problem problems.Problem, samples []Sample) []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	header := []string{"purpose", "status", "reason"}
	for _, v := range problem.Variables() {
		header = append(header, v.Name)
	}
	for _, q := range problem.Quantities() {
		header = append(header, columnName(q))
	}
	rows := [][]string{header}
	for _, s := range samples {
		status, reason := completeness(problem.Quantities(), s.Evaluation)
		row := []string{s.Purpose, status, reason}
		for _, v := range slices.Concat(s.X, s.Evaluation.Values) {
			row = append(row, shortest(v))
		}
		rows = append(rows, row)
	}
	if err := w.WriteAll(rows); err != nil {
		panic("report: memory always takes a row: " + err.Error())
	}
	return b.Bytes()
}

func columnName(q problems.Quantity) string {
	name := q.Name + "@" + q.Point
	if q.Member != "" {
		name += "/" + q.Member
	}
	return name
}

// completeness lists each reason for missing values once, with its first point.
func completeness(quantities []problems.Quantity, e *problems.Evaluation) (status, reason string) {
	var texts, reasons []string
	for i, why := range e.Reasons {
		var notApplicable *problems.NotApplicable
		if finite(e.Values[i]) || errors.As(why, &notApplicable) {
			continue
		}
		if text := reasonText(why); !slices.Contains(texts, text) {
			texts = append(texts, text)
			reasons = append(reasons, quantities[i].Point+": "+text)
		}
	}
	if reasons == nil {
		return "complete", ""
	}
	return "incomplete", strings.Join(reasons, "; ")
}

// shortest writes a number so that it reads back as it was, empty where missing.
func shortest(v float64) string {
	if !finite(v) {
		return ""
	}
	return strconv.FormatFloat(v+0, 'g', -1, 64)
}
