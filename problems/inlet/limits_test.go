package inlet

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"rampwright/problems"
)

// written turns limits into lines "quantity point low high", sorted.
func written(limits []problems.Limit) []string {
	var lines []string
	for _, l := range limits {
		lines = append(lines, fmt.Sprintf("%s %s %g %g", l.Quantity, l.Point, l.Low, l.High))
	}
	slices.Sort(lines)
	return lines
}

// at writes the wanted lines, "@" standing for each of the points.
func lines(text string, points ...string) []string {
	var list []string
	for line := range strings.Lines(text) {
		fields := strings.Fields(line)
		if len(fields) == 0 {
			continue
		}
		where := []string{fields[1]}
		if fields[1] == "@" {
			where = points
		}
		for _, point := range where {
			list = append(list, strings.Join([]string{fields[0], point, fields[2], fields[3]}, " "))
		}
	}
	slices.Sort(list)
	return list
}

func TestDefaultLimits(t *testing.T) {
	everywhere := `
		ramp_attachment_margin_deg @ 2 +Inf
		lip_attachment_margin_deg @ 1 +Inf
		lip_reflection_margin_deg @ 1 +Inf
		separation_margin @ 0.05 +Inf
		internal_contraction_over_self_start @ -Inf 1
		total_contraction_over_started @ -Inf 1
		cowl_attachment_margin_deg cruise 2 +Inf
		shortest_ramp_ratio geometry 0.05 +Inf
		total_turning_deg geometry -Inf 30
		`
	if got, want := written(DefaultLimits(veyric())), lines(everywhere+"throat_mach @ 1.5 +Inf", "cruise", "takeover"); !slices.Equal(got, want) {
		t.Errorf("default limits\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	d := veyric()
	d.TerminalShock = true
	if got, want := written(DefaultLimits(d)), lines(everywhere+"terminal_mach @ 1.1 +Inf", "cruise", "takeover"); !slices.Equal(got, want) {
		t.Errorf("with a terminal shock\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestHardLimits(t *testing.T) {
	common := `
		ramp_attachment_margin_deg @ 0 +Inf
		lip_attachment_margin_deg @ 0 +Inf
		lip_mach @ 1 +Inf
		throat_mach @ 1 +Inf
		internal_contraction_over_isentropic @ -Inf 1
		shortest_ramp_ratio geometry 0 +Inf
		`
	if got, want := written(HardLimits(veyric())), lines(common, "cruise", "takeover"); !slices.Equal(got, want) {
		t.Errorf("hard limits\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	d := veyric()
	d.RampAngle[0] = Between(3, 16)
	if got, want := written(HardLimits(d)), lines(common+"lip_turning_deg geometry 0.1 +Inf", "cruise", "takeover"); !slices.Equal(got, want) {
		t.Errorf("with a searched lip turning\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestLimitsAreOfTheCatalogueAndOfTheirKind(t *testing.T) {
	for kind, limits := range map[problems.LimitKind][]problems.Limit{
		problems.Hard: HardLimits(veyric()), problems.Default: DefaultLimits(veyric()),
	} {
		for _, l := range limits {
			entry, ok := Lookup(l.Quantity)
			if !ok || (entry.Scope == OfGeometry) != (l.Point == problems.Geometry) || l.Kind != kind || l.Source == "" {
				t.Errorf("%+v", l)
			}
			if !(l.Low <= l.High) || (math.IsInf(l.Low, -1) && math.IsInf(l.High, 1)) {
				t.Errorf("%+v limits nothing", l)
			}
		}
	}
}
