package brief

import (
	"os"
	"strings"
	"testing"

	"rampwright/problems/contour"
)

func sorvane(t *testing.T) string {
	t.Helper()
	data, err := os.ReadFile("../../../../testdata/briefs/sorvane-5.yaml")
	if err != nil {
		t.Fatal(err)
	}
	return string(data)
}

// An outline is read to the last bit, its lip the capture height, and what it
// resolves to is the same brief.
func TestOutlineIsReadAndResolved(t *testing.T) {
	b := read(t, sorvane(t), nil)
	o := b.Definition.Outline
	if o == nil || len(o.Body) != 4 || o.Body[1] != (contour.Point{X: 0.62, Y: 0.0978}) || o.CowlInner[0] != (contour.Point{X: 1.085, Y: 0.36}) ||
		o.ThroatX != 1.2 || o.OuterAngle != 14*degreeInRadians || b.Definition.CaptureHeight != 0.36 || b.Definition.CowlLength != 0.3 {
		t.Fatalf("definition %+v, outline %+v", b.Definition, o)
	}
	resolved := string(b.ResolvedYAML())
	sameValues(t, b, read(t, resolved, nil))
	if strings.Contains(resolved, "ramp_angle_deg: [") || strings.Contains(resolved, "capture_height_m") {
		t.Errorf("ramps of an outline:\n%s", resolved)
	}
}

const degreeInRadians = 0.017453292519943295 // pi/180

// Every number of an outline counts in the hash.
func TestOutlineInTheHash(t *testing.T) {
	seen := map[string]string{read(t, sorvane(t), nil).Hash(): "nothing"}
	for _, edit := range [][2]string{
		{"[0.62, 0.0978]", "[0.62, 0.0979]"}, {"[1.20, 0.3800]", "[1.21, 0.3800]"},
		{"cowl_outer_angle_deg: 14", "cowl_outer_angle_deg: 14.5"}, {"throat_x_m: 1.20", "throat_x_m: 1.25"},
		{"width_m: 0.60", "width_m: 0.61"}, {"cowl_length: 0.30", "cowl_length: 0.31"},
	} {
		text := strings.Replace(sorvane(t), edit[0], edit[1], 1)
		if text == sorvane(t) {
			t.Fatalf("no %q in the brief", edit[0])
		}
		hash := read(t, text, nil).Hash()
		if seen[hash] != "" {
			t.Errorf("%s hashes like %s", edit[1], seen[hash])
		}
		seen[hash] = edit[1]
	}
}

// Every point of an outline is traced, asked for or not, and hashes alike.
func TestOutlineIsTraced(t *testing.T) {
	asked := strings.Replace(sorvane(t), "mach: 4.2,", "mach: 4.2, throat: traced,", 1)
	b, same := read(t, sorvane(t), nil), read(t, asked, nil)
	for i, p := range b.Definition.Points {
		if !p.Traced || !same.Definition.Points[i].Traced {
			t.Errorf("%s is not traced", p.Name)
		}
	}
	if b.Hash() != same.Hash() || b.Source("flight.climb.throat") != "default" || same.Source("flight.climb.throat") != "line 12" {
		t.Errorf("hashes %s, %s; sources %s, %s", b.Hash(), same.Hash(), b.Source("flight.climb.throat"), same.Source("flight.climb.throat"))
	}
}

// There is nothing to search in an outline, whatever else the brief asks.
func TestOutlineIsNotSearched(t *testing.T) {
	b := read(t, sorvane(t)+"aim: {highest: recovery}\nlimits:\n  - {quantity: total_turning_deg, at_least: 3}\n", nil)
	refused := CheckSearch(b)
	if len(refused) != 1 || !strings.Contains(refused[0].Message, "nothing to search") || !strings.Contains(refused[0].Hint, "rampwright flow") {
		t.Errorf("refused %+v", refused)
	}
	if notes := b.Notes(nil); len(notes) != 0 {
		t.Errorf("notes %+v", notes)
	}
}
