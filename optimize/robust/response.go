package robust

import (
	"math"

	"rampwright/problems"
)

// Response is one quantity at one point as tables show it: alone, or the least
// member of a group.
type Response struct {
	Name    string
	Point   string
	Unit    string
	Members []int // in the problem's quantities
}

// Responses lists the quantities with the members of each group gathered.
func Responses(quantities []problems.Quantity) []Response {
	var list []Response
	for i, q := range quantities {
		if last := len(list) - 1; q.Member != "" && last >= 0 && list[last].Name == q.Name && list[last].Point == q.Point {
			list[last].Members = append(list[last].Members, i)
			continue
		}
		list = append(list, Response{q.Name, q.Point, q.Unit, []int{i}})
	}
	return list
}

// Value reads a response off one row of draws: the least member of those with a
// value, NaN where none has one, +Inf where none applies.
func (r *Response) Value(row []float64) float64 {
	least, missing := math.Inf(1), false
	for _, i := range r.Members {
		if math.IsNaN(row[i]) {
			missing = true
		} else {
			least = math.Min(least, row[i])
		}
	}
	if missing && math.IsInf(least, 1) {
		return math.NaN()
	}
	return least
}

// column lists a response over draws.
func (r *Response) column(rows [][]float64) []float64 {
	values := make([]float64, len(rows))
	for i, row := range rows {
		values[i] = r.Value(row)
	}
	return values
}
