package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
)

// csvRows reads a table by its heads; a point column comes first.
func csvRows(t *testing.T, name string) []map[string]string {
	t.Helper()
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var list []map[string]string
	for _, row := range rows[1:] {
		named := map[string]string{}
		for i, head := range rows[0] {
			named[head] = row[i]
		}
		list = append(list, named)
	}
	return list
}

func numberIn(t *testing.T, row map[string]string, column string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(row[column], 64)
	if err != nil {
		t.Fatalf("%s: %v", column, err)
	}
	return v
}

// wavesOf runs flow on a brief of the starters with --waves and returns the folder.
func wavesOf(t *testing.T, name string, arguments ...string) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "waves")
	got := command(append([]string{"flow", starterBrief(name), "--json", "--waves", dir}, arguments...)...)
	if got.code != exitDone {
		t.Fatalf("flow ended with code %d:\n%s", got.code, got.messages)
	}
	if data, err := os.ReadFile(filepath.Join(dir, "flow.json")); err != nil || !bytes.Equal(data, got.out) {
		t.Errorf("flow.json is not what was printed (%v)", err)
	}
	if files := entries(t, dir); !slices.Equal(files, []string{"flow.json", "forces.csv", "fronts.csv", "streamline.csv", "tubes.csv", "walls.csv"}) {
		t.Errorf("the folder holds %q", files)
	}
	return dir
}

// documentOf reads the flow.json of a folder of waves.
func documentOf(t *testing.T, dir string) []byte {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(dir, "flow.json"))
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// walls.csv, forces.csv and tubes.csv are what flow.json says, bit by bit and in its
// order.
func TestWaveTablesAreTheDocument(t *testing.T) {
	dir := wavesOf(t, "sorvane-5")
	var document struct {
		Points []struct {
			Name  string
			Trace map[string]json.RawMessage
		}
	}
	decode(t, documentOf(t, dir), &document)
	for table, key := range map[string]string{"walls": "walls", "forces": "forces", "tubes": "throat"} {
		rows := csvRows(t, filepath.Join(dir, table+".csv"))
		for _, p := range document.Points {
			list := p.Trace[key]
			if key == "throat" {
				var throat struct{ Tubes json.RawMessage }
				decode(t, list, &throat)
				list = throat.Tubes
			}
			var entries []map[string]any
			decode(t, list, &entries)
			for i, entry := range entries {
				if len(rows) == 0 {
					t.Fatalf("%s.csv ends ahead of %s %d", table, p.Name, i)
				}
				row := rows[0]
				rows = rows[1:]
				want := map[string]string{"point": p.Name}
				for name, value := range entry {
					switch value := value.(type) {
					case []any: // from_m, to_m
						end := name[:len(name)-len("_m")]
						want["x_"+end+"_m"], want["y_"+end+"_m"] = inTable(value[0]), inTable(value[1])
					default:
						want[name] = inTable(value)
					}
				}
				if fmt.Sprint(row) != fmt.Sprint(want) {
					t.Fatalf("%s.csv has\n%v\nthe document\n%v", table, row, want)
				}
			}
		}
		if len(rows) > 0 {
			t.Errorf("%s.csv has %d rows more than the document", table, len(rows))
		}
	}
}

func inTable(v any) string {
	if number, ok := v.(float64); ok {
		return strconv.FormatFloat(number, 'g', -1, 64)
	}
	return fmt.Sprint(v)
}

// A slip line has one pressure and direction on both sides, a shock the pressure jump
// of the Mach number normal to it (NACA Report 1135 eq. 128), and an expansion keeps
// the total pressure.
func TestFrontsHoldTheJumps(t *testing.T) {
	dir := wavesOf(t, "sorvane-5")
	kinds := map[string]int{}
	for _, row := range csvRows(t, filepath.Join(dir, "fronts.csv")) {
		read := func(column string) float64 { return numberIn(t, row, column) }
		kinds[row["kind"]]++
		angle := math.Atan2(read("y_to_m")-read("y_from_m"), read("x_to_m")-read("x_from_m")) * degree
		if math.Abs(angle-read("angle_deg")) > 1e-9 {
			t.Fatalf("angle of %v", row)
		}
		if row["kind"] == "slip line" {
			if math.Abs(read("pressure_ratio_below")/read("pressure_ratio_above")-1) > 1e-9 || math.Abs(read("flow_angle_below_deg")-read("flow_angle_above_deg")) > 1e-7 ||
				row["wave_angle_deg"] != "" || row["family"] != "" {
				t.Fatalf("no slip line: %v", row)
			}
			continue
		}
		ahead, behind := "above", "below"
		if row["family"] == "down" {
			ahead, behind = "below", "above"
		} else if row["family"] != "up" {
			t.Fatalf("family of %v", row)
		}
		turn := read("flow_angle_"+ahead+"_deg") - read("angle_deg")
		if row["family"] == "up" {
			turn = -turn
		}
		if math.Abs(turn-read("wave_angle_deg")) > 1e-9 || !(turn > 0 && turn < 90) {
			t.Fatalf("wave angle of %v", row)
		}
		rise := read("pressure_ratio_"+behind) / read("pressure_ratio_"+ahead)
		switch row["kind"] {
		case "expansion":
			if !(rise < 1) || row["merged"] == "no" && math.Abs(read("total_pressure_ratio_"+behind)/read("total_pressure_ratio_"+ahead)-1) > 1e-12 {
				t.Fatalf("no expansion: %v", row)
			}
		case "shock":
			// A short front's places tell its direction to rounding over its length.
			length := math.Hypot(read("y_to_m")-read("y_from_m"), read("x_to_m")-read("x_from_m"))
			normal := read("mach_"+ahead) * math.Sin(turn/degree)
			if want := 1 + 2*1.4/2.4*(normal*normal-1); row["merged"] == "no" && length > 1e-6 && math.Abs(rise/want-1) > 1e-8 {
				t.Fatalf("the pressure rises by %v, its normal Mach number says %v: %v", rise, want, row)
			}
		}
	}
	for _, kind := range []string{"shock", "expansion", "slip line"} {
		if kinds[kind] < 100 {
			t.Errorf("%d of kind %s", kinds[kind], kind)
		}
	}
}

