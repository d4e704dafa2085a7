package main

import (
	"bytes"
	"encoding/csv"
	"encoding/xml"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"
)

// drawnTolerance is how far a drawn point may lie from the geometry, in capture
// heights.
const drawnTolerance = 1e-6

// The side view of every starter is read back and agrees with the exact flow of
// the same folder.
func TestSideViewAgreesWithTheFlow(t *testing.T) {
	for _, name := range starters {
		t.Run(name, func(t *testing.T) {
			d := designStarter(t, name)
			view := readSideView(t, d.files["inlet.svg"])
			flow := flowOf(t, name, d)
			view.checkScales(t)
			view.checkLabels(t)
			checkWalls(t, view, flow)
			checkShocks(t, view, flow)
		})
	}
}

type xy struct{ x, y float64 }

// drawnFlow is what `flow --of DIR --json` says of the geometry and of the first
// flight point.
type drawnFlow struct {
	Inlet struct {
		CaptureHeight float64      `json:"capture_height_m"`
		ShockOnLip    float64      `json:"shock_on_lip_mach"`
		CowlAngle     float64      `json:"cowl_angle_deg"`
		Corners       [][2]float64 `json:"corners_m"`
		Setback       float64      `json:"lip_setback"`
		Lip           [2]float64   `json:"lip_m"`
		Shoulder      [2]float64   `json:"shoulder_m"`
	}
	Points []struct {
		Name     string
		Mach     float64
		Status   string
		Traced   bool
		Stations []map[string]any
	}
}

func flowOf(t *testing.T, name string, d *designed) *drawnFlow {
	t.Helper()
	got := command("flow", starterBrief(name), "--of", d.folder(t), "--json")
	if got.code != exitDone {
		t.Fatalf("flow ended with code %d:\n%s", got.code, got.messages)
	}
	var flow drawnFlow
	decode(t, got.out, &flow)
	return &flow
}

// waveAngle is the absolute angle of the wave that leads into a station of the
// first flight point.
func (f *drawnFlow) waveAngle(t *testing.T, station string) float64 {
	t.Helper()
	for _, s := range f.Points[0].Stations {
		if angle, ok := s["wave_angle_absolute_deg"].(float64); ok && s["name"] == station {
			return angle * math.Pi / 180
		}
	}
	t.Fatalf("no wave leads into %q", station)
	return math.NaN()
}

// sideViewFile is what a program reads in inlet.svg, in metres.
type sideViewFile struct {
	root   map[string]string
	scale  float64
	origin xy
	waves  map[string][2]xy
	kinds  map[string]string
	walls  map[string][]xy
	labels []labelBox
}

type labelBox struct {
	name       string
	x, y, w, h float64
}

func readSideView(t *testing.T, data []byte) *sideViewFile {
	t.Helper()
	view := &sideViewFile{waves: map[string][2]xy{}, kinds: map[string]string{}, walls: map[string][]xy{}}
	decoder := xml.NewDecoder(bytes.NewReader(data))
	for {
		token, err := decoder.Token()
		if token == nil {
			if len(view.waves) == 0 || len(view.walls) == 0 || len(view.labels) == 0 {
				t.Fatalf("the drawing is not complete (%v)", err)
			}
			return view
		}
		element, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		attributes := map[string]string{}
		for _, a := range element.Attr {
			attributes[a.Name.Local] = a.Value
		}
		view.take(t, element.Name.Local, attributes)
	}
}

func (v *sideViewFile) take(t *testing.T, element string, attributes map[string]string) {
	t.Helper()
	number := func(name string) float64 { return parse(t, attributes[name]) }
	switch {
	case element == "svg":
		v.root = attributes
		v.scale, v.origin = number("data-scale"), xy{number("data-origin-x"), number("data-origin-y")}
	case element == "line":
		name := attributes["data-name"]
		v.waves[name] = [2]xy{v.metres(number("x1"), number("y1")), v.metres(number("x2"), number("y2"))}
		v.kinds[name] = attributes["data-kind"]
	case element == "polyline":
		for _, pair := range strings.Fields(attributes["points"]) {
			x, y, _ := strings.Cut(pair, ",")
			v.walls[attributes["data-name"]] = append(v.walls[attributes["data-name"]], v.metres(parse(t, x), parse(t, y)))
		}
	case attributes["data-role"] == "label":
		side := strings.Fields(attributes["data-box"])
		if len(side) != 4 {
			t.Fatalf("label %s has the box %q", attributes["data-name"], attributes["data-box"])
		}
		v.labels = append(v.labels, labelBox{
			attributes["data-name"], parse(t, side[0]), parse(t, side[1]), parse(t, side[2]), parse(t, side[3]),
		})
	}
}

