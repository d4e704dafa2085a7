package handoff

import (
	"errors"
	"io"
	"math"
	"strings"
	"testing"
)

func someFront() Front {
	return Front{
		Point: "cruise", Kind: "shock", Family: "up", Source: "leading edge", Stream: "captured", To: [2]float64{1, 0.5}, Angle: 26.5, WaveAngle: 28.5,
		Below: Side{1, 4, 8, 2.5, 1.25, 0.9}, Above: Side{0, 5, -2, 1, 1, 1},
	}
}

func TestFrontsText(t *testing.T) {
	slip := someFront()
	slip.Kind, slip.Family, slip.Source, slip.Merged, slip.Stream, slip.WaveAngle = "slip line", "", "", true, "outside", math.NaN()
	var out strings.Builder
	if err := WriteFronts(&out, []Front{someFront(), slip}); err != nil {
		t.Fatal(err)
	}
	want := `point,kind,family,source,stream,merged,region_below,region_above,x_from_m,y_from_m,x_to_m,y_to_m,angle_deg,mach_below,flow_angle_below_deg,pressure_ratio_below,temperature_ratio_below,total_pressure_ratio_below,mach_above,flow_angle_above_deg,pressure_ratio_above,temperature_ratio_above,total_pressure_ratio_above,wave_angle_deg
cruise,shock,up,leading edge,captured,no,1,0,0,0,1,0.5,26.5,4,8,2.5,1.25,0.9,5,-2,1,1,1,28.5
cruise,slip line,,,outside,yes,1,0,0,0,1,0.5,26.5,4,8,2.5,1.25,0.9,5,-2,1,1,1,
`
	if out.String() != want {
		t.Errorf("got\n%swant\n%s", out.String(), want)
	}
}

func TestWallTablesText(t *testing.T) {
	from, to := [2]float64{0, 0}, [2]float64{3, 4}
	for want, write := range map[string]func(w io.Writer) error{
		`point,surface,segment,x_from_m,y_from_m,x_to_m,y_to_m,mach,flow_angle_deg,pressure_ratio,pressure_kPa
cruise,cowl inside,2,0,0,3,4,2.5,8,1.5,3
`: func(w io.Writer) error {
			return WriteWalls(w, []Wall{{"cruise", "cowl inside", 2, from, to, 2.5, 8, 1.5, 3}})
		},
		`point,surface,segment,x_from_m,y_from_m,x_to_m,y_to_m,length_m,least_pressure_ratio,mean_pressure_ratio,greatest_pressure_ratio,force_x,force_y,force_x_N,force_y_N
cruise,body,1,0,0,3,4,5,1,1.5,2,0.25,-0.5,25,-50
`: func(w io.Writer) error {
			return WriteForces(w, []Force{{"cruise", "body", 1, from, to, 5, 1, 1.5, 2, 0.25, -0.5, 25, -50}})
		},
		`point,x_from_m,y_from_m,x_to_m,y_to_m,height_m,mach,flow_angle_deg,pressure_ratio,temperature_ratio,total_pressure_ratio,mass_fraction
cruise,0,0,3,4,4,2.5,8,1.5,1.25,0.9,0.125
`: func(w io.Writer) error {
			return WriteTubes(w, []Tube{{"cruise", from, to, 4, 2.5, 8, 1.5, 1.25, 0.9, 0.125}})
		},
		`point,x_m,y_m
cruise,3,4
`: func(w io.Writer) error { return WriteStreamline(w, []Vertex{{"cruise", 3, 4}}) },
	} {
		var out strings.Builder
		if err := write(&out); err != nil {
			t.Fatal(err)
		}
		if out.String() != want {
			t.Errorf("got\n%swant\n%s", out.String(), want)
		}
	}
}

func TestBadWavesAreRefused(t *testing.T) {
	var out strings.Builder
	none := math.NaN()
	place, blind, endless := someFront(), someFront(), someFront()
	place.To[1], blind.Above.Mach, endless.WaveAngle = none, none, math.Inf(1)
	for want, err := range map[NotFinite]error{
		{"fronts", 1, "y_to_m", none}:                      WriteFronts(&out, []Front{place}),
		{"fronts", 2, "mach_above", none}:                  WriteFronts(&out, []Front{someFront(), blind}),
		{"fronts", 1, "wave_angle_deg", endless.WaveAngle}: WriteFronts(&out, []Front{endless}),
		{"walls", 1, "pressure_kPa", none}:                 WriteWalls(&out, []Wall{{Point: "a", Surface: "body", PressureKPa: none}}),
		{"forces", 1, "force_y_N", none}:                   WriteForces(&out, []Force{{Point: "a", Surface: "body", YN: none}}),
		{"tubes", 1, "mass_fraction", none}:                WriteTubes(&out, []Tube{{Point: "a", MassFraction: none}}),
		{"streamline", 1, "x_m", none}:                     WriteStreamline(&out, []Vertex{{"a", none, 0}}),
	} {
		var got *NotFinite
		if !errors.As(err, &got) || got.Error() != want.Error() {
			t.Errorf("got %v, want %v", err, &want)
		}
	}
	for want, err := range map[Incomplete]error{
		{"fronts", 1, "point"}:     WriteFronts(&out, []Front{{}}),
		{"fronts", 1, "kind"}:      WriteFronts(&out, []Front{{Point: "a"}}),
		{"walls", 1, "surface"}:    WriteWalls(&out, []Wall{{Point: "a"}}),
		{"forces", 1, "point"}:     WriteForces(&out, []Force{{Surface: "body"}}),
		{"tubes", 1, "point"}:      WriteTubes(&out, []Tube{{}}),
		{"streamline", 1, "point"}: WriteStreamline(&out, []Vertex{{}}),
	} {
		var got *Incomplete
		if !errors.As(err, &got) || *got != want {
			t.Errorf("got %v, want %v", err, &want)
		}
	}
	if out.Len() > 0 {
		t.Errorf("a refused table left %q behind", out.String())
	}
}

func BenchmarkWriteFronts(b *testing.B) {
	fronts := make([]Front, 1000)
	for i := range fronts {
		fronts[i] = someFront()
	}
	for b.Loop() {
		if err := WriteFronts(io.Discard, fronts); err != nil {
			b.Fatal(err)
		}
	}
}
