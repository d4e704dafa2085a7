package shock

import (
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"rampwright/problems/gas"
)

// row is one line of the table of published shock values: printed holds the
// values as printed, in the order of the quantity names where each has one.
type row struct {
	id, inputs string
	quantities []string
	printed    []string
}

// routes are the two exact ways to each relation.
var routes = []struct {
	name       string
	weak       func(g gas.Perfect, mach, turning float64) (Oblique, error)
	normal     func(g gas.Perfect, mach float64) (float64, Jump)
	largest    func(g gas.Perfect, mach float64) (turning, waveAngle float64)
	reflection func(g gas.Perfect, mach float64) float64
}{
	{"first route", Weak, Normal, LargestTurning, RegularReflection},
	{"second route", WeakBracketed, NormalByPrandtl, LargestTurningSearched, RegularReflectionBracketed},
}

// elsewhere names the test of another package that proves a kind of row.
var elsewhere = map[string]string{
	"OPT": "../ramp/published_test.go",
	"KZ":  "../inlet/published_test.go",
	"ST":  "../inlet/published_test.go",
}

// readRows returns the published rows; it fails on a line of another shape and
// on a file without its header of sources.
func readRows(t *testing.T) []row {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/shocks.csv")
	if err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(string(data), "#") {
		t.Fatal("the table has no header that says where its values come from")
	}
	reader := csv.NewReader(strings.NewReader(string(data)))
	reader.Comment, reader.FieldsPerRecord = '#', 6
	records, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(records[0], ","); got != "id,inputs,quantity,value,source,how" {
		t.Fatalf("unknown columns %s", got)
	}
	var rows []row
	for _, r := range records[1:] {
		if r[4] == "" || (r[5] != "read" && r[5] != "memory" && r[5] != "computed") {
			t.Fatalf("%s: no source", r[0])
		}
		rows = append(rows, row{id: r[0], inputs: r[1], quantities: cells(r[2]), printed: cells(r[3])})
	}
	return rows
}

func cells(list string) []string {
	parts := strings.FieldsFunc(list, func(r rune) bool { return r == ';' || r == '|' })
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	return parts
}

// kind is the part of an id that says what the row is about.
func (r row) kind() string {
	if r.id == "PM-ex" || r.id == "MR-C" {
		return r.id
	}
	kind, _, _ := strings.Cut(r.id, "-")
	return kind
}

// input returns the number behind "name=".
func (r row) input(t *testing.T, name string) float64 {
	t.Helper()
	for _, word := range strings.Fields(r.inputs) {
		if value, found := strings.CutPrefix(word, name+"="); found {
			number, err := strconv.ParseFloat(value, 64)
			if err != nil {
				t.Fatalf("%s: %v", r.id, err)
			}
			return number
		}
	}
	t.Fatalf("%s: no input %s in %q", r.id, name, r.inputs)
	return 0
}

// inputs returns the list of numbers behind "name=".
func (r row) list(t *testing.T, name string) []float64 {
	t.Helper()
	text, found := strings.CutPrefix(r.inputs, name+"=")
	if !found {
		t.Fatalf("%s: no list %s in %q", r.id, name, r.inputs)
	}
	var numbers []float64
	for _, cell := range cells(text) {
		number, err := strconv.ParseFloat(cell, 64)
		if err != nil {
			t.Fatalf("%s: %v", r.id, err)
		}
		numbers = append(numbers, number)
	}
	return numbers
}

func (r row) gas(t *testing.T) gas.Perfect {
	if strings.Contains(r.inputs, "gamma=") {
		return gas.Perfect{Gamma: r.input(t, "gamma"), R: gas.SpecificConstantAir}
	}
	return gas.Air
}

// chart rows were read off a chart or rounded on the way: 2 %.
func (r row) chart() bool { return r.id == "CHART" || r.id == "RR-1" }

// units is the tolerance in units of the last printed place, where a source
// does not round its last digit.
var units = map[string]struct {
	count  float64
	reason string
}{
	"NS-2":   {1, "the table cuts its digits off"},
	"NS-5":   {0.6, "32.654 is printed for 32.65347"},
	"NS-g11": {1, "the calculator cuts its digits off"},
	"OS-1":   {3, "the calculator stops its iteration in the eighth digit"},
	"OS-2":   {3, "the calculator stops its iteration in the eighth digit"},
	"OS-3":   {3, "the calculator stops its iteration in the eighth digit"},
	"OS-4":   {3, "the calculator stops its iteration in the eighth digit"},
}

// check compares computed values with the printed ones: within half a unit of
// the last printed digit unless units says otherwise, chart rows within 2 %.
func (r row) check(t *testing.T, computed []float64) {
	t.Helper()
	if len(computed) != len(r.printed) {
		t.Fatalf("%s: %d values computed, %d printed", r.id, len(computed), len(r.printed))
	}
	for i, cell := range r.printed {
		want, err := strconv.ParseFloat(cell, 64)
		if err != nil {
			t.Fatalf("%s: %v", r.id, err)
		}
		_, decimals, _ := strings.Cut(cell, ".")
		count := 0.5
		if exception, listed := units[r.id]; listed {
			count = exception.count
		}
		tolerance := count*math.Pow(10, -float64(len(decimals))) + 1e-12
		if r.chart() {
			tolerance = 0.02 * want
		}
		if !(math.Abs(computed[i]-want) <= tolerance) {
			t.Errorf("%s %q value %d: computed %.10g, printed %s", r.id, r.inputs, i+1, computed[i], cell)
		}
	}
}

// named looks each printed quantity up by its name and fails on an unknown one.
func (r row) named(t *testing.T, values map[string]float64) []float64 {
	t.Helper()
	var list []float64
	for _, name := range r.quantities {
		value, known := values[name]
		if !known {
			t.Fatalf("%s: no quantity %q", r.id, name)
		}
		list = append(list, value)
	}
	return list
}

// only fails unless the row prints exactly these quantities.
func (r row) only(t *testing.T, quantities ...string) {
	t.Helper()
	if got, want := strings.Join(r.quantities, ";"), strings.Join(quantities, ";"); got != want {
		t.Fatalf("%s prints %q, the test knows %q", r.id, got, want)
	}
}

func TestEveryPublishedRow(t *testing.T) {
	rows := readRows(t)
	if len(rows) < 32 {
		t.Fatalf("the table has %d rows, want at least 32", len(rows))
	}
	for _, r := range rows {
		if file, other := elsewhere[r.kind()]; other {
			provenBy(t, r.kind(), file)
			continue
		}
		prove, known := proofs[r.kind()]
		if !known {
			t.Errorf("no test proves row %s", r.id)
			continue
		}
		for i, route := range routes {
			t.Run(fmt.Sprintf("%s %s", r.id, route.name), func(t *testing.T) { r.check(t, prove(t, r, i)) })
		}
	}
}

// provenBy fails unless the test file of another package claims this kind.
func provenBy(t *testing.T, kind, file string) {
	t.Helper()
	source, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(string(source), `"`+kind+`"`) {
		t.Errorf("%s does not claim the rows %s", file, kind)
	}
}
