package chart

import (
	"fmt"
	"math"
)

// FieldPair is one quantity over two variables, told twice: side by side, in the
// same colours, with the side that limits forbid hatched.
type FieldPair struct {
	ID       string // of the hatching; unique on a page, letters, digits and -
	Title    string
	Note     string // below the title; may be empty
	Label    string // the quantity with its unit
	X, Y     Span
	Cells    int // along each side, 2 to 100
	Fields   [2]Field
	Best     [2]float64 // ringed; NaN: nowhere
	BestName string
}

// Field holds Cells x Cells values, row by row from the low end of Y, each at the
// middle of its cell. A value that is NaN leaves its cell blank.
type Field struct {
	Name      string
	Values    []float64
	Forbidden []bool
}

const mostCells = 100

// Validate returns *InvalidChart with all defects at once, or nil.
func (f FieldPair) Validate() error {
	var found []string
	check := func(bad bool, format string, args ...any) {
		if bad {
			found = append(found, fmt.Sprintf(format, args...))
		}
	}
	check(!f.X.valid() || !f.Y.valid(), "a range has no length")
	check(f.Cells < 2 || f.Cells > mostCells, "%d cells a side, 2 to %d are drawn", f.Cells, mostCells)
	for _, c := range f.ID {
		check(!(c >= 'a' && c <= 'z' || c >= '0' && c <= '9' || c == '-'), "id has the character %q", c)
	}
	check(f.ID == "", "it has no id")
	for _, field := range f.Fields {
		check(len(field.Values) != f.Cells*f.Cells || len(field.Forbidden) != len(field.Values),
			"field %s has %d values and %d marks for %d cells", field.Name, len(field.Values), len(field.Forbidden), f.Cells*f.Cells)
		check(len(field.Name) > longestText, "a name is too long")
	}
	if found == nil {
		_, ok := f.bands()
		check(!ok, "no cell has a value")
	}
	if found != nil {
		return &InvalidChart{"map", found}
	}
	return nil
}

// bands are the steps of colour: from + k step to from + (k+1) step, k < count.
type bands struct {
	from, step float64
	count      int
}

// mostBands is the number of colours aimed at; round steps give up to two and a
// half times less.
const mostBands = 12

// bands chooses round steps over the values of the second field, or of the first
// where the second has none: a surrogate that runs away must not wash out the
// colours of what is exact.
func (f FieldPair) bands() (b bands, ok bool) {
	for _, field := range []Field{f.Fields[1], f.Fields[0]} {
		low, high := math.Inf(1), math.Inf(-1)
		for _, v := range field.Values {
			if finite(v) {
				low, high = min(low, v), max(high, v)
			}
		}
		if low > high {
			continue
		}
		low, high = separated(low, high)
		step := roundStep((high - low) / mostBands)
		first := math.Floor(low / step)
		return bands{first * step, step, max(1, int(math.Ceil(high/step-first)))}, true
	}
	return bands{}, false
}

// of is the band of a value; values beyond the ends take the end's.
func (b bands) of(v float64) int {
	return int(clamp(math.Floor((v-b.from)/b.step), 0, float64(b.count-1)))
}

// shade is the colour of band k: lightness falls evenly from sand to deep blue,
// so that the order survives a grey print and every colour deficiency.
func (b bands) shade(k int) string {
	stops := [...][3]float64{{243, 234, 210}, {150, 190, 178}, {62, 128, 152}, {22, 52, 96}}
	t := 0.5 * float64(len(stops)-1)
	if b.count > 1 {
		t = float64(k) / float64(b.count-1) * float64(len(stops)-1)
	}
	i := min(int(t), len(stops)-2)
	var mixed [3]int
	for c := range mixed {
		mixed[c] = int(math.Round(stops[i][c] + (t-float64(i))*(stops[i+1][c]-stops[i][c])))
	}
	return fmt.Sprintf("#%02x%02x%02x", mixed[0], mixed[1], mixed[2])
}
