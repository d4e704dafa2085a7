package atmosphere

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// readTable returns the rows of the published table, by column name.
func readTable(t *testing.T) []map[string]string {
	t.Helper()
	data, err := os.ReadFile("../../testdata/reference/atmosphere.csv")
	if err != nil {
		t.Fatal(err)
	}
	reader := csv.NewReader(strings.NewReader(string(data)))
	reader.Comment = '#'
	rows, err := reader.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var table []map[string]string
	for _, row := range rows[1:] {
		named := map[string]string{}
		for i, cell := range row {
			named[rows[0][i]] = cell
		}
		table = append(table, named)
	}
	return table
}

// halfDigit is half a unit in the last printed place of cell.
func halfDigit(t *testing.T, cell string) (value, half float64) {
	t.Helper()
	value, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		t.Fatal(err)
	}
	mantissa, exponent, _ := strings.Cut(cell, "e")
	power := 0
	if exponent != "" {
		if power, err = strconv.Atoi(exponent); err != nil {
			t.Fatal(err)
		}
	}
	_, decimals, _ := strings.Cut(mantissa, ".")
	return value, 0.5 * math.Pow(10, float64(power-len(decimals)))
}

func TestPublishedTableAtItsPrintedDigits(t *testing.T) {
	table := readTable(t)
	if len(table) < 13 {
		t.Fatalf("table has %d rows, want at least 13", len(table))
	}
	for _, row := range table {
		kilometres, _ := strconv.ParseFloat(row["altitude_km"], 64)
		h := 1000 * kilometres
		if row["altitude_kind"] == "geometric" {
			h = Geopotential(h)
		}
		got, err := At(h)
		if err != nil {
			t.Fatal(err)
		}
		for column, value := range map[string]float64{
			"temperature_K": got.Temperature, "pressure_Pa": got.Pressure, "density_kg_m3": got.Density,
			"sound_speed_m_s": got.SoundSpeed, "viscosity_Pa_s": got.Viscosity,
		} {
			if row[column] == "" {
				continue
			}
			want, half := halfDigit(t, row[column])
			if math.Abs(value-want) > half*1.0001 { // 1.0001: the half digit itself is rounded
				t.Errorf("%s %s km: %s = %.8g, printed %s", row["altitude_kind"], row["altitude_km"], column, value, row[column])
			}
		}
	}
}

func TestPressureAndAltitudeInvertEachOther(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := rapid.OneOf(
			rapid.Float64Range(Lowest, Highest),
			rapid.SampledFrom([]float64{Lowest, 0, 11000, 20000, 32000, 47000, 51000, 71000, Highest}),
		).Draw(t, "altitude")
		state, err := At(h)
		if err != nil {
			t.Fatal(err)
		}
		back, err := AltitudeOf(state.Pressure)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(back-h) > 1e-6 {
			t.Fatalf("altitude of the pressure at %v m is %v m", h, back)
		}
		if z := Geometric(h); math.Abs(Geopotential(z)-h) > 1e-9*math.Max(1, math.Abs(h)) {
			t.Fatalf("geopotential altitude %v m came back as %v m", h, Geopotential(z))
		}
	})
}

func TestLayersJoin(t *testing.T) {
	for i := 1; i < len(layers); i++ {
		below, _ := layers[i-1].at(layers[i].base)
		if math.Abs(below-layers[i].temperature) > 1e-9 {
			t.Errorf("at %v m the temperature jumps from %v to %v K", layers[i].base, below, layers[i].temperature)
		}
	}
}

// TestHydrostaticBalance checks dp/dh = -rho g0 against central differences
// away from the layer bases, where the second derivative jumps.
func TestHydrostaticBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := rapid.Float64Range(Lowest+2, Highest-2).Draw(t, "altitude")
		above, _ := At(h + 1)
		below, _ := At(h - 1)
		here, _ := At(h)
		slope, weight := (above.Pressure-below.Pressure)/2, -here.Density*gravity
		if math.Abs(slope-weight) > 1e-6*math.Abs(weight) {
			t.Fatalf("at %v m dp/dh = %v, -rho g = %v", h, slope, weight)
		}
	})
}

func TestLimitsOfTheModel(t *testing.T) {
	for _, h := range []float64{Lowest - 1, Highest + 1, math.NaN(), math.Inf(1), math.Inf(-1)} {
		_, err := At(h)
		if out := (*OutOfRange)(nil); !errors.As(err, &out) || out.Low != Lowest || out.High != Highest {
			t.Errorf("At(%v): %v, want *OutOfRange", h, err)
		}
	}
	for _, p := range []float64{0, -1, 0.3, 2e5, math.NaN(), math.Inf(1)} {
		_, err := AltitudeOf(p)
		if out := (*OutOfRange)(nil); !errors.As(err, &out) || out.What != "pressure" {
			t.Errorf("AltitudeOf(%v): %v, want *OutOfRange", p, err)
		}
	}
	err := (&OutOfRange{"pressure", "Pa", 2e5, 0.37, 177687}).Error()
	if want := "standard atmosphere: pressure 200000 Pa is outside 0.37 to 177687 Pa"; err != want {
		t.Errorf("error text %q, want %q", err, want)
	}
	// 86 km geometric is the top of the model (U.S. Standard Atmosphere 1976).
	if got := Geopotential(86000); math.Abs(got-Highest) > 0.5 {
		t.Errorf("86 km geometric is %v m geopotential, want %v", got, float64(Highest))
	}
}

func BenchmarkAt(b *testing.B) {
	for b.Loop() {
		if _, err := At(26500); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkAltitudeOf(b *testing.B) {
	for b.Loop() {
		if _, err := AltitudeOf(2000); err != nil {
			b.Fatal(err)
		}
	}
}
