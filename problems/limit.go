package problems

// LimitKind says who asked for a limit, which decides whether it may be lifted.
type LimitKind int

const (
	// Asked is a limit the brief states.
	Asked LimitKind = iota
	// Default is a limit that is on unless the brief overrides it.
	Default
	// Hard is a limit of the model itself; nothing removes it.
	Hard
)

// String returns the word used in tables and results.
func (k LimitKind) String() string {
	switch k {
	case Default:
		return "default"
	case Hard:
		return "hard"
	default:
		return "asked"
	}
}

// Limit is the one form of a limit: Low <= quantity <= High at one point, in
// the quantity's unit; an absent side is an infinity. For a group it holds for
// every member.
type Limit struct {
	Quantity string
	Point    string
	Low      float64
	High     float64
	Kind     LimitKind
	Source   string // where it came from: "line 24", "default", "hard"
}
