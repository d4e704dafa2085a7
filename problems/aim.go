package problems

// Aggregate says how the parts of an aim become one number.
type Aggregate int

const (
	// Single is an aim of one part.
	Single Aggregate = iota
	// Mean is sum(w f) / sum(w) over the parts of positive weight.
	Mean
	// Worst is the least part of an aim of highest, the greatest of lowest.
	Worst
)

// Read is one quantity an aim depends on. For a group it is the least member, or
// the one named.
type Read struct {
	Quantity string
	Point    string
	Member   string // empty for the whole group
}

// Part is the value an aim takes at one flight point: Formula of the quantities
// in Reads, or the only one of them when Formula is nil. Formula must be pure
// and safe for concurrent use; a result that is not finite makes the candidate
// infeasible.
type Part struct {
	Point   string
	Weight  float64
	Reads   []Read
	Formula func(values []float64) float64
}

// Aim is what the search drives up (Highest) or down.
type Aim struct {
	Highest   bool
	Text      string // quantity or formula, as written
	Where     string // point name, "mean" or "worst", as resolved
	Aggregate Aggregate
	Parts     []Part
}
