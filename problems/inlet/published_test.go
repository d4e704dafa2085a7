package inlet

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"rampwright/problems"
	"rampwright/problems/gas"
)

// TestPublishedRows proves the rows of published values whose functions live
// here, to half a unit of their last printed digit.
func TestPublishedRows(t *testing.T) {
	data, err := os.ReadFile("../../testdata/reference/shocks.csv")
	if err != nil {
		t.Fatal(err)
	}
	reader := csv.NewReader(strings.NewReader(string(data)))
	reader.Comment, reader.FieldsPerRecord = '#', 6
	records, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	selfStart := func(r route) func(float64) float64 {
		return func(mach float64) float64 { return selfStartAt(r, mach) }
	}
	proofs := map[string]struct {
		quantity string
		compute  []func(float64) float64
	}{
		"KZ": {"self-start internal contraction", []func(float64) float64{selfStart(first{}), selfStart(second{})}},
		"ST": {"standard recovery", []func(float64) float64{StandardRecovery}},
	}
	proven := 0
	for _, r := range records {
		kind, _, _ := strings.Cut(r[0], "-")
		proof, ours := proofs[kind]
		if !ours {
			continue
		}
		proven++
		if r[2] != proof.quantity {
			t.Fatalf("%s: no quantity %q", r[0], r[2])
		}
		inputs, printed := strings.Split(strings.TrimPrefix(r[1], "M="), ";"), strings.Split(r[3], ";")
		if len(inputs) != len(printed) {
			t.Fatalf("%s: %d inputs, %d values", r[0], len(inputs), len(printed))
		}
		for i := range inputs {
			cell := strings.TrimSpace(printed[i])
			mach, want := number(t, strings.TrimSpace(inputs[i])), number(t, cell)
			_, decimals, _ := strings.Cut(cell, ".")
			for _, compute := range proof.compute {
				within(t, r[0], compute(mach), want, 0.5*math.Pow(10, -float64(len(decimals))))
			}
		}
	}
	if proven != 2 {
		t.Errorf("%d rows proven, want 2", proven)
	}
}

func number(t *testing.T, cell string) float64 {
	t.Helper()
	value, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		t.Fatal(err)
	}
	return value
}

func selfStartAt(r route, mach float64) float64 {
	return (&analysis{def: &Definition{Gas: gas.Air}, route: r, lipMach: mach}).selfStartLimit()
}

// Kantrowitz & Donaldson, NACA ACR L5D20, gamma 1.4, to four decimals
// (recomputed independently).
func TestSelfStartLimits(t *testing.T) {
	for mach, want := range map[float64]float64{2: 1.2165, 3: 1.3904, 4: 1.4873, 6: 1.5768} {
		for _, r := range []route{first{}, second{}} {
			within(t, "self-start limit", selfStartAt(r, mach), want, 5e-5)
		}
	}
}

// MIL-E-5007D as printed: continuous at Mach 1; the two upper branches, from
// different fits, meet within 2 % at Mach 5.
func TestStandardRecoveryBranches(t *testing.T) {
	within(t, "below Mach 1", StandardRecovery(0.8), 1, 0)
	within(t, "at Mach 1", StandardRecovery(1), 1, 0)
	within(t, "just above Mach 1", StandardRecovery(1+1e-9), 1, 1e-9)
	within(t, "at Mach 2", StandardRecovery(2), 0.925, 1e-15)
	within(t, "across Mach 5", StandardRecovery(5)/StandardRecovery(math.Nextafter(5, 6)), 1, 0.02)
}

// The branches of the separation limit (Korkegi 1975, from memory) are joined
// where they cross.
func TestSeparationBranchesCross(t *testing.T) {
	mach := separationBranches
	within(t, "branches at the crossing", 1+0.3*mach*mach, 0.17*math.Pow(mach, 2.5), 1e-11)
	within(t, "crossing", mach, 4.324, 5e-4)
	within(t, "below", SeparationPressureRatio(3), 1+0.3*9, 1e-14)
	within(t, "above", SeparationPressureRatio(9), 0.17*243, 1e-12)
}

// External compression at Mach 3 with the equal-strength turnings of three ramps
// (Oswatitsch 1944, NACA TM 1140) and an aligned cowl: the outer cowl, at 39.6
// deg, has no attached shock, and yet recovery is defined.
func TestDetachedOuterCowlLeavesRecoveryDefined(t *testing.T) {
	d := veyric().at(3, 0).lipTurned(0)
	d.RampAngle = []Setting{Fixed(11.064), Fixed(13.140), Fixed(15.360)}
	d.ShockOnLip, d.CowlWedge, d.TerminalShock = Fixed(3), Fixed(0), true
	e := evaluate(t, d)
	within(t, "recovery", e.value("only", "recovery"), 0.836143, 1e-6)
	within(t, "capture", e.value("only", "capture"), 1, 1e-9)
	within(t, "outer cowl", e.value(problems.Geometry, "cowl_outer_angle_deg"), 39.564, 1e-9)
	_, err := e.find("only", "cowl_drag")
	var detached *problems.Detached
	if !errors.As(err, &detached) || detached.Shock != "outer cowl" || !(detached.By > 0) {
		t.Errorf("cowl drag is missing because of %v", err)
	}
	if margin := e.value("only", "cowl_attachment_margin_deg"); math.Abs(margin+detached.By/radian) > 1e-9 {
		t.Errorf("cowl attachment margin %v deg, detached by %v rad", margin, detached.By)
	}
}

// The take-over point of veyric-6 keeps 0.677 of its capture height at Mach 4.5.
func TestCaptureFallsBelowShockOnLip(t *testing.T) {
	within(t, "capture at Mach 4.5", evaluate(t, veyric()).value("takeover", "capture"), 0.677, 5e-3)
}