func (v *sideViewFile) metres(x, y float64) xy {
	return xy{(x - v.origin.x) / v.scale, (v.origin.y - y) / v.scale}
}

func parse(t *testing.T, text string) float64 {
	t.Helper()
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return value
}

// checkScales: one scale serves both axes, and the sheet is not stretched.
func (v *sideViewFile) checkScales(t *testing.T) {
	t.Helper()
	box := strings.Fields(v.root["viewBox"])
	if len(box) != 4 {
		t.Fatalf("viewBox %q", v.root["viewBox"])
	}
	across := parse(t, v.root["width"]) / parse(t, box[2])
	down := parse(t, v.root["height"]) / parse(t, box[3])
	if math.Abs(across/down-1) > 1e-9 || v.root["preserveAspectRatio"] == "none" {
		t.Errorf("the sheet is stretched: %g across, %g down", across, down)
	}
}

func (v *sideViewFile) checkLabels(t *testing.T) {
	t.Helper()
	for i, a := range v.labels {
		for _, b := range v.labels[i+1:] {
			if a.x < b.x+b.w && b.x < a.x+a.w && a.y < b.y+b.h && b.y < a.y+a.h {
				t.Errorf("labels %q and %q overlap", a.name, b.name)
			}
		}
		if a.w <= 0 || a.h <= 0 || a.x < 0 || a.y < 0 || a.x+a.w > parse(t, v.root["width"]) || a.y+a.h > parse(t, v.root["height"]) {
			t.Errorf("label %q is not on the sheet", a.name)
		}
	}
}

// near fails unless two places coincide to the tolerance of the drawing.
func near(t *testing.T, what string, got, want xy, height float64) {
	t.Helper()
	if miss := math.Hypot(got.x-want.x, got.y-want.y); !(miss <= drawnTolerance*height) {
		t.Errorf("%s is drawn at %v, wanted %v, %.2g capture heights away", what, got, want, miss/height)
	}
}

func place(p [2]float64) xy { return xy{p[0], p[1]} }

func checkWalls(t *testing.T, view *sideViewFile, flow *drawnFlow) {
	t.Helper()
	height := flow.Inlet.CaptureHeight
	body := view.walls["body"]
	if len(body) < len(flow.Inlet.Corners)+1 {
		t.Fatalf("the body is drawn with %d points", len(body))
	}
	for i, corner := range flow.Inlet.Corners {
		near(t, fmt.Sprintf("corner %d", i+1), body[i], place(corner), height)
	}
	near(t, "shoulder", body[len(flow.Inlet.Corners)], place(flow.Inlet.Shoulder), height)
	for _, name := range []string{"cowl inner", "cowl outer"} {
		if len(view.walls[name]) == 0 {
			t.Fatalf("no %s", name)
		}
		near(t, name+" lip", view.walls[name][0], place(flow.Inlet.Lip), height)
	}
	if line := view.walls["lip streamline"]; len(line) > 0 {
		near(t, "end of the lip streamline", line[len(line)-1], place(flow.Inlet.Lip), height)
	}
}

// checkShocks: a ramp shock runs from its corner at its wave angle to the height
// of the lip, the lip shock from the lip at its wave angle to the body.
func checkShocks(t *testing.T, view *sideViewFile, flow *drawnFlow) {
	t.Helper()
	height := flow.Inlet.CaptureHeight
	lip, shoulder := place(flow.Inlet.Lip), place(flow.Inlet.Shoulder)
	focused, traced := flow.Points[0].Mach == flow.Inlet.ShockOnLip, flow.Points[0].Traced
	for i, corner := range flow.Inlet.Corners {
		name := fmt.Sprintf("ramp %d", i+1)
		drawn, ok := view.waves[name+" shock"]
		if !ok || view.kinds[name+" shock"] != "ramp shock" {
			t.Fatalf("no %s shock", name)
		}
		from := place(corner)
		near(t, "start of the shock of "+name, drawn[0], from, height)
		if traced { // as far as the wave it crosses first
			if miss := offLine(drawn[1], from, flow.waveAngle(t, name)); !(miss <= drawnTolerance*height) || !(drawn[1].y > from.y) {
				t.Errorf("the shock of %s ends %.2g off its angle", name, miss)
			}
			continue
		}
		end := xy{from.x + (lip.y-from.y)/math.Tan(flow.waveAngle(t, name)), lip.y}
		near(t, "end of the shock of "+name, drawn[1], end, height)
		if focused {
			focus := xy{lip.x - flow.Inlet.Setback*height, lip.y}
			near(t, "end of the shock of "+name, drawn[1], focus, height)
		}
	}
	drawn, ok := view.waves["lip shock"]
	if !ok || view.kinds["lip shock"] != "lip shock" {
		t.Fatal("no lip shock")
	}
	near(t, "start of the lip shock", drawn[0], lip, height)
	if traced {
		return
	}
	angle := flow.waveAngle(t, "behind lip shock")
	if miss := offLine(drawn[1], lip, angle); !(miss <= drawnTolerance*height) {
		t.Errorf("the lip shock ends %.2g off its angle", miss)
	}
	last := place(flow.Inlet.Corners[len(flow.Inlet.Corners)-1])
	wall := math.Atan2(shoulder.y-last.y, shoulder.x-last.x)
	if drawn[1].x > shoulder.x {
		wall = flow.Inlet.CowlAngle * math.Pi / 180
	}
	if miss := offLine(drawn[1], shoulder, wall); !(miss <= drawnTolerance*height) {
		t.Errorf("the lip shock ends %.2g off the body", miss)
	}
	if focused {
		near(t, "end of the lip shock", drawn[1], shoulder, height)
	}
	if len(view.waves) != len(flow.Inlet.Corners)+1 {
		t.Errorf("%d waves drawn for %d shocks", len(view.waves), len(flow.Inlet.Corners)+1)
	}
}

