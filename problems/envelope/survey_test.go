package envelope_test

import (
	"context"
	"math"
	"testing"

	"rampwright/problems"
	"rampwright/problems/envelope"
)

// disc is a model whose margin is known: the starting ratio is 1 on an ellipse
// about (4.5, 0), and a ramp detaches below a slanted line; on its far side the
// ratio is missing.
type disc struct{}

const degree = math.Pi / 180

var discQuantities = []problems.Quantity{
	{Name: "ramp_attachment_margin_deg", Point: "condition", Member: "ramp 1"},
	{Name: "internal_contraction_over_self_start", Point: "condition"},
}

func (disc) Quantities() []problems.Quantity { return discQuantities }

func discMargins(at envelope.Condition) (ramp, ratio float64) {
	x, y := at.Mach-4.5, at.Incidence/degree
	return at.Mach - 3.8 + 0.05*y, x*x + y*y/9
}

func (disc) At(_ context.Context, at envelope.Condition, dst *problems.Evaluation) (envelope.Outcome, error) {
	ramp, ratio := discMargins(at)
	dst.Set(0, ramp)
	if ramp < 0 {
		detached := &problems.Detached{Shock: "ramp 1", Mach: at.Mach, By: -ramp * degree}
		dst.Miss(1, detached)
		return envelope.Outcome{Status: detached}, nil
	}
	dst.Set(1, ratio)
	return envelope.Outcome{}, nil
}

func discSettings() envelope.Settings {
	return envelope.Settings{LowMach: 3, HighMach: 6, LowIncidence: -4 * degree, HighIncidence: 4 * degree}
}

func TestBoundariesLieOnTheirCurves(t *testing.T) {
	survey, err := envelope.Run(context.Background(), disc{}, discSettings())
	if err != nil {
		t.Fatal(err)
	}
	kinds := map[envelope.Kind]int{}
	for _, line := range survey.Lines {
		kinds[line.Kind]++
		for i, p := range line.Points {
			ramp, ratio := discMargins(p)
			margin := ramp
			if line.Kind == envelope.OverSelfStart {
				margin = 1 - ratio
			}
			if !(margin >= 0 && margin < 3e-6) {
				t.Errorf("%s: margin %g at %+v", line.Kind, margin, p)
			}
			if i == 0 {
				continue
			}
			// The middle of a chord stays within the flatness of the curve.
			before := line.Points[i-1]
			ramp, ratio = discMargins(envelope.Condition{Mach: (p.Mach + before.Mach) / 2, Incidence: (p.Incidence + before.Incidence) / 2})
			off := ramp
			if line.Kind == envelope.OverSelfStart {
				off = math.Abs(math.Sqrt(ratio) - 1)
			}
			if math.Abs(off) > 0.02*3/39*1.5 {
				t.Errorf("%s: the chord before %+v leaves the curve by %g", line.Kind, p, off)
			}
		}
	}
	if kinds[envelope.RampShockDetaches] != 1 || kinds[envelope.OverSelfStart] != 1 || kinds[envelope.StreamEnds] != 1 || len(kinds) != 3 {
		t.Errorf("lines by kind: %v", kinds)
	}
}

// The ellipse passes the line of detachment: its ends are followed up to it.
func TestALineIsFollowedToWhereItEnds(t *testing.T) {
	settings := discSettings()
	survey, err := envelope.Run(context.Background(), disc{}, settings)
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range survey.Lines {
		if line.Kind != envelope.OverSelfStart {
			continue
		}
		for _, end := range []envelope.Condition{line.Points[0], line.Points[len(line.Points)-1]} {
			ramp, _ := discMargins(end)
			if ramp > 0.01 {
				t.Errorf("the line ends at %+v, %g ahead of detachment", end, ramp)
			}
		}
		if line.Closed {
			t.Error("the line is cut by detachment and closed all the same")
		}
	}
}