// The streamline of each point ends at the lip, and what it starts at is the captured
// height of the free stream.
func TestStreamlineEndsAtTheLip(t *testing.T) {
	dir := wavesOf(t, "sorvane-5")
	var document struct {
		Points []struct {
			Name      string
			Incidence float64 `json:"incidence_deg"`
			Trace     struct{ Capture float64 }
		}
	}
	decode(t, documentOf(t, dir), &document)
	rows := csvRows(t, filepath.Join(dir, "streamline.csv"))
	for _, p := range document.Points {
		var line []map[string]string
		for ; len(rows) > 0 && rows[0]["point"] == p.Name; rows = rows[1:] {
			line = append(line, rows[0])
		}
		if len(line) < 2 {
			t.Fatalf("%s: %d corners", p.Name, len(line))
		}
		for i, row := range line[1:] {
			before := line[i]
			if math.Hypot(numberIn(t, row, "x_m")-numberIn(t, before, "x_m"), numberIn(t, row, "y_m")-numberIn(t, before, "y_m")) < 1e-9*0.36 {
				t.Errorf("%s has a corner twice: %v", p.Name, row)
			}
		}
		last := line[len(line)-1]
		if math.Hypot(numberIn(t, last, "x_m")-1.085, numberIn(t, last, "y_m")-0.36) > 1e-12 {
			t.Errorf("%s ends at %v", p.Name, last)
		}
		sin, cos := math.Sincos(p.Incidence / degree)
		entry := numberIn(t, line[0], "y_m")*cos + numberIn(t, line[0], "x_m")*sin
		if math.Abs(entry/0.36-p.Trace.Capture) > 1e-4 {
			t.Errorf("%s enters at %v of the capture height, captures %v", p.Name, entry/0.36, p.Trace.Capture)
		}
	}
}

// A chain of straight shocks is traced for the folder: its fronts are those shocks, and
// the throat is one stream tube.
func TestWavesOfAChain(t *testing.T) {
	dir := wavesOf(t, "veyric-6", "--ramp-angle-deg", "8.08,7.22,8.44", "--cowl-angle-deg", "8")
	var sources []string
	for _, row := range csvRows(t, filepath.Join(dir, "fronts.csv")) {
		sources = append(sources, row["source"])
	}
	if want := []string{"leading edge", "corner 2", "corner 3", "lip", "outer cowl"}; !slices.Equal(sources, want) {
		t.Errorf("fronts start from %q, want %q", sources, want)
	}
	if corners := csvRows(t, filepath.Join(dir, "streamline.csv")); len(corners) != 2 { // the free stream as far as the lip, where all shocks meet
		t.Errorf("streamline %v", corners)
	}
	if tubes := csvRows(t, filepath.Join(dir, "tubes.csv")); len(tubes) != 1 || numberIn(t, tubes[0], "mass_fraction") != 1 {
		t.Errorf("tubes %v", tubes)
	}
}

// A folder that cannot be finished leaves nothing.
func TestNewFolderIsWholeOrNotAtAll(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := writeNewFolder("waves", []file{{"a.csv", []byte("a")}, {"no/such.csv", nil}}); err == nil {
		t.Error("a file in no folder was written")
	}
	if left := entries(t, "."); left != nil {
		t.Errorf("left behind: %q", left)
	}
	if err := writeNewFolder("waves", []file{{"a.csv", []byte("a")}}); err != nil {
		t.Error(err)
	}
	if err := writeNewFolder("waves", []file{{"b.csv", []byte("b")}}); err == nil {
		t.Error("a folder with files was replaced")
	}
	if left := entries(t, "waves"); !slices.Equal(left, []string{"a.csv"}) || !slices.Equal(entries(t, "."), []string{"waves"}) {
		t.Errorf("the folder holds %q", left)
	}
}