// offLine is the distance of p from the line through a point at an angle.
func offLine(p, through xy, angle float64) float64 {
	sin, cos := math.Sincos(angle)
	return math.Abs((p.y-through.y)*cos - (p.x-through.x)*sin)
}

// profile.csv and stations.csv hold the very numbers of result.json.
func TestTablesAgreeWithTheResult(t *testing.T) {
	for _, name := range starters {
		t.Run(name, func(t *testing.T) {
			d := designStarter(t, name)
			var result drawnFlow
			decode(t, d.files["result.json"], &result)
			checkProfile(t, readTable(t, d.files["profile.csv"]), &result)
			checkStations(t, readTable(t, d.files["stations.csv"]), &result)
		})
	}
}

// readTable reads a CSV file as one map a row.
func readTable(t *testing.T, data []byte) []map[string]string {
	t.Helper()
	rows, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	table := make([]map[string]string, 0, len(rows)-1)
	for _, row := range rows[1:] {
		fields := map[string]string{}
		for j, field := range row {
			fields[rows[0][j]] = field
		}
		table = append(table, fields)
	}
	return table
}

func checkProfile(t *testing.T, table []map[string]string, result *drawnFlow) {
	t.Helper()
	want := map[[2]string][2]float64{
		{"body", "leading edge"}: result.Inlet.Corners[0],
		{"body", "shoulder"}:     result.Inlet.Shoulder,
		{"cowl inner", "lip"}:    result.Inlet.Lip,
		{"cowl outer", "lip"}:    result.Inlet.Lip,
	}
	for i, corner := range result.Inlet.Corners[1:] {
		want[[2]string{"body", fmt.Sprintf("corner %d", i+2)}] = corner
	}
	for _, row := range table {
		key := [2]string{row["surface"], row["point"]}
		if at, ok := want[key]; ok {
			if got := [2]float64{parse(t, row["x_m"]), parse(t, row["y_m"])}; got != at {
				t.Errorf("%v at %v in profile.csv, %v in result.json", key, got, at)
			}
			delete(want, key)
		}
	}
	for key := range want {
		t.Errorf("profile.csv has no %v", key)
	}
}

func checkStations(t *testing.T, table []map[string]string, result *drawnFlow) {
	t.Helper()
	next := 0
	for _, point := range result.Points {
		for _, station := range point.Stations {
			if next == len(table) {
				t.Fatalf("stations.csv ends before %s %v", point.Name, station["name"])
			}
			row := table[next]
			next++
			if row["point"] != point.Name || row["station"] != station["name"] || row["status"] != point.Status {
				t.Errorf("row %d of stations.csv is %v, wanted %s %v", next, row, point.Name, station["name"])
			}
			for key, value := range station {
				number, isNumber := value.(float64)
				switch {
				case key == "name":
				case !isNumber && row[key] != "":
					t.Errorf("%s of %s %s: %q in stations.csv, %v in result.json", key, point.Name, row["station"], row[key], value)
				case isNumber && parse(t, row[key]) != number:
					t.Errorf("%s of %s %s: %s in stations.csv, %v in result.json", key, point.Name, row["station"], row[key], number)
				}
			}
		}
	}
	if next != len(table) {
		t.Errorf("stations.csv has %d rows, result.json %d stations", len(table), next)
	}
}
